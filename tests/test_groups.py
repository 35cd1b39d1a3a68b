"""Point groups: laws over every group, handbook tables typed independently, and scipy's rotation groups."""

import numpy as np
import pytest
import sympy
from scipy.spatial.transform import Rotation

from vibsym.errors import VibsymError
from vibsym.groups.pointgroup import point_group
from vibsym.groups.reduction import reduce, write_reduction
from vibsym.groups.symbols import group_symbol, is_group_symbol, plain_label, typeset, typeset_function

FAMILIES = [("C", ""), ("C", "v"), ("C", "h"), ("D", ""), ("D", "h"), ("D", "d")]
AXIAL = [f"{letter}{n}{suffix}" for n in range(2, 21) for letter, suffix in FAMILIES]
AXIAL += [f"S{2 * n}" for n in range(2, 21)]
POLYHEDRAL = ["T", "Td", "Th", "O", "Oh", "I", "Ih"]
EVERY = ["C1", "Ci", "Cs", *AXIAL, *POLYHEDRAL]
ORDERS = {"": 1, "v": 2, "h": 2, "d": 4}


@pytest.mark.parametrize("symbol", EVERY)
def test_operations_close_and_classes_are_conjugacy_classes(symbol):
    group = point_group(symbol)
    R, product, inverse = group.matrices, group.product, group.inverse
    assert np.allclose(R[0], np.eye(3))
    assert np.allclose(R[product], np.einsum("aij,bjk->abik", R, R))
    assert len(np.unique(np.round(R.reshape(-1, 9), 6), axis=0)) == group.order
    for operations in group.classes:
        first = operations.members[0]
        conjugates = product[product[np.arange(group.order), first], inverse]
        assert set(conjugates.tolist()) == set(operations.members)


@pytest.mark.parametrize("symbol", EVERY)
def test_species_are_orthonormal_representations(symbol):
    """Row orthogonality (norm 2 for conjugate pairs), Σ d²/norm = h, and matrices that multiply like the operations."""
    group = point_group(symbol)
    rows = group.character_rows
    assert np.allclose(rows * group.class_sizes @ rows.T / group.order, np.diag(group.norms))
    assert sum(s.degeneracy**2 / s.norm for s in group.species) == group.order
    assert group.species[0].totally_symmetric and not any(s.totally_symmetric for s in group.species[1:])
    for label in group.labels:
        D = group.irrep(label)
        assert np.allclose(D[group.product], np.einsum("aij,bjk->abik", D, D))
        assert np.allclose(np.einsum("gij,gkj->gik", D, D), np.eye(D.shape[1]))


@pytest.mark.parametrize("symbol", EVERY)
def test_functions_agree_with_the_reduced_powers_of_the_matrices(symbol):
    """Γ(xyz), Γ(R), the symmetric square and cube reduce to the species under which the functions are listed."""
    group = point_group(symbol)
    R = group.matrices[[c.members[0] for c in group.classes]]
    one, two, three = (np.trace(np.linalg.matrix_power(R, k), axis1=1, axis2=2) for k in (1, 2, 3))
    spaces = {"linear": one, "rotations": one * np.linalg.det(R), "quadratic": (one**2 + two) / 2,
              "cubic": (one**3 + 3 * one * two + 2 * three) / 6}
    for kind, characters in spaces.items():
        expected = {label: n * group.species_named(label).degeneracy for label, n in reduce(characters, group).items()}
        listed = {s.label: len(getattr(s, kind)) for s in group.species if getattr(s, kind)}
        assert listed == expected


