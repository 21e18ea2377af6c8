"""Luminosity and bolometric magnitude of the nominal Sun: IAU 2015 Resolutions B2 and B3."""

from __future__ import annotations

import numpy as np
import pytest
from astropy import constants as astropy_constants
from astropy import units as u

from starkiln import luminosity
from starkiln.derived import (
    apparent_bolometric_magnitude,
    bolometric_flux,
    bolometric_magnitude,
    luminosity_row,
    luminosity_table,
)
from starkiln.errors import InputError


def test_nominal_sun_is_0_999998_nominal_luminosities():
    # Resolution B3: the nominal effective temperature is the rounded one.
    value = luminosity(1.0 * u.solRad, 5772.0 * u.K)
    assert value.unit == u.solLum
    assert value.value == pytest.approx(0.999998, abs=1e-6)
    expected = (
        4 * np.pi * astropy_constants.R_sun**2 * astropy_constants.sigma_sb * (5772 * u.K) ** 4
    )
    assert value.to_value(u.W) == pytest.approx(expected.to_value(u.W), rel=1e-9)


def test_nominal_magnitudes_of_the_sun():
    # Resolution B2, notes: M_bol = 4.74 (4.739996), m_bol at 1 au = -26.832.
    assert bolometric_magnitude(np.array(3.828e26)) == pytest.approx(4.739996, abs=5e-7)
    assert apparent_bolometric_magnitude(np.array(1361.0)) == pytest.approx(-26.832, abs=5e-4)


def test_sun_at_one_au_has_its_irradiance():
    # 2 R_N / au = 1918.4555 arcsec; L_N / (4 pi au^2) = 1361.17 W m-2 (Prsa et al. 2016).
    flux = bolometric_flux(np.array(5772.0), np.array(1918.4555e3))
    assert flux == pytest.approx(1361.17, rel=1e-5)


def test_units_and_arrays_at_the_door():
    in_metres = luminosity(6.957e8 * u.m, [5772.0, 11544.0] * u.K)
    assert in_metres.value == pytest.approx([0.999998, 15.99997], rel=1e-6)
    assert luminosity(1, 5772).value == pytest.approx(in_metres[0].value, rel=1e-14)


@pytest.mark.parametrize(
    ("radius", "temperature", "words"),
    [
        (-1.0, 5772.0, "radius = -1"),
        (1.0, 0.0, "temperature = 0 K"),
        (1.0 * u.s, 5772.0, "cannot be converted"),
        (1.0, np.nan, "temperature = nan"),
        ("big", 5772.0, "not a number"),
    ],
)
def test_bad_input_is_named(radius, temperature, words):
    with pytest.raises(InputError, match=words):
        luminosity(radius, temperature)


def test_errors_are_carried_beyond_linear_order():
    # Against a plain Monte Carlo (numpy), 4e6 draws: 3e-4 of the interval.
    rng = np.random.default_rng(1)
    radius = rng.normal(8.2, 0.3, 4_000_000)
    temperature = rng.normal(21000.0, 1500.0, 4_000_000)
    draws = radius**2 * (temperature / 5772.0) ** 4 * 0.999998
    row = luminosity_row(8.2, 21000.0, 0.3, 1500.0)
    expected = np.percentile(draws, [16, 84])
    width = expected[1] - expected[0]
    assert row["luminosity_lo"] == pytest.approx(expected[0], abs=3e-3 * width)
    assert row["luminosity_hi"] == pytest.approx(expected[1], abs=3e-3 * width)
    assert row["mbol_lo"] < row["mbol"] < row["mbol_hi"]


def test_one_bad_row_of_a_table_leaves_the_others():
    table = luminosity_table(
        {"name": ["a", "b"], "radius": [1.0, -1.0], "temperature": [5772.0] * 2}
    )
    assert table["luminosity"][0] == pytest.approx(0.999998, abs=1e-6)
    assert table["luminosity"].mask.tolist() == [False, True]
    assert "radius = -1 solRad" in table["message"][1]
