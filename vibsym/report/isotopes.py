"""Pages, rows and objects of isotopic substitution (`vibsym isotopes`): one pair, all isotopologues, or satellites."""


from vibsym.groups.symbols import typeset, typeset_formula
from vibsym.report.descent import changes_table
from vibsym.report.document import Paragraph, Table
from vibsym.report.wording import NOTHING, about_structure, gamma_plain, gamma_text, group_text
from vibsym.spectra.isotopes import IsotopeEffect
from vibsym.spectra.isotopologues import IsotopologueList
from vibsym.spectra.satellites import Satellites


def parts(result, **_) -> list:
    """Return the page."""
    return {IsotopeEffect: _pair, IsotopologueList: _list, Satellites: _satellites}[type(result)](result)


def rows(result, **_) -> list[dict]:
    """Return one CSV row a species of the common group, an isotopologue, or a molecule with its satellites."""
    if isinstance(result, IsotopologueList):
        return [each | {"sites": " ".join(str(site) for site in each["sites"])}
                for each in result.to_dict()["isotopologues"]]
    if isinstance(result, Satellites):
        return [{"atom": each.atom if each.atom is None else each.atom + 1, "point_group": each.symmetry.group.symbol,
                 "sites": each.sites, "weight": round(each.weight, 6), "gamma": gamma_plain(each.gamma),
                 "positions": "; ".join(f"{label} {value:.1f}" for label, value in each.positions)}
                for each in result.molecules]
    observed = {each.species: each for each in result.observed}
    table = []
    for line in result.rule:
        row = {"from": result.pair.original.group.symbol, "to": result.pair.substituted.group.symbol,
               "common": result.pair.common.group.symbol, "species": line.species, "modes": line.modes,
               "product_rule": round(line.theory, 8)}
        if line.species in observed:
            each = observed[line.species]
            row |= {"observed": each.product, "deviation": each.deviation, "doubtful": each.doubtful}
        table.append(row)
    return table


def as_object(result, **_) -> dict:
    """Return the JSON object."""
    return result.to_dict()


def _pair(result: IsotopeEffect) -> list:
    pair = result.pair
    before, after = result.counts
    page = [about_structure(pair.original.structure),
            Paragraph("\n".join(_before_and_after(result))),
            Paragraph(f"Infrared at most {before.infrared} before, {after.infrared} after; "
                      f"Raman at most {before.raman} before, {after.raman} after", strong=True)]
    if pair.common.group.symbol != pair.original.group.symbol:
        page.append(changes_table(result.activity, f"Species of {typeset(pair.original.group.symbol)} "
                                                   f"in {typeset(pair.common.group.symbol)}"))
    if pair.common.group.symbol != pair.substituted.group.symbol:
        rows = tuple((typeset(label), gamma_text(parts)) for label, parts in pair.correlation_substituted.items()
                     if label in result.gammas[1])
        page.append(Table(("species", "becomes"), rows,
                          heading=f"{typeset_formula(pair.substituted.structure.formula)} in the common group "
                                  f"{typeset(pair.common.group.symbol)}"))
    page.append(_rule(result))
    page.append(Paragraph("Product rule: Π ω(to)/Π ω(from), each degenerate set once (Redlich 1935). Observed products "
                          "normally exceed it a little, because anharmonicity lowers the lighter molecule more."))
    return page


def _before_and_after(result: IsotopeEffect) -> list[str]:
    """Return a line for each of the two molecules: formula, group, Γvib."""
    return [f"{typeset_formula(each.structure.formula)}: {group_text(each.group.symbol)}, Γvib = {gamma_text(gamma)}"
            for each, gamma in zip((result.pair.original, result.pair.substituted), result.gammas)]


def _rule(result: IsotopeEffect) -> Table:
    observed = {each.species: each for each in result.observed}
    rows = []
    for line in result.rule:
        row = (typeset(line.species), str(line.modes), f"{line.theory:.4f}")
        if observed:
            each = observed[line.species]
            if each.product is None:
                row += (NOTHING, NOTHING, f"{each.seen[0]} and {each.seen[1]} of {each.modes} seen")
            else:
                remark = "doubtful" if each.doubtful else ""
                if each.deperturbed:
                    remark = ", ".join(filter(None, (remark, "deperturbed " + ", ".join(each.deperturbed))))
                row += (f"{each.product:.4f}", f"{each.deviation:+.1f} %".replace("-", "−"), remark)
        rows.append(row)
    head = ("species", "modes", "theory") + (("observed", "deviation", "") if observed else ())
    return Table(head, tuple(rows), right=frozenset(range(1, 5)),
                 heading=f"Product rule in {typeset(result.pair.common.group.symbol)}")


def _list(result: IsotopologueList) -> list:
    rows = tuple((typeset_formula(each.structure.formula), typeset(each.symmetry.group.symbol), str(each.weight),
                  " ".join(str(site + 1) for site in each.sites) or NOTHING) for each in result.isotopologues)
    return [about_structure(result.structure), Paragraph(f"{len(rows)} distinct isotopologues of {result.arrangements} "
                                                         "arrangements", strong=True),
            Table(("formula", "group", "weight", "replaced atoms (one of the equivalent ways)"), rows,
                  right=frozenset({2}), flow=True)]


def _satellites(result: Satellites) -> list:
    rows = []
    for each in result.molecules:
        bands = ", ".join(f"{typeset(label)} {value:.1f}" for label, value in each.positions)
        rows.append((NOTHING if each.atom is None else str(each.atom + 1), typeset(each.symmetry.group.symbol),
                     f"{100 * each.weight:.2f} %", gamma_text(each.gamma), bands))
    head = ("13C at atom", "group", "weight", "C-O stretches", "cm-1")
    notes = "Weight: molecules with one carbon-13 among the equivalent carbonyls, relative to those with none."
    if not result.molecules[0].positions:
        notes += " Positions need one C-O stretch of every species (--mode)."
    table = Table(head, tuple(rows), right=frozenset({2}), flow=True,
                  heading="Carbon-13 satellites at natural abundance")
    return [about_structure(result.structure), table, Paragraph(notes)]
