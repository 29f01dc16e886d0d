"""Every example in the core's docstrings does what it says."""

import doctest
import importlib
import pkgutil

import pytest

import pycore

MODULES = sorted(found.name for found in pkgutil.walk_packages(pycore.__path__, "pycore.") if found.name != "pycore.__main__")


@pytest.mark.parametrize("name", MODULES)
def test_examples(name: str) -> None:
    module = importlib.import_module(name)
    assert doctest.testmod(module, raise_on_error=False).failed == 0


def test_there_are_examples() -> None:
    """A run that finds no examples would prove nothing."""
    found = [test for name in MODULES for test in doctest.DocTestFinder().find(importlib.import_module(name)) if test.examples]
    assert len(found) >= 40
