"""Photometry of any unit into flux, against astropy's own conversions."""

from __future__ import annotations

import numpy as np
import pytest
from astropy import units as u

from starkiln.errors import InputError
from starkiln.passbands import flux_from, flux_unit_kind, load_band

BAND = load_band("SDSS r")
UNITS = [
    "Jy",
    "mJy",
    "erg s-1 cm-2 Hz-1",
    "W m-2 um-1",
    "erg s-1 cm-2 A-1",
    "erg / (s cm2 Angstrom)",
]


@pytest.mark.parametrize("unit", UNITS)
def test_flux_densities_agree_with_astropy(unit: str) -> None:
    value = np.array([1.5, -0.2, 0.0])
    flux, error = flux_from(value, 0.1, unit, BAND)
    quantity = u.Quantity(value, unit.replace(" A-1", " Angstrom-1"))
    expected = quantity.to(u.W / u.m**3, u.spectral_density(BAND.pivot_m * u.m)).value
    np.testing.assert_allclose(flux, expected, rtol=1e-12)
    np.testing.assert_allclose(error, 0.1 * expected[0] / 1.5, rtol=1e-12)


@pytest.mark.parametrize(("unit", "astropy_unit"), [("mag(AB)", u.ABmag), ("mag(ST)", u.STmag)])
def test_magnitudes_agree_with_astropy(unit: str, astropy_unit: u.Unit) -> None:
    flux, error = flux_from([12.0, 15.5], [0.01, 0.02], unit, BAND)
    expected = (u.Magnitude([12.0, 15.5] * astropy_unit)).to(
        u.W / u.m**3, u.spectral_density(BAND.pivot_m * u.m)
    )
    np.testing.assert_allclose(flux, expected.value, rtol=1e-12)
    # d F / F = 0.4 ln 10 dm, by a difference.
    step = flux_from([12.0 - 1e-6, 15.5 - 1e-6], 0.0, unit, BAND)[0] / flux - 1.0
    np.testing.assert_allclose(error / flux, np.array([0.01, 0.02]) * step / 1e-6, rtol=2e-6)


def test_a_bare_magnitude_is_of_the_catalogue() -> None:
    bare = flux_from(0.0, 0.01, "mag", "2MASS J")[0]
    # Cohen, Wheaton & Megeath 2003: 3.129e-13 W cm-2 um-1.
    assert bare == pytest.approx(3.129e-13 * 1e10, rel=1e-12)
    assert flux_from(0.0, 0.01, "mag", "2MASS J", "AB")[0] > bare
    assert flux_from(0.0, 0.01, u.mag, "2MASS J", "Vega")[0] == bare


@pytest.mark.parametrize(
    ("unit", "kind"),
    [("mag", "magnitude"), ("uJy", "per frequency"), ("W / (m2 um)", "per wavelength")],
)
def test_kinds(unit: str, kind: str) -> None:
    assert flux_unit_kind(unit) == kind


@pytest.mark.parametrize("unit", ["W m-2", "K", "erg s-1", "furlong", ""])
def test_other_units_are_refused(unit: str) -> None:
    with pytest.raises(InputError, match="use mag"):
        flux_unit_kind(unit)
