"""Conversions: round trips, astropy's own equivalencies, published asinh magnitudes."""

from __future__ import annotations

import numpy as np
import pytest
from astropy import units as u
from astropy.table import MaskedColumn

from starkiln.errors import BandError, InputError
from starkiln.passbands import convert, flux_from, flux_to, load_band

UNITS = [
    "mag",
    "mag(AB)",
    "mag(ST)",
    "mag(Vega)",
    "mag(asinh)",
    "Jy",
    "uJy",
    "W m-2 um-1",
    "erg s-1 cm-2 A-1",
    "erg s-1 cm-2 Hz-1",
    "photon s-1 cm-2 A-1",
    "photon s-1 m-2",
]


@pytest.mark.parametrize("unit", UNITS)
@pytest.mark.parametrize("name", ["SDSS u", "SDSS z"])
def test_round_trip(unit: str, name: str) -> None:
    flux = np.array([1e-4, 3e-9, 2e-13])
    value, error = flux_to(flux, 0.03 * flux, unit, name)
    back, back_error = flux_from(value, error, unit, name)
    np.testing.assert_allclose(back, flux, rtol=1e-12)
    np.testing.assert_allclose(back_error, 0.03 * flux, rtol=1e-12)


def test_photons_agree_with_astropy() -> None:
    band = load_band("Gaia G")
    value = convert(2.5, "photon s-1 cm-2 Angstrom-1", band, unit="W m-2 um-1")
    expected = (2.5 * u.W / u.m**2 / u.um).to(
        u.photon / u.s / u.cm**2 / u.AA, u.spectral_density(band.photon_mean_m * u.m)
    )
    assert value.quantity.value == pytest.approx(expected.value, rel=1e-12)
    assert value.quantity.unit == expected.unit


def test_photons_of_a_star_of_magnitude_0() -> None:
    # Bessell, Castelli & Plez 1998, Table A2 (from memory): 995.5 photons s-1 cm-2 A-1 at V.
    value = convert(0.0, "photon s-1 cm-2 A-1", "Johnson V", unit="mag").value
    assert value == pytest.approx(995.5, rel=0.01)


def test_electrons_of_gaia() -> None:
    # Riello et al. 2021: zero point of the Vega scale, 25.6873668671, is of e-/s through
    # 0.7278 m2; the curve holds the throughput.
    rate = convert(15.0, "photon s-1 m-2", "Gaia G", unit="mag").value
    assert 2.5 * np.log10(0.7278 * rate) + 15.0 == pytest.approx(25.6873668671, abs=0.003)


def test_asinh_magnitudes() -> None:
    # Stoughton et al. 2002, AJ 123, 485, Table 21 (from memory): magnitude of zero flux, and
    # magnitude at which asinh and Pogson magnitudes differ by less than 1 per cent.
    published = {"u": (24.63, 22.12), "g": (25.11, 22.60), "r": (24.80, 22.29), "z": (22.83, 20.32)}
    for letter, (zero, faint) in published.items():
        name = f"SDSS {letter}"
        assert convert(0.0, "mag(asinh)", name, unit="Jy").value == pytest.approx(zero, abs=0.005)
        pogson = convert(faint, "mag", name, unit="luptitude").value
        assert abs(pogson - faint) < 0.011
    negative = convert(25.5, "Jy", "SDSS r", unit="luptitude", error=0.3)
    assert negative.value < 0.0 < negative.error
    with pytest.raises(BandError, match="Gaia G has no asinh magnitudes"):
        convert(15.0, "Jy", "Gaia G", unit="luptitude")


def test_asinh_error_is_the_derivative() -> None:
    magnitude, step = np.array([18.0, 23.5, 25.0]), 1e-5
    brighter = flux_from(magnitude - step, 0.0, "luptitude", "SDSS i")[0]
    fainter = flux_from(magnitude + step, 0.0, "luptitude", "SDSS i")[0]
    error = flux_from(magnitude, 1.0, "luptitude", "SDSS i")[1]
    np.testing.assert_allclose(error, (brighter - fainter) / (2 * step), rtol=1e-8)


def test_a_column_with_gaps() -> None:
    column = MaskedColumn([1.0, 2.0, -3.0], mask=[False, True, False], unit="mJy")
    result = convert(column, "mag", "2MASS J", error=[0.1, 0.1, 0.1])
    assert np.isnan(result.value).tolist() == [False, True, True]
    # 2.5 / ln 10 times 10 per cent.
    assert result.error[0] == pytest.approx(0.108574, rel=1e-5)
    assert result.unit == "mag"


def test_quantities_bring_their_unit() -> None:
    assert convert(u.Magnitude(12.0 * u.ABmag), "mag(ST)", "Gaia G").value == pytest.approx(
        (12.0 * u.ABmag).to_value(u.STmag, u.spectral_density(load_band("Gaia G").pivot)), abs=1e-12
    )
    assert convert(3.0 * u.mJy, "Jy", "Gaia G").value == pytest.approx(0.003, rel=1e-14)


def test_sdss_catalogue_magnitudes_are_not_quite_ab() -> None:
    # SDSS photometric documentation (from memory): u_AB = u - 0.04, z_AB = z + 0.02.
    assert convert(18.0, "mag(AB)", "SDSS u", unit="mag").value == pytest.approx(17.96)
    assert convert(18.0, "mag(AB)", "SDSS z", unit="mag").value == pytest.approx(18.02)


def test_bad_values() -> None:
    with pytest.raises(InputError, match="-2 Jy is not positive and has no magnitude"):
        convert(-2.0, "mag", "Gaia G", unit="Jy")
    with pytest.raises(InputError, match="the value has no unit"):
        convert(2.0, "mag", "Gaia G")
    with pytest.raises(InputError, match="'bright' is not a number"):
        convert("bright", "mag", "Gaia G", unit="Jy")
    with pytest.raises(InputError, match="the unit 'K' is no flux density"):
        convert(2.0, "K", "Gaia G", unit="Jy")
