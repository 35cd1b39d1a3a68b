"""The report page as a person meets it: in a browser, at three widths, dark and light, by keyboard, without scripts."""

import re
import shutil
import time
from pathlib import Path

import pytest

PROBES = (Path(__file__).parent / "probes.js").read_text(encoding="utf-8")
MOLECULES = ("water", "carbonyl", "benzene", "c60")
LAYOUTS = (*MOLECULES, "tube", "flask", "linear", "atom")
WIDTHS = (400, 900, 1600)


def opened(browser, path, width=900, scheme="light", motion="reduce"):
    """Open a page at a width (px of the window's inside), in a colour scheme; `motion` is the user's wish."""
    browser.execute_cdp_cmd("Emulation.setDeviceMetricsOverride",
                            {"width": width, "height": 900, "deviceScaleFactor": 1, "mobile": False})
    browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"features": [
        {"name": "prefers-color-scheme", "value": scheme}, {"name": "prefers-reduced-motion", "value": motion}]})
    browser.get(path.as_uri())
    browser.execute_script(PROBES)
    return browser


def asked(browser, probe):
    return browser.execute_script(f"return window.probes.{probe}();")


@pytest.mark.parametrize("scheme", ("light", "dark"))
@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("name", LAYOUTS)
def test_layout_and_contrast(browser, pages, name, width, scheme):
    opened(browser, pages[name], width, scheme)
    browser.execute_script("document.querySelectorAll('details').forEach(each => { each.open = true; });")
    for probe in ("sideways", "clipped", "overlapping", "contrast", "unreachable", "broken"):
        assert asked(browser, probe) == [], f"{probe} at {width} px, {scheme}"


@pytest.mark.parametrize("name", ("carbonyl", "flask", "tube"))
def test_between_the_layouts_nothing_scrolls_sideways(browser, pages, name):
    """Where one layout takes over from another a column is narrowest."""
    opened(browser, pages[name])
    for width in (320, 735, 737, 1100, 1247, 1249, 1280):
        browser.execute_cdp_cmd("Emulation.setDeviceMetricsOverride",
                                {"width": width, "height": 900, "deviceScaleFactor": 1, "mobile": False})
        assert asked(browser, "sideways") == [], f"at {width} px"


@pytest.mark.parametrize("name", MOLECULES)
def test_no_console_error_and_no_network(browser, pages, name):
    browser.get_log("browser")
    opened(browser, pages[name])
    time.sleep(0.2)
    assert browser.get_log("browser") == []
    fetched = browser.execute_script("return performance.getEntriesByType('resource').map(each => each.name);")
    assert [each for each in fetched if not each.startswith("data:")] == []


def canvas_pixels(browser):
    return browser.execute_script("return document.querySelector('canvas').toDataURL();")


@pytest.mark.parametrize("name", MOLECULES)
def test_the_structure_turns_and_a_mode_moves(browser, pages, name):
    opened(browser, pages[name], motion="no-preference")
    first = canvas_pixels(browser)
    time.sleep(0.4)
    assert canvas_pixels(browser) != first, "it turns by itself"
    browser.find_element("css selector", "[data-turn]").click()
    time.sleep(0.2)
    still = canvas_pixels(browser)
    time.sleep(0.3)
    assert canvas_pixels(browser) == still, "Hold still holds it"
    button = browser.find_element("css selector", ".motion [data-motion]")
    browser.execute_script("arguments[0].click();", button)
    time.sleep(0.5)
    browser.execute_script("scrollTo(0, document.querySelector('canvas').offsetTop);")
    time.sleep(0.2)
    moving = {canvas_pixels(browser) for _ in range(4) if not time.sleep(0.12)}
    assert len(moving) > 1, "the mode moves"
    assert button.get_attribute("aria-pressed") == "true"
    assert button.get_attribute("data-label") in browser.find_element("css selector", ".status").text


def test_reduced_motion_is_respected(browser, pages):
    opened(browser, pages["benzene"], motion="reduce")
    time.sleep(0.3)
    first = canvas_pixels(browser)
    time.sleep(0.4)
    assert canvas_pixels(browser) == first


