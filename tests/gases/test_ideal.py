"""Ideal gases: analytic limits, identities, textbook systems, multiprecision."""

import math
from functools import partial

import mpmath as mp
import numpy as np
import pytest
from astropy import constants as c
from astropy import units as u

from starkiln.constants import HBAR, K_B, M_E, SIGMA_SB, C
from starkiln.errors import InputError
from starkiln.gases import IdealGas

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)

KINDS = ("fermions", "bosons", "classical")
#: Dispersion exponent and dimension; s = 3/2, 3, 1, 2, 1/2, 4/3, 2/3.
CASES = [(2.0, 3), (1.0, 3), (2.0, 2), (1.0, 2), (2.0, 1), (1.5, 2), (3.0, 2)]


def gas_of(kind, exponent, dimension):
    coefficient = C.value if exponent == 1.0 else 0.5 / M_E.value
    return IdealGas(kind, exponent, coefficient, dimension=dimension, degeneracy=2.0)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize(("exponent", "dimension"), CASES)
def test_state_sum_number_energy_and_pressure_against_multiprecision(kind, exponent, dimension):
    # Direct integrals over momentum, with nothing of s in them.
    gas = gas_of(kind, exponent, dimension)
    t, eta = 1e5, {"fermions": 2.5, "bosons": -0.2, "classical": -3.0}[kind]
    sign = {"fermions": 1, "bosons": -1, "classical": 0}[kind]
    state = gas.state(t, chemical_potential=eta * K_B.value * t)
    with mp.workdps(25):
        k_t = mp.mpf(K_B.value) * mp.mpf(t)
        coefficient = mp.mpf(gas.coefficient)
        sphere = 2 * mp.pi ** (mp.mpf(dimension) / 2) / mp.gamma(mp.mpf(dimension) / 2)
        cell = (2 * mp.pi * mp.mpf(HBAR.value)) ** dimension
        # e = E / k T; p^(d-1) dp from e.
        power = mp.mpf(dimension) / mp.mpf(exponent)
        scale = 2 * sphere / cell / mp.mpf(exponent) * (k_t / coefficient) ** power

        def integral(weight):
            def f(e):
                return e ** (power - 1) * weight(e)

            return scale * mp.quad(f, [0, 0.01, 0.3, 1, 2.5, 6, 15, 40, 90])

        number = integral(lambda e: 1 / (mp.exp(e - eta) + sign))
        energy = k_t * integral(lambda e: e / (mp.exp(e - eta) + sign))
        whole = integral(lambda e: mp.exp(-e))

        def ln_sum(e):
            return sign * mp.log1p(sign * mp.exp(eta - e)) if sign else mp.exp(eta - e)

        ln_grand = integral(ln_sum)
    assert gas.state_sum(t).value == approx(float(whole), rel=1e-10)
    assert state.number_density.value == approx(float(number), rel=1e-10)
    assert state.energy_density.value == approx(float(energy), rel=1e-10)
    assert state.ln_grand_sum.value == approx(float(ln_grand), rel=1e-10)
    assert state.pressure.value == approx(float(k_t * ln_grand), rel=1e-10)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize(("exponent", "dimension"), CASES)
def test_density_gives_back_the_chemical_potential(kind, exponent, dimension):
    gas = gas_of(kind, exponent, dimension)
    eta = np.array([-40.0, -3.0, -0.01] + ([0.0, 3.0, 200.0] if kind == "fermions" else []))
    mu = eta * K_B.value * 1e4
    there = gas.state(1e4, chemical_potential=mu)
    back = gas.state(1e4, density=there.number_density)
    np.testing.assert_allclose(back.eta, eta, rtol=1e-10, atol=1e-13)
    for name in ("energy_density", "pressure", "entropy_density", "heat_capacity"):
        np.testing.assert_allclose(
            getattr(back, name).value, getattr(there, name).value, rtol=1e-10
        )


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize(("exponent", "dimension"), CASES)
def test_thermodynamic_identities(kind, exponent, dimension):
    gas = gas_of(kind, exponent, dimension)
    filling = np.array([1e-6, 0.1, 1.0]) if kind == "bosons" else np.array([1e-6, 0.5, 30.0])
    t = 1e5
    n = filling * gas.state_sum(t).value
    state = gas.state(t, density=n)
    np.testing.assert_allclose(
        state.energy_density.value, gas.index * state.pressure.value, rtol=1e-14
    )
    # Euler: U = T S - P V + mu N.
    euler = (
        t * state.entropy_density.value - state.pressure.value + state.chemical_potential.value * n
    )
    scale = np.abs(state.chemical_potential.value * n) + state.energy_density.value
    np.testing.assert_allclose(euler / scale, state.energy_density.value / scale, atol=1e-12)
    # C_V by central differences of U and of S at fixed density.
    step = 1e-4
    hot, cold = (gas.state(t * (1 + d), density=n) for d in (step, -step))
    slope = (hot.energy_density.value - cold.energy_density.value) / (2 * step * t)
    np.testing.assert_allclose(state.heat_capacity.value, slope, rtol=1e-6)
    slope = (hot.entropy_density.value - cold.entropy_density.value) / (2 * step)
    np.testing.assert_allclose(state.heat_capacity.value, slope, rtol=3e-7)


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize(("exponent", "dimension"), CASES)
def test_classical_limit(kind, exponent, dimension):
    gas = gas_of(kind, exponent, dimension)
    n = 1e-13 * gas.state_sum(1e5).value
    state = gas.state(1e5, density=n)
    n_k = n * K_B.value
    assert state.pressure.value == approx(n_k * 1e5, rel=1e-10)
    assert state.heat_capacity.value == approx(gas.index * n_k, rel=1e-10)
    # Sackur and Tetrode, with s + 1 for 5/2.
    assert state.entropy_density.value == approx(
        n_k * (gas.index + 1.0 - math.log(1e-13)), rel=1e-10
    )


