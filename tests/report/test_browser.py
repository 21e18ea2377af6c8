"""The page in a real browser: Chromium, driven by playwright, checked by axe-core.

Needs the packages playwright and axe-playwright-python and a Chromium on the machine
(Debian: `apt-get install chromium`). STARKILN_NEED_BROWSER=1 turns the skip into a
failure, so that a CI run that means to have a browser cannot lose it unseen.
"""

import os
import re
import shutil

import numpy as np
import pytest
from tests.report.fake_run import FakeRun

from starkiln.report import write_page

NAMES = ["Kiln 1", "<script>alert(1)</script>", '" onclick="alert(3)', "O'Hara & \u03b1", ""]
PHONE, DESK = {"width": 390, "height": 844}, {"width": 1300, "height": 900}


def lacking(what):
    text = f"THE PAGE WAS NOT TRIED IN A BROWSER: {what}"
    if os.environ.get("STARKILN_NEED_BROWSER"):
        pytest.fail(text)
    pytest.skip(text)


@pytest.fixture(scope="module")
def browser():
    try:
        from playwright.sync_api import sync_playwright
    except ImportError:
        lacking("pip install playwright axe-playwright-python")
    path = next((found for name in ("chromium", "chromium-browser", "google-chrome")
                 if (found := shutil.which(name))), None)  # fmt: skip
    if path is None:
        lacking("no Chromium on this machine (Debian: apt-get install chromium)")
    with sync_playwright() as playwright:
        running = playwright.chromium.launch(executable_path=path, args=["--no-sandbox"])
        yield running
        running.close()


@pytest.fixture(scope="module")
def run(tmp_path_factory):
    names = NAMES + [f"Kiln {n}" for n in range(6, 131)]
    folder = tmp_path_factory.mktemp("run")
    return FakeRun(names, np.geomspace(3400, 25000, 130), folder=folder)


@pytest.fixture(scope="module")
def address(run):
    return write_page(run).as_uri()


@pytest.fixture(scope="module")
def short_address(tmp_path_factory):
    """A short run: axe weighs every cell of the table."""
    folder = tmp_path_factory.mktemp("short")
    return write_page(FakeRun(NAMES * 2, np.geomspace(3400, 25000, 10), folder=folder)).as_uri()


@pytest.fixture
def tab(browser, address):
    """A page that fails the test when it complains or asks the network for anything."""
    context = browser.new_context(viewport=DESK)
    page = context.new_page()
    trouble = []
    page.on("console", lambda message: trouble.append(message.text))
    page.on("pageerror", lambda error: trouble.append(str(error)))
    page.on("dialog", lambda dialog: trouble.append(f"dialog {dialog.message}"))
    page.on("request", lambda request: trouble.append(request.url) if request.url != address else 0)
    page.goto(address)
    yield page
    context.close()
    assert trouble == []


def column(tab, place):
    return [cell.inner_text() for cell in tab.locator(f"#table tbody td:nth-child({place})").all()]


def test_opens_on_the_hottest_star(tab, run):
    assert tab.title() == "starkiln: 130 stars"
    # Row 129 is the hottest that was fitted; the last was rejected.
    assert tab.inner_text("#star-head") == "Kiln 129"
    assert tab.locator("#star-plots svg").count() == 2
    assert "Rows 1 to 100 of 130" in tab.inner_text("#table-count")


def test_sorts_both_ways(tab):
    heading = tab.get_by_role("button", name="T (K)")
    heading.click()
    rising = [float(text.split("\n")[0]) for text in column(tab, 4)[:20]]
    assert rising == sorted(rising)
    cell = tab.locator("#table thead th:nth-child(4)")
    assert cell.get_attribute("aria-sort") == "ascending"
    heading.press("Enter")  # by keyboard
    falling = [float(text.split("\n")[0]) for text in column(tab, 4)[:20]]
    assert falling == sorted(falling, reverse=True)
    assert falling[0] > rising[0]
    assert cell.get_attribute("aria-sort") == "descending"
    # Stars without a value come last, whichever way.
    tab.get_by_role("button", name="Next page").click()
    assert column(tab, 3)[-1] == "rejected"


def test_filters(tab):
    tab.get_by_label("Status").select_option("rejected")
    assert column(tab, 2) == ["Kiln 130"]
    tab.get_by_role("button", name="Show all").click()
    tab.get_by_label("Name holds").fill("kiln 12")
    assert column(tab, 2) == ["Kiln 12", *[f"Kiln 12{n}" for n in range(10)]]
    tab.get_by_label("Name holds").fill("nobody")
    assert tab.inner_text("#table-count") == "No star matches the filter."
    tab.get_by_role("button", name="Show all").click()
    tab.get_by_label("Hotter than (K)").fill("24000")
    shown = [float(text.split("\n")[0]) for text in column(tab, 4)]
    assert shown
    assert min(shown) > 24000
    tab.get_by_role("button", name="Show all").click()
    tab.get_by_label("Flag").select_option("degenerate")
    assert column(tab, 3) == ["unconverged"]


