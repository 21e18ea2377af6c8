"""A printed number becomes the flux that astropy's own conversions give."""

import math

import pytest
from astropy import units as u
from hypothesis import given, settings
from hypothesis import strategies as st

from starkiln.errors import InputError
from starkiln.observations import Star
from starkiln.passbands import band_names, load_band

W_M3 = u.W / u.m**3


def one(photometry, **rest):
    (found,) = Star("x", photometry, **rest).measurements
    return found


@settings(deadline=None)
@given(value=st.floats(5.0, 20.0), band=st.sampled_from(band_names()))
def test_ab_magnitudes_are_astropys(value, band):
    # astropy.units.ABmag is Oke & Gunn's definition; F_nu to F_lambda at the pivot
    # wavelength is exact for band means (Tokunaga & Vacca 2005, PASP 117, 421, eq. A16).
    found = one({band: (value * u.ABmag, 0.02 * u.mag)}, saturated="keep")
    pivot = load_band(band).pivot_m * u.m
    expected = (value * u.ABmag).to(u.Jy).to_value(W_M3, u.spectral_density(pivot))
    assert found.flux_w_m3 == pytest.approx(expected, rel=1e-12)
    assert found.fractional_error == pytest.approx(0.4 * math.log(10) * 0.02, rel=1e-12)
    assert found.error_w_m3 == pytest.approx(found.fractional_error * expected, rel=1e-12)


@pytest.mark.parametrize(
    "unit",
    [
        "Jy",
        "mJy",
        "W m-2 um-1",
        "erg s-1 cm-2 Angstrom-1",
        "erg s-1 cm-2 Hz-1",
        "W / m3",
    ],
)
def test_flux_densities_are_astropys(unit):
    pivot = load_band("2MASS H").pivot_m * u.m
    flux = (3.0 * u.mJy).to(u.Unit(unit), u.spectral_density(pivot))
    found = one({"2MASS H": (flux, 0.05 * flux)})
    expected = (3.0 * u.mJy).to_value(W_M3, u.spectral_density(pivot))
    assert found.flux_w_m3 == pytest.approx(expected, rel=1e-10)
    assert found.fractional_error == pytest.approx(0.05, rel=1e-10)


def test_bare_numbers_are_magnitudes_of_the_bands_own_system():
    bare = one({"SDSS r": (15.0, 0.02)})
    assert bare == one({"SDSS r": (15.0 * u.mag, 0.02 * u.mag)})
    vega = one({"2MASS J": (9.0, 0.02)})
    assert vega.flux_w_m3 == pytest.approx(load_band("2MASS J").zero_flux_w_m3("Vega") * 10**-3.6)


def test_millimagnitudes_of_the_error_are_converted():
    assert one({"Gaia G": (9.0 * u.mag, 20 * u.mmag)}) == one({"Gaia G": (9.0, 0.02)})


def test_a_fainter_magnitude_is_an_upper_limit_of_flux():
    star = Star("x", {"Gaia G": (9.0, 0.01), "WISE W4": (">", 8.0)}, limit_sigma=2.0)
    found = star.measurements[1]
    assert (found.limit, found.limit_sigma) == ("upper", 2.0)
    assert found.flux_w_m3 == pytest.approx(load_band("WISE W4").zero_flux_w_m3() * 10**-3.2)
    assert found.error_w_m3 == pytest.approx(found.flux_w_m3 / 2.0)
    assert star.limits == ("WISE W4",)


@pytest.mark.parametrize(("flag", "side"), [("<", "upper"), (">", "lower")])
def test_a_limit_in_flux_has_its_own_sense(flag, side):
    star = Star("x", {"Gaia G": (9.0, 0.01), "WISE W4": (flag, 8.0 * u.mJy)})
    assert star.measurements[1].limit == side


def test_a_flux_that_is_not_above_zero_is_data():
    found = one({"WISE W3": (-0.2 * u.mJy, 0.3 * u.mJy)})
    assert found.flux_w_m3 < 0.0 < found.error_w_m3
    assert found.fractional_error == math.inf


def test_a_star_too_bright_for_its_survey():
    # Limits and extra errors are those of the band table: WISE W1 is dropped above 8 mag,
    # WISE W3 widened by 0.1 mag above 3.8 (Wright et al. 2010; common practice).
    photometry = {"Gaia G": (9.0, 0.01), "WISE W1": (7.0, 0.02), "WISE W3": (3.0, 0.02)}
    star = Star("x", photometry)
    assert star.bands == ("Gaia G", "WISE W3")
    assert set(star.saturated_bands) == {"WISE W1", "WISE W3"}
    assert star.measurements[1].fractional_error == pytest.approx(
        0.4 * math.log(10) * math.hypot(0.02, 0.1)
    )
    assert any(note.startswith("WISE W1: saturated: 7.00 mag") for note in star.notes)
    assert Star("x", photometry, saturated="drop").bands == ("Gaia G",)
    kept = Star("x", photometry, saturated="keep")
    assert kept.bands == ("Gaia G", "WISE W1", "WISE W3")
    assert kept.saturated_bands == ()


def test_saturation_is_judged_in_flux_units_too():
    flux = load_band("WISE W3").zero_flux_w_m3() * 10 ** (-0.4 * 3.0) * W_M3
    star = Star("x", {"WISE W3": (flux, 0.02 * flux)})
    assert star.saturated_bands == ("WISE W3",)


@pytest.mark.parametrize(
    ("entry", "words"),
    [
        ((9.0, 0.0), "error 0 mag is not above zero"),
        ((9.0, -0.1), "error -0.1 mag"),
        ((9.0, math.inf), "error inf mag"),
        ((math.inf, 0.1), "infinite magnitude"),
        ((math.inf * u.Jy, 0.1 * u.Jy), "infinite flux"),
        ((99.99, 0.1), "99.99 mag is no magnitude of a star"),
        ((-999.0, 0.1), "-999 mag is no magnitude"),
        (9.0, "an error is needed"),
        ((9.0, 0.1, 3.0), "not 3 numbers"),
        (("~", 9.0), "no limit flag"),
        (("<", -1.0 * u.Jy), "a limit must be a flux above zero"),
        ((9.0 * u.K, 1.0 * u.K), "neither a magnitude nor a flux density"),
        ((9.0 * u.mJy, 0.1 * u.mag), "the error is in 'mag' and the value in 'mJy'"),
        (("bright", 0.1), "no limit flag"),
    ],
)
def test_a_number_that_cannot_be_is_refused(entry, words):
    with pytest.raises(InputError, match=words) as caught:
        Star("Adra 1", {"2MASS J": entry})
    assert "Adra 1" in str(caught.value)
    assert "2MASS J" in str(caught.value)
