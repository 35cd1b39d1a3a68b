"""Packages import downwards only, no two files need each other, and heavy packages are loaded inside functions.

Imports are read from the source, those inside functions too, so that none hides.
"""

import ast
from pathlib import Path

import pytest

ROOT = Path(__file__).parent.parent
LAYERS = ("groups", "structures", "vibrations", "spectra", "evidence", "report", "cli")     # from the lowest upwards
GROUND = ("errors", "files", "tables")                                                      # below all layers
HEAVY = {"sympy", "scipy", "rich", "jcamp", "importlib.metadata", "importlib.resources"}
# Run as a program, `calibration` hands its result to `calibration_report`, which writes the tables.
PROGRAM = {"vibsym.vibrations.calibration", "vibsym.vibrations.calibration_report"}

SOURCES = {".".join(path.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__"): path.read_text("utf-8")
           for path in sorted((ROOT / "vibsym").rglob("*.py"))}


def imported(tree: ast.AST, within_functions: bool = True) -> set[str]:
    """Return the modules that a source imports; names taken from a package count as modules if they are some."""
    found: set[str] = set()
    waiting = list(ast.iter_child_nodes(tree))
    while waiting:
        node = waiting.pop()
        if isinstance(node, ast.Import):
            found |= {each.name for each in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert not node.level, "relative import"
            inner = {f"{node.module}.{each.name}" for each in node.names}
            found |= inner & SOURCES.keys() or {node.module}
        elif isinstance(node, ast.If) and ast.unparse(node.test) == "TYPE_CHECKING":
            continue                                            # for annotations; never loaded
        if within_functions or not isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.Lambda):
            waiting += ast.iter_child_nodes(node)
    return found


def height(module: str) -> int:
    """Return how high a module stands: -1 below all layers, else the place of its package."""
    parts = module.split(".")
    if len(parts) == 1 or parts[1] in GROUND:
        return -1
    if parts[1] == "__main__":                                  # `python -m vibsym`, above all
        return len(LAYERS)
    return LAYERS.index(parts[1])


def upward(module: str, source: str) -> set[str]:
    """Return what a module imports from layers above its own."""
    own = [each for each in imported(ast.parse(source)) if each.startswith("vibsym.")]
    return {each for each in own if height(each) > height(module)}


def heavy_at_top(source: str) -> set[str]:
    """Return the heavy packages that a source loads as soon as it is imported."""
    return {each for each in imported(ast.parse(source), within_functions=False)
            if any(each == name or each.startswith(name + ".") for name in HEAVY)}


def foreign_private_names(source: str) -> set[str]:
    """Return private names (`_name`) that a source takes from another file; those of named tuples are public."""
    found = {each for node in ast.walk(ast.parse(source)) if isinstance(node, ast.ImportFrom)
             for each in (alias.name for alias in node.names)}
    found |= {node.attr for node in ast.walk(ast.parse(source)) if isinstance(node, ast.Attribute)
              and not (isinstance(node.value, ast.Name) and node.value.id in ("self", "cls"))}
    private = {each for each in found if each.startswith("_") and not each.startswith("__")}
    return private - {"_replace", "_asdict", "_fields"}


def circles(edges: dict[str, set[str]]) -> list[set[str]]:
    """Return the sets of modules of which each needs every other, by way of others too."""
    reach = {module: set(targets) for module, targets in edges.items()}
    for _ in edges:
        grown = {module: targets.union(*(reach.get(each, ()) for each in targets)) for module, targets in reach.items()}
        if grown == reach:
            break
        reach = grown
    sets = [{other for other in edges if other in reach[module] and module in reach[other]} for module in edges]
    return [each for number, each in enumerate(sets) if len(each) > 1 and each not in sets[:number]]


@pytest.mark.parametrize("module", SOURCES)
def test_imports_run_downwards_and_heavy_packages_wait(module):
    assert not upward(module, SOURCES[module])
    assert not heavy_at_top(SOURCES[module])


@pytest.mark.parametrize("module", SOURCES)
def test_private_names_stay_in_their_file(module):
    assert not foreign_private_names(SOURCES[module])


def test_no_two_files_need_each_other():
    edges = {module: imported(ast.parse(source)) & SOURCES.keys() - {module, "vibsym"}
             for module, source in SOURCES.items()}
    assert [each for each in circles(edges) if each != PROGRAM] == []


def test_a_spoilt_source_is_found():
    assert upward("vibsym.groups.axial", "def f():\n    from vibsym.spectra import expectation") == {
        "vibsym.spectra.expectation"}
    assert heavy_at_top("import numpy, scipy.optimize") == {"scipy.optimize"}
    assert not heavy_at_top("def f():\n    import sympy")
    assert foreign_private_names("from vibsym.tables import _read\nx._hidden\nself._own") == {"_read", "_hidden"}
    assert circles({"a": {"b"}, "b": {"c"}, "c": {"a"}, "d": {"a"}}) == [{"a", "b", "c"}]
