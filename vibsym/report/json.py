"""Set results as JSON: one compact object a line, keys in the order of the contract, Greek letters as they are."""


def set_json(objects: list[dict]) -> str:
    """Return one line for each object."""
    import json

    return "".join(json.dumps(each, ensure_ascii=False, separators=(",", ":"), allow_nan=False) + "\n"
                   for each in objects)
