"""Ideal gases of any statistics whose energy is a power of momentum, in any dimension."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array, as_float
from starkiln.constants import HBAR, K_B, C
from starkiln.errors import InputError
from starkiln.gases._inverse import bose_inverse, fermi_inverse
from starkiln.gases._state import GasState, degenerate, populated
from starkiln.gases._statistics import LARGEST_ORDER, zeta

STATISTICS = ("fermions", "bosons", "classical")


@dataclass(frozen=True)
class IdealGas:
    """A gas of free particles with energy K p^alpha in d dimensions.

    Parameters
    ----------
    statistics : {"fermions", "bosons", "classical"}
        Which statistics the particles obey.
    exponent : float
        alpha, above 0: 2 for massive particles at low speed, 1 for massless ones.
    coefficient : Quantity or float
        K, in J (kg m/s)^-alpha when bare; above 0.
    dimension : int
        d, at least 1. Densities are per m^d.
    degeneracy : float
        Internal states of a particle (spin, polarisation), above 0.

    Notes
    -----
    Everything depends on s = d / alpha. The density of states is proportional to
    E^(s-1), and P V = U / s (Pathria & Beale 2011, Statistical Mechanics, chapters
    7 and 8, generalised to any s as in de Groot, Hooyman & ten Seldam 1950, Proc. R.
    Soc. A 203, 266, and May 1964, Phys. Rev. 135, A1515).
    """

    statistics: str
    exponent: float
    coefficient: Any
    dimension: int = 3
    degeneracy: float = 1.0

    def __post_init__(self) -> None:
        if self.statistics not in STATISTICS:
            raise InputError(
                f"statistics {self.statistics!r} is unknown: choose one of {', '.join(STATISTICS)}"
            )
        if self.dimension != int(self.dimension) or self.dimension < 1:
            raise InputError(
                f"dimension = {self.dimension} is out of bounds: give a whole number from 1"
            )
        as_float(self.exponent, "", "exponent", lower=0.0, exclusive=True)
        as_float(self.degeneracy, "", "degeneracy", lower=0.0, exclusive=True)
        alpha = float(self.exponent)
        unit = f"J kg**({-alpha!r}) m**({-alpha!r}) s**({alpha!r})"
        plain = as_float(self.coefficient, unit, "coefficient", lower=0.0, exclusive=True)
        object.__setattr__(self, "coefficient", plain)
        if self.index > LARGEST_ORDER - 1.0:
            raise InputError(
                f"dimension / exponent = {self.index:g} is out of bounds: "
                f"it must be at most {LARGEST_ORDER - 1.0:g}"
            )

    @classmethod
    def massive(cls, mass: Any, statistics: str, **options: Any) -> IdealGas:
        """Return the gas of particles of `mass` (kg) at low speed: E = p^2 / 2 m."""
        mass_kg = as_float(mass, "kg", "mass", lower=0.0, exclusive=True)
        return cls(statistics, 2.0, 0.5 / mass_kg, **options)

    @classmethod
    def massless(cls, statistics: str, *, speed: Any = C.value, **options: Any) -> IdealGas:
        """Return the gas of particles with E = c p; `speed` (m/s) replaces c, as for phonons."""
        speed_m_s = as_float(speed, "m / s", "speed", lower=0.0, exclusive=True)
        return cls(statistics, 1.0, speed_m_s, **options)

    @property
    def index(self) -> float:
        """The number s = d / alpha on which everything depends."""
        return self.dimension / self.exponent

    def state_sum(self, temperature: Any) -> Any:
        """Return the state sum of one particle per volume, in m^-d.

        g S_d Gamma(s) / (alpha h^d) (k T / K)^s with S_d = 2 pi^(d/2) / Gamma(d/2): the
        inverse cube of the thermal wavelength for massive particles in three dimensions.
        """
        return self._quantity(self._state_sum(_kelvin(temperature)), "m", -self.dimension)

    def state(
        self, temperature: Any, *, density: Any = None, chemical_potential: Any = None
    ) -> GasState:
        """Return the gas in equilibrium.

        Parameters
        ----------
        temperature : Quantity or array_like
            K, at least 0.
        density : Quantity or array_like, optional
            Particles per m^d, at least 0.
        chemical_potential : Quantity or array_like, optional
            J; at most 0 for bosons. Exactly one of the two must be given.

        Returns
        -------
        GasState

        Raises
        ------
        InputError
            Both or neither given, or out of bounds.
        ConvergenceError
            The chemical potential could not be found.
        """
        if (density is None) == (chemical_potential is None):
            raise InputError("give exactly one of density and chemical_potential")
        kelvin = _kelvin(temperature)
        if density is not None:
            unit = f"m**(-{self.dimension})"
            number = as_array(density, unit, "density", lower=0.0)
            kelvin, number = np.broadcast_arrays(kelvin, number)
            return self._at_density(kelvin, number)
        upper = 0.0 if self.statistics == "bosons" else math.inf
        mu = as_array(chemical_potential, "J", "chemical potential", upper=upper)
        kelvin, mu = np.broadcast_arrays(kelvin, mu)
        if np.any(kelvin == 0.0):
            raise InputError("temperature = 0 K: give the density, not the chemical potential")
        eta = mu / (K_B.value * kelvin)
        return populated(self, kelvin, eta, self._state_sum(kelvin))

    def fermi_energy(self, density: Any) -> Any:
        """Return the energy of the highest state filled at T = 0, in J."""
        number = as_array(density, f"m**(-{self.dimension})", "density", lower=0.0)
        return self._quantity(self._fermi_energy(number), "J")

    def fermi_temperature(self, density: Any) -> Any:
        """Return the Fermi energy over k, in K."""
        return self._quantity(self.fermi_energy(density).value / K_B.value, "K")

    def condensation_temperature(self, density: Any) -> Any:
        """Return the temperature below which bosons condense, in K.

        The state sum times zeta(s) equals the density there; 0 where s <= 1, since
        such a gas never condenses (Einstein 1925; May 1964 for d dimensions).
        """
        number = as_array(density, f"m**(-{self.dimension})", "density", lower=0.0)
        if self.index <= 1.0:
            return self._quantity(np.zeros_like(number), "K")
        at_one_kelvin = self._state_sum(np.asarray(1.0)) * zeta(self.index)
        return self._quantity((number / at_one_kelvin) ** (1.0 / self.index), "K")

    def _state_sum(self, kelvin: np.ndarray) -> np.ndarray:
        d, s = self.dimension, self.index
        sphere = 2.0 * math.pi ** (0.5 * d) / math.gamma(0.5 * d)
        cells = (2.0 * math.pi * HBAR.value) ** d
        scale = self.degeneracy * sphere * math.gamma(s) / (self.exponent * cells)
        return np.asarray(scale * (K_B.value * kelvin / self.coefficient) ** s)

    def _fermi_energy(self, number: np.ndarray) -> np.ndarray:
        at_one_kelvin = self._state_sum(np.asarray(1.0)) / math.gamma(self.index + 1.0)
        return np.asarray(K_B.value * (number / at_one_kelvin) ** (1.0 / self.index))

    def _at_density(self, kelvin: np.ndarray, number: np.ndarray) -> GasState:
        state_sum = self._state_sum(kelvin)
        cold = kelvin == 0.0
        filling = number / np.where(cold, 1.0, state_sum)
        if self.statistics == "fermions":
            eta = fermi_inverse(self.index, filling)
        elif self.statistics == "bosons":
            eta = bose_inverse(self.index, filling)
        else:
            with np.errstate(divide="ignore"):
                eta = np.log(filling)
        warm = populated(self, kelvin, np.asarray(eta), state_sum, number)
        if not np.any(cold):
            return warm
        return degenerate(self, warm, cold, self._fermi_energy(number))

    def _quantity(self, value: Any, unit: str, power: int = 1) -> Any:
        from astropy import units as u

        return u.Quantity(np.asarray(value), u.Unit(unit) ** power)


def _kelvin(temperature: Any) -> np.ndarray:
    return as_array(temperature, "K", "temperature", lower=0.0)