def test_sackur_tetrode_of_argon():
    # CODATA 2022: S_0 / R at 1 K and 100 kPa for a particle of 1 u is -1.15170753496.
    gas = IdealGas.massive(1.66053906892e-27, "classical")
    n = 1e5 / K_B.value
    state = gas.state(1.0, density=n)
    assert state.entropy_density.value / (n * K_B.value) == approx(-1.15170753, abs=2e-8)


@pytest.mark.parametrize(("exponent", "dimension"), CASES)
def test_degenerate_limit_of_fermions(exponent, dimension):
    gas = gas_of("fermions", exponent, dimension)
    n = 1e30 if dimension == 3 else 1e20 if dimension == 2 else 1e10
    fermi = gas.fermi_energy(n).value
    t = 1e-6 * gas.fermi_temperature(n).value
    cold, frozen = gas.state(t, density=n), gas.state(0.0, density=n)
    s = gas.index
    for state in (cold, frozen):
        assert state.chemical_potential.value == approx(fermi, rel=1e-11)
        assert state.energy_density.value == approx(s / (s + 1) * n * fermi, rel=1e-11)
        assert state.pressure.value == approx(n * fermi / (s + 1), rel=1e-11)
    # Sommerfeld: C_V = S = pi^2/3 s N k T / T_F.
    leading = math.pi**2 / 3 * s * n * K_B.value * 1e-6
    assert cold.heat_capacity.value == approx(leading, rel=1e-10)
    assert cold.entropy_density.value == approx(leading, rel=1e-10)
    assert frozen.entropy_density.value == 0.0


def test_fermi_energy_of_three_dimensions_is_the_textbooks():
    # hbar^2 (3 pi^2 n)^(2/3) / 2 m; copper, 8.49e28 m-3, 7.0 eV (Kittel, table 6.1).
    gas = IdealGas.massive(c.m_e, "fermions", degeneracy=2)
    textbook = HBAR.value**2 * (3 * math.pi**2 * 8.49e28) ** (2 / 3) / (2 * M_E.value)
    assert gas.fermi_energy(8.49e28).value == approx(textbook, rel=1e-13)
    assert gas.fermi_energy(8.49e28).to_value("eV") == approx(7.0, abs=0.05)
    light = IdealGas.massless("fermions", degeneracy=2)
    momentum = HBAR.value * (3 * math.pi**2 * 1e36) ** (1 / 3)
    assert light.fermi_energy(1e36).value == approx(C.value * momentum, rel=1e-13)


def test_condensation_of_massive_bosons():
    mass = 1.443160648e-25  # rubidium-87, kg
    gas = IdealGas.massive(mass, "bosons")
    n = 1e20
    textbook = (
        2 * math.pi * HBAR.value**2 / (mass * K_B.value) * (n / float(mp.zeta(1.5))) ** (2 / 3)
    )
    critical = gas.condensation_temperature(n).value
    assert critical == approx(textbook, rel=1e-13)
    reduced = np.array([0.0, 0.3, 0.9, 1.0 + 1e-9, 3.0])
    state = gas.state(reduced * critical, density=n)
    np.testing.assert_allclose(
        state.condensed_fraction, np.maximum(1.0 - reduced**1.5, 0.0), atol=1e-12
    )
    # C_V at the critical point is 1.92567 N k (15/4 zeta(5/2)/zeta(3/2)).
    peak = gas.state(critical * (1 - 1e-12), density=n).heat_capacity.value / (n * K_B.value)
    assert peak == approx(float(15 / mp.mpf(4) * mp.zeta(2.5) / mp.zeta(1.5)), rel=1e-9)
    # Below it the pressure does not depend on the density.
    twice = gas.state(0.3 * critical, density=2 * n)
    assert twice.pressure.value == approx(state.pressure.value[1], rel=1e-14)


