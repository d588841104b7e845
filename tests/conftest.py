"""Shared fixtures."""

import hypothesis
import pytest

import ridemodes as rm

# The same draws in every run and nothing kept between runs; a slow machine is no fault.
hypothesis.settings.register_profile(
    "repeatable", derandomize=True, database=None, deadline=None, max_examples=60
)
hypothesis.settings.load_profile("repeatable")


@pytest.fixture(scope="session", params=rm.examples())
def car(request):
    """Every example vehicle."""
    return rm.example(request.param)


@pytest.fixture(scope="session")
def roadster():
    """The light vehicle with two roll circuits."""
    return rm.example("roadster")
