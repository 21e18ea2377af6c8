"""Planck's law: against multiprecision (mpmath), against its limits, and its door."""

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
from starkiln.photons import FORMS, VARIABLES, planck, planck_wavelength
from starkiln.photons._kernels import limit_errors, power_law

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)

# Exact SI values, in multiprecision.
MP_H, MP_C, MP_K = mp.mpf("6.62607015e-34"), mp.mpf(299792458), mp.mpf("1.380649e-23")
EXPONENTS = np.concatenate([np.geomspace(1e-12, 1e4, 33), [0.5, 1.0, 2.0, 690.0, 699.9, 700.1]])


def frequency_of(variable, q):
    q = mp.mpf(float(q))
    return {
        "wavelength": lambda: MP_C / q,
        "frequency": lambda: q,
        "angular_frequency": lambda: q / (2 * mp.pi),
        "wavenumber": lambda: MP_C * q,
        "energy": lambda: q / MP_H,
    }[variable]()


def per_hertz(variable, nu):
    """Return |d nu / d q|."""
    return {
        "wavelength": nu**2 / MP_C,
        "frequency": mp.mpf(1),
        "angular_frequency": 1 / (2 * mp.pi),
        "wavenumber": MP_C,
        "energy": 1 / MP_H,
    }[variable]


def multiprecision(variable, form, q, t, law="planck"):
    with mp.workdps(40):
        nu = frequency_of(variable, q)
        x = MP_H * nu / (MP_K * mp.mpf(float(t)))
        occupation = {
            "planck": lambda: 1 / mp.expm1(x),
            "wien": lambda: mp.exp(-x),
            "rayleigh_jeans": lambda: 1 / x,
        }[law]()
        value = 2 * nu**2 / MP_C**2 * per_hertz(variable, nu) * occupation
        if not form.startswith("photon"):
            value *= MP_H * nu
        kind = form.removeprefix("photon_")
        factor = {"radiance": 1, "exitance": mp.pi}.get(kind, 4 * mp.pi / MP_C)
        return +(value * factor)


def points(variable, t):
    x = np.asarray(EXPONENTS)
    law = power_law(variable, False)
    return law.second / (x * t) if variable == "wavelength" else x * t / law.second


@pytest.mark.parametrize("form", FORMS)
@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("t", [2.7255, 5772.0, 1e7])
def test_agrees_with_multiprecision_to_1e_12(variable, form, t):
    q = points(variable, t)
    got = planck(q, t, variable=variable, form=form).value
    got_ln = photons.ln_planck(q, t, variable=variable, form=form)
    compared = 0
    for at, value, ln_value in zip(q, got, got_ln, strict=True):
        exact = multiprecision(variable, form, at, t)
        ln_exact = mp.log(exact)
        assert abs(mp.mpf(float(ln_value)) - ln_exact) <= 1e-12 * max(1, abs(ln_exact))
        if exact > mp.mpf("1e-307"):
            assert abs(mp.mpf(float(value)) / exact - 1) <= 1e-12
            compared += 1
        else:
            assert value == approx(0.0, abs=1e-300)
    assert compared >= 30


@pytest.mark.parametrize("law", ["wien", "rayleigh_jeans"])
@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("form", ["radiance", "photon_density"])
def test_limits_agree_with_multiprecision_to_1e_12(law, variable, form):
    t = 5772.0
    q = points(variable, t)
    got = getattr(photons, law)(q, t, variable=variable, form=form).value
    for at, value in zip(q, got, strict=True):
        exact = multiprecision(variable, form, at, t, law)
        if exact > mp.mpf("1e-307"):
            assert abs(mp.mpf(float(value)) / exact - 1) <= 1e-12


def test_errors_of_the_limits_agree_with_multiprecision_to_1e_12():
    for x in [*np.geomspace(1e-12, 700.0, 60), 0.999999, 1.0, 1.000001]:
        wien, jeans = limit_errors(x)
        with mp.workdps(60):
            exact_wien = -mp.exp(-mp.mpf(float(x)))
            exact_jeans = mp.expm1(mp.mpf(float(x))) / mp.mpf(float(x)) - 1
        assert abs(wien / exact_wien - 1) <= 1e-12
        assert abs(jeans / exact_jeans - 1) <= 1e-12
    assert limit_errors(1e4) == (0.0, math.inf)
    assert limit_errors(0.0) == (-1.0, 0.0)


def test_error_of_a_limit_is_that_of_the_function_itself():
    at, t = np.geomspace(1e-7, 1e-3, 20), 4000.0
    exact = planck(at, t)
    wien, jeans = photons.limit_errors(at, t)
    np.testing.assert_allclose(photons.wien(at, t) / exact - 1, wien, rtol=1e-10, atol=1e-13)
    np.testing.assert_allclose(
        photons.rayleigh_jeans(at, t) / exact - 1, jeans, rtol=1e-10, atol=1e-13
    )


@pytest.mark.parametrize("variable", VARIABLES)
@pytest.mark.parametrize("form", FORMS)
def test_limits_at_the_ends_are_numbers(variable, form):
    ends = np.array([1e-300, 1e300, math.inf, *([] if variable == "wavelength" else [0.0])])
    for t in (0.0, 1e-3, 5772.0):
        values = planck(ends, t, variable=variable, form=form).value
        assert np.all(values == 0.0) or np.all(np.isfinite(values))
        assert values[2] == 0.0
    at = 1e-6 if variable == "wavelength" else 1.0
    assert planck(at, 0.0, variable=variable, form=form).value == 0.0


