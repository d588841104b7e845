"""The command line, as a user runs it."""

import os
import subprocess
import sys

import pytest

import ridemodes as rm


def run(*arguments, cwd):
    command = [sys.executable, "-m", "ridemodes", *arguments]
    return subprocess.run(command, capture_output=True, text=True, cwd=cwd, check=False)


def test_demo_shows_the_main_job_and_repeats_itself(tmp_path):
    first = run("demo", "--output", "pictures", cwd=tmp_path)
    assert first.returncode == 0, first.stderr
    for text in ("frequency Hz", "body roll", "N/mm", "warp to roll", rm.CAUTION):
        assert text in first.stdout
    assert first.stdout.count(rm.CAUTION) == 1
    pictures = sorted(path.name for path in (tmp_path / "pictures").iterdir())
    assert pictures == ["ridemodes-demo-modes.png", "ridemodes-demo-motions.png"]
    assert run("demo", "--output", "pictures", cwd=tmp_path).stdout == first.stdout


def test_a_file_is_made_checked_and_reported(tmp_path):
    assert run("new", "car.toml", cwd=tmp_path).returncode == 0
    assert rm.load(tmp_path / "car.toml") == rm.example("roadster")
    assert "circuits left, right" in run("check", "car.toml", cwd=tmp_path).stdout
    assert "wheel warp" in run("report", "car.toml", cwd=tmp_path).stdout
    refused = run("new", "car.toml", cwd=tmp_path)
    assert refused.returncode == 1
    assert "already" in refused.stderr


@pytest.mark.parametrize(
    ("arguments", "code", "said"),
    [
        (("check", "no.toml"), 1, "No such file"),
        (("check", "bad.toml"), 1, "body: is missing"),
        (("new", "x.toml", "--example", "roadstr"), 1, "roadster"),
        (("unheard",), 2, "usage"),
        ((), 2, "usage"),
    ],
)
def test_faults_go_to_stderr_without_traceback(tmp_path, arguments, code, said):
    (tmp_path / "bad.toml").write_text("x = 1\n")
    ended = run(*arguments, cwd=tmp_path)
    assert ended.returncode == code
    assert said in ended.stderr
    assert "Traceback" not in ended.stderr


def test_check_lists_every_violation(tmp_path):
    text = rm.example("roadster").to_toml()
    text = text.replace("mass = 1080.0", "mass = -1.0", 1)
    text = text.replace("track = 1.5\n", "trck = 1.5\n", 1)
    (tmp_path / "bad.toml").write_text(text, encoding="utf-8")
    ended = run("check", "bad.toml", cwd=tmp_path)
    assert ended.returncode == 1
    assert ended.stdout == ""
    for path in ("body.mass", "front.track", "front.trck"):
        assert path in ended.stderr


def test_json_is_checked_too(tmp_path):
    assert run("new", "car.json", "--example", "forest_truck", cwd=tmp_path).returncode == 0
    assert run("check", "car.json", cwd=tmp_path).returncode == 0
    (tmp_path / "car.json").write_text("{", encoding="utf-8")
    ended = run("check", "car.json", cwd=tmp_path)
    assert ended.returncode == 1
    assert "line 1" in ended.stderr


def test_report_into_an_old_code_page(tmp_path):
    """What a redirected console of Windows is by default (common practice: cp1252)."""
    rm.example("roadster").save(tmp_path / "car.toml")
    command = [sys.executable, "-m", "ridemodes", "report", "car.toml"]
    environment = {**os.environ, "PYTHONIOENCODING": "cp1252", "PYTHONUTF8": "0"}
    ended = subprocess.run(command, capture_output=True, cwd=tmp_path, env=environment, check=False)
    assert b"Traceback" not in ended.stderr
    assert ended.returncode == 0


def test_examples_are_listed(tmp_path):
    listed = run("examples", cwd=tmp_path).stdout
    assert all(name in listed for name in rm.examples())
