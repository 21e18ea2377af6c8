import numpy as np
import pytest

from starkiln.interiors import zero_age_luminosity, zero_age_radius


def test_zero_age_sun_and_hot_stars():
    # Tout et al. 1996: a zero-age star of 1 solar mass has L = 0.698, R = 0.888 (MEMORY).
    # Electron-scattering Eddington factors 0.0146, 0.149, 0.340 of an independent
    # structure calculation at 10, 40 and 100 solar masses, within its own 3 per cent.
    assert zero_age_luminosity(1.0) == pytest.approx(0.698, abs=0.001)
    assert zero_age_radius(1.0) == pytest.approx(0.888, abs=0.001)
    masses = np.array([10.0, 40.0, 100.0])
    factor = 10**-4.815 * 1.7 * zero_age_luminosity(masses) / masses
    assert factor == pytest.approx([0.0146, 0.149, 0.340], rel=0.03)


@pytest.mark.parametrize("metals", [1e-4, 0.001, 0.01, 0.02, 0.03])
def test_the_fit_is_smooth(metals):
    # A mistyped coefficient shows as a break of the slope d ln L/d ln M, d ln R/d ln M.
    mass = np.geomspace(0.1, 100.0, 400)
    slope_l = np.gradient(np.log(zero_age_luminosity(mass, metals)), np.log(mass))
    slope_r = np.gradient(np.log(zero_age_radius(mass, metals)), np.log(mass))
    assert np.all((slope_l > 1.2) & (slope_l < 6.5))
    assert np.all((slope_r > -0.2) & (slope_r < 1.6))


def test_outside_the_fit_is_nan():
    assert np.isnan(zero_age_luminosity([0.05, 101.0])).all()
    assert np.isnan(zero_age_radius(1.0, 0.05))
