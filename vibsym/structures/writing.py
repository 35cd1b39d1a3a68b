"""Write a structure as XYZ that reads back the same: isotopes as labels (`D`, `13C`), dummy atoms by their kind."""

from vibsym.structures.structure import Structure


def write_xyz(structure: Structure, comment: str = "") -> str:
    """Return the XYZ text of a structure with eight decimals; a comment of several lines becomes one.

    Masses that are no isotope's (a mean mass from the file) are not written: they never change what is alike.

    >>> print(write_xyz(Structure.from_atoms(["H", "D"], [[0, 0, 0], [0, 0, 0.74]]), "a made example"), end="")
    2
    a made example
    H         0.00000000      0.00000000      0.00000000
    D         0.00000000      0.00000000      0.74000000
    """
    lines = [str(len(structure)), " ".join((comment or structure.comment).split())]
    for label, position in zip(structure.labels, structure.positions.tolist()):
        x, y, z = (value if abs(value) >= 5e-9 else 0.0 for value in position)    # no -0.00000000
        lines.append(f"{label:<4}{x:16.8f}{y:16.8f}{z:16.8f}")
    return "\n".join(lines) + "\n"
