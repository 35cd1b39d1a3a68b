"""The page, the rows and the object of descent in symmetry (`vibsym descend`)."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Paragraph, Table, Title
from vibsym.report.wording import NOTHING, about_structure, gamma_plain, gamma_text, group_text
from vibsym.spectra.descent import Descent


def parts(result: Descent, **_) -> list:
    """Return the page: one table an embedding, or the list of the classes of subgroups."""
    page = [Title(f"Point group {group_text(result.group.symbol)}") if result.symmetry is None else about_structure(
        result.symmetry.structure)]
    if result.symmetry is not None:
        counts = result.counts
        page.append(Paragraph(f"Point group {group_text(result.group.symbol)}, Γvib = {gamma_text(result.gamma)}\n"
                              f"Infrared at most {counts.infrared}, Raman at most {counts.raman}"))
    if result.to is None:
        return [*page, _subgroups(result), *_endless(result)]
    for each in result.embeddings:
        page += _embedding(result, each)
    if len(result.embeddings) > 1:
        page.insert(1, Paragraph(f"{typeset(result.to)} lies in {typeset(result.group.symbol)} in "
                                 f"{len(result.embeddings)} inequivalent ways", strong=True))
    return page


def rows(result: Descent, **_) -> list[dict]:
    """Return one CSV row an embedding and species, or a class of subgroups."""
    if result.to is None:
        return [{"from": result.group.symbol, **_flat(result.listed(each))} for each in result.embeddings]
    table = []
    for each in result.embeddings:
        for change in result.activity(each):
            table.append({"from": result.group.symbol, "to": result.to, "keeps": each.keeps,
                          "species": change["species"], "modes": change["modes"],
                          "becomes": gamma_plain(change["becomes"]), "splits": change["splits"],
                          "infrared_before": change["infrared"][0],
                          "infrared_after": change["infrared"][1], "raman_before": change["raman"][0],
                          "raman_after": change["raman"][1], "exchange": "; ".join(each.exchange)})
    return table


def as_object(result: Descent, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def changes_table(changes, heading: str = "") -> Table:
    """Return the table of what each species becomes; `changes` are those of `activity_changes`."""
    rows = []
    for change in changes:
        news = [f"{name} active" for name, key in (("infrared", "infrared"), ("Raman", "raman"))
                if change[key] == [False, True]]
        if change["splits"]:
            news.append("splits")
        modes = () if change["modes"] is None else (str(change["modes"]),)
        rows.append((typeset(change["species"]), *modes, gamma_text(change["becomes"]), ", ".join(news) or NOTHING))
    head = ("species", *(("modes",) if changes and changes[0]["modes"] is not None else ()), "becomes", "new")
    return Table(head, tuple(rows), frozenset({1}) if len(head) == 4 else frozenset(), heading, flow=True)


def _flat(entry: dict) -> dict:
    """Return an entry with its counts as columns of their own."""
    return {name: value for name, value in entry.items() if name != "counts"} | entry.get("counts", {})


def _embedding(result: Descent, each) -> list:
    heading = f"{typeset(each.group.symbol)} ({typeset(each.keeps)})"
    if each.conjugates and each.conjugates > 1:
        heading += f", {each.conjugates} of them equivalent"
    page = [changes_table(result.activity(each), heading)]
    if result.gamma is not None:
        below, counts = result.after(each)
        page.append(Paragraph(f"Γvib = {gamma_text(below)}\nInfrared at most {counts.infrared}, "
                              f"Raman at most {counts.raman}"))
    if each.exchange:
        swaps = "; ".join(typeset(swap).replace("<->", "↔").replace("->", "→") for swap in each.exchange)
        page.append(Paragraph(f"Another choice of axes of {typeset(each.group.symbol)} exchanges {swaps}"))
    return page


def _subgroups(result: Descent) -> Table:
    rows = []
    for each in result.embeddings:
        order = "∞" if each.group.order is None else str(each.group.order)
        conjugates = "∞" if each.conjugates is None else str(each.conjugates)
        row = (typeset(each.group.symbol), typeset(each.keeps), order, conjugates)
        if result.gamma is not None:
            counts = result.after(each)[1]
            row += (str(counts.infrared), str(counts.raman))
        rows.append(row)
    head = ("subgroup", "keeps", "order", "conjugates")
    if result.gamma is not None:
        head += ("infrared", "Raman")
    return Table(head, tuple(rows), right=frozenset(range(2, len(head))),
                 heading=f"{len(rows)} class{'es' if len(rows) > 1 else ''} of subgroups")


def _endless(result: Descent) -> list:
    if not result.group.infinite:
        return []
    return [Paragraph("The subgroups go on without end; here are those with axes up to C₆. Name one for any other.")]
