"""What the main job may load: numpy and click, not sympy, scipy or importlib.metadata; what `vibsym` offers."""

import subprocess
import sys
from pathlib import Path

import pytest

import vibsym

ROOT = Path(__file__).parent.parent
HEAVY = ("sympy", "scipy", "rich", "importlib.metadata", "importlib.resources", "pkg_resources", "ase", "spglib")
AVOIDABLE = ("numpy.ma", "pathlib", "fractions", "decimal")      # 15 ms together; numpy.unique loads numpy.ma
PROGRAM = """
import sys
from vibsym.cli.main import cli
try:
    cli(sys.argv[1:], prog_name="vibsym")
finally:
    print("LOADED", *sorted(sys.modules), file=sys.stderr)
"""


def loaded_by(*arguments):
    done = subprocess.run([sys.executable, "-c", PROGRAM, *arguments], cwd=ROOT, capture_output=True, text=True,
                          encoding="utf-8")
    return done.stdout, set(done.stderr.split("LOADED")[1].split())


@pytest.mark.parametrize("arguments", [
    ("expect", "samples/stabiliser-dimethoxybenzene.xyz"),
    ("expect", "samples/stabiliser-dimethoxybenzene.xyz", "--format", "json"),
    ("expect", "samples/cluster-mo6cl14.xyz"), ("expect", "samples/soot-c60.xyz"), ("expect", "samples/flask-cis.xyz"),
    ("expect", "samples/rinse-dichloromethane.mol", "--working"),
    ("group", "samples/cluster-mo6cl14.xyz"),
], ids=" ".join)
def test_the_main_job_loads_nothing_heavy(arguments):
    printed, modules = loaded_by(*arguments)
    assert printed and "numpy" in modules
    assert not modules.intersection(HEAVY)
    assert arguments[0] == "group" or not modules.intersection(AVOIDABLE)


def test_version_and_help_do_not_even_load_numpy():
    printed, modules = loaded_by("--version")
    assert printed == f"vibsym {vibsym.__version__}\n" and "numpy" not in modules
    printed, modules = loaded_by("expect", "--help")
    assert "Examples:" in printed and "numpy" not in modules


def test_import_vibsym_loads_nothing():
    done = subprocess.run([sys.executable, "-c", "import sys, vibsym; print(*sys.modules)"], cwd=ROOT,
                          capture_output=True, text=True)
    assert not {"numpy", "click", *HEAVY}.intersection(done.stdout.split())


def test_the_names_that_vibsym_offers():
    assert vibsym.__all__ == ["Structure", "VibsymError", "assign", "character_table", "climb", "combine", "descend",
                              "expect", "find_symmetry", "isotopes", "ladder", "point_group", "read", "read_all",
                              "read_bands", "reduce", "screen", "write_reduction"]
    for name in vibsym.__all__:
        assert callable(getattr(vibsym, name))
    assert set(vibsym.__all__) <= set(dir(vibsym))
    with pytest.raises(AttributeError, match="nonsense"):
        vibsym.nonsense  # noqa: B018
