"""Shared fixtures."""

import pytest

import ridemodes as rm


@pytest.fixture(scope="session", params=rm.examples())
def car(request):
    """Every example vehicle."""
    return rm.example(request.param)


@pytest.fixture(scope="session")
def roadster():
    """The light vehicle with two roll circuits."""
    return rm.example("roadster")
