"""The equilibrium state of an ideal gas: what its functions f_s and g_s say."""

from __future__ import annotations

import math
from dataclasses import dataclass, fields, replace
from typing import TYPE_CHECKING, Any

import numpy as np

from starkiln.constants import K_B
from starkiln.gases._statistics import bose, fermi, fermi_entropy

if TYPE_CHECKING:
    from starkiln.gases._ideal import IdealGas


@dataclass(frozen=True, eq=False)
class GasState:
    """An ideal gas in equilibrium; densities are per m^d, arrays of one shape.

    Attributes
    ----------
    temperature : Quantity
        K.
    eta : numpy.ndarray
        Chemical potential over k T.
    chemical_potential : Quantity
        J, without rest energy.
    number_density, energy_density, pressure, entropy_density : Quantity
        m^-d, J m^-d (twice), J K^-1 m^-d.
    heat_capacity : Quantity
        At constant volume and number, J K^-1 m^-d.
    state_sum : Quantity
        Of one particle, per volume, m^-d.
    ln_grand_sum : Quantity
        Logarithm of the grand-canonical state sum per volume, P / k T, in m^-d.
    condensed_fraction : numpy.ndarray
        Of the particles, in the lowest state; 0 but for condensed bosons.
    """

    temperature: Any
    eta: np.ndarray
    chemical_potential: Any
    number_density: Any
    energy_density: Any
    pressure: Any
    entropy_density: Any
    heat_capacity: Any
    state_sum: Any
    ln_grand_sum: Any
    condensed_fraction: np.ndarray

    @property
    def mean_energy(self) -> Any:
        """Mean energy of a particle, J."""
        return self.energy_density / self.number_density

    @property
    def free_energy_density(self) -> Any:
        """Helmholtz free energy per volume, U - T S, J m^-d."""
        return self.energy_density - self.temperature * self.entropy_density


def populated(
    gas: IdealGas,
    kelvin: np.ndarray,
    eta: np.ndarray,
    state_sum: np.ndarray,
    number: np.ndarray | None = None,
) -> GasState:
    """Return the state at a given eta; bosons beyond what it holds have condensed.

    With Z the state sum: N = Z f_s, P = k T Z f_(s+1), U = s P, S = (U + P - mu N) / T
    (Pathria & Beale 2011, sections 7.1 and 8.1, with s for 3/2).
    """
    s = gas.index
    functions = _functions(gas.statistics, s, eta)
    _, here, above, entropy = functions
    thermal = state_sum * here
    count = thermal if number is None else number
    with np.errstate(divide="ignore", invalid="ignore"):
        condensed = np.where((eta == 0.0) & (count > thermal), 1.0 - thermal / count, 0.0)
    if gas.statistics != "bosons":
        condensed = np.zeros_like(condensed)
    k_t = K_B.value * kelvin
    pressure = k_t * state_sum * above
    heat = K_B.value * state_sum * _heat_capacity(gas.statistics, s, eta, functions)
    with np.errstate(invalid="ignore"):
        mu = np.where(np.isinf(eta), eta, eta * k_t)
    return _with_units(
        gas.dimension,
        temperature=kelvin,
        eta=eta,
        chemical_potential=mu,
        number_density=count,
        energy_density=s * pressure,
        pressure=pressure,
        entropy_density=K_B.value * state_sum * entropy[0],
        heat_capacity=heat,
        state_sum=state_sum,
        ln_grand_sum=state_sum * above,
        condensed_fraction=condensed,
    )


def degenerate(
    gas: IdealGas, warm: GasState, cold: np.ndarray, fermi_energy: np.ndarray
) -> GasState:
    """Return `warm` with its elements at T = 0, where `cold`, set to their limits.

    Fermions fill the states up to the Fermi energy: U = s / (s + 1) N E_F; bosons and
    classical particles rest. Nothing has entropy.
    """
    s = gas.index
    fermions = gas.statistics == "fermions"
    energy = s / (s + 1.0) * warm.number_density.value * fermi_energy if fermions else 0.0
    limits = {
        "chemical_potential": fermi_energy if fermions else 0.0,
        "energy_density": energy,
        "pressure": energy / s,
        "entropy_density": 0.0,
        "heat_capacity": 0.0,
        "ln_grand_sum": math.inf if fermions else 0.0,
    }
    changed: dict[str, Any] = {
        name: np.where(cold, limit, getattr(warm, name).value) * getattr(warm, name).unit
        for name, limit in limits.items()
    }
    at_rest = gas.statistics == "bosons"
    changed["eta"] = np.where(cold, math.inf if fermions else 0.0, warm.eta)
    changed["condensed_fraction"] = np.where(cold & at_rest, 1.0, warm.condensed_fraction)
    return replace(warm, **changed)


def _functions(statistics: str, s: float, eta: np.ndarray) -> Any:
    """Return the function at orders s - 1, s, s + 1, and the entropy's at s and s - 1."""
    if statistics == "classical":
        f = np.exp(eta)
        weighted = np.where(np.isinf(eta), 0.0, eta) * f
        return f, f, f, ((s + 1.0) * f - weighted, s * f - weighted)
    if statistics == "fermions":
        f_three = tuple(np.asarray(fermi(s + k, eta)) for k in (-1.0, 0.0, 1.0))
        return *f_three, (fermi_entropy(s, eta), fermi_entropy(s - 1.0, eta))
    g_three = tuple(np.asarray(bose(s + k, eta)) for k in (-1.0, 0.0, 1.0))
    with np.errstate(invalid="ignore"):
        weighted = np.where((eta == 0.0) | np.isinf(eta), 0.0, eta * g_three[1])
    return *g_three, ((s + 1.0) * g_three[2] - weighted, np.zeros_like(eta))


def _heat_capacity(statistics: str, s: float, eta: np.ndarray, functions: Any) -> np.ndarray:
    """Return C_V / (k Z) from d(S/N)/d eta and d eta / d ln T = -s f_s / f_(s-1)."""
    below, here, above, entropy = functions
    with np.errstate(divide="ignore", invalid="ignore"):
        if statistics == "fermions":
            # The entropy's own function keeps the digits that cancel in a dense gas.
            value = s * (entropy[0] - here * entropy[1] / below)
        else:
            # With eta held at 0 by a condensate, or by free creation, nothing is taken off.
            at_fixed_number = np.where(eta == 0.0, 0.0, s**2 * here**2 / below)
            value = s * (s + 1.0) * above - (
                at_fixed_number if statistics == "bosons" else s**2 * here
            )
    return np.where(here > 0.0, value, 0.0)


def _with_units(dimension: int, **values: Any) -> GasState:
    from astropy import units as u

    per_volume = u.m**-dimension
    units = {
        "temperature": u.K,
        "chemical_potential": u.J,
        "number_density": per_volume,
        "energy_density": u.J * per_volume,
        "pressure": u.J * per_volume,
        "entropy_density": u.J / u.K * per_volume,
        "heat_capacity": u.J / u.K * per_volume,
        "state_sum": per_volume,
        "ln_grand_sum": per_volume,
    }
    given = {
        field.name: u.Quantity(np.asarray(values[field.name]), units[field.name])
        if field.name in units
        else np.asarray(values[field.name])
        for field in fields(GasState)
    }
    return GasState(**given)
