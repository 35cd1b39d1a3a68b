"""vibsym: point groups, vibrational species and band assignment for infrared and Raman spectra.

>>> import vibsym
>>> vibsym.point_group("D3h").order
12
"""

__version__ = "0.1.0"

# Name and the module that owns it; a name is imported when it is first used, so that `import vibsym` costs nothing.
_OWNERS = {
    "Structure": "vibsym.structures.structure",
    "VibsymError": "vibsym.errors",
    "assign": "vibsym.evidence.assignment",
    "character_table": "vibsym.groups.character_table",
    "climb": "vibsym.spectra.climb",
    "combine": "vibsym.spectra.combinations",
    "descend": "vibsym.spectra.descent",
    "expect": "vibsym.spectra.expectation",
    "find_symmetry": "vibsym.structures.finder",
    "isotopes": "vibsym.spectra.isotopes",
    "ladder": "vibsym.structures.ladder",
    "point_group": "vibsym.groups.pointgroup",
    "read": "vibsym.structures.reading",
    "read_all": "vibsym.structures.reading",
    "read_bands": "vibsym.evidence.bandlist",
    "reduce": "vibsym.groups.reduction",
    "screen": "vibsym.evidence.proposals",
    "write_reduction": "vibsym.groups.reduction",
}
__all__ = list(_OWNERS)


def __getattr__(name: str):
    if name not in _OWNERS:
        raise AttributeError(f"module 'vibsym' has no attribute '{name}'")
    from importlib import import_module

    value = getattr(import_module(_OWNERS[name]), name)
    globals()[name] = value
    return value


def __dir__() -> list[str]:
    return sorted([*globals(), *__all__])