@pytest.mark.parametrize("name", ("water", "benzene"))
def test_everything_is_reached_and_worked_by_keyboard(browser, pages, name):
    from selenium.webdriver.common.action_chains import ActionChains
    from selenium.webdriver.common.keys import Keys

    opened(browser, pages[name])
    wanted = browser.execute_script(
        "const all = [...document.querySelectorAll('button, input, a[href], summary, canvas')].filter(e => "
        "e.checkVisibility()); all.forEach((e, k) => { e.dataset.place = k; }); return all.length;")
    reached = set()
    for _ in range(wanted + 10):
        ActionChains(browser).send_keys(Keys.TAB).perform()
        place = browser.execute_script("return document.activeElement.dataset.place || null;")
        if place is not None:
            reached.add(int(place))
            shown = browser.execute_script("return getComputedStyle(document.activeElement).outlineStyle;")
            assert shown != "none", "the focus is seen"
    assert reached == set(range(wanted))
    canvas = browser.find_element("css selector", "canvas")
    before = canvas_pixels(browser)
    browser.execute_script("arguments[0].focus();", canvas)
    ActionChains(browser).send_keys(Keys.ARROW_LEFT, Keys.ARROW_UP).perform()
    assert canvas_pixels(browser) != before
    button = browser.find_element("css selector", ".motion [data-motion]")
    browser.execute_script("arguments[0].focus();", button)
    ActionChains(browser).send_keys(Keys.SPACE).perform()
    assert button.get_attribute("aria-pressed") == "true"


def test_text_and_drawings_are_there_without_scripts(browser_options, pages):
    from selenium import webdriver
    from selenium.webdriver.chrome.service import Service

    options = browser_options("--blink-settings=scriptEnabled=false")
    driver = webdriver.Chrome(options=options, service=Service(shutil.which("chromedriver")))
    try:
        driver.get(pages["carbonyl"].as_uri())
        text = driver.find_element("tag name", "body").text
        for words in ("C4v", "What to expect", "stretch C-O", "Beware", "Which band is which mode", "vibsym report"):
            assert words in text
        assert driver.find_element("css selector", ".stage svg").is_displayed()
        assert not driver.find_elements("css selector", "canvas")
        assert not driver.find_element("css selector", ".motion button").is_displayed()
    finally:
        driver.quit()


def test_the_page_of_sixty_atoms_is_small_and_answers_at_once(browser, pages):
    assert pages["c60"].stat().st_size < 2_000_000
    opened(browser, pages["c60"])
    ready = browser.execute_script("const t = performance.getEntriesByType('navigation')[0]; return t.loadEventEnd;")
    drawn = browser.execute_script(
        "const c = document.querySelector('canvas'); const t = performance.now(); for (let k = 0; k < 20; k++) "
        "c.dispatchEvent(new KeyboardEvent('keydown', { key: 'ArrowLeft' })); return (performance.now() - t) / 20;")
    print(f"C60: {pages['c60'].stat().st_size / 1e6:.2f} MB, loaded after {ready:.0f} ms, one picture {drawn:.1f} ms")
    assert drawn < 200


def test_print_shows_the_still_drawing(browser, pages):
    opened(browser, pages["water"])
    browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": "print"})
    assert browser.find_element("css selector", ".stage svg").is_displayed()
    assert not browser.find_element("css selector", ".stage canvas").is_displayed()
    browser.execute_cdp_cmd("Emulation.setEmulatedMedia", {"media": ""})


def test_a_comment_with_markup_stays_text(browser, pages):
    opened(browser, pages["water"])
    comment = browser.find_element("css selector", ".comment")
    assert "<b>by hand</b>" in comment.text and not comment.find_elements("css selector", "b")
    assert re.search("&lt;b&gt;", pages["water"].read_text(encoding="utf-8"))


SPOILT = {
    "sideways": "const e = document.createElement('div'); e.style.cssText = 'width:3000px'; e.textContent = 'wide'; "
                "document.querySelector('main').append(e);",
    "clipped": "const e = document.createElement('div'); e.style.cssText = 'width:40px;overflow:hidden;"
               "white-space:nowrap'; e.innerHTML = '<span>a text that is cut off at the side</span>'; "
               "document.querySelector('main').append(e);",
    "overlapping": "const e = document.querySelector('dd'); e.style.position = 'relative'; e.style.top = '-24px';",
    "contrast": "document.querySelector('h2').style.color = '#bbb';",
    "unreachable": "document.querySelector('.contents a').tabIndex = -1;",
    "broken": "document.querySelector('.contents a').href = '#nowhere';",
}


@pytest.mark.parametrize("probe", SPOILT)
def test_the_probes_notice_a_spoilt_page(browser, pages, probe):
    opened(browser, pages["benzene"])
    assert asked(browser, probe) == []
    browser.execute_script(SPOILT[probe])
    assert asked(browser, probe)
