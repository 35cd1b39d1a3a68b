"""`vibsym isomers`: every isomer of a composition on a coordination shape, with the bands it can show."""

import click

from vibsym.cli import options
from vibsym.cli.bands import LONG_WORK, bands_options, refuse_without_bands
from vibsym.cli.delivery import deliver
from vibsym.cli.progress import progress


@click.command("isomers")
@click.argument("symbol", metavar="SYMBOL")
@click.option("--centre", required=True, metavar="ELEMENT", help="The central atom; a mere name such as M will do.")
@click.option("--ligand", "ligands", multiple=True, metavar="NAME=COUNT",
              help="A ligand and its number: CO=4, Cl=2, L=2 (a point); a chelate with its donors: 'en(N,N)=3'.")
@click.option("--donor", "donors", multiple=True, metavar="NAME=ELEMENT",
              help="Donor atom of a named point, for the configuration index: L=P.")
@click.option("--oscillators", metavar="BOND", help="The stretches to count: C-O, Mo-Cl; C-O by default.")
@click.option("--limit", type=int, default=200, show_default=True, metavar="N", help="How many isomers to list.")
@click.option("--write", metavar="DIR", help="Save the listed isomers as XYZ in this folder (idealised).")
@bands_options
@click.option("--mixture", is_flag=True, help="With bands: also let every two isomers share the lines.")
@options.output_options
def command(symbol, centre, ligands, donors, oscillators, limit, write, form, output, **bands):
    """List every isomer of a composition on the shape SYMBOL.

    SYMBOL is a polyhedral symbol of IUPAC: SP-4, T-4, TBPY-5, SPY-5, OC-6, TPR-6, PBPY-7, SAPR-8, TPRS-9, ...
    A pair of enantiomers is one isomer.

    \b
    Examples:
      vibsym isomers OC-6 --centre Mo --ligand CO=4 --ligand L=2 --donor L=P
      vibsym isomers OC-6 --centre Co --ligand 'en(N,N)=2' --ligand Cl=2
      vibsym isomers SP-4 --centre Pt --ligand CO=2 --ligand Cl=2 --write cis-trans
      vibsym isomers OC-6 --centre Mo --ligand CO=4 --ligand L=2 --bands try-it/flask-bands.csv
    """
    from vibsym.report import isomers as view
    from vibsym.spectra.isomer_bands import list_isomers

    measured = bands["bands"] or bands["infrared"] or bands["raman"]
    if not measured:
        refuse_without_bands(mixture=bands["mixture"], between=bands["between"], allow=bands["allow"])
    result = list_isomers(symbol, centre, ligands, donors, oscillators, limit)
    if write is not None:
        save(result, write)
    if measured:
        from vibsym.report import isomer_screening as view

        result = screened(list_isomers(symbol, centre, ligands, donors, oscillators, None), limit, **bands)
    deliver([result], view, form, output)


def screened(listing, limit, bands, infrared, raman, between, window, allow, light, mixture):
    """Return all isomers, ranked by how well they explain the observed bands."""
    from vibsym.evidence.bandlist import read_bands
    from vibsym.evidence.isomer_screening import screen_isomers
    from vibsym.evidence.screening import ScreenOptions

    observed = read_bands(bands, infrared, raman, between=between, light=light)
    with progress("isomers", LONG_WORK) as callback:
        return screen_isomers(listing, observed, ScreenOptions(window, allow, mixture), limit, callback)


def save(result, directory: str) -> None:
    """Write each listed isomer as XYZ into a folder, which is made if need be."""
    import re
    from pathlib import Path

    from vibsym.errors import VibsymError
    from vibsym.files import write_text_atomically
    from vibsym.structures.writing import write_xyz

    try:
        Path(directory).mkdir(parents=True, exist_ok=True)
    except OSError as error:
        why = (error.strerror or str(error)).lower()
        raise VibsymError(f"--write {directory}: the folder cannot be made ({why})") from None
    for number, entry in enumerate(result.entries, 1):
        isomer = entry.isomer
        name = re.sub("-+", "-", re.sub("[^A-Za-z0-9]+", "-", isomer.name.partition(";")[0])).strip("-")[:40]
        words = (isomer.name, isomer.index, isomer.group.symbol, "idealised, bond lengths from covalent radii",
                 f"one of a pair of enantiomers ({isomer.descriptors[0]})" if isomer.descriptors else
                 "one of a pair of enantiomers" if isomer.chiral else "")
        write_text_atomically(Path(directory) / f"{number:03d}-{name}.xyz",
                              write_xyz(isomer.structure, "; ".join(filter(None, words))))
