"""Every example in a docstring of the library is run."""

import doctest
import importlib
import pkgutil

import pytest

import vibsym

MODULES = sorted(module.name for module in pkgutil.walk_packages(vibsym.__path__, "vibsym."))


@pytest.mark.parametrize("name", ["vibsym", *MODULES])
def test_examples_in_docstrings(name):
    result = doctest.testmod(importlib.import_module(name))
    assert not result.failed, f"{result.failed} of {result.attempted} examples fail"
