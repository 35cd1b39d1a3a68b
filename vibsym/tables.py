"""Find and read the data files of `tables/` and the folder of samples.

In a wheel both folders lie inside the package, in a checkout beside it.  Tables are CSV whose head lines start with `#`
and tell source and convention.
"""

import os
from functools import cache
from typing import TYPE_CHECKING

from vibsym.errors import VibsymError

if TYPE_CHECKING:
    from pathlib import Path


def folder(name: str) -> "Path":
    """Return the folder `tables` or `samples`: inside the package if it is there, else beside the package."""
    from pathlib import Path

    return Path(_folder(name))


def _folder(name: str) -> str:
    """The same as text; pathlib would cost a thirtieth of the whole main job."""
    package = os.path.dirname(os.path.abspath(__file__))
    inside = os.path.join(package, name)
    return inside if os.path.isdir(inside) else os.path.join(os.path.dirname(package), name)


@cache
def table_text(filename: str) -> str:
    """Return the text of a file in `tables/`."""
    path = os.path.join(_folder("tables"), filename)
    try:
        with open(path, encoding="utf-8") as file:
            return file.read()
    except OSError as error:
        raise VibsymError(f"{path}: cannot be read ({error.strerror}); is the installation complete?") from None


def read_table(filename: str) -> list[dict[str, str]]:
    """Return the rows of a CSV table as dictionaries; head lines and empty lines are left out.

    A row with too many or too few fields stops the program with file and line.
    """
    import csv

    lines = [(number, line) for number, line in enumerate(table_text(filename).splitlines(), 1)
             if line.strip() and not line.startswith("#")]
    rows = list(csv.reader(line for _, line in lines))
    head = rows[0]
    for (number, _), row in zip(lines[1:], rows[1:], strict=True):
        if len(row) != len(head):
            raise VibsymError(f"tables/{filename}, line {number}: {len(row)} fields where {len(head)} are needed")
    return [dict(zip(head, row, strict=True)) for row in rows[1:]]
