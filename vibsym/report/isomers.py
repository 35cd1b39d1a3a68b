"""The page, the rows and the object of the isomers of a composition (`vibsym isomers`)."""

from vibsym.groups.symbols import typeset
from vibsym.report.document import Facts, Listing, Paragraph, Table, Title
from vibsym.report.wording import NOTHING, count_text, gamma_plain, gamma_text
from vibsym.spectra.isomer_bands import IsomerBands, IsomerList


def parts(result: IsomerList, **_) -> list:
    """Return the page."""
    among = result.isomers
    proof = Paragraph(f"From {count_text(among.orbits.arrangements, 'arrangement')}; Burnside's lemma over the "
                      f"{among.shape.image.order} operations of {typeset(among.shape.image.symbol)} gives the same.")
    caption = Paragraph(f"Bands of the oscillators {result.oscillators.name}, at most: infrared, Raman, in both, "
                        "polarised in Raman. The group is that of the ideal shape with its ligands on it.")
    page = [*opening(result), proof, _table(result), caption]
    if result.indices_open:
        page.append(_open_indices(result))
    return [*page, _sites(result), *_beware(result)]


def opening(result: IsomerList) -> list:
    """Return the title and the count, which open the page."""
    among = result.isomers
    title = Title(f"{composition(result)}   {among.shape.symbol}, {among.shape.name}")
    pairs = among.stereoisomers - among.count
    counted = count_text(among.count, "isomer")
    if pairs == among.count == 1:
        counted += ", a pair of enantiomers"
    elif pairs:
        counted += f", {pairs} of them {'a pair' if pairs == 1 else 'pairs'} of enantiomers"
    if pairs:
        counted += f" ({among.stereoisomers} stereoisomers in all)"
    return [title, Paragraph(counted if pairs else counted + ", no pairs of enantiomers", strong=True)]


def rows(result: IsomerList, **_) -> list[dict]:
    """Return a CSV row for each isomer that is listed."""
    return [_row(result, entry) for entry in result.entries]


def as_object(result: IsomerList, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def composition(result: IsomerList) -> str:
    """Return the composition as it is written: `Mo(CO)₄L₂`, brackets around names of more than one letter."""
    text = result.isomers.centre
    for ligand in result.isomers.ligands:
        name = ligand.name if len(ligand.name) == 1 or ligand.form == "atom" else f"({ligand.name})"
        text += name + (chr(ord("₀") + ligand.count) if ligand.count > 1 else "")      # nine at most
    return text


def _row(result: IsomerList, entry: IsomerBands) -> dict:
    isomer, counts = entry.isomer, entry.counts
    return {"symbol": result.isomers.shape.symbol, "centre": result.isomers.centre, "name": isomer.name,
            "index": isomer.index, "arrangement": " ".join(isomer.arrangement), "point_group": isomer.group.symbol,
            "chiral": isomer.chiral, "stereoisomers": isomer.stereoisomers, "descriptors": " ".join(isomer.descriptors),
            "oscillators": result.oscillators.name, "gamma": gamma_plain(entry.gamma), "infrared": counts.infrared,
            "raman": counts.raman, "coincident": counts.coincident, "polarised": counts.polarised}


def _table(result: IsomerList) -> Table:
    head = ("isomer", "index", "group", "pair", "IR", "Raman", "both", "pol.", "species")
    numbered = any(entry.isomer.numbered for entry in result.entries)
    if numbered:                                           # a running number says nothing: show what stands where
        head += (f"on sites 1 to {len(result.isomers.shape)}",)
    table = []
    for entry in result.entries:
        isomer, counts = entry.isomer, entry.counts
        pair = "/".join(isomer.descriptors) or ("yes" if isomer.chiral else NOTHING)
        index = isomer.index or ("depends" if isomer.indices else NOTHING)
        row = (isomer.name, index, typeset(isomer.group.symbol), pair, str(counts.infrared), str(counts.raman),
               str(counts.coincident), str(counts.polarised), gamma_text(entry.gamma))
        table.append((*row, " ".join(isomer.arrangement)) if numbered else row)
    return Table(head, tuple(table), right=frozenset({4, 5, 6, 7}))


def _open_indices(result: IsomerList) -> Facts | Paragraph:
    pairs = []
    for entry in result.entries:
        isomer = entry.isomer
        if len(isomer.indices) > 1:
            told = "; ".join(f"{index} if " + " or ".join(isomer.among.ranking_text(order) for order in orders)
                             for index, orders in isomer.indices.items())
            pairs.append((isomer.name, told))
    if not pairs or len(pairs) > 20:
        return Paragraph("The indices depend on the order of priority of the donors, which is not known.")
    return Facts(tuple(pairs), "Index by the priority of the donors")


def _sites(result: IsomerList) -> Facts:
    among = result.isomers
    pairs = [(ligand.name, ligand.words) for ligand in among.ligands]
    places = [f"{number} {place}" for number, place in enumerate(among.shape.places, 1) if place]
    if places:
        pairs.append(("sites", ", ".join(places)))
    return Facts(tuple(pairs), "Ligands")


def _beware(result: IsomerList) -> list:
    return [Listing(result.notes, "Beware")] if result.notes else []