# Typed from the tables of E. B. Wilson, J. C. Decius, P. C. Cross, Molecular Vibrations (1955), appendix X, and
# G. Herzberg, Infrared and Raman Spectra (1945), from memory; classes in their order, conjugate pairs as real sums.
TAU, UAT = 1.6180339887498949, -0.6180339887498949
R2 = 2**0.5
HANDBOOK = {
    "C2v": ("E C2 σv(xz) σv'(yz)", {
        "A1": [1, 1, 1, 1], "A2": [1, 1, -1, -1], "B1": [1, -1, 1, -1], "B2": [1, -1, -1, 1]}),
    "C3v": ("E 2C3 3σv", {"A1": [1, 1, 1], "A2": [1, 1, -1], "E": [2, -1, 0]}),
    "C4v": ("E 2C4 C2 2σv 2σd", {"A1": [1, 1, 1, 1, 1], "A2": [1, 1, 1, -1, -1], "B1": [1, -1, 1, 1, -1],
                                 "B2": [1, -1, 1, -1, 1], "E": [2, 0, -2, 0, 0]}),
    "C2h": ("E C2 i σh", {"Ag": [1, 1, 1, 1], "Bg": [1, -1, 1, -1], "Au": [1, 1, -1, -1], "Bu": [1, -1, -1, 1]}),
    "C3": ("E C3 C3^2", {"A": [1, 1, 1], "E": [2, -1, -1]}),
    "S4": ("E S4 C2 S4^3", {"A": [1, 1, 1, 1], "B": [1, -1, 1, -1], "E": [2, 0, -2, 0]}),
    "C3h": ("E C3 C3^2 σh S3 S3^5", {"A'": [1, 1, 1, 1, 1, 1], "E'": [2, -1, -1, 2, -1, -1],
                                     "A''": [1, 1, 1, -1, -1, -1], "E''": [2, -1, -1, -2, 1, 1]}),
    "D2": ("E C2(z) C2(y) C2(x)", {
        "A": [1, 1, 1, 1], "B1": [1, 1, -1, -1], "B2": [1, -1, 1, -1], "B3": [1, -1, -1, 1]}),
    "D2d": ("E 2S4 C2 2C2' 2σd", {"A1": [1, 1, 1, 1, 1], "A2": [1, 1, 1, -1, -1], "B1": [1, -1, 1, 1, -1],
                                  "B2": [1, -1, 1, -1, 1], "E": [2, 0, -2, 0, 0]}),
    "D3h": ("E 2C3 3C2 σh 2S3 3σv", {"A1'": [1, 1, 1, 1, 1, 1], "A2'": [1, 1, -1, 1, 1, -1], "E'": [2, -1, 0, 2, -1, 0],
                                     "A1''": [1, 1, 1, -1, -1, -1], "A2''": [1, 1, -1, -1, -1, 1],
                                     "E''": [2, -1, 0, -2, 1, 0]}),
    "D3d": ("E 2C3 3C2 i 2S6 3σd", {"A1g": [1, 1, 1, 1, 1, 1], "A2g": [1, 1, -1, 1, 1, -1], "Eg": [2, -1, 0, 2, -1, 0],
                                    "A1u": [1, 1, 1, -1, -1, -1], "A2u": [1, 1, -1, -1, -1, 1],
                                    "Eu": [2, -1, 0, -2, 1, 0]}),
    "D4d": ("E 2S8 2C4 2S8^3 C2 4C2' 4σd", {
        "A1": [1, 1, 1, 1, 1, 1, 1], "A2": [1, 1, 1, 1, 1, -1, -1], "B1": [1, -1, 1, -1, 1, 1, -1],
        "B2": [1, -1, 1, -1, 1, -1, 1], "E1": [2, R2, 0, -R2, -2, 0, 0], "E2": [2, 0, -2, 0, 2, 0, 0],
        "E3": [2, -R2, 0, R2, -2, 0, 0]}),
    "D4h": ("E 2C4 C2 2C2' 2C2'' i 2S4 σh 2σv 2σd", {
        "A1g": [1, 1, 1, 1, 1, 1, 1, 1, 1, 1], "A2g": [1, 1, 1, -1, -1, 1, 1, 1, -1, -1],
        "B1g": [1, -1, 1, 1, -1, 1, -1, 1, 1, -1], "B2g": [1, -1, 1, -1, 1, 1, -1, 1, -1, 1],
        "Eg": [2, 0, -2, 0, 0, 2, 0, -2, 0, 0], "A1u": [1, 1, 1, 1, 1, -1, -1, -1, -1, -1],
        "A2u": [1, 1, 1, -1, -1, -1, -1, -1, 1, 1], "B1u": [1, -1, 1, 1, -1, -1, 1, -1, -1, 1],
        "B2u": [1, -1, 1, -1, 1, -1, 1, -1, 1, -1], "Eu": [2, 0, -2, 0, 0, -2, 0, 2, 0, 0]}),
    "D6h": ("E 2C6 2C3 C2 3C2' 3C2'' i 2S3 2S6 σh 3σd 3σv", {
        "A1g": [1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1, 1], "A2g": [1, 1, 1, 1, -1, -1, 1, 1, 1, 1, -1, -1],
        "B1g": [1, -1, 1, -1, 1, -1, 1, -1, 1, -1, 1, -1], "B2g": [1, -1, 1, -1, -1, 1, 1, -1, 1, -1, -1, 1],
        "E1g": [2, 1, -1, -2, 0, 0, 2, 1, -1, -2, 0, 0], "E2g": [2, -1, -1, 2, 0, 0, 2, -1, -1, 2, 0, 0],
        "A1u": [1, 1, 1, 1, 1, 1, -1, -1, -1, -1, -1, -1], "A2u": [1, 1, 1, 1, -1, -1, -1, -1, -1, -1, 1, 1],
        "B1u": [1, -1, 1, -1, 1, -1, -1, 1, -1, 1, -1, 1], "B2u": [1, -1, 1, -1, -1, 1, -1, 1, -1, 1, 1, -1],
        "E1u": [2, 1, -1, -2, 0, 0, -2, -1, 1, 2, 0, 0], "E2u": [2, -1, -1, 2, 0, 0, -2, 1, 1, -2, 0, 0]}),
    "D5h": ("E 2C5 2C5^2 5C2 σh 2S5 2S5^3 5σv", {
        "A1'": [1, 1, 1, 1, 1, 1, 1, 1], "A2'": [1, 1, 1, -1, 1, 1, 1, -1],
        "E1'": [2, -UAT, -TAU, 0, 2, -UAT, -TAU, 0], "E2'": [2, -TAU, -UAT, 0, 2, -TAU, -UAT, 0],
        "A1''": [1, 1, 1, 1, -1, -1, -1, -1], "A2''": [1, 1, 1, -1, -1, -1, -1, 1],
        "E1''": [2, -UAT, -TAU, 0, -2, UAT, TAU, 0], "E2''": [2, -TAU, -UAT, 0, -2, TAU, UAT, 0]}),
    "Td": ("E 8C3 3C2 6S4 6σd", {"A1": [1, 1, 1, 1, 1], "A2": [1, 1, 1, -1, -1], "E": [2, -1, 2, 0, 0],
                                 "T1": [3, 0, -1, 1, -1], "T2": [3, 0, -1, -1, 1]}),
    "Th": ("E 4C3 4C3^2 3C2 i 4S6 4S6^5 3σh", {
        "Ag": [1, 1, 1, 1, 1, 1, 1, 1], "Eg": [2, -1, -1, 2, 2, -1, -1, 2], "Tg": [3, 0, 0, -1, 3, 0, 0, -1],
        "Au": [1, 1, 1, 1, -1, -1, -1, -1], "Eu": [2, -1, -1, 2, -2, 1, 1, -2], "Tu": [3, 0, 0, -1, -3, 0, 0, 1]}),
    "Oh": ("E 8C3 6C2' 6C4 3C2 i 6S4 8S6 3σh 6σd", {
        "A1g": [1, 1, 1, 1, 1, 1, 1, 1, 1, 1], "A2g": [1, 1, -1, -1, 1, 1, -1, 1, 1, -1],
        "Eg": [2, -1, 0, 0, 2, 2, 0, -1, 2, 0], "T1g": [3, 0, -1, 1, -1, 3, 1, 0, -1, -1],
        "T2g": [3, 0, 1, -1, -1, 3, -1, 0, -1, 1], "A1u": [1, 1, 1, 1, 1, -1, -1, -1, -1, -1],
        "A2u": [1, 1, -1, -1, 1, -1, 1, -1, -1, 1], "Eu": [2, -1, 0, 0, 2, -2, 0, 1, -2, 0],
        "T1u": [3, 0, -1, 1, -1, -3, -1, 0, 1, 1], "T2u": [3, 0, 1, -1, -1, -3, 1, 0, 1, -1]}),
    "I": ("E 12C5 12C5^2 20C3 15C2", {"A": [1, 1, 1, 1, 1], "T1": [3, TAU, UAT, 0, -1], "T2": [3, UAT, TAU, 0, -1],
                                      "G": [4, -1, -1, 1, 0], "H": [5, 0, 0, -1, 1]}),
}


