"""Colours of blackbodies: beside the published chromaticities of tests/reference/light.csv."""

from functools import partial

import numpy as np
import pytest

from starkiln import photons
from starkiln.errors import InputError
from starkiln.store import read_data_table

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)


def test_observer_is_the_standard_one():
    # CIE 15:2004: equal energy gives x = y = 1/3, and y_bar is V(lambda), 1 at 555 nm.
    table = read_data_table("photons", "cie_1931_2deg.ecsv")
    assert len(table) == 95
    assert np.all(np.diff(table["wavelength"]) == 5)
    sums = np.array([np.sum(table[c]) for c in ("x_bar", "y_bar", "z_bar")])
    np.testing.assert_allclose(sums, 21.3714, atol=8e-3)
    assert table["y_bar"][table["wavelength"] == 555][0] == approx(1.0, abs=2e-4)


def test_locus_agrees_with_a_published_approximation():
    # Kim et al. 2002 (US patent 7024034), cubic in 1/T, from memory; good to a few 1e-4.
    t = np.array([4500.0, 6500.0, 9000.0, 20000.0])
    x = -3.0258469e9 / t**3 + 2.1070379e6 / t**2 + 0.2226347e3 / t + 0.240390
    y = 3.0817580 * x**3 - 5.87338670 * x**2 + 3.75112997 * x - 0.37001483
    np.testing.assert_allclose(photons.chromaticity(t), np.stack([x, y], -1), atol=6e-4)


def test_cold_bodies_have_the_limit_of_the_spectrum_locus():
    # The longest wavelengths of the table all have one chromaticity, that of spectral red.
    np.testing.assert_allclose(photons.chromaticity([1.0, 30.0]), [[0.7347, 0.2653]] * 2, atol=1e-4)


def test_screen_colours_run_from_red_through_white_to_blue():
    red, solar, blue = photons.srgb([1000.0, 6600.0, 40000.0])
    assert red[0] == approx(1.0, rel=1e-15)
    assert red[2] == 0.0
    assert np.min(solar) > 0.96
    assert blue[2] == approx(1.0, rel=1e-15)
    assert blue[0] < blue[1] < blue[2]
    colours = photons.srgb(np.geomspace(300.0, 1e6, 200))
    assert colours.shape == (200, 3)
    assert np.all((colours >= 0.0) & (colours <= 1.0 + 1e-15))
    # Hotter is never redder.
    assert np.all(np.diff(colours[:, 2] - colours[:, 0]) >= -1e-12)


def test_infinite_temperature_is_the_rayleigh_jeans_colour():
    # CIE: the Planckian locus ends at x = 0.240, y = 0.234.
    np.testing.assert_allclose(photons.chromaticity(1e9), [0.240, 0.234], atol=5e-4)


def test_bad_input():
    with pytest.raises(InputError, match="temperature = 0 K"):
        photons.chromaticity(0.0)
