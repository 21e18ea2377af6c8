"""The photon gas: thermodynamic relations to 1e-13, and the general Bose gas."""

import math
from functools import partial

import mpmath as mp
import numpy as np
import pytest
from astropy import units as u

from starkiln.constants import A_RAD, K_B, SIGMA_SB, C
from starkiln.errors import InputError
from starkiln.gases import IdealGas
from starkiln.photons import PhotonGas, planck

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)

T = np.array([2.7255, 300.0, 5772.0, 1.57e7])
V = 2.5
GAS = PhotonGas(T, V)


def derivative(function, x):
    """Five-point rule: exact for the polynomials of degree 4 that these functions are."""
    h = 0.25 * x
    return (
        8.0 * (function(x + h) - function(x - h)) - (function(x + 2 * h) - function(x - 2 * h))
    ) / (12.0 * h)


def test_values_against_multiprecision():
    with mp.workdps(30):
        c2 = mp.mpf("6.62607015e-34") * 299792458 / mp.mpf("1.380649e-23")
        for t, n, energy in zip(T, GAS.number.value, GAS.energy.value, strict=True):
            x = mp.mpf(float(t)) / c2
            assert n == approx(float(16 * mp.pi * mp.zeta(3) * x**3 * V), rel=1e-14)
            u_exact = 8 * mp.pi**5 / 15 * mp.mpf("1.380649e-23") * x**3 * mp.mpf(float(t)) * V
            assert energy == approx(float(u_exact), rel=1e-14)


RELATIONS = {
    "U = 4 sigma V T^4 / c": (GAS.energy.value, 4 * SIGMA_SB.value * V * T**4 / C.value),
    "P = 4 sigma T^4 / 3 c": (GAS.pressure.value, 4 * SIGMA_SB.value * T**4 / (3 * C.value)),
    "u = 3 P": (GAS.energy.value, 3 * GAS.pressure.value * V),
    "S = 4 U / 3 T": (GAS.entropy.value, 4 * GAS.energy.value / (3 * T)),
    "F = -U / 3": (GAS.free_energy.value, -GAS.energy.value / 3),
    "F = U - T S": (GAS.free_energy.value, GAS.energy.value - T * GAS.entropy.value),
    "C_V = 3 S": (GAS.heat_capacity.value, 3 * GAS.entropy.value),
    "H = U + P V": (GAS.enthalpy.value, GAS.energy.value + GAS.pressure.value * V),
    "mean photon energy": (GAS.mean_photon_energy.value, GAS.energy.value / GAS.number.value),
    "entropy per photon": (GAS.entropy_per_photon.value, GAS.entropy.value / GAS.number.value),
    "var U = k T^2 C_V": (GAS.energy_variance.value, K_B.value * T**2 * GAS.heat_capacity.value),
    "relative fluctuation": (
        GAS.relative_energy_fluctuation.value,
        np.sqrt(GAS.energy_variance.value) / GAS.energy.value,
    ),
    "var N = zeta(2)/zeta(3) N": (
        GAS.number_variance.value,
        float(mp.zeta(2) / mp.zeta(3)) * GAS.number.value,
    ),
}


@pytest.mark.parametrize("name", RELATIONS)
def test_relation_holds_to_1e_13(name):
    left, right = RELATIONS[name]
    np.testing.assert_allclose(left, right, rtol=1e-13)


def test_free_enthalpy_and_chemical_potential_vanish():
    np.testing.assert_array_equal(GAS.gibbs_energy.value, 0.0)
    np.testing.assert_array_equal(GAS.chemical_potential.value, 0.0)
    free = GAS.free_energy.value + GAS.pressure.value * V
    np.testing.assert_allclose(free / GAS.energy.value, 0.0, atol=1e-15)


def test_maxwell_relations_to_1e_13():
    # (dS/dV)_T = (dP/dT)_V
    d_s = derivative(lambda v: PhotonGas(T, v).entropy.value, V)
    d_p = derivative(lambda t: PhotonGas(t, V).pressure.value, T)
    np.testing.assert_allclose(d_s, d_p, rtol=1e-13)
    # S = -(dF/dT)_V and P = -(dF/dV)_T, whose cross derivatives that is.
    d_f = derivative(lambda t: PhotonGas(t, V).free_energy.value, T)
    np.testing.assert_allclose(-d_f, GAS.entropy.value, rtol=1e-13)
    d_f = derivative(lambda v: PhotonGas(T, v).free_energy.value, V)
    np.testing.assert_allclose(-d_f, GAS.pressure.value, rtol=1e-13)
    # C_V = T (dS/dT)_V
    d_s = derivative(lambda t: PhotonGas(t, V).entropy.value, T)
    np.testing.assert_allclose(T * d_s, GAS.heat_capacity.value, rtol=1e-13)


def test_adiabat():
    after = GAS.expanded_to(20 * u.m**3)
    np.testing.assert_allclose(after.entropy.value, GAS.entropy.value, rtol=1e-13)
    np.testing.assert_allclose(after.number.value, GAS.number.value, rtol=1e-13)
    invariant = [g.pressure.value * g.volume.value**GAS.adiabatic_index for g in (GAS, after)]
    np.testing.assert_allclose(invariant[0], invariant[1], rtol=1e-13)
    back = after.brought_to(T)
    np.testing.assert_allclose(back.volume.value, V, rtol=1e-13)


def test_density_is_the_integral_of_the_spectrum():
    # 5 mm to 0.1 um at 300 K holds all but 1e-9; trapezoid in ln(lambda) of the door's values.
    ln_at = np.linspace(math.log(1e-7), math.log(1.0), 20001)
    at = np.exp(ln_at)
    for form, total in (
        ("energy_density", PhotonGas(300.0).energy.value),
        ("photon_density", PhotonGas(300.0).number.value),
    ):
        values = planck(at, 300.0, form=form).value * at
        assert np.trapezoid(values, ln_at) == approx(total, rel=1e-8)


def test_is_the_massless_bose_gas_of_two_polarisations():
    state = IdealGas.massless("bosons", degeneracy=2).state(T, chemical_potential=0.0)
    per_volume = PhotonGas(T)
    for theirs, ours in (
        ("number_density", "number"),
        ("energy_density", "energy"),
        ("pressure", "pressure"),
        ("entropy_density", "entropy"),
        ("heat_capacity", "heat_capacity"),
        ("free_energy_density", "free_energy"),
    ):
        ratio = (getattr(state, theirs) / getattr(per_volume, ours)).to_value("")
        np.testing.assert_allclose(ratio, 1.0, rtol=1e-13)


def test_units_with_and_without_volume():
    assert PhotonGas(300.0).energy.unit == u.J / u.m**3
    assert PhotonGas(300.0, 1 * u.l).energy.unit == u.J
    assert PhotonGas(300.0, 1 * u.l).number.unit == u.one
    cold = PhotonGas(0.0, 1.0)
    assert cold.energy.value == 0.0
    assert cold.pressure.value == 0.0
    assert PhotonGas(300.0, 1000 * u.l).energy.value == approx(A_RAD.value * 300.0**4)


def test_bad_input():
    with pytest.raises(InputError, match="temperature = -1 K"):
        PhotonGas(-1.0)
    with pytest.raises(InputError, match="volume = 0 m3"):
        PhotonGas(1.0, 0.0)
    with pytest.raises(InputError, match="needs the volume"):
        PhotonGas(1.0).expanded_to(1.0)
    with pytest.raises(InputError, match="'kg'"):
        PhotonGas(1.0, 3 * u.kg)
