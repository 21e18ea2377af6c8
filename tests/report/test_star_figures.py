"""Structure of the figures of one star: what must be on them, and nothing over another."""

import dataclasses

import numpy as np
import pytest
from tests.report.drawn import drawn_texts, outside, overlapping
from tests.report.fake_run import BANDS, FakeRun, pivot_um

from starkiln.errors import InputError
from starkiln.report import corner_figure, image_bytes, run_view, sed_figure

NAMES = ["Kiln 1", 'a/b "$<script>\N{GREEK SMALL LETTER ALPHA}' + "x" * 300, "", "Kiln 4"]


@pytest.fixture(scope="module")
def run():
    return FakeRun(NAMES, [5800, 9000, 20000, 3500])


def test_sed_shows_its_labels_bands_and_limits(run, monkeypatch):
    figure = sed_figure(run_view(run, 1))
    shown = [text for text, _ in drawn_texts(figure, monkeypatch)]
    for label in (
        r"$\lambda F_\lambda$ ($\mathrm{W\,m^{-2}}$)",
        "residual (\N{GREEK SMALL LETTER SIGMA})",
        "residual (%)",
        "wavelength (µm)",
        "Kiln 1",
        "fitted",
        "left out",
        "limit",
        "model, 68%",
        *BANDS,
    ):
        assert label in shown
    arrows = [text for text in figure.axes[1].texts if getattr(text, "arrow_patch", None)]
    assert len(arrows) == 1
    tail, head = arrows[0].xy, arrows[0].get_position()
    assert tail[0] == pytest.approx(pivot_um("WISE W2"))
    assert head[1] < 0  # an upper limit points down


@pytest.mark.parametrize(
    ("width", "count"), [("one", count) for count in range(1, 13)] + [("two", 1), ("two", 12)]
)
def test_sed_labels_never_overlap(width, count, monkeypatch):
    run = FakeRun(NAMES, [3600 + 2000 * count, 9000, 20000, 3500], bands=BANDS[-count:])
    figure = sed_figure(run_view(run, 1), width=width, draws=16)
    texts = drawn_texts(figure, monkeypatch)
    assert overlapping(texts) == []
    assert outside(figure, texts) == []
    assert len([text for text, _ in texts if text in BANDS]) == count


def test_sed_residuals_are_those_of_the_likelihood(run):
    """The drawn points equal (d - F)/sqrt(e^2 + f^2 F^2), worked out here by hand."""
    view = run_view(run, 1)
    figure = sed_figure(view, draws=256)
    band = next(item for item in view.photometry if item.band == "2MASS J")
    index = BANDS.index("2MASS J")
    model = np.median(view.model(view.draws)[:, index])
    misfit = np.median(view.draws["misfit"])
    expected = (band.flux - model) / np.sqrt(band.e_flux**2 + (misfit * model) ** 2)
    drawn = [
        line.get_ydata()[0]
        for line in figure.axes[2].lines
        if len(line.get_xdata()) == 1 and line.get_xdata()[0] == band.wavelength_um
    ]
    assert drawn == [pytest.approx(expected)]


def test_sed_of_a_band_without_a_flux(run, monkeypatch):
    """What was left out without a flux keeps its name and the model, and has no point."""
    figure = sed_figure(run_view(run, 2))
    assert "SDSS g" in [text for text, _ in drawn_texts(figure, monkeypatch)]
    place = pivot_um("SDSS g")
    markers = [
        line.get_marker()
        for line in figure.axes[1].lines
        if len(line.get_xdata()) == 1
        and line.get_xdata()[0] == place
        and np.isfinite(line.get_ydata()[0])
    ]
    assert markers == ["D"]


def test_sed_of_a_negative_flux_and_an_infinite_error(run):
    view = run_view(run, 1)
    first, second, *others = view.photometry
    odd = (
        dataclasses.replace(first, flux=-first.flux),
        dataclasses.replace(second, e_flux=np.inf),
        *others,
    )
    figure = sed_figure(dataclasses.replace(view, photometry=odd))
    assert image_bytes(figure, "png")


@pytest.mark.parametrize("row", [2, 3])
@pytest.mark.parametrize("draw", [sed_figure, corner_figure])
def test_a_name_that_would_harm_is_only_shown(run, row, draw, monkeypatch):
    figure = draw(run_view(run, row))
    texts = drawn_texts(figure, monkeypatch)
    title = "row 3" if row == 3 else 'a/b "$<script>\N{GREEK SMALL LETTER ALPHA}x'
    assert any(text.startswith(title) for text, _ in texts)
    assert outside(figure, texts) == []


@pytest.mark.parametrize("draw", [sed_figure, corner_figure])
def test_a_rejected_star_says_why(run, draw):
    with pytest.raises(InputError, match=r"row 4.*no usable band"):
        draw(run_view(run, 4))


@pytest.mark.parametrize("width", ["one", "two"])
def test_corner_shows_every_label_with_its_unit(run, width, monkeypatch):
    chosen = None if width == "two" else ("temperature", "av", "radius")
    figure = corner_figure(run_view(run, 1), width=width, quantities=chosen)
    texts = drawn_texts(figure, monkeypatch)
    labels = [r"$T$ (K)", r"$A_V$ (mag)"]
    labels += [r"$\theta$ (mas)", r"$f$", r"$d$ (pc)"] if width == "two" else []
    labels += [] if width == "two" else [r"$R$ ($\mathrm{R_\odot}$)"]
    for label in labels:
        assert label in [text for text, _ in texts]
    assert overlapping(texts) == []
    assert outside(figure, texts) == []


def test_corner_title_is_the_rounded_median_and_interval(run):
    """The percentiles are numpy's, from the draws."""
    view = dataclasses.replace(run_view(run, 1), summary={})
    figure = corner_figure(view)
    low, middle, high = np.percentile(view.draws["temperature"], [16, 50, 84])
    assert middle == pytest.approx(5790, abs=5)
    assert high - middle == pytest.approx(90, abs=5)
    assert middle - low == pytest.approx(110, abs=5)
    assert figure.axes[0].get_title() == "$T$ = $5790^{+90}_{-110}$ K"
    view = dataclasses.replace(
        view, summary={"temperature": 5800.0, "temperature_lo": 5700.0, "temperature_hi": 6000.0}
    )
    assert corner_figure(view).axes[0].get_title() == "$T$ = $5800^{+200}_{-100}$ K"


def test_corner_refuses_what_is_not_there(run):
    view = run_view(run, 2)
    with pytest.raises(InputError, match="hold no 'distance'"):
        corner_figure(view, quantities=["distance"])
    with pytest.raises(InputError, match="'colour' is unknown"):
        corner_figure(view, quantities=["colour"])
    fixed = dataclasses.replace(view, draws=dict(view.draws) | {"av": np.zeros(256)})
    with pytest.raises(InputError, match="held fixed"):
        corner_figure(fixed, quantities=["av"])
    assert len(corner_figure(fixed).axes) == 9


def test_one_free_quantity_makes_one_panel(run):
    assert len(corner_figure(run_view(run, 1), quantities=["av"]).axes) == 1
