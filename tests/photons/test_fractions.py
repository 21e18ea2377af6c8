"""Parts of blackbody emission: against multiprecision, and the door."""

import math
from functools import partial

import mpmath as mp
import numpy as np
import pytest
from astropy import units as u
from hypothesis import given
from hypothesis import strategies as st

from starkiln import photons
from starkiln.errors import InputError
from starkiln.photons._integrals import TOTAL, band_integral

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)


def tail(x, m):
    """Integrate t^m / (exp(t) - 1) from x to infinity: polylogarithms, mpmath."""
    e = mp.exp(-x)
    return mp.fsum(
        mp.factorial(m) / mp.factorial(m - j) * x ** (m - j) * mp.polylog(j + 1, e)
        for j in range(m + 1)
    )


def exact_integral(lower, width, m):
    with mp.workdps(60):
        a, w = mp.mpf(float(lower)), mp.mpf(float(width))
        whole = mp.factorial(m) * mp.zeta(m + 1)
        start = tail(a, m) if a else whole
        return start - (tail(a + w, m) if w < 2000 else 0)


@pytest.mark.parametrize("m", [2, 3])
@pytest.mark.parametrize("lower", [0.0, 1e-9, 1e-3, 0.5, 1.7, 1.999, 2.0, 3.0, 10.0, 100.0])
def test_integral_agrees_with_multiprecision_to_1e_12(lower, m):
    widths = [1e-6, 1e-3, 0.3, 0.999, 1.0, 1.3, 3.0, 30.0, 1e4, math.inf]
    got = band_integral(np.full(len(widths), lower), np.array(widths), m)
    for width, value in zip(widths, got, strict=True):
        exact = exact_integral(lower, min(width, 1e4), m)
        assert abs(mp.mpf(float(value)) / exact - 1) <= 1e-12


def test_totals():
    assert TOTAL[3] == approx(math.pi**4 / 15, rel=1e-15)
    assert TOTAL[2] == approx(float(2 * mp.zeta(3)), rel=1e-15)


def test_narrow_band_keeps_its_digits():
    # The exact integral between the very floats that are handed in, to 1e-12.
    lower, upper, t = 0.55e-6, 0.55e-6 * (1 + 1e-9), 5772.0
    with mp.workdps(60):
        c2 = mp.mpf("6.62607015e-34") * 299792458 / mp.mpf("1.380649e-23")
        x = [c2 / (mp.mpf(w) * mp.mpf(t)) for w in (upper, lower)]
        exact = (tail(x[0], 3) - tail(x[1], 3)) * 15 / mp.pi**4
    assert photons.fraction(lower, upper, t) == approx(float(exact), rel=1e-12)


@pytest.mark.parametrize("counted", [False, True])
def test_narrow_band_is_the_law_times_its_width(counted):
    form = "photon_exitance" if counted else "exitance"
    at, t, half = 0.55e-6, 5772.0, 1e-12
    part = photons.band_exitance(at - half, at + half, t, photons=counted).value
    # Exact but for terms of second order, 1e-11; the width itself is known to 1e-10.
    width = (at + half) - (at - half)
    assert part == approx(photons.planck(at, t, form=form).value * width, rel=1e-9)


def test_photon_total_is_a_quarter_of_density_times_c():
    total = photons.exitance(300.0, photons=True).value
    density = photons.PhotonGas(300.0).number.value
    assert total == approx(density * 299792458.0 / 4.0, rel=1e-14)


@given(st.floats(1e-8, 1e-3), st.floats(1.0001, 1e3), st.floats(10.0, 1e6), st.booleans())
def test_parts_add_up(lower, factor, t, counted):
    upper = lower * factor
    edges = np.array([0.0, lower, upper, math.inf])
    parts = photons.fraction(edges[:-1], edges[1:], t, photons=counted)
    assert np.sum(parts) == approx(1.0, rel=1e-13)
    assert np.all(parts >= 0.0)


