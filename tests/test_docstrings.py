"""Everything public in the library says what it is, and every example in a docstring is run."""

import ast
import doctest
import importlib
import pkgutil
from pathlib import Path

import pytest

import vibsym

MODULES = sorted(module.name for module in pkgutil.walk_packages(vibsym.__path__, "vibsym."))


@pytest.mark.parametrize("name", ["vibsym", *MODULES])
def test_examples_in_docstrings(name):
    result = doctest.testmod(importlib.import_module(name))
    assert not result.failed, f"{result.failed} of {result.attempted} examples fail"


def silent(source: str) -> list[str]:
    """Return the public classes and functions of a source that have no docstring; what a function holds is its own."""
    tree = ast.parse(source)
    own = [node for node in tree.body if isinstance(node, ast.ClassDef | ast.FunctionDef)]
    own += [each for node in own if isinstance(node, ast.ClassDef) and not node.name.startswith("_")
            for each in node.body if isinstance(each, ast.FunctionDef)]
    found = [node.name for node in own if not node.name.startswith("_") and not ast.get_docstring(node)]
    return found if ast.get_docstring(tree) else [*found, "the module"]


@pytest.mark.parametrize("name", ["vibsym", *MODULES])
def test_what_is_public_says_what_it_is(name):
    assert silent(Path(importlib.import_module(name).__file__).read_text("utf-8")) == []


def test_a_missing_docstring_is_found():
    assert silent('"""Doc."""\nclass A:\n    """Doc."""\n    def f(self):\n        pass') == ["f"]
    assert silent("def g():\n    pass") == ["g", "the module"]
