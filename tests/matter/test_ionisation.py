"""Ionisation equilibrium against Saha's law worked by hand and against statistical mechanics."""

import mpmath as mp
import numpy as np
import pytest

from starkiln.matter import saha_factor, solve_ionisation
from starkiln.matter._ionisation import h2_factor, h_minus_factor

# CODATA 2022, typed here on purpose: the check shall not share the package's constants.
K = 1.380649e-23
H = 6.62607015e-34
ME = 9.1093837139e-31
EV = 1.602176634e-19


def test_log_form_of_sahas_equation():
    # Gray, The Observation and Analysis of Stellar Photospheres, eq. 1.20 (from memory):
    # log(N1 Pe/N0) = -5040 I/T + 2.5 log T + log(2 U1/U0) - 0.4772 - log 2 + ..., here in its
    # usual form log(N1/N0 Pe) = -5040/T I + 2.5 log T - 0.1761 + log(U1/U0), Pe in dyn cm-2.
    t, chi = 5777.0, 7.646
    ours = saha_factor(t, chi, 1.9) * K * t * 10.0
    log = -5039.778 * chi / t + 2.5 * np.log10(t) - 0.1761 + np.log10(1.9)
    assert np.log10(ours) == pytest.approx(log, abs=3e-3)


def test_saha_factor_in_high_precision():
    with mp.workdps(30):
        t = mp.mpf(10000)
        waves = (2 * mp.pi * mp.mpf(ME) * mp.mpf(K) * t / mp.mpf(H) ** 2) ** mp.mpf("1.5")
        want = 2 * mp.mpf("0.5") * waves * mp.exp(-mp.mpf("13.598") * mp.mpf(EV) / (mp.mpf(K) * t))
    assert saha_factor(1e4, 13.598, 0.5) == pytest.approx(float(want), rel=1e-9)


def test_half_of_hydrogen_is_ionised_near_9600_k_at_20_pa():
    # Carroll & Ostlie, An Introduction to Modern Astrophysics, example 8.1.4: pure hydrogen at
    # P_e = 20 N m-2 is half ionised at 9600 K (from memory; their 9600 is rounded to 100 K).
    temperature = np.linspace(9000.0, 10200.0, 241)
    ratio = saha_factor(temperature, 13.598, 0.5) * K * temperature / 20.0
    assert np.interp(1.0, ratio, temperature) == pytest.approx(9600.0, abs=60.0)


@pytest.mark.parametrize("feh", [-2.5, 0.0, 0.5])
def test_charge_and_particles_balance(feh):
    temperature = np.array([2500.0, 4000.0, 5800.0, 8000.0, 12000.0, 40000.0])
    pressure = np.array([10.0, 1e3, 1e4, 100.0, 1e3, 1e4])
    gas = solve_ionisation(pressure, temperature, feh=feh)
    positive = gas.h_plus - gas.h_minus
    particles = gas.electron + gas.h_neutral + gas.h_plus + gas.h_minus + gas.h2
    for symbol in gas.nuclei:
        positive = positive + gas.number(symbol, 1) + 2.0 * gas.number(symbol, 2)
        particles = particles + sum(gas.number(symbol, i) for i in range(3))
    np.testing.assert_allclose(positive, gas.electron, rtol=1e-8)
    np.testing.assert_allclose(particles * K * temperature, pressure, rtol=1e-9)
    nuclei = gas.h_neutral + gas.h_plus + gas.h_minus + 2.0 * gas.h2
    np.testing.assert_allclose(nuclei, gas.hydrogen_nuclei, rtol=1e-9)


def test_every_element_obeys_saha():
    temperature = np.array([4500.0, 9000.0])
    gas = solve_ionisation(np.array([3e3, 3e3]), temperature)
    iron = gas.number("Fe", 1) * gas.electron / gas.number("Fe", 0)
    np.testing.assert_allclose(iron, saha_factor(temperature, 7.902, 43.0 / 27.0), rtol=1e-9)


def test_h2_dissociation_against_partition_functions():
    # Rigid rotor and harmonic oscillator with the constants of Huber & Herzberg 1979 (NIST
    # WebBook): D0 4.478 eV, B 59.3 cm-1, omega 4161 cm-1 (v = 0 to 1). Anharmonicity is worth
    # some per cent at 3000-5000 K, hence 12 per cent.
    for t in (3000.0, 4000.0, 5000.0):
        hc_k = 1.438777
        rotation = t / (2.0 * hc_k * 59.3) * (1.0 + hc_k * 59.3 / (3.0 * t))
        vibration = 1.0 / (1.0 - np.exp(-hc_k * 4161.0 / t))
        mass = 1.00784 * 1.66053907e-27 / 2.0
        waves = (2.0 * np.pi * mass * K * t / H**2) ** 1.5
        want = rotation * vibration / (4.0 * waves) * np.exp(4.478 * EV / (K * t))
        assert h2_factor(np.array(t)) == pytest.approx(want, rel=0.12)


def test_hminus_factor_agrees_with_johns_constant():
    # John 1988, eq. 3: the bound-free absorption per H and P_e is 0.750 T^-5/2 exp(alpha/(l0 T))
    # (1 - exp(...)) sigma in cm4/dyn with alpha = 1.439e4 um K (from memory), which states the
    # same equilibrium: n(H-)/(n_H n_e) = 0.750 k T^-3/2 exp(...) in cm3, k in erg/K.
    t = np.array([4000.0, 6300.0, 10000.0])
    want = 0.750 * 1.380649e-16 * t**-1.5 * np.exp(1.438777e4 / (1.6419 * t)) * 1e-6
    np.testing.assert_allclose(h_minus_factor(t), want, rtol=0.01)


def test_metals_give_the_electrons_of_a_cool_gas():
    rich = solve_ionisation(np.array([1e4]), np.array([4500.0]))
    poor = solve_ionisation(np.array([1e4]), np.array([4500.0]), feh=-1.0)
    assert 4.0 < float(rich.electron[0] / poor.electron[0]) < 10.0
