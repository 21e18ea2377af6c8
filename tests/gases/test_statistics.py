"""The functions of quantum gases: against polylogarithms of mpmath and published values."""

import math
from functools import partial

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from starkiln.errors import InputError
from starkiln.gases import bose, bose_inverse, fermi, fermi_inverse
from starkiln.gases._statistics import SOMMERFELD_FROM, fermi_entropy

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)

ORDERS = (-0.5, 0.0, 0.25, 2 / 3, 1.5, 2.0, 3.0, 7.5, 15.0)
ETAS = (-600, -30, -5, -1.0001, -1, -0.9, -0.5, -1e-3, -1e-9, 0, 0.5, 1, 3.999, 4.001, 10, 25, 34)


def exact_fermi(order, eta):
    with mp.workdps(40):
        value = -mp.polylog(mp.mpf(order), -mp.exp(mp.mpf(eta)))
        return float(mp.re(value))


def exact_bose(order, eta):
    with mp.workdps(60):
        return float(mp.re(mp.polylog(mp.mpf(order), mp.exp(mp.mpf(eta)))))


@pytest.mark.parametrize("order", ORDERS)
def test_fermi_agrees_with_the_polylogarithm_to_1e_12(order):
    got = fermi(order, np.array(ETAS, dtype=float))
    want = np.array([exact_fermi(order, eta) for eta in ETAS])
    seen = want > 1e-300
    assert np.count_nonzero(seen) >= 16
    np.testing.assert_allclose(got[seen], want[seen], rtol=1e-12)


@pytest.mark.parametrize("order", ORDERS)
def test_bose_agrees_with_the_polylogarithm_to_1e_12(order):
    etas = [eta for eta in ETAS if eta < 0 and eta > -600]
    got = bose(order, np.array(etas, dtype=float))
    np.testing.assert_allclose(got, [exact_bose(order, eta) for eta in etas], rtol=1e-12)


@pytest.mark.parametrize("order", [1.5, 2.0, 3.0, 4.0])
def test_bose_at_zero_is_riemanns_function(order):
    assert bose(order, 0.0) == approx(float(mp.zeta(order)), rel=1e-15)
    assert bose(0.5, 0.0) == math.inf


@pytest.mark.parametrize("order", [-0.5, 0.5, 1.5, 2.0, 3.0])
def test_dense_fermi_agrees_with_quadrature_to_1e_12(order):
    # mpmath integrates x^s (-df/dx), the derivative form, which holds for orders above -1.
    for eta in (38.0, SOMMERFELD_FROM, np.nextafter(SOMMERFELD_FROM, 50.0), 55.0, 300.0):
        with mp.workdps(25):
            e, s = mp.mpf(float(eta)), mp.mpf(order)
            edges = [mp.mpf(0), *(e + mp.mpf(d) for d in range(-30, 61, 5))]
            integral = mp.quad(lambda x, e=e, s=s: x**s * mp.sech((x - e) / 2) ** 2 / 4, edges)
            want = float(integral / mp.gamma(s + 1))
        assert fermi(order, eta) == approx(want, rel=1e-12)


PUBLISHED = [
    # Gamma(s) f_s, generalised Fermi-Dirac integrals at theta = 0 (multiprecision).
    (0.5, 0.0, 0.678093895153101),
    (0.5, 1.0, 1.39637528067),
    (0.5, 4.0, 5.77072652760),
    (0.5, 20.0, 59.8127953704),
]


@pytest.mark.parametrize(("k", "eta", "value"), PUBLISHED)
def test_fermi_dirac_integrals(k, eta, value):
    got = math.gamma(k + 1.0) * fermi(k + 1.0, eta)
    assert got == approx(value, rel=5e-12)


@pytest.mark.parametrize("order", [0.25, 1.0, 1.5, 3.0])
def test_dense_entropy_keeps_its_digits(order):
    # On both sides of the change of method, and against Sommerfeld's first term far up.
    for eta in (-3.0, 0.0, 5.0, 39.9, 40.1):
        with mp.workdps(60):
            f = [mp.re(-mp.polylog(mp.mpf(order) + i, -mp.exp(mp.mpf(eta)))) for i in (0, 1)]
            want = float((order + 1) * f[1] - mp.mpf(eta) * f[0])
        assert fermi_entropy(order, eta) == approx(want, rel=2e-12)
    eta = 1e7
    leading = math.pi**2 / 3 * eta ** (order - 1.0) / math.gamma(order)
    assert fermi_entropy(order, eta) == approx(leading, rel=1e-12)


def test_ends_of_the_axis():
    assert fermi(1.5, -math.inf) == 0.0
    assert bose(1.5, -math.inf) == 0.0
    assert fermi_entropy(1.5, -math.inf) == 0.0
    assert fermi(1.5, np.zeros((2, 3))).shape == (2, 3)
    assert np.isscalar(fermi(1.5, 0.0)) or np.ndim(fermi(1.5, 0.0)) == 0


@settings(max_examples=50, deadline=None)
@given(st.floats(0.3, 8.0), st.floats(-300.0, 1e6))
def test_fermi_inverse(order, eta):
    back = fermi_inverse(order, fermi(order, eta))
    assert back == approx(eta, rel=1e-12, abs=1e-12)


@settings(max_examples=50, deadline=None)
@given(st.floats(0.3, 8.0), st.floats(1e-5, 300.0))
def test_bose_inverse(order, minus_eta):
    value = bose(order, -minus_eta)
    back = bose_inverse(order, value)
    # Near condensation the value says little of eta: d ln g / d eta is g_(s-1) / g_s.
    slope = bose(order - 1.0, -minus_eta) / value
    assert back == approx(-minus_eta, rel=1e-13, abs=2e-13 / slope)


def test_inverses_at_their_ends():
    np.testing.assert_array_equal(fermi_inverse(1.5, np.zeros(2)), [-math.inf] * 2)
    np.testing.assert_array_equal(bose_inverse(1.5, np.array([0.0, 2.7, 1e9])), [-math.inf, 0, 0])


def test_bad_input():
    with pytest.raises(InputError, match="above 0"):
        bose(1.5, [-1.0, 0.1])
    with pytest.raises(InputError, match="order -2"):
        fermi(-2.0, 0.0)
    with pytest.raises(InputError, match="order 99"):
        bose(99.0, -1.0)