@pytest.mark.parametrize("symbol", HANDBOOK)
def test_table_equals_the_handbook(symbol):
    classes, rows = HANDBOOK[symbol]
    group = point_group(symbol)
    assert [c.symbol for c in group.classes] == classes.split()
    assert list(group.labels) == list(rows)
    for species in group.species:
        assert np.allclose(species.characters, rows[species.label])


# Which species the functions belong to, as handbooks print them (same sources).
FUNCTIONS = [
    ("C2v", "B1", "linear", ("x",)), ("C2v", "B1", "rotations", ("Ry",)), ("C2v", "A2", "quadratic", ("xy",)),
    ("D2", "B1", "linear", ("z",)), ("D2", "B2", "linear", ("y",)), ("D2", "B3", "linear", ("x",)),
    ("D2h", "B1g", "rotations", ("Rz",)), ("D2h", "B3u", "linear", ("x",)), ("D2d", "B2", "linear", ("z",)),
    ("D2d", "B1", "quadratic", ("x2-y2",)), ("D4d", "B2", "linear", ("z",)), ("D4d", "E3", "rotations", ("Rx", "Ry")),
    ("D4d", "E2", "quadratic", ("x2-y2", "xy")), ("D4d", "E3", "quadratic", ("xz", "yz")), ("C4v", "B1", "quadratic",
    ("x2-y2",)), ("D4h", "B1g", "quadratic", ("x2-y2",)), ("D4h", "B2g", "quadratic", ("xy",)), ("D3h", "A1'",
    "cubic", ("x(x2-3y2)",)), ("D6h", "B1u", "cubic", ("x(x2-3y2)",)), ("D6h", "B2u", "cubic", ("y(3x2-y2)",)),
    ("C6v", "B1", "cubic", ("x(x2-3y2)",)), ("S4", "B", "linear", ("z",)), ("S4", "B", "quadratic", ("x2-y2", "xy")),
    ("S8", "E1", "linear", ("x", "y")), ("S8", "E3", "rotations", ("Rx", "Ry")), ("Td", "T2", "quadratic", ("yz",
    "xz", "xy")), ("Td", "A1", "cubic", ("xyz",)), ("Oh", "A2u", "cubic", ("xyz",)), ("Td", "T1", "rotations", ("Rx",
    "Ry", "Rz")),
]