def test_kernel_keeps_nan_and_gives_limits():
    got = planck_wavelength([1e-6, 0.0, math.inf, 1e-6, math.nan], [0.0, 5.0, 5.0, math.nan, 5.0])
    np.testing.assert_array_equal(got, [0.0, 0.0, 0.0, math.nan, math.nan])


def test_kernel_is_the_radiance_per_wavelength():
    at, t = np.geomspace(1e-7, 1e-3, 20_001)[:, np.newaxis], np.array([300.0, 5772.0])
    got = planck_wavelength(at, t)
    # In blocks and alone, scalar and array.
    np.testing.assert_array_equal(got, planck(at, t).value)
    for i in (0, 9_000, 20_000):
        exact = multiprecision("wavelength", "radiance", at[i, 0], 5772.0)
        assert got[i, 1] == approx(float(exact), rel=1e-12)
        assert planck_wavelength(at[i, 0], 5772.0) == got[i, 1]


def test_stefan_boltzmann_comes_out_of_the_spectrum_in_every_variable():
    # Quadrature by scipy of what the door returns, against sigma T^4.
    from scipy.integrate import quad

    for variable in VARIABLES:
        law = power_law(variable, False)
        t = 300.0
        scale = law.second / t if variable == "wavelength" else t / law.second

        def integrand(ln_x, scale=scale, variable=variable):
            q = scale * math.exp(ln_x)
            return planck(q, 300.0, variable=variable, form="exitance").value * q

        total, _ = quad(integrand, -9.0, 14.0, epsrel=1e-11, limit=200)
        assert total == approx(photons.exitance(t).value, rel=1e-9)


def test_any_spectral_unit_gives_the_same_answer():
    at = 0.55 * u.um
    same = [
        at,
        at.to(u.THz, u.spectral()),
        at.to(1 / u.cm, u.spectral()),
        at.to(u.eV, u.spectral()),
        at.to(u.Hz, u.spectral()).value * 2 * np.pi * u.rad / u.s,
        550 * u.nm,
    ]
    for variable in VARIABLES:
        values = [planck(q, 5772 * u.K, variable=variable).value for q in same]
        np.testing.assert_allclose(values, values[0], rtol=1e-13)


def test_units_of_temperature_and_result():
    kelvin = planck(10 * u.um, 300 * u.K, unit="W / (m2 sr um)")
    assert kelvin.unit == u.Unit("W / (m2 sr um)")
    celsius = planck(10 * u.um, 26.85 * u.deg_C)
    assert celsius.to_value(kelvin.unit) == approx(kelvin.value, rel=1e-12)
    k_t = (300 * u.K).to(u.eV, u.temperature_energy())
    assert planck(10 * u.um, k_t).to_value(kelvin.unit) == approx(kelvin.value, rel=1e-12)


def test_agrees_with_astropy_models():
    from astropy.modeling.physical_models import BlackBody

    nu = np.geomspace(1e11, 1e16, 30) * u.Hz
    theirs = BlackBody(temperature=6000 * u.K)(nu).to_value("W / (m2 sr Hz)")
    ours = planck(nu, 6000.0, variable="frequency").value
    np.testing.assert_allclose(ours, theirs, rtol=1e-10)


def test_dilution_is_a_factor():
    full = planck(1e-6, 4000.0)
    np.testing.assert_allclose(planck(1e-6, 4000.0, dilution=[0.0, 0.3]) / full, [0.0, 0.3])


@given(st.floats(1e-9, 1e-2), st.floats(3.0, 1e6))
def test_forms_hang_together(at, t):
    radiance = planck(at, t).value
    assert planck(at, t, form="exitance").value == approx(math.pi * radiance, rel=1e-14)
    energy = 6.62607015e-34 * 299792458.0 / at
    photon = planck(at, t, form="photon_radiance").value
    assert photon * energy == approx(radiance, rel=1e-12, abs=1e-290)


BAD = [
    (lambda: planck(0.0, 5.0), "wavelength = 0 m"),
    (lambda: planck(-1e-6, 5.0), "wavelength = -1e-06 m"),
    (lambda: planck(1e-6, -5.0), "temperature = -5 K"),
    (lambda: planck(1e-6, math.nan), "temperature = nan K"),
    (lambda: planck(1 * u.kg, 5.0), "'kg'"),
    (lambda: planck(1e-6, 5 * u.m), "temperature is given in 'm'"),
    (lambda: planck(1e-6, 5.0, unit="kg"), "'kg'"),
    (lambda: planck(1e-6, 5.0, unit="nonsense"), "'nonsense'"),
    (lambda: planck("red", 5.0), "wavelength = 'red'"),
    (lambda: planck(1e-6, 5.0, variable="colour"), "choose one of wavelength, frequency"),
    (lambda: planck(1e-6, 5.0, form="glow"), "choose one of radiance, exitance"),
    (lambda: planck(1e-6, 5.0, dilution=-1), "dilution = -1"),
    (lambda: planck(-1.0, 5.0, variable="frequency"), "frequency = -1 Hz"),
]


@pytest.mark.parametrize(("call", "says"), BAD, ids=[says for _, says in BAD])
def test_bad_input_gives_one_clear_line(call, says):
    with pytest.raises(InputError) as caught:
        call()
    assert says in str(caught.value)
    assert "\n" not in str(caught.value)
