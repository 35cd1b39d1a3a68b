"""Set rows as CSV: one head line, quotes only where needed, lines ended by a line feed."""


def set_csv(rows: list[dict]) -> str:
    """Return rows (dictionaries) as CSV; true and false are yes and no, None and what a row lacks stay empty."""
    import csv
    import io

    if not rows:
        return ""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    columns = list(dict.fromkeys(name for row in rows for name in row))
    writer.writerow(columns)
    writer.writerows([[_cell(row.get(name)) for name in columns] for row in rows])
    return text.getvalue()


def _cell(value):
    if isinstance(value, bool):
        return "yes" if value else "no"
    return "" if value is None else value
