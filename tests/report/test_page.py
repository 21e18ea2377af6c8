"""The page of a run, read by Python's own HTML parser; a browser tries it in test_browser.py."""

import json
import re
from html.parser import HTMLParser

import numpy as np
import pytest
from tests.report.fake_run import FakeRun

from starkiln.report import page, write_page

NAMES = [
    "<script>alert(1)</script>",
    "</script><img src=x onerror=alert(2)>",
    '" onclick="alert(3)',
    "O'Hara & \u03b1",
    "",
    "x" * 5000,
    "a\nb\x00c",
    "<!-- <script >",
    "Kiln 9",
    "<img src=x onerror=alert(4)>",
]


class Reader(HTMLParser):
    """Collect tags, attributes and the text of scripts."""

    def __init__(self):
        super().__init__()
        self.tags, self.attributes, self.scripts, self.text = [], [], [], []

    def handle_starttag(self, tag, attrs):
        self.tags.append(tag)
        self.attributes += [(tag, *pair) for pair in attrs]

    def handle_data(self, data):
        inside = self.tags[-1] if self.tags else ""
        (self.scripts if inside == "script" else self.text).append(data)


@pytest.fixture(scope="module")
def run(tmp_path_factory):
    folder = tmp_path_factory.mktemp("run")
    return FakeRun(NAMES, np.geomspace(3400, 25000, 10), folder=folder)


@pytest.fixture(scope="module")
def text(run):
    return page(run)


@pytest.fixture(scope="module")
def reader(text):
    made = Reader()
    made.feed(text)
    return made


@pytest.fixture(scope="module")
def data(text):
    found = re.search(r'<script type="application/json" id="data">(.*?)</script>', text, re.DOTALL)
    return json.loads(found[1])


def test_names_are_escaped_everywhere(text, reader):
    """Only the page's own two scripts, no image, no handler: nothing of a name became markup."""
    assert reader.tags.count("script") == 2
    assert "img" not in reader.tags
    assert not [name for _, name, _ in reader.attributes if name.startswith("on")]
    assert "alert(1)</script>" not in text


def test_the_data_hold_no_markup_at_all(text):
    """Not one bracket or ampersand: no parser state of a script can be entered."""
    raw = re.search(r'id="data">(.*?)</script>', text, re.DOTALL)[1]
    assert not set("<>&") & set(raw)


def test_nothing_is_asked_of_the_network(reader):
    for _, name, value in reader.attributes:
        if name in {"src", "href", "action", "srcset", "poster", "data"}:
            assert value.startswith("#"), (name, value)
    assert not [tag for tag in reader.tags if tag in {"link", "iframe", "object", "embed", "form"}]
    policy = [value for _, name, value in reader.attributes if name == "content"]
    assert any(value.startswith("default-src 'none'") for value in policy)


def test_landmarks_and_headings(reader):
    for tag in ("header", "nav", "main", "footer", "h1"):
        assert reader.tags.count(tag) == 1
    sections = [value for tag, name, value in reader.attributes if (tag, name) == ("section", "id")]
    wanted = ["glance", "failed", "diagram", "star", "stars", "assumptions", "cite"]
    assert sections == wanted
    assert ("html", "lang", "en") in reader.attributes


def test_plain_html_tells_the_failures_and_the_hottest_star(text, run):
    """Without a script too: who failed and why, the hottest star and its radius with error."""
    head = text.split('<p id="no-script">')[0]
    assert "no usable band: every magnitude is missing" in head
    assert "&lt;img src=x onerror=alert(4)&gt;</a>" in head
    hottest = head.split('<th scope="row">Hottest</th>')[1].split("</tr>")[0]
    assert "Kiln 9" in hottest
    radius = float(run.results["radius"][8])
    shown = re.findall(
        r'class="number">([\d.]+)<span class="error"><span>\+([\d.]+)</span>', hottest
    )
    assert float(shown[1][0]) == pytest.approx(radius, rel=0.03)
    error = float(run.results["radius_hi"][8]) - radius
    assert float(shown[1][1]) == pytest.approx(error, rel=0.1)


def test_assumptions_and_citations_are_there(text):
    for part in (
        "log-uniform, 3000 to 50000 K",
        "distance_length",
        "@article{Harris2020,",
        "2MASS J",
    ):
        assert part in text


def test_data_holds_every_star(data, run):
    assert len(data["names"]) == 10
    assert data["messages"][-1].startswith("no usable band")
    np.testing.assert_allclose(
        data["values"]["temperature"][:9], run.results["temperature"][:9], rtol=1e-5
    )
    assert data["values"]["temperature"][9] is None
    assert data["draws"][9] is None
    assert data["spectra"][9] == ""


def test_packed_draws_and_spectra_unpack_to_what_they_were(data, run):
    """Read back by numpy: draws within half a step of 256, spectra within 0.06 per cent."""
    import base64

    kept = data["draws"][0]
    raw = np.frombuffer(base64.b64decode(kept["data"]), dtype="u1").reshape(len(kept["keys"]), -1)
    place = kept["keys"].index("temperature")
    low, high = kept["range"][place]
    found = low + raw[place] / 255 * (high - low)
    full = np.asarray(run.draws(1)["temperature"])
    pick = np.linspace(0, 255, 96).round().astype(int)
    np.testing.assert_allclose(found, full[pick], atol=0.51 * (high - low) / 255 + 0.5)
    steps = np.frombuffer(base64.b64decode(data["spectra"][0]), dtype="<u2").reshape(3, -1)
    low, high = data["spectrumRange"]
    flux = 10 ** (low + steps / 65535 * (high - low))
    wavelength = np.array(data["wavelengths"])
    sample = {key: np.asarray(run.draws(1)[key])[pick] for key in run.draws(1).colnames}
    expected = np.median(run.model(1).spectrum(wavelength * 1e-6, sample), axis=0)
    np.testing.assert_allclose(flux[1], expected, rtol=1e-3)


def test_one_star_and_none_fitted(tmp_path):
    one = FakeRun(["only"], [5000.0], folder=tmp_path)
    text = page(one)
    assert "starkiln: 1 star<" in text
    assert "No star was fitted." in text


def test_without_distances_the_diagram_is_of_flux(tmp_path):
    run = FakeRun(["a", "b", "c"], [5e3, 6e3, 7e3], folder=tmp_path)
    for key in ("distance", "radius", "luminosity"):
        run.results.remove_columns([key, f"{key}_lo", f"{key}_hi"])
    text = page(run)
    assert "Flux against temperature" in text
    assert '"diagram":"bolometric_flux"' in text


def test_many_failures_are_counted_by_reason(tmp_path):
    run = FakeRun([f"s{n}" for n in range(600)], np.full(600, 5e3), folder=tmp_path)
    run.results["status"][:] = "rejected"
    run.results["message"][:] = "no usable band"
    text = page(run)
    assert "600 stars, by reason" in text
    assert text.split('id="failed"')[1].split("</section>")[0].count("no usable band") == 1


def test_the_same_run_gives_the_same_bytes(run):
    path = write_page(run)
    assert path.name == "report.html"
    before = path.read_bytes()
    assert write_page(run).read_bytes() == before
    # Times stand in run.json alone.
    assert b"2026-01-01T" not in before
