"""Prior against posterior, predictive check, chain and autocorrelation."""

import dataclasses

import numpy as np
import pytest
from tests.report.drawn import drawn_texts, outside, overlapping
from tests.report.fake_run import FakeRun

from starkiln.emitters import BlackbodyEmitter
from starkiln.errors import InputError
from starkiln.inference import Settings
from starkiln.report import (
    autocorrelation_plot,
    chain_figure,
    predictive_plot,
    prior_figure,
    run_view,
)
from starkiln.report._checks import _replicate
from starkiln.report._priors import priors_of_settings


@pytest.fixture(scope="module")
def view():
    run = FakeRun(["Kiln 1", "b", "c"], [5800.0, 6000.0, 7000.0])
    made = run_view(run, 1)
    rng = np.random.default_rng(3)
    steps, walkers = 2000, 32
    noise = rng.standard_normal((steps, walkers, 2))
    chain = np.empty_like(noise)
    chain[0] = noise[0]
    # Autoregressive of order 1: the autocorrelation time is (1 + a)/(1 - a) exactly.
    for step in range(1, steps):
        chain[step] = np.array([0.5, 0.8]) * chain[step - 1] + noise[step]
    return dataclasses.replace(made, chain=chain, chain_names=("ln_temperature", "av"), burn_in=100)


def test_prior_figure_names_every_quantity(view, monkeypatch):
    figure = prior_figure(view)
    texts = drawn_texts(figure, monkeypatch)
    assert overlapping(texts) == []
    assert outside(figure, texts) == []
    shown = [text for text, _ in texts]
    for label in ("$T$ (K)", r"$\theta$ (mas)", "$A_V$ (mag)", "$f$", "prior", "posterior"):
        assert label in shown
    # The run folder holds neither a row's dust nor its distance.
    assert shown.count("prior not in the run folder") == 2


def test_prior_densities_integrate_to_one():
    """Each density is a density in the quantity that is drawn, not in its logarithm."""
    for settings in (Settings(), Settings(dust="free")):
        for key, density in priors_of_settings(settings, BlackbodyEmitter()).items():
            grid = np.geomspace(*((1e3, 1e5) if key == "temperature" else (1e-7, 200.0)), 200001)
            assert np.trapezoid(density(grid), grid) == pytest.approx(1.0, abs=2e-3)


def test_predictive_names_bands_and_p(view, monkeypatch):
    ax = predictive_plot(view)
    texts = drawn_texts(ax.figure, monkeypatch)
    assert overlapping(texts) == []
    shown = [text for text, _ in texts]
    assert "2MASS Ks" in shown
    assert "WISE W2" not in shown  # a limit
    assert "flux over median prediction" in shown
    assert any(text.startswith("Kiln 1: p = 0.") for text in shown)


def test_predictive_p_is_uniform_under_the_model():
    """With the true parameters known, p is the chi-square tail: 0.5 at the median of chi^2_10."""
    from scipy.stats import chi2

    model = np.full((20000, 10), 2.0)
    error = np.full(10, 0.1)
    observed = 2.0 + 0.1 * np.sqrt(chi2(10).median() / 10.0) * np.ones(10)
    _, share = _replicate(model, {}, observed, error)
    assert share == pytest.approx(0.5, abs=0.015)
    _, far = _replicate(model, {}, observed + 0.5, error)
    assert far == 0.0
    # Errors of 0.1 and 0.3 x 2 join to 0.608.
    _, wide = _replicate(model, {"misfit": np.full(20000, 0.3)}, np.full(10, 2.7), error)
    assert wide == pytest.approx(chi2(10).sf(10 * (0.7 / 0.6083) ** 2), abs=0.015)


def test_chain_shows_every_parameter_and_the_burn_in(view, monkeypatch):
    figure = chain_figure(view)
    shown = [text for text, _ in drawn_texts(figure, monkeypatch)]
    for label in ("step", r"$\ln T$", "$A_V$ (mag)"):
        assert label in shown
    assert figure.axes[0].patches[0].get_width() == 100


def test_autocorrelation_time_of_a_known_process(view):
    """(1 + a)/(1 - a): 3 for a = 0.5 and 9 for a = 0.8."""
    ax = autocorrelation_plot(view)
    labels = [text.get_text() for text in ax.get_legend().get_texts()]
    assert labels == [r"$\ln T$: $\tau$ = 3", r"$A_V$: $\tau$ = 9"]
    np.testing.assert_allclose(ax.lines[0].get_ydata()[:4], 0.5 ** np.arange(4), atol=0.02)
    assert ax.get_xlabel() == "lag (steps)"


def test_a_run_folder_keeps_no_chain(view):
    with pytest.raises(InputError, match="holds no chain"):
        chain_figure(dataclasses.replace(view, chain=None))
