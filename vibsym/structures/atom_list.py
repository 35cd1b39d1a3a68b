"""Atoms named on the command line: `1,5,6` or `2-7`, counted from 1."""

from vibsym.errors import VibsymError


def parse_atoms(text: str | None, atoms: int) -> tuple[int, ...]:
    """Return the atoms named in `text`, counted from 0, in order and each once; None or an empty text names none.

    >>> parse_atoms("1,5-7", 8)
    (0, 4, 5, 6)
    """
    found: set[int] = set()
    for part in (text or "").replace("–", "-").replace(" ", ",").split(","):
        if not part:
            continue
        ends = part.split("-")
        if len(ends) > 2 or not all(end.isascii() and end.isdigit() for end in ends):
            raise VibsymError(f"atoms '{text}': '{part[:20]}' is not an atom number; write numbers as in 1,5,6 or 2-7")
        numbers = [int(end[:18]) for end in ends]
        for number in numbers:
            if not 1 <= number <= atoms:
                raise VibsymError(f"atoms '{text}': there is no atom {number}; there are atoms 1 to {atoms}")
        found.update(range(min(numbers) - 1, max(numbers)))
    return tuple(sorted(found))