@pytest.mark.parametrize(("symbol", "label", "kind", "functions"), FUNCTIONS)
def test_functions_stand_where_handbooks_print_them(symbol, label, kind, functions):
    assert getattr(point_group(symbol).species_named(label), kind) == functions


# Groups without a species active in both spectra (conventions of the selection rules; recounted from the functions).
@pytest.mark.parametrize("symbol", ["D5h", "D7h", "C5h", "D4d", "D6d", "S8", "S12", "O", "I", "Oh", "D4h", "Ci", "Ih"])
def test_no_species_is_active_in_both(symbol):
    assert not any(s.infrared and s.raman for s in point_group(symbol).species)


@pytest.mark.parametrize("symbol", ["D3h", "C3h", "D2d", "S4", "Td", "C2v", "T", "D6", "C6v"])
def test_some_species_is_active_in_both(symbol):
    assert any(s.infrared and s.raman for s in point_group(symbol).species)


@pytest.mark.parametrize(("symbol", "scipy_name"), [(s, s) for s in ("T", "O", "I", "C5", "D4", "D7", "C12")])
def test_rotations_agree_with_scipy(symbol, scipy_name):
    """scipy.spatial.transform.Rotation.create_group: same traces; scipy orients some groups differently."""
    theirs = Rotation.create_group(scipy_name).as_matrix()
    ours = point_group(symbol).matrices
    assert np.allclose(np.sort(np.trace(theirs, axis1=1, axis2=2)), np.sort(np.trace(ours, axis1=1, axis2=2)))


@pytest.mark.parametrize("symbol", ["C7", "D5h", "D7d", "S8", "C5v", "D12", "Td", "Oh", "T"])
def test_exact_matrices_are_representations_and_equal_the_floats(symbol):
    group = point_group(symbol)
    rng = np.random.default_rng(5)
    for label in group.labels:
        exact = [sympy.Matrix(m) for m in group.exact_irrep(label)]
        numbers = np.array([np.array(m.evalf(20), dtype=float) for m in exact])
        assert np.abs(numbers - group.irrep(label)).max() < 1e-14
        for a, b in rng.integers(group.order, size=(6, 2)):
            difference = exact[a] * exact[b] - exact[group.product[a, b]]
            assert all(abs(complex(entry.evalf(30))) < 1e-25 for entry in difference)


