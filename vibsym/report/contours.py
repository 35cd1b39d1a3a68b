"""What `vibsym expect --gas` adds to a page: the rotor and the contour of each infrared-active species."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Listing, Table
from vibsym.report.wording import NOTHING
from vibsym.spectra.contours import GasPhase
from vibsym.vibrations.rotor import Rotor

_KINDS = {"atom": "single atom, no rotor", "linear": "linear", "spherical": "spherical top",
          "prolate": "symmetric top, prolate", "oblate": "symmetric top, oblate", "asymmetric": "asymmetric top"}


def gas_parts(gas: GasPhase) -> list:
    """Return rotor and contours as parts of a page."""
    if gas.rotor.kind == "atom":
        return [Facts((("rotor", _KINDS["atom"]),), "Gas phase")]
    pairs = [("rotor", _KINDS[gas.rotor.kind])]
    pairs += [(letter.upper(), _axis(gas.rotor, place)) for place, letter in enumerate("abc")
              if gas.rotor.constants[place] is not None]
    if gas.weights:
        pairs.append(("spins", f"statistical weight {gas.weights['even']} for even J, {gas.weights['odd']} for odd J"))
    page = [Facts(tuple(pairs), "Gas phase")]
    rows = tuple((typeset(f"{each.species} {each.mode or ''}".strip()), each.type, " ".join(each.branches),
                  _number(each.separation, 1),
                  _number(each.spacing, 3), _number(each.zeta, 3), each.source or NOTHING) for each in gas.contours)
    if rows:
        head = ("species", "type", "branches", "P–R cm-1", "Q spacing", "ζ", "formula")
        page.append(Table(head, rows, right=frozenset({3, 4, 5}), flow=True,
                          heading=f"Contours of infrared bands at {gas.temperature:g} K"))
    return [*page, *([Listing(gas.notes)] if gas.notes else [])]


def gas_columns(gas: GasPhase) -> dict:
    """Return the columns of the CSV row."""
    return {"rotor": gas.rotor.kind, **{f"constant_{name}": value for name, value in zip("ABC", gas.rotor.constants)},
            "contours": "; ".join(f"{each.species}: {each.type}" for each in gas.contours)}


def _axis(rotor: Rotor, place: int) -> str:
    """Constant, moment and direction of a principal axis."""
    direction = rotor.axes[place]
    along = [name for name, part in zip("xyz", direction) if abs(part) > 1 - 1e-6]
    parts = ", ".join(_number(round(part, 3) + 0, 3) for part in direction)        # + 0: no part is −0.000
    words = along[0] if along else f"({parts})"
    where = "" if rotor.kind == "spherical" else f", axis {words}"
    return f"{rotor.constants[place]:.5g} cm-1, I = {rotor.moments[place]:.4f} u Å²{where}"


def _number(value: float | None, places: int) -> str:
    return NOTHING if value is None else f"{value:.{places}f}".replace("-", "−")
