"""Figures of a whole run: what must be on them, and numbers worked out by other means."""

import numpy as np
import pytest
from tests.report.drawn import drawn_texts, outside, overlapping
from tests.report.fake_run import BANDS, FakeRun

from starkiln.errors import InputError
from starkiln.report import hr_plot, misfit_plot, run_view, temperature_figure
from starkiln.report._sample import band_residuals, posterior_ellipse
from starkiln.report._tracks import main_sequence_tracks, zero_age_line


@pytest.fixture(scope="module")
def run():
    return FakeRun([f"Kiln {n}" for n in range(12)], np.geomspace(3400, 25000, 12))


def shown(figure, monkeypatch):
    texts = drawn_texts(figure, monkeypatch)
    assert overlapping(texts) == []
    assert outside(figure, texts) == []
    return [text for text, _ in texts]


@pytest.mark.parametrize("width", ["one", "two"])
def test_hr_shows_stars_radii_and_the_zero_age_sequence(run, width, monkeypatch):
    ax = hr_plot(run, width=width)
    texts = shown(ax.figure, monkeypatch)
    lines = ("zero-age main sequence", "0.1 R$_\\odot$")
    for label in ("$T$ (K)", r"$L$ ($\mathrm{L_\odot}$)", *lines):
        assert label in texts
    assert any(text.endswith(" M$_\\odot$") for text in texts)
    # One star has no distance, one was rejected.
    assert "10 stars, 2 without luminosity" in texts
    assert len(ax.patches) == 10
    assert ax.xaxis_inverted()
    open_points = [line for line in ax.lines if line.get_markerfacecolor() == "white"]
    assert len(open_points) == 1  # the unconverged star


def test_radius_lines_follow_the_stefan_boltzmann_law(run):
    """The Sun's own line passes through 5772 K and 1 L_sun (IAU 2015 Resolution B3)."""
    ax = hr_plot(run)
    lines = [line for line in ax.lines if line.get_linestyle() == ":"]
    passing = [
        np.exp(np.interp(np.log(5772.0), np.log(line.get_xdata()), np.log(line.get_ydata())))
        for line in lines
    ]
    radii = np.array([0.01, 0.03, 0.1, 0.3, 1, 3, 10, 30, 100, 300, 1000])
    np.testing.assert_allclose(passing, radii**2)


def test_zero_age_sequence_passes_the_zero_age_sun(run):
    """At 1 solar mass the Sun began with 0.70 L_sun (Gough 1981, Sol. Phys. 74, 21), within 3%."""
    ax = hr_plot(run)
    line = next(item for item in ax.lines if item.get_label() == "zero-age main sequence")
    mass = np.geomspace(0.1, 100.0, 200)
    luminosity = np.exp(np.interp(0.0, np.log(mass), np.log(line.get_ydata())))
    assert luminosity == pytest.approx(0.70, rel=0.03)


def test_tracks_leave_the_zero_age_line_and_cool(run):
    """A star brightens and cools on the main sequence; its start lies within 7% of the line."""
    line = dict(zip(*zero_age_line(), strict=True))
    temperatures = np.array(sorted(line))
    for mass, (temperature, luminosity) in main_sequence_tracks().items():
        start = np.interp(np.log(luminosity[0]), np.log(list(line.values())), np.log(list(line)))
        assert temperature[0] == pytest.approx(np.exp(start), rel=0.07), mass
        assert luminosity[-1] > luminosity[0]
        assert temperature.min() < 0.9 * temperature[0]
        assert temperatures[0] < temperature[0] < temperatures[-1] * 1.1


def test_ellipse_holds_one_standard_deviation():
    """Of a Gaussian of two dimensions, 39.3 per cent lies within (1 - exp(-1/2))."""
    rng = np.random.default_rng(5)
    mean, covariance = [8.7, 0.4], [[4e-4, 9e-4], [9e-4, 4e-3]]
    sample = np.exp(rng.multivariate_normal(mean, covariance, 20000))
    outline = np.log(posterior_ellipse(*sample.T, points=400))
    from matplotlib.path import Path

    inside = Path(outline).contains_points(np.log(sample)).mean()
    assert inside == pytest.approx(1 - np.exp(-0.5), abs=0.012)
    assert np.ptp(outline[:, 1]) / 2 == pytest.approx(np.sqrt(4e-3), rel=0.02)


def test_a_run_without_distances_has_no_diagram(run):
    bare = FakeRun(["a", "b", "c"], [5000.0, 6000.0, 7000.0])
    bare.results.remove_columns(["luminosity", "luminosity_lo", "luminosity_hi"])
    with pytest.raises(InputError, match="give parallax or distance"):
        hr_plot(bare)


def test_misfit_names_every_band_with_its_stars(run, monkeypatch):
    texts = shown(misfit_plot(run).figure, monkeypatch)
    # The limit in W2 and the band that was left out are no residuals.
    for band in set(BANDS) - {"WISE W2", "SDSS g"}:
        assert f"{band} (11)" in texts
    assert not any(text.startswith(("WISE W2", "SDSS g")) for text in texts)
    assert any("(%)" in text for text in texts)


def test_a_wrong_zero_point_shows_in_its_band(run):
    """One band is made 20 per cent too bright: its median residual says so, no other's does."""
    wrong = FakeRun(run.names, run.temperatures)
    band = wrong.photometry["band"] == "2MASS H"
    wrong.photometry["flux"][band] *= 1.2
    found = band_residuals(run_view(wrong, row) for row in range(1, 12))
    medians = {band: np.median(values) for band, values in found.items()}
    assert max(medians, key=lambda band: abs(medians[band])) == "2MASS H"
    assert medians["2MASS H"] == pytest.approx(20.0, abs=6.0)


def test_temperature_shows_the_median_difference(run, monkeypatch):
    results = run.results
    published = np.asarray(results["temperature"].filled(np.nan)) / 1.04
    figure = temperature_figure(results, published, np.full(12, 50.0))
    texts = shown(figure, monkeypatch)
    for label in ("published temperature (K)", "fitted temperature (K)", "difference (%)"):
        assert label in texts
    assert "median +4.0%" in texts
    assert "11 stars" in texts


def test_temperature_needs_one_value_per_row(run):
    with pytest.raises(InputError, match="3 published temperatures for 12 rows"):
        temperature_figure(run.results, [1.0, 2.0, 3.0])
    with pytest.raises(InputError, match="no star has both"):
        temperature_figure(run.results, np.full(12, np.nan))


def test_axes_of_the_caller_are_used():
    from matplotlib.figure import Figure

    ax = Figure().subplots()
    run = FakeRun(["a", "b", "c", "d"], [5000.0, 6000.0, 7000.0, 8000.0])
    assert hr_plot(run, ax=ax) is ax
    assert ax.get_xlabel() == "$T$ (K)"