def test_no_condensation_where_s_is_at_most_one():
    gas = gas_of("bosons", 2.0, 2)
    assert gas.condensation_temperature(1e18).value == 0.0
    # Two dimensions have a closed form: mu = k T ln(1 - exp(-n lambda^2 / g)).
    t, n = 10.0, 1e16
    filling = n / gas.state_sum(t).value
    mu = K_B.value * t * math.log(-math.expm1(-filling))
    state = gas.state(t, density=n)
    assert state.chemical_potential.value == approx(mu, rel=1e-10)
    assert state.condensed_fraction == 0.0


def test_two_dimensional_fermions_have_a_closed_form():
    gas = gas_of("fermions", 2.0, 2)
    t, n = 300.0, 3e17
    mu = K_B.value * t * math.log(math.expm1(n / gas.state_sum(t).value))
    assert gas.state(t, density=n).chemical_potential.value == approx(mu, rel=1e-12)


def test_massless_fermions_hold_seven_eighths_of_the_photons_energy():
    gas = IdealGas.massless("fermions", degeneracy=2)
    state = gas.state(1e9, chemical_potential=0.0)
    photons = 4 * SIGMA_SB.value * 1e36 / C.value
    assert state.energy_density.value == approx(7 / 8 * photons, rel=1e-13)


def test_phonons_far_below_the_debye_temperature():
    # Three branches at one speed: C_V = (2 pi^2 / 5) k (k T / hbar v)^3 (Debye 1912).
    gas = IdealGas.massless("bosons", speed=3 * u.km / u.s, degeneracy=3)
    state = gas.state(2.0, chemical_potential=0.0)
    debye = 2 * math.pi**2 / 5 * K_B.value * (K_B.value * 2.0 / (HBAR.value * 3000.0)) ** 3
    assert state.heat_capacity.value == approx(debye, rel=1e-13)


def test_units_and_shapes():
    gas = IdealGas("classical", 1.5, 2 * u.J / (u.kg * u.m / u.s) ** 1.5, dimension=2)
    state = gas.state([[100.0], [200.0]] * u.K, density=[1e10, 1e11, 1e12] / u.m**2)
    assert state.pressure.shape == (2, 3)
    assert state.pressure.unit == u.J / u.m**2
    assert state.mean_energy.to_value("J")[1, 0] == approx(4 / 3 * K_B.value * 200.0)
    assert state.free_energy_density.unit.is_equivalent("J / m2")


BAD = [
    (lambda: IdealGas("anyons", 1.0, 1.0), "choose one of fermions, bosons, classical"),
    (lambda: IdealGas("bosons", 0.0, 1.0), "exponent = 0"),
    (lambda: IdealGas("bosons", 1.0, -1.0), "coefficient = -1"),
    (lambda: IdealGas("bosons", 1.0, 1.0, dimension=2.5), "dimension = 2.5"),
    (lambda: IdealGas("bosons", 1.0, 1.0, dimension=0), "dimension = 0"),
    (lambda: IdealGas("bosons", 0.05, 1.0), "dimension / exponent = 60"),
    (lambda: IdealGas.massive(0.0, "bosons"), "mass = 0 kg"),
    (lambda: IdealGas.massive(1 * u.s, "bosons"), "'s'"),
    (lambda: gas_of("bosons", 1.0, 3).state(1.0), "exactly one"),
    (lambda: gas_of("bosons", 1.0, 3).state(-1.0, density=1.0), "temperature = -1 K"),
    (lambda: gas_of("bosons", 1.0, 3).state(1.0, density=-1.0), "density = -1"),
    (lambda: gas_of("bosons", 1.0, 3).state(1.0, chemical_potential=1.0), "at most 0 J"),
    (lambda: gas_of("fermions", 1.0, 3).state(0.0, chemical_potential=1.0), "give the density"),
]


@pytest.mark.parametrize(("call", "says"), BAD, ids=[str(i) for i in range(len(BAD))])
def test_bad_input_gives_one_clear_line(call, says):
    with pytest.raises(InputError) as caught:
        call()
    assert says in str(caught.value)
