"""Distance posteriors against direct integration (scipy.integrate) and published sense."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq

from starkiln.errors import InputError
from starkiln.inference import Settings, from_distance, from_parallax

SETTINGS = Settings()


def percentile(parallax, error, level, length=1350.0):
    """A percentile of d^2 exp(-d/L) N(parallax; 1/d, error) by adaptive quadrature."""

    def density(d):
        return d * d * np.exp(-d / length - 0.5 * ((1000.0 / d - parallax) / error) ** 2)

    peak = 1000.0 / parallax if parallax > 0 else 2.0 * length
    top = density(peak)
    low = 1000.0 / (max(parallax, 0.0) + 12.0 * error)
    high = 40.0 * length
    if parallax > 15.0 * error:
        high = 1000.0 / (parallax - 12.0 * error)
    points = np.geomspace(low, high, 40)
    whole = sum(quad(lambda d: density(d) / top, *pair)[0] for pair in pairwise(points))

    def below(d):
        inside = [*points[points < d], d]
        return sum(quad(lambda x: density(x) / top, *p)[0] for p in pairwise(inside)) / whole

    return brentq(lambda d: below(d) - level, points[1], points[-2], xtol=1e-6 * peak)


@pytest.mark.parametrize(
    ("parallax", "error"), [(2.31, 0.03), (10.0, 0.002), (0.4, 0.2), (-0.3, 0.2), (0.0, 1.0)]
)
def test_percentiles_agree_with_adaptive_quadrature(parallax, error):
    posterior = from_parallax(parallax, error, SETTINGS)
    for level in (0.16, 0.5, 0.84):
        got = np.interp(level, posterior.cumulative, posterior.distance_pc)
        assert got == pytest.approx(percentile(parallax, error, level), rel=2e-4)


def test_sharp_parallax_gives_its_inverse():
    posterior = from_parallax(5.0, 0.005, SETTINGS)
    draws = posterior.draw(np.random.default_rng(0), 5000)
    assert np.median(draws) == pytest.approx(200.0, rel=1e-4)
    assert draws.std() == pytest.approx(0.2, rel=0.02)


def test_hopeless_parallax_gives_the_prior():
    # p(d) ~ d^2 exp(-d/L) is a gamma distribution: mean 3 L, variance 3 L^2.
    draws = from_parallax(0.0, 500.0, SETTINGS).draw(np.random.default_rng(0), 20000)
    assert draws.mean() == pytest.approx(3 * 1350.0, rel=0.01)
    assert draws.std() == pytest.approx(np.sqrt(3) * 1350.0, rel=0.02)


def test_zero_point_and_error_factor_count():
    moved = from_parallax(
        2.27, 0.02, Settings(parallax_zero_point=-0.04, parallax_error_factor=1.5)
    )
    plain = from_parallax(2.31, 0.03, SETTINGS)
    np.testing.assert_allclose(moved.distance_pc, plain.distance_pc, rtol=1e-12)
    assert "zero point -0.04" in moved.description


def test_uniform_prior_is_cut_at_ten_lengths():
    settings = Settings(distance_prior="uniform", distance_length=100.0)
    draws = from_parallax(-1.0, 3.0, settings).draw(np.random.default_rng(0), 4000)
    assert 900.0 < draws.max() <= 1000.0


def test_given_distances_are_taken_as_they_are():
    assert from_distance(100.0, None).draw(np.random.default_rng(0), 3).tolist() == [100.0] * 3
    draws = from_distance(100.0, 8.0).draw(np.random.default_rng(0), 20000)
    assert draws.mean() == pytest.approx(100.0, rel=1e-3)
    assert draws.std() == pytest.approx(8.0, rel=0.01)


def test_bad_numbers_are_named():
    with pytest.raises(InputError, match="e_parallax = 0 mas must be above 0"):
        from_parallax(1.0, 0.0, SETTINGS)
    with pytest.raises(InputError, match="distance = -5 pc"):
        from_distance(-5.0, None)
