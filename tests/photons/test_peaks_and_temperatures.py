"""Peaks, and temperatures read off a radiance: against multiprecision and round trips."""

from functools import partial

import mpmath as mp
import numpy as np
import pytest
from astropy import units as u
from hypothesis import given
from hypothesis import strategies as st

from starkiln import photons
from starkiln.errors import InputError
from starkiln.photons import FORMS, VARIABLES

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)


@pytest.mark.parametrize("n", [2, 3, 4, 5])
def test_peak_exponent_is_lamberts_function(n):
    from starkiln.photons._peaks import peak_exponent

    exact = n + mp.lambertw(-n * mp.exp(-n))
    assert peak_exponent(n) == approx(float(exact.real), rel=1e-15)


@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("form", FORMS)
def test_peak_is_where_the_law_is_highest(variable, form):
    top = photons.peak(5772.0, variable=variable, form=form).value
    near = top * np.array([1.0 - 1e-4, 1.0, 1.0 + 1e-4])
    values = photons.planck(near, 5772.0, variable=variable, form=form).value
    assert values[1] > values[0]
    assert values[1] > values[2]
    # Far tighter than values can: the slope vanishes.
    step = 1e-6
    lower, upper = photons.ln_planck(
        top * np.array([1 - step, 1 + step]), 5772.0, variable=variable, form=form
    )
    assert abs(upper - lower) < 1e-12


@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("form", FORMS)
def test_temperature_of_peak_is_the_inverse(variable, form):
    t = np.array([2.7255, 5772.0, 1e8])
    top = photons.peak(t, variable=variable, form=form)
    back = photons.temperature_of_peak(top, variable=variable, form=form)
    np.testing.assert_allclose(back.to_value("K"), t, rtol=1e-14)


def test_peak_at_zero_temperature_is_the_limit():
    assert photons.peak(0.0).value == np.inf
    assert photons.peak(0.0, variable="energy").value == 0.0
    assert photons.peak(5772.0, unit="nm").value == approx(502.04, abs=0.005)


@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("form", FORMS)
def test_brightness_temperature_is_the_inverse_of_planck(variable, form):
    at = 1.3 * u.um
    t = np.geomspace(20.0, 1e12, 60)
    value = photons.planck(at, t, variable=variable, form=form, dilution=0.3)
    back = photons.brightness_temperature(at, value, variable=variable, form=form, dilution=0.3)
    np.testing.assert_allclose(back.value, t, rtol=1e-13)


def test_brightness_temperature_of_nothing_is_zero():
    assert photons.brightness_temperature(1e-6, 0.0).value == 0.0


@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("form", FORMS)
def test_rayleigh_jeans_temperature_is_the_inverse_of_its_law(variable, form):
    at, t = 21 * u.cm, np.array([0.0, 3.0, 1e4])
    value = photons.rayleigh_jeans(at, t, variable=variable, form=form)
    back = photons.rayleigh_jeans_temperature(at, value, variable=variable, form=form)
    np.testing.assert_allclose(back.value, t, rtol=1e-14)


def test_j_of_t_is_the_rayleigh_jeans_temperature_of_planck():
    nu, t = np.array([1e9, 1.5e11, 1e12]) * u.Hz, 2.7255
    value = photons.planck(nu, t, variable="frequency")
    want = photons.rayleigh_jeans_temperature(nu, value, variable="frequency")
    np.testing.assert_allclose(photons.to_rayleigh_jeans(nu, t).value, want.value, rtol=1e-13)
    # mpmath, with h nu / k T of 150 GHz.
    x = mp.mpf("6.62607015e-34") * mp.mpf("1.5e11") / (mp.mpf("1.380649e-23") * mp.mpf(t))
    assert photons.to_rayleigh_jeans(1.5e11 * u.Hz, t).value == approx(
        float(mp.mpf(t) * x / mp.expm1(x)), rel=1e-13
    )


@given(st.floats(1e8, 1e14), st.floats(0.05, 1e6))
def test_from_rayleigh_jeans_is_the_inverse(nu, t):
    seen = photons.to_rayleigh_jeans(nu * u.Hz, t)
    if seen.value > 1e-290:
        assert photons.from_rayleigh_jeans(nu * u.Hz, seen).value == approx(t, rel=1e-12)
    assert photons.from_rayleigh_jeans(nu * u.Hz, 0.0).value == 0.0


@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("form", ["radiance", "photon_exitance"])
@pytest.mark.parametrize("ends", [(0.4, 0.8), (2.0, 1.0), (1.0, 1.001)])
def test_colour_temperature_is_the_inverse_of_the_ratio(variable, form, ends):
    first, second = ends * u.um
    t = np.geomspace(100.0, 3e5, 40)
    ratio = photons.colour_ratio(first, second, t, variable=variable, form=form)
    back = photons.colour_temperature(first, second, ratio, variable=variable, form=form)
    # What rounding of the powers and exponents does to ln(ratio), over d ln(ratio) / d ln(T).
    x = np.array([photons.reduced_energy(at, t) for at in (first, second)])
    tolerance = 5e-15 * (10.0 + 2.0 * np.max(x, axis=0)) / np.abs(x[0] - x[1])
    assert np.all(np.abs(back.value / t - 1.0) <= tolerance)


def test_colour_ratio_against_multiprecision():
    with mp.workdps(30):
        c2 = mp.mpf("6.62607015e-34") * 299792458 / mp.mpf("1.380649e-23")
        t = mp.mpf(5000)
        ratio = (
            (mp.mpf("0.7e-6") / mp.mpf("0.44e-6")) ** 5
            * mp.expm1(c2 / (mp.mpf("0.7e-6") * t))
            / mp.expm1(c2 / (mp.mpf("0.44e-6") * t))
        )
    assert photons.colour_ratio(0.44e-6, 0.7e-6, 5000.0) == approx(float(ratio), rel=1e-13)


BAD = [
    (lambda: photons.colour_temperature(1e-6, 2e-6, 17.0), "no blackbody has this ratio"),
    (lambda: photons.colour_temperature(2e-6, 1e-6, 1 / 17.0), "no blackbody has this ratio"),
    (lambda: photons.colour_temperature(1e-6, 1e-6, 1.0), "the same"),
    (lambda: photons.colour_temperature(1e-6, 2e-6, 0.0), "ratio = 0"),
    (lambda: photons.brightness_temperature(1e-6, -1.0), "radiance = -1"),
    (lambda: photons.brightness_temperature(1e-6, 1 * u.K), "'K'"),
    (lambda: photons.temperature_of_peak(0.0), "wavelength = 0 m"),
    (lambda: photons.peak(-1.0), "temperature = -1 K"),
    (lambda: photons.peak(1.0, unit="Hz"), "'Hz'"),
]


@pytest.mark.parametrize(("call", "says"), BAD, ids=[str(i) for i in range(len(BAD))])
def test_bad_input_gives_one_clear_line(call, says):
    with pytest.raises(InputError) as caught:
        call()
    assert says in str(caught.value)
