"""Set rows as CSV: one head line, quotes only where needed, lines ended by a line feed."""


def set_csv(rows: list[dict]) -> str:
    """Return rows (dictionaries with the same keys) as CSV; true and false are written yes and no, None stays empty."""
    import csv
    import io

    if not rows:
        return ""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(rows[0])
    writer.writerows([[_cell(value) for value in row.values()] for row in rows])
    return text.getvalue()


def _cell(value):
    if isinstance(value, bool):
        return "yes" if value else "no"
    return "" if value is None else value
