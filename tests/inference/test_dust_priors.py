"""Every way to say what is known of the dust: the prior that follows, and the posterior.

Outside check: with one band the data say nothing of A_V, so its posterior must be the
prior, whose percentiles scipy gives.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import halfnorm, truncnorm, uniform

from starkiln import Star, fit
from starkiln.errors import InputError
from starkiln.inference import Settings, build_problem
from starkiln.runner import dust_of, emitter_of

ONE = {"2MASS Ks": (9.0, 0.02)}
FIVE = {
    "Gaia BP": (13.1, 0.01),
    "Gaia RP": (11.6, 0.01),
    "2MASS J": (10.4, 0.02),
    "2MASS H": (9.9, 0.02),
    "2MASS Ks": (9.7, 0.02),
}
QUICK = {"effective_draws": 3000}


def problem_of(star, **settings):
    chosen = Settings(**settings)
    return build_problem(star, emitter_of("blackbody"), dust_of(chosen), chosen)


@pytest.mark.parametrize(
    ("settings", "known", "expected"),
    [
        ({"dust": "free", "dust_width": 0.5}, {}, halfnorm(scale=0.5)),
        (
            {"dust": "gaussian", "dust_mean": 0.4, "dust_width": 0.3},
            {},
            truncnorm(-4 / 3, 30, 0.4, 0.3),
        ),
        ({"dust": "uniform", "dust_width": 2.0}, {}, uniform(0, 2)),
        ({"dust": "column"}, {"av": (0.2, 0.1)}, truncnorm(-2, 90, 0.2, 0.1)),
    ],
)
def test_where_the_data_say_nothing_the_posterior_is_the_prior(settings, known, expected):
    result = fit(Star("one band", ONE, **known), settings=Settings(**settings, **QUICK))
    middle, low, high = result.summary["av"]
    spread = expected.ppf(0.84) - expected.ppf(0.16)
    # 5 standard errors of a percentile of 3,000 draws (about 1.6 sd / sqrt(n)).
    for got, level in ((low, 0.16), (middle, 0.5), (high, 0.84)):
        assert got == pytest.approx(expected.ppf(level), abs=0.08 * spread)
    assert "few_bands" in result.flags


def test_fixed_and_absent_dust_is_no_parameter():
    assert problem_of(Star("a", FIVE, av=0.3)).fixed_av == 0.3
    assert problem_of(Star("a", FIVE, av=(0.3, 0.1)), dust="zero").fixed_av == 0.0
    bare = problem_of(Star("a", FIVE))
    assert bare.fixed_av == 0.0
    assert "no av given: A_V = 0 assumed" in bare.notes


def test_impossible_dust_is_named():
    with pytest.raises(InputError, match="av = 12 mag is out of bounds"):
        problem_of(Star("a", FIVE, av=(12.0, 0.1)))
    with pytest.raises(InputError, match="negative by more than 6 sigma"):
        problem_of(Star("a", FIVE, av=(-0.9, 0.1)))


def test_free_rv_widens_and_is_reported():
    star = Star("dusty", FIVE, av=(2.0, 0.1))
    fixed = fit(star, settings=Settings(**QUICK))
    free = fit(star, settings=Settings(dust_rv_error=0.4, **QUICK))
    assert "rv" not in fixed.summary
    middle, low, high = free.summary["rv"]
    assert 2.3 < low < middle < high < 5.6
    assert free.model.spectrum(np.array([5.5e-7, 2e-6]), free.draws[:3]).shape == (3, 2)
    table = free.model.band_flux(free.draws[:3])
    assert np.all(np.abs(np.log(table / fixed.model.band_flux(fixed.draws[:3]))) < 0.5)


def test_a_row_with_its_own_rv_uses_and_tells_it():
    star = Star("dusty", FIVE, av=2.0, rv=4.5)
    result = fit(star, settings=Settings(**QUICK))
    assert result.problem.dust.rv == 4.5
    assert result.summary["rv"] == (4.5, 4.5, 4.5)
    plain = fit(Star("dusty", FIVE, av=2.0), settings=Settings(**QUICK))
    assert abs(result.summary["temperature"][0] / plain.summary["temperature"][0] - 1) > 0.003


def test_a_published_temperature_serves_as_prior_where_asked():
    star = Star("hot", FIVE, av=(2.0, 0.5), teff=(9000.0, 150.0))
    told = fit(star, settings=Settings(use_published_temperature=True, **QUICK))
    untold = fit(star, settings=Settings(**QUICK))
    assert told.summary["temperature"][0] == pytest.approx(9000.0, abs=400.0)
    assert "temperature prior 9000 +- 150 K" in told.message
    width = [r.summary["temperature"][2] - r.summary["temperature"][1] for r in (told, untold)]
    assert width[0] < width[1]
    with pytest.raises(InputError, match="teff without e_teff"):
        problem_of(Star("hot", FIVE, teff=9000.0), use_published_temperature=True)
