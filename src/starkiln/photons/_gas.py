"""The photon gas: blackbody radiation in a cavity as a thermodynamic system."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import A_RAD, C2, K_B
from starkiln.errors import InputError
from starkiln.photons._forms import give, kelvin
from starkiln.photons._integrals import ZETA_3

#: Photons per volume over T^3: 16 pi zeta(3) (k / h c)^3, in m-3 K-3.
NUMBER = 16.0 * math.pi * ZETA_3 / C2.value**3
#: Mean photon energy over k T: pi^4 / (30 zeta(3)).
MEAN_ENERGY = math.pi**4 / (30.0 * ZETA_3)
#: Variance of the number of photons over its mean: zeta(2) / zeta(3).
NUMBER_DISPERSION = math.pi**2 / (6.0 * ZETA_3)


@dataclass(frozen=True, eq=False)
class PhotonGas:
    """Blackbody radiation at one temperature, in a volume or per volume.

    Parameters
    ----------
    temperature : Quantity or array_like
        K, at least 0; all quantities broadcast over it.
    volume : Quantity or array_like, optional
        m3, above 0. Without it the extensive quantities are densities, per m3.

    Notes
    -----
    Landau & Lifshitz 1980, Statistical Physics, section 63: with a = 4 sigma / c,
    U = a V T^4, P = a T^4 / 3, S = 4 a V T^3 / 3, F = -U / 3, C_V = 3 S, H = 4 U / 3,
    G = 0. The heat capacity at constant pressure is infinite: pressure is a function
    of temperature alone.
    """

    temperature: Any
    volume: Any = None

    def __post_init__(self) -> None:
        object.__setattr__(self, "temperature", give(kelvin(self.temperature), "K"))
        if self.volume is not None:
            volume = as_array(self.volume, "m3", "volume", lower=0.0, exclusive=True)
            object.__setattr__(self, "volume", give(volume, "m3"))

    @property
    def number(self) -> Any:
        """Number of photons, 2.0287e7 T^3 per m3."""
        return self._extensive(NUMBER * self._t**3, "", "m-3")

    @property
    def energy(self) -> Any:
        """Internal energy U."""
        return self._extensive(self._u, "J", "J m-3")

    @property
    def pressure(self) -> Any:
        """Pressure P = u / 3."""
        return give(self._u / 3.0, "Pa")

    @property
    def entropy(self) -> Any:
        """Entropy S = 4 U / 3 T."""
        return self._extensive(4.0 / 3.0 * A_RAD.value * self._t**3, "J K-1", "J K-1 m-3")

    @property
    def heat_capacity(self) -> Any:
        """Heat capacity at constant volume C_V = 3 S."""
        return self._extensive(4.0 * A_RAD.value * self._t**3, "J K-1", "J K-1 m-3")

    @property
    def free_energy(self) -> Any:
        """Helmholtz free energy F = U - T S = -U / 3, which is also the grand potential."""
        return self._extensive(-self._u / 3.0, "J", "J m-3")

    @property
    def enthalpy(self) -> Any:
        """Enthalpy H = U + P V = 4 U / 3."""
        return self._extensive(4.0 / 3.0 * self._u, "J", "J m-3")

    @property
    def gibbs_energy(self) -> Any:
        """Gibbs energy G = F + P V, zero: photons are made and lost freely."""
        return self._extensive(np.zeros_like(self._t), "J", "J m-3")

    @property
    def chemical_potential(self) -> Any:
        """Chemical potential, zero (per photon)."""
        return give(np.zeros_like(self._t), "J")

    @property
    def mean_photon_energy(self) -> Any:
        """Mean energy of a photon, pi^4 / (30 zeta(3)) k T = 2.7012 k T."""
        return give(MEAN_ENERGY * K_B.value * self._t, "J")

    @property
    def entropy_per_photon(self) -> Any:
        """Entropy per photon, 3.6016 k whatever the temperature."""
        return give(np.full_like(self._t, 4.0 / 3.0 * MEAN_ENERGY * K_B.value), "J K-1")

    @property
    def number_variance(self) -> Any:
        """Variance of the photon number, zeta(2)/zeta(3) N = 1.3684 N: more than Poisson's."""
        return self._extensive(NUMBER_DISPERSION * NUMBER * self._t**3, "", "m-3")

    @property
    def energy_variance(self) -> Any:
        """Variance of the energy, k T^2 C_V = 4 k T U (Einstein 1904)."""
        return self._extensive(4.0 * K_B.value * self._t * self._u, "J2", "J2 m-3")

    @property
    def relative_energy_fluctuation(self) -> Any:
        """Standard deviation over mean of the energy, sqrt(4 k T / U); needs a volume."""
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = 4.0 * K_B.value * self._t / (self._u * self._required_volume())
        return give(np.sqrt(ratio), "")

    @property
    def adiabatic_index(self) -> float:
        """Exponent of the adiabat P V^(4/3) = const."""
        return 4.0 / 3.0

    def expanded_to(self, volume: Any) -> PhotonGas:
        """Return the gas after a reversible adiabatic change to `volume`: V T^3 is kept."""
        after = as_array(volume, "m3", "volume", lower=0.0, exclusive=True)
        return PhotonGas(self._t * np.cbrt(self._required_volume() / after), after)

    def brought_to(self, temperature: Any) -> PhotonGas:
        """Return the gas after a reversible adiabatic change to `temperature`: V T^3 is kept."""
        after = kelvin(temperature, exclusive=True)
        return PhotonGas(after, self._required_volume() * (self._t / after) ** 3)

    @property
    def _t(self) -> np.ndarray:
        return np.asarray(self.temperature.value)

    @property
    def _u(self) -> np.ndarray:
        return np.asarray(A_RAD.value * self._t**4)

    def _extensive(self, density: Any, unit: str, density_unit: str) -> Any:
        if self.volume is None:
            return give(density, density_unit)
        return give(density * self.volume.value, unit)

    def _required_volume(self) -> np.ndarray:
        if self.volume is None:
            raise InputError("this needs the volume of the photon gas: give `volume` in m3")
        return np.asarray(self.volume.value)
