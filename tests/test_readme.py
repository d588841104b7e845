"""The README's Python prints what its comments say."""

import contextlib
import io
import re
from pathlib import Path

import ridemodes as rm

README = (Path(__file__).parent.parent / "README.md").read_text(encoding="utf-8")


def test_python_block_prints_its_comments():
    code, more, state = re.findall(r"```python\n(.*?)```", README, re.DOTALL)
    expected = re.findall(r"print\(.*\)\s+# (.*)", code)
    printed = io.StringIO()
    names = {}
    with contextlib.redirect_stdout(printed):
        exec(code, names)
    with contextlib.redirect_stdout(io.StringIO()) as tables:
        exec(more, names)
        exec(state, names)
    assert "What moves body roll" in tables.getvalue()
    assert "Handling readings" in tables.getvalue()
    assert printed.getvalue().splitlines() == [line.strip() for line in expected]
    assert len(expected) == 3


def test_table_is_the_printed_one():
    printed = str(rm.example("roadster").settle().linear().modes()).splitlines()
    [table] = re.findall(r"(    Modes \(damped\)\n(?:    .*\n)+)", README)
    shown = [line[4:] for line in table.splitlines() if "…" not in line]
    assert shown == printed[: len(shown)]


def test_file_section_is_of_the_example():
    [given] = re.findall(r"```toml\n(.*?)```", README, re.DOTALL)
    car = rm.example("roadster").to_dict()
    import tomllib

    for table, values in tomllib.loads(given).items():
        assert table in car
        assert set(values) <= set(car[table]), table


def test_how_to_is_one_file_that_loads(tmp_path, monkeypatch):
    page = Path(__file__).parent.parent / "crates/ridemodes/docs/from_sketch_to_file.md"
    text = page.read_text(encoding="utf-8")
    file = "\n".join(re.findall(r"```toml\n(.*?)```", text, re.DOTALL))
    (tmp_path / "car.toml").write_text(file, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    [code] = re.findall(r"```python\n(.*?)```", text, re.DOTALL)
    names = {}
    with contextlib.redirect_stdout(io.StringIO()) as printed:
        exec(code, names)
    assert "time constant" in printed.getvalue()
    assert "warning: front" not in printed.getvalue()
    oil = names["lin"].motions().stiffness_oil.diagonal()
    assert oil[2] > 10 * oil[3]
    assert len(names["locked"].closed_off) == 3