def test_icosahedral_matrices_multiply_exactly():
    """Products of exact matrices of I simplify to exact matrices: the recognised entries are the right numbers."""
    group = point_group("I")
    rng = np.random.default_rng(8)
    for label in group.labels:
        exact = group.exact_irrep(label)
        for a, b in rng.integers(group.order, size=(4, 2)):
            product = (sympy.Matrix(exact[a]) * sympy.Matrix(exact[b])).applyfunc(sympy.expand)
            difference = product - sympy.Matrix(exact[group.product[a, b]])
            assert difference.applyfunc(sympy.expand) == sympy.zeros(len(exact[a]))


@pytest.mark.parametrize("symbol", ["D7h", "Ih", "S10", "C5", "D8d"])
def test_exact_characters_equal_the_floats(symbol):
    group = point_group(symbol)
    for species in group.species:
        values = [float(x) for x in group.exact_characters(species.label)]
        assert np.abs(np.array(values) - species.characters).max() < 1e-14


def test_large_axis_is_made_at_once():
    group = point_group("D100h")
    assert group.order == 400 and len(group.species) == 4 * 2 + 49 * 2
    assert len(group.species) == len(group.classes)


@pytest.mark.parametrize(("typed", "symbol"), [
    ("C3i", "S6"), ("C5i", "S10"), ("S2", "Ci"), ("C1h", "Cs"), ("S3", "C3h"), ("D1h", "C2v"), ("d2D", "D2d"), ("Vd",
    "D2d"), ("Cinfv", "C∞v"), ("D∞h", "D∞h"), ("dinfh", "D∞h"), ("Kh", "Kh"), ("c1", "C1"),
    ("D1", "C2"), ("D1d", "C2h"), ("td", "Td")])
def test_symbols_are_read_as_people_type_them(typed, symbol):
    assert group_symbol(typed) == symbol


@pytest.mark.parametrize("typed", [
    "C0v", "C99999999999v", "X3v", "C3x", "", "C-2", "C2i", "S5d", "Tdh", "C", "D", "361", "C361", "C²v"])
def test_unknown_symbols_are_one_clear_line(typed):
    assert not is_group_symbol(typed)
    with pytest.raises(VibsymError) as caught:
        point_group(typed)
    assert "\n" not in str(caught.value) and (typed in str(caught.value))


def test_unknown_species_names_those_there_are():
    with pytest.raises(VibsymError, match="no species 'B3' in D4h; it has A1g, A2g, B1g"):
        point_group("D4h").species_named("B3")


def test_labels_typed_and_printed():
    assert plain_label("F2g") == "T2g" and plain_label("A₂″") == "A2''" and plain_label("Σg⁺") == "Σg+"
    assert typeset("A2''") == "A₂″" and typeset("2C5^2") == "2C₅²" and typeset("Σg+") == "Σg⁺"
    assert typeset_function("2z2-x2-y2") == "2z²−x²−y²"


def test_reduction_checks_what_must_be_whole():
    with pytest.raises(VibsymError, match="not a representation of C2v"):
        reduce((9, -1, 1, 4), point_group("C2v"))
    with pytest.raises(VibsymError, match="4 classes"):
        reduce((9, -1), point_group("C2v"))
    assert write_reduction(reduce((9, -1, 1, 3), point_group("C2v"))) == "3A1 + A2 + 2B1 + 3B2"


# Nuclear displacements of CO2 and HCN (G. Herzberg, Infrared and Raman Spectra, 1945): through the image, exactly.
def test_infinite_groups_reduce_through_their_image():
    linear = point_group("D∞h")
    R = linear.image.matrices[[c.members[0] for c in linear.image.classes]]
    unmoved = np.where(R[:, 2, 2] > 0, 3, 1)
    assert reduce(unmoved * np.trace(R, axis1=1, axis2=2), linear) == {"Σg+": 1, "Πg": 1, "Σu+": 2, "Πu": 2}
    assert point_group("Kh").species_named("Pu").degeneracy == 3
    assert linear.species_named("Δu").cubic == ("xyz", "z(x2-y2)")
    assert not linear.species_named("Σg-").raman


def test_tables_of_infinite_groups():
    group = point_group("D∞h")
    assert group.exact_characters("Πg") == ["2", "2cos(φ)", "0", "2", "-2cos(φ)", "0"]
    assert group.exact_characters("Σu-") == ["1", "1", "-1", "-1", "-1", "1"]
    assert [c.symbol for c in group.classes] == ["E", "2C∞^φ", "∞σv", "i", "2S∞^φ", "∞C2"]
    with pytest.raises(VibsymError, match="no species 'A1'"):
        group.species_named("A1")
