"""Equation of state: ions, electrons of any degeneracy and relativity with pairs, and light."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import A_RAD, K_B, M_U, H
from starkiln.errors import ConvergenceError, InputError
from starkiln.matter._composition import Composition
from starkiln.matter._electrons import electron_gas

#: kT = 10 m c^2: beyond, the integrals lose digits and other particles appear.
MAX_TEMPERATURE_K = 5.9e10


_UNITS = {
    "density": "kg m-3",
    "temperature": "K",
    "gas_pressure": "Pa",
    "radiation_pressure": "Pa",
    "energy": "J kg-1",
    "entropy": "J K-1 kg-1",
    "pairs": "m-3",
    "heat_capacity": "J K-1 kg-1",
}


@dataclass(frozen=True)
class GasState:
    """Matter and light at given density and temperature.

    `gas_state` fills it with quantities, `gas_state_si` with plain arrays in the units below.

    Attributes
    ----------
    density, temperature : astropy.units.Quantity
        kg m-3 and K.
    gas_pressure, radiation_pressure : astropy.units.Quantity
        Pa: ions with electrons and pairs; light.
    energy, entropy : astropy.units.Quantity
        J kg-1 and J K-1 kg-1, light included; energy counts from cold electrons at rest.
    eta : numpy.ndarray
        Degeneracy parameter of the electrons.
    pairs : astropy.units.Quantity
        Positrons per m3.
    chi_rho, chi_t : numpy.ndarray
        d ln P/d ln rho at fixed T and d ln P/d ln T at fixed rho.
    heat_capacity : astropy.units.Quantity
        At fixed volume, J K-1 kg-1.
    """

    density: Any
    temperature: Any
    gas_pressure: Any
    radiation_pressure: Any
    energy: Any
    entropy: Any
    eta: np.ndarray
    pairs: Any
    chi_rho: np.ndarray
    chi_t: np.ndarray
    heat_capacity: Any

    @property
    def pressure(self) -> Any:
        """Total pressure, Pa."""
        return self.gas_pressure + self.radiation_pressure

    @property
    def radiation_to_gas(self) -> np.ndarray:
        """P_rad/P_gas."""
        return np.asarray(self.radiation_pressure / self.gas_pressure)

    @property
    def gamma_3(self) -> np.ndarray:
        """1 + d ln T/d ln rho at fixed entropy."""
        work = self.pressure * self.chi_t / (self.density * self.temperature)
        return np.asarray(1.0 + work / self.heat_capacity)

    @property
    def gamma_1(self) -> np.ndarray:
        """Return d ln P/d ln rho at fixed entropy."""
        return self.chi_rho + self.chi_t * (self.gamma_3 - 1.0)

    @property
    def adiabatic_gradient(self) -> np.ndarray:
        """Return d ln T/d ln P at fixed entropy."""
        return (self.gamma_3 - 1.0) / self.gamma_1

    @property
    def heat_capacity_p(self) -> Any:
        """At fixed pressure, J K-1 kg-1."""
        return self.heat_capacity * self.gamma_1 / self.chi_rho


def gas_state(density: Any, temperature: Any, matter: Composition) -> GasState:
    """Return the state of fully ionised matter and light.

    Parameters
    ----------
    density, temperature : astropy.units.Quantity or array_like
        Bare numbers in kg m-3 and K; broadcast. Temperature up to 5.9e10 K.
    matter : Composition

    Returns
    -------
    GasState

    Notes
    -----
    Ions are an ideal gas, electrons and positrons ideal Fermi gases; Coulomb forces
    (-1.1 per cent of P at the Sun's centre), partial ionisation and nuclear
    statistical balance are left out. Relations of e.g. Cox & Giuli 1968, Principles
    of Stellar Structure, ch. 9 and 24.

    Raises
    ------
    InputError
        A value out of bounds.
    """
    from astropy import units as u

    rho, t = _checked(density, "kg m-3", "density", temperature)
    state = gas_state_si(rho.ravel(), t.ravel(), 1.0 / matter.mu_ion, 1.0 / matter.mu_electron)
    values = {key: value.reshape(rho.shape) for key, value in vars(state).items()}
    return GasState(**values | {key: u.Quantity(values[key], _UNITS[key]) for key in _UNITS})


def gas_state_si(
    rho: np.ndarray,
    t: np.ndarray,
    ions: Any,
    electrons: Any,
    guess: np.ndarray | None = None,
) -> GasState:
    """Return the state of flat arrays, with ions and electrons per atomic mass unit."""
    n_ion, n_el = rho * ions / M_U.value, rho * electrons / M_U.value
    el = electron_gas(n_el, t, guess)
    kt = K_B.value * t
    light = A_RAD.value * t**4 / 3.0
    gas = n_ion * kt + el.pressure
    # At fixed excess of electrons the chemical potential follows the temperature.
    drift = el.dq_dt / el.dq_dmu
    slope_t = n_ion * K_B.value + el.entropy - n_el * drift + 4.0 * light / t
    slope_rho = n_ion * kt + n_el**2 / el.dq_dmu
    heat = 1.5 * n_ion * K_B.value + t * (el.ds_dt - el.dq_dt * drift) + 12.0 * light / t
    pressure = gas + light
    ion_mass = M_U.value / ions
    cell = (2.0 * math.pi * ion_mass * kt / H.value**2) ** 1.5 / n_ion
    entropy = n_ion * K_B.value * (2.5 + np.log(cell)) + el.entropy + 4.0 * light / t
    return GasState(
        density=rho,
        temperature=t,
        gas_pressure=gas,
        radiation_pressure=light,
        energy=(1.5 * n_ion * kt + el.energy + 3.0 * light) / rho,
        entropy=entropy / rho,
        eta=el.eta,
        pairs=el.pairs,
        chi_rho=slope_rho / pressure,
        chi_t=t * slope_t / pressure,
        heat_capacity=heat / rho,
    )


def gas_density(pressure: Any, temperature: Any, matter: Composition) -> Any:
    """Return the density (a quantity, kg m-3) at given total pressure and temperature.

    Parameters
    ----------
    pressure, temperature : astropy.units.Quantity or array_like
        Bare numbers in Pa and K; broadcast.
    matter : Composition

    Raises
    ------
    InputError
        A value out of bounds, or a pressure that light and pairs exceed by themselves.
    ConvergenceError
        Newton's method failed.
    """
    from astropy import units as u

    p, t = _checked(pressure, "Pa", "pressure", temperature)
    shape, p, t = p.shape, p.ravel(), t.ravel()
    gas = p - A_RAD.value * t**4 / 3.0
    if np.any(gas <= 0.0):
        raise _too_little(p, t, gas <= 0.0)
    ions, electrons = 1.0 / matter.mu_ion, 1.0 / matter.mu_electron
    rho = gas * M_U.value / ((ions + electrons) * K_B.value * t)
    for _ in range(60):
        state = gas_state_si(rho, t, ions, electrons)
        miss = np.log(gas / state.gas_pressure)
        step = np.clip(miss * state.gas_pressure / (state.chi_rho * state.pressure), -3.0, 3.0)
        rho = rho * np.exp(step)
        if np.any(rho < 1e-30):
            raise _too_little(p, t, rho < 1e-30)
        # Where light or pairs dominate, rounding of the pressure bounds what can be had.
        if np.all((np.abs(step) < 1e-13) | (np.abs(miss) < 1e-14 * np.maximum(1.0, p / gas))):
            return u.Quantity(rho.reshape(shape), "kg m-3")
    raise ConvergenceError("the density did not converge in 60 steps", partial=rho.reshape(shape))


def _too_little(p: np.ndarray, t: np.ndarray, bad: np.ndarray) -> InputError:
    i = int(np.flatnonzero(bad)[0])
    return InputError(
        f"pressure = {p[i]:.6g} Pa is out of bounds: light and pairs alone press more at "
        f"{t[i]:.6g} K; give more than {A_RAD.value * t[i] ** 4 / 3.0:.6g} Pa"
    )


def _checked(value: Any, unit: str, name: str, temperature: Any) -> tuple[np.ndarray, np.ndarray]:
    plain = as_array(value, unit, name, lower=0.0, upper=math.inf, exclusive=True)
    t = as_array(
        temperature, "K", "temperature", lower=0.0, upper=MAX_TEMPERATURE_K, exclusive=True
    )
    first, second = np.broadcast_arrays(plain, t)
    return np.array(first), np.array(second)
