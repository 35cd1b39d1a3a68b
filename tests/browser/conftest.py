"""A real browser for the report page: Debian's chromium and chromium-driver through selenium.

Without them the tests are skipped by name; with VIBSYM_BROWSER=required (set by .ci/run) that is a failure.
"""

import os
import shutil

import pytest

import vibsym
from vibsym.evidence.bandlist import parse_bands, read_bands
from vibsym.evidence.whole_molecule import Proposal
from vibsym.report.collection import collect
from vibsym.report.html.page import report_page
from vibsym.structures.structure import Structure
from vibsym.tables import folder

FLAGS = ("--headless", "--no-sandbox", "--disable-gpu", "--no-first-run", "--disable-background-networking",
         "--disable-component-update", "--disable-sync", "--disable-dev-shm-usage",
         "--force-device-scale-factor=1")
BANDS = """wavenumber,spectrum,strength,polarisation
{rows}
"""
# Lines near published fundamentals (Shimanouchi, NSRDS-NBS 39), rounded; the last one of benzene is a combination.
WATER = BANDS.format(rows="3657,IR,s,\n1595,IR,vs,\n3756,IR,vs,\n3657,Raman,vs,0.05\n1595,Raman,w,")
BENZENE = BANDS.format(rows="3062,Raman,vs,p\n992,Raman,vs,p\n674,IR,vs,\n3063,IR,s,\n1486,IR,s,\n1038,IR,m,\n"
                            "849,Raman,w,dp\n3047,Raman,m,dp\n1596,Raman,m,dp\n1178,Raman,m,dp\n606,Raman,m,dp\n1815,IR,m,")
CARBONYL = BANDS.format(rows="2134,IR,w,\n2051,IR,vs,\n2001,IR,s,\n2138,Raman,m,p\n2084,Raman,s,dp\n2001,Raman,w,p")


def _unavailable() -> str:
    try:
        import selenium  # noqa: F401
    except ImportError:
        return "selenium is not installed (extra browser)"
    for program in ("chromium", "chromedriver"):
        if shutil.which(program) is None:
            return f"{program} is not installed (Debian: chromium, chromium-driver)"
    return ""


@pytest.fixture(scope="session")
def browser_options(tmp_path_factory):
    reason = _unavailable()
    if reason:
        (pytest.fail if os.environ.get("VIBSYM_BROWSER") == "required" else pytest.skip)(reason)
    from selenium.webdriver.chrome.options import Options

    def make(*flags):
        options = Options()
        options.binary_location = shutil.which("chromium")
        for flag in (*FLAGS, f"--user-data-dir={tmp_path_factory.mktemp('profile')}", *flags):
            options.add_argument(flag)
        options.set_capability("goog:loggingPrefs", {"browser": "ALL"})
        return options
    return make


@pytest.fixture(scope="session")
def browser(browser_options):
    from selenium import webdriver
    from selenium.webdriver.chrome.service import Service

    driver = webdriver.Chrome(options=browser_options(), service=Service(shutil.which("chromedriver")))
    yield driver
    driver.quit()


def _structures():
    samples = folder("samples")
    water = Structure.from_atoms(["O", "H", "H"], [[0, 0, 0.117], [0, 0.757, -0.469], [0, -0.757, -0.469]],
                                 source="water.xyz", comment="made here <b>by hand</b>")
    ring = [[radius * x for x in direction] for radius in (1.397, 2.481)
            for direction in ([1, 0, 0], [0.5, 3 ** 0.5 / 2, 0], [-0.5, 3 ** 0.5 / 2, 0], [-1, 0, 0],
                              [-0.5, -3 ** 0.5 / 2, 0], [0.5, -3 ** 0.5 / 2, 0])]
    benzene = Structure.from_atoms(["C"] * 6 + ["H"] * 6, ring, source="benzene.xyz")
    return {"water": (water, WATER), "carbonyl": (vibsym.read(samples / "carbonyl-mn-br.xyz"), CARBONYL),
            "benzene": (benzene, BENZENE), "c60": (vibsym.read(samples / "soot-c60.xyz"), "")}


def _several():
    """Three structures with bands, one of them with a line left over; a linear molecule; one atom."""
    samples = folder("samples")
    tube = [vibsym.read(samples / f"tube-clf3-{shape}.xyz") for shape in ("t", "pyramid", "triangle")]
    bands = read_bands(str(samples / "tube-clf3-bands.csv"))
    flask = [vibsym.read(samples / f"flask-{shape}.xyz") for shape in ("cis", "trans")]
    infrared = read_bands(infrared=str(samples / "flask-infrared.csv"))
    return {"tube": (tube, bands, None), "flask": (flask, infrared, Proposal(oscillators="C-O", local=True)),
            "linear": ([vibsym.read(samples / "cylinder-n2o.xyz")], None, None),
            "atom": ([vibsym.read(samples / "cylinder-argon.xyz")], None, None)}


@pytest.fixture(scope="session")
def pages(tmp_path_factory):
    """Return the path of the page of each molecule."""
    place = tmp_path_factory.mktemp("pages")
    found = {}
    for name, (structure, bands) in _structures().items():
        observed = parse_bands(bands, f"{name}-bands.csv") if bands else None
        path = place / f"{name}.html"
        report = collect([structure], observed, command=f"vibsym report {name}.xyz")
        path.write_text(report_page(report), encoding="utf-8")
        found[name] = path
    for name, (structures, observed, proposal) in _several().items():
        found[name] = path = place / f"{name}.html"
        path.write_text(report_page(collect(structures, observed, proposal)), encoding="utf-8")
    return found
