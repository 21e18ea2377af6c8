"""Spectra through bands, against closed forms."""

from __future__ import annotations

import numpy as np
import pytest
from astropy import units as u

from starkiln.errors import BandError, InputError
from starkiln.passbands import band_names, load_band, synthetic_flux, synthetic_magnitude
from starkiln.passbands._kernels import spectrum_mean


@pytest.mark.parametrize("name", band_names())
def test_flat_spectra_have_the_magnitudes_of_their_system(name: str) -> None:
    # A source of constant F_nu (F_lambda) has one AB (ST) magnitude in every band, by
    # definition: Oke & Gunn 1983; 3.63078e-20 erg s-1 cm-2 Hz-1 and 3.63078e-9 per A at 0.
    band = load_band(name)
    wave = np.geomspace(0.9 * band.range_m[0], 1.1 * band.range_m[1], 3000) * 1e6 * u.um
    fnu = np.full(3000, 3.6307805477e-20 * 1e-4) * u.erg / u.s / u.cm**2 / u.Hz
    assert synthetic_magnitude(wave, fnu, band, system="AB") == pytest.approx(10.0, abs=2e-5)
    flam = np.full(2, 3.6307805477e-9 * 1e-4) * u.erg / u.s / u.cm**2 / u.AA
    ends = wave[[0, -1]]
    assert synthetic_magnitude(ends, flam, band, system="ST") == pytest.approx(10.0, abs=1e-9)


def test_a_line_narrower_than_the_curve_samples() -> None:
    # A triangle of unit area is the response times lambda over the integral.
    band = load_band("SDSS r")
    wave = np.array([0.5, 0.61999, 0.62, 0.62001, 0.75])
    flux = np.array([0.0, 0.0, 1e5, 0.0, 0.0])
    plain = band.response * band.wavelength_m
    expected = np.interp(0.62e-6, band.wavelength_m, plain) / (plain @ band.step_m) * 1e-6
    mean = synthetic_flux(wave, flux, band)
    assert mean.to_value("W m-2 um-1") == pytest.approx(expected, rel=1e-4)


def test_coarse_curve_and_coarse_spectrum_are_integrated_exactly() -> None:
    # A triangle 1, 2, 3 weighting photons, F = lambda: the integrals of R lambda^2 and
    # R lambda are 25/6 and 2.
    curve = np.array([1.0, 2.0, 3.0]), np.array([0.0, 1.0, 0.0])
    spectrum = np.array([0.5, 4.0]), np.array([0.5, 4.0])
    mean = spectrum_mean(curve, spectrum, photon=True)
    assert mean == pytest.approx(25.0 / 12.0, rel=1e-14)


def test_order_of_the_spectrum_does_not_matter() -> None:
    wave, flux = np.linspace(0.3, 1.2, 50), np.linspace(1.0, 3.0, 50)
    forward = synthetic_flux(wave, flux, "Gaia G")
    assert synthetic_flux(wave[::-1], flux[::-1], "Gaia G") == forward
    # F_lambda = a + b lambda: the mean is a + b times the band's mean with photon weights.
    band = load_band("Gaia G")
    centre = band.wavelength_m @ band.weight * 1e6
    expected = 1.0 + 2.0 * (centre - 0.3) / 0.9
    assert forward.value == pytest.approx(expected, rel=1e-9)


def test_partial_coverage_is_refused() -> None:
    wave, flux = np.linspace(0.4, 0.6, 20), np.ones(20)
    with pytest.raises(BandError, match=r"misses \d\d\.\d\d% of SDSS r"):
        synthetic_flux(wave, flux, "SDSS r")
    accepted = synthetic_flux(wave, flux, "SDSS r", max_missing=0.9)
    assert 0.0 < accepted.value < 1.0


@pytest.mark.parametrize(
    ("wave", "flux", "message"),
    [
        ([0.4, 0.5, 0.5, 0.9], [1, 1, 1, 1], "not monotonic near 0.5 um"),
        ([0.4, 0.5], [1, 1, 1], "two columns of one length"),
        ([-0.4, 0.5], [1, 1], "wavelength = -0.4 um is out of bounds"),
        ([0.4, 0.9], [1, np.nan], "flux = nan"),
        ([0.4, 0.9] * u.kg, [1, 1], "cannot be converted"),
    ],
)
def test_bad_spectra(wave: list, flux: list, message: str) -> None:
    with pytest.raises(InputError, match=message):
        synthetic_flux(wave, flux, "SDSS r")