def test_picks_from_the_table_the_failures_and_the_glance(tab):
    tab.get_by_role("button", name="Kiln 6", exact=True).click()
    assert tab.inner_text("#star-head") == "Kiln 6"
    assert tab.evaluate("document.activeElement.id") == "star-head"
    tab.locator("#failed a").first.click()
    assert tab.inner_text("#star-head") == "Kiln 130"
    assert "no usable band" in tab.inner_text("#star-body")
    assert "No fit, and so no quantities." in tab.inner_text("#star-body")
    tab.locator("#glance a").first.click()
    assert tab.inner_text("#star-head") == "Kiln 129"


def test_picks_from_the_diagram_by_pointer_and_by_keys(tab):
    tab.get_by_role("button", name="Kiln 6", exact=True).click()
    tab.locator("#diagram-plot").scroll_into_view_if_needed()
    box = tab.locator("#diagram-plot svg").bounding_box()
    hottest = tab.evaluate(
        "[chart.x(DATA.values.temperature[128]), chart.y(DATA.values.luminosity[128])]"
    )
    x, y = hottest[0] * box["width"] / 640, hottest[1] * box["height"] / 560
    tab.mouse.click(box["x"] + x, box["y"] + y)
    assert tab.inner_text("#star-head") == "Kiln 129"
    tab.locator("#diagram-plot").focus()
    tab.keyboard.press("ArrowRight")
    assert tab.inner_text("#star-head") == "Kiln 128"
    tab.keyboard.press("ArrowLeft")
    assert tab.inner_text("#star-head") == "Kiln 129"


def test_shows_what_the_run_holds(tab, run):
    """Radius of the hottest star on the page, against the run's own numbers."""
    row = tab.locator("#star-body tr", has_text="radius")
    shown = row.locator("td").inner_text().replace("\N{MINUS SIGN}", "-")
    middle, plus, minus = re.match(r"([\d.]+)\s*\+([\d.]+)\s*-([\d.]+)", shown).groups()
    value, low, high = (float(run.results[f"radius{end}"][128]) for end in ("", "_lo", "_hi"))
    assert float(middle) == pytest.approx(value, rel=0.02)
    assert float(plus) == pytest.approx(high - value, rel=0.1)
    assert float(minus) == pytest.approx(value - low, rel=0.1)
    assert tab.locator("#star-plots svg").first.locator(".point").count() == 2 * 10


def test_posterior_can_be_turned(tab):
    tab.get_by_label("Up").select_option("av")
    title = tab.locator("#star-plots svg").nth(1).get_attribute("aria-label")
    assert "against extinction" in title


def test_names_are_shown_and_not_obeyed(tab):
    names = column(tab, 2)[:5]
    assert names == [
        "Kiln 1",
        "<script>alert(1)</script>",
        '" onclick="alert(3)',
        NAMES[3],
        "row 5",
    ]
    for row in range(1, 6):
        tab.locator(f"#table tbody tr:nth-child({row}) button").click()
        # Row 2 and 4 have a band without a flux.
        assert tab.locator("#star-plots table tbody tr").count() == 12
    assert tab.inner_text("#star-head") == "row 5"


def test_saves_what_is_shown(tab, tmp_path):
    tab.get_by_label("Status").select_option("rejected")
    with tab.expect_download() as download:
        tab.get_by_role("button", name="Save shown as CSV").click()
    path = tmp_path / "stars.csv"
    download.value.save_as(path)
    lines = path.read_text(encoding="utf-8").splitlines()
    assert len(lines) == 2
    assert lines[1].startswith('130,"Kiln 130",rejected,')


def test_prints_every_row(tab, tmp_path):
    tab.evaluate("window.dispatchEvent(new Event('beforeprint'))")
    assert tab.locator("#table tbody tr").count() == 130
    tab.evaluate("window.dispatchEvent(new Event('afterprint'))")
    assert tab.locator("#table tbody tr").count() == 100
    assert tab.pdf().startswith(b"%PDF")


@pytest.mark.parametrize("scheme", ["light", "dark"])
@pytest.mark.parametrize("viewport", [PHONE, DESK])
def test_no_serious_finding_of_axe(browser, short_address, scheme, viewport):
    try:
        from axe_playwright_python.sync_playwright import Axe
    except ImportError:
        lacking("pip install axe-playwright-python")
    context = browser.new_context(viewport=viewport, color_scheme=scheme, bypass_csp=True)
    page = context.new_page()
    page.goto(short_address)
    page.evaluate("for (const d of document.querySelectorAll('details')) d.open = true")
    found = Axe().run(page).response["violations"]
    wide = page.evaluate("document.documentElement.scrollWidth")
    context.close()
    assert [(item["id"], item["nodes"][0]["html"]) for item in found] == []
    assert wide <= viewport["width"]


def test_without_script_the_failures_still_show(browser, address):
    context = browser.new_context(java_script_enabled=False)
    page = context.new_page()
    page.goto(address)
    assert page.locator("#failed table").is_visible()
    assert page.get_by_text("need JavaScript").is_visible()
    context.close()