def test_limits_at_zero_temperature():
    np.testing.assert_array_equal(photons.fraction(1e-6, [1e-3, math.inf], 0.0), [0.0, 1.0])
    assert photons.fraction(0.0, math.inf, 300.0) == approx(1.0, rel=1e-15)


def test_frequencies_and_energies_are_limits_too():
    by_wavelength = photons.fraction(1 * u.um, 3 * u.um, 2000.0)
    nu = (np.array([3.0, 1.0]) * u.um).to(u.THz, u.spectral())
    assert photons.fraction(nu[0], nu[1], 2000.0) == approx(by_wavelength, rel=1e-13)
    energies = nu.to(u.eV, u.spectral())
    assert photons.fraction(*energies, 2000.0) == approx(by_wavelength, rel=1e-13)
    assert photons.fraction(0 * u.Hz, nu[1], 2000.0) == approx(
        photons.fraction(1 * u.um, math.inf * u.um, 2000.0), rel=1e-13
    )


def test_broadcasts_over_draws():
    t = np.linspace(5000.0, 6000.0, 7)
    got = photons.band_exitance(0.4e-6, 0.7e-6, t, unit="MW / m2")
    assert got.shape == (7,)
    assert got[3].value == approx(
        photons.band_exitance(0.4e-6, 0.7e-6, t[3]).to_value("MW / m2"), rel=1e-15
    )


def test_effective_temperature_is_the_inverse_of_exitance():
    flux = photons.exitance([0.0, 1500.0], dilution=0.6)
    back = photons.effective_temperature(flux, dilution=0.6)
    np.testing.assert_allclose(back.value, [0.0, 1500.0], rtol=1e-14)


def test_grey_and_dilute_emission():
    # Far away W is (R/2r)^2; at the surface a half (Mihalas 1978).
    assert photons.dilution_factor(1.0, 1.0) == 0.5
    assert photons.dilution_factor(1.0, 1e9) == approx(0.25e-18, rel=1e-14)
    with mp.workdps(40):
        exact = (1 - mp.sqrt(1 - mp.mpf(1) / 49)) / 2
    assert photons.dilution_factor(1.0, 7.0) == approx(float(exact), rel=1e-15)
    assert photons.irradiance_factor(1.0, 7.0) == approx(1 / 49, rel=1e-15)
    w = photons.dilution_factor(1.0, 7.0)
    u_dilute = w * photons.PhotonGas(6000.0).energy.value
    equivalent = photons.equivalent_temperature(6000.0, w)
    assert photons.PhotonGas(equivalent).energy.value == approx(u_dilute, rel=1e-14)
    hardened = photons.colour_dilution(4000.0, 6000.0)
    assert photons.exitance(6000.0, dilution=hardened).value == approx(
        photons.exitance(4000.0).value, rel=1e-14
    )


BAD = [
    (lambda: photons.fraction(2e-6, 1e-6, 300.0), "is not below upper limit"),
    (lambda: photons.fraction(1e-6, 1e-6, 300.0), "exchange the two"),
    (lambda: photons.fraction(3 * u.THz, 1 * u.THz, 300.0), "3.0 THz is not below"),
    (lambda: photons.fraction(1 * u.um, 1 * u.THz, 300.0), "two kinds"),
    (lambda: photons.fraction(1e-6, 1 * u.THz, 300.0), "two kinds"),
    (lambda: photons.fraction(-1e-6, 1e-6, 300.0), "lower limit = -1e-06 m"),
    (lambda: photons.fraction(1e-6, 2e-6, -3.0), "temperature = -3 K"),
    (lambda: photons.fraction(1 * u.kg, 2 * u.kg, 3.0), "'kg'"),
    (lambda: photons.dilution_factor(2.0, 1.0), "at least its radius"),
    (lambda: photons.exitance(-1.0), "temperature = -1 K"),
]


@pytest.mark.parametrize(("call", "says"), BAD, ids=[str(i) for i in range(len(BAD))])
def test_bad_input_gives_one_clear_line(call, says):
    with pytest.raises(InputError) as caught:
        call()
    assert says in str(caught.value)
