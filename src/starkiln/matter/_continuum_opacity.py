"""Continuous absorption and scattering of a stellar gas, source by source.

Left out, because they matter only below 4,200 K or a little in the far
ultraviolet: H2+, He-, H2- and molecular bands.
"""

from __future__ import annotations

import numpy as np

from starkiln.constants import C2, E_CHARGE, K_B, SIGMA_T, C
from starkiln.matter._hminus import hminus_bound_free, hminus_free_free
from starkiln.matter._hydrogenic import (
    KRAMERS_M2,
    RYDBERG_EV,
    RYDBERG_H,
    bound_free,
    free_free_gaunt,
)
from starkiln.matter._ionisation import IonisationState, elements
from starkiln.store import read_data_table

__all__ = ["ABSORPTION_SOURCES", "SCATTERING_SOURCES", "ContinuumOpacity", "bound_free_edges"]

#: Source of true absorption -> where its formula comes from.
ABSORPTION_SOURCES = {
    "H- bound-free": "John 1988, A&A 193, 189, Table 2",
    "H- free-free": "John 1988, A&A 193, 189, Table 3",
    "H bound-free": "Kramers 1923; Gaunt factors Johnson 1972, ApJ 174, 227",
    "H free-free": "Kramers 1923; Gaunt factor Karzas & Latter 1961, ApJS 6, 167",
    "He bound-free": "He I: one power law per level (memory); He II: as hydrogen, Z = 2",
    "He free-free": "Kramers 1923; Gaunt factor Karzas & Latter 1961, ApJS 6, 167",
    "metals bound-free": "C, Mg, Al, Si, Ca, Fe: one power law per level (memory)",
}
#: Source of scattering -> where its formula comes from.
SCATTERING_SOURCES = {
    "electrons": "Thomson; CODATA 2022",
    "Rayleigh H": "Dalgarno's series, as in Gray (from memory)",
    "Rayleigh H2": "Dalgarno & Williams 1962, ApJ 136, 690 (from memory)",
}

_H_LEVELS = 9
_HE2_LEVELS = 8
_HE2_EV = 54.418
#: Series whose dissolved levels continue the bound-free absorption below the edge.
_DISSOLVED_SERIES = 4
#: Free-free absorption: 3.6924e8 cm5 K^(1/2) s^-3 (Kramers 1923), here in SI.
_FREE_FREE = 3.6924e-2
#: The series of Rayleigh scattering fail at Lyman alpha: held constant below, in Angstrom.
_RAYLEIGH_FROM = 1300.0


def bound_free_edges() -> np.ndarray:
    """Return the wavelengths in metres at which bound-free absorption sets in, ascending."""
    hydrogen = np.arange(1, _H_LEVELS + 1) ** 2 / RYDBERG_H
    helium = np.arange(1, _HE2_LEVELS + 1) ** 2 / (4.0 * RYDBERG_H)
    table = read_data_table("matter", "photoionisation_edges.ecsv")
    return np.unique(np.concatenate([hydrogen, helium[::2], np.asarray(table["edge"]) * 1e-6]))


def inglis_teller_level(electron: np.ndarray) -> np.ndarray:
    """Return the principal quantum number at which the lines of hydrogen merge.

    log10 n_m = (23.26 - log10 n_e)/7.5 with n_e in cm-3 (Inglis & Teller 1939,
    ApJ 90, 439); `electron` in m-3.
    """
    return 10.0 ** ((23.26 - np.log10(electron * 1e-6)) / 7.5)


def undissolved(level: np.ndarray, merging: np.ndarray) -> np.ndarray:
    """Return the share of levels that the plasma leaves bound: 1/(1 + (m/n_m)^8)."""
    return 1.0 / (1.0 + (level / merging) ** 8)


class ContinuumOpacity:
    """Continuous opacity on a fixed set of wavelengths.

    Everything that depends on wavelength alone is computed once.

    Parameters
    ----------
    wavelength_m : numpy.ndarray
        Metres, shape (n_wave,).
    """

    def __init__(self, wavelength_m: np.ndarray) -> None:
        self.wavelength_m = np.asarray(wavelength_m, dtype=float)
        self._minus_bf = hminus_bound_free(self.wavelength_m)
        self._minus_powers, self._minus_ff = hminus_free_free(self.wavelength_m)
        self._h_levels = np.array(
            [
                _cut(bound_free(n, self.wavelength_m), self.wavelength_m, n, 1)
                for n in _up(_H_LEVELS)
            ]
        )
        self._he2_levels = np.array(
            [
                _cut(bound_free(n, self.wavelength_m, 2), self.wavelength_m, n, 2)
                for n in _up(_HE2_LEVELS)
            ]
        )
        self._edges = _Edges(self.wavelength_m)
        self._rayleigh = _rayleigh(self.wavelength_m)

    def absorption_sources(self, gas: IonisationState) -> dict[str, np.ndarray]:
        """Return each source of true absorption in m-1, shape (n_depth, n_wave).

        Stimulated emission is taken off; the keys are those of `ABSORPTION_SOURCES`.
        """
        t = gas.temperature_k[:, None]
        stimulated = -np.expm1(-C2.value / (self.wavelength_m * t))
        theta_powers = (5040.0 / t) ** self._minus_powers
        free = _FREE_FREE * (self.wavelength_m / C.value) ** 3 * stimulated
        free = free * (gas.electron / np.sqrt(gas.temperature_k))[:, None]
        gaunt = free_free_gaunt(self.wavelength_m, t)
        helium = gas.number("He", 1)[:, None] * gaunt + 4.0 * gas.number("He", 2)[
            :, None
        ] * free_free_gaunt(self.wavelength_m, t, 2)
        he2 = _level_populations(gas.number("He", 1), gas.temperature_k, _HE2_LEVELS, _HE2_EV)
        pressure = gas.h_neutral * gas.electron * K_B.value * gas.temperature_k
        return {
            "H- bound-free": gas.h_minus[:, None] * self._minus_bf * stimulated,
            "H- free-free": pressure[:, None] * (theta_powers @ self._minus_ff),
            "H bound-free": self._hydrogen(gas) * stimulated,
            "H free-free": free * gas.h_plus[:, None] * gaunt,
            "He bound-free": (self._edges.of(gas, True) + he2 @ self._he2_levels) * stimulated,
            "He free-free": free * helium,
            "metals bound-free": self._edges.of(gas, False) * stimulated,
        }

    def scattering_sources(self, gas: IonisationState) -> dict[str, np.ndarray]:
        """Return each source of scattering in m-1, shape (n_depth, n_wave)."""
        flat = np.ones_like(self.wavelength_m)
        return {
            "electrons": (gas.electron * SIGMA_T.value)[:, None] * flat,
            "Rayleigh H": gas.h_neutral[:, None] * self._rayleigh[0],
            "Rayleigh H2": gas.h2[:, None] * self._rayleigh[1],
        }

    def absorption(self, gas: IonisationState) -> np.ndarray:
        """Return the sum of the sources of absorption in m-1, shape (n_depth, n_wave)."""
        return np.sum(list(self.absorption_sources(gas).values()), axis=0)

    def scattering(self, gas: IonisationState) -> np.ndarray:
        """Return the sum of the sources of scattering in m-1, shape (n_depth, n_wave)."""
        return np.sum(list(self.scattering_sources(gas).values()), axis=0)

    def _hydrogen(self, gas: IonisationState) -> np.ndarray:
        levels = _level_populations(gas.h_neutral, gas.temperature_k, _H_LEVELS, RYDBERG_EV)
        total = levels @ self._h_levels
        total += self._higher_levels(gas)
        merging = inglis_teller_level(gas.electron)[:, None]
        for n in _up(_DISSOLVED_SERIES):
            # Past the edge of level n up to its first line.
            inverse = 1.0 / n**2 - 1.0 / (self.wavelength_m * RYDBERG_H)
            chosen = (inverse > 0.0) & (inverse < 1.0 / (n + 1) ** 2)
            wave = self.wavelength_m[chosen]
            gone = 1.0 - undissolved(inverse[chosen] ** -0.5, merging)
            total[:, chosen] += levels[:, n - 1, None] * bound_free(n, wave) * gone
        return total

    def _higher_levels(self, gas: IonisationState) -> np.ndarray:
        # The sum over n >= 10 of n^-3 exp(-E_n/kT) as an integral (Unsoeld 1955, Physik der
        # Sternatmosphaeren, section 47), from the level whose edge lies at the wavelength.
        chi_kt = RYDBERG_EV * E_CHARGE.value / (K_B.value * gas.temperature_k)[:, None]
        reduced = self.wavelength_m * RYDBERG_H
        first = np.maximum((_H_LEVELS + 0.5) ** 2, reduced)
        kramers = KRAMERS_M2 * reduced**3
        integral = np.exp(-chi_kt) * np.expm1(chi_kt / first) / (2.0 * chi_kt)
        return gas.h_neutral[:, None] * kramers * integral


def _up(levels: int) -> range:
    return range(1, levels + 1)


def _cut(values: np.ndarray, wavelength_m: np.ndarray, n: int, charge: int) -> np.ndarray:
    return np.where(wavelength_m <= n**2 / (RYDBERG_H * charge**2), values, 0.0)


def _level_populations(
    number: np.ndarray, temperature_k: np.ndarray, levels: int, chi_ev: float
) -> np.ndarray:
    # Boltzmann with g_n = 2 n^2 and U = 2; shape (n_depth, levels).
    n = np.arange(1, levels + 1)
    excitation = chi_ev * (1.0 - 1.0 / n**2) * E_CHARGE.value / K_B.value
    return number[:, None] * n**2 * np.exp(-excitation / temperature_k[:, None])


class _Edges:
    """Bound-free edges of neutral atoms that are no hydrogen, one power law each."""

    def __init__(self, wavelength_m: np.ndarray) -> None:
        table = read_data_table("matter", "photoionisation_edges.ecsv")
        self._symbols = [str(s) for s in table["element"]]
        self._excitation = np.asarray(table["excitation"], dtype=float)
        edge = np.asarray(table["edge"], dtype=float)[:, None] * 1e-6
        ratio = wavelength_m / edge
        power = np.asarray(table["power"], dtype=float)[:, None]
        peak = np.asarray(table["cross_section"], dtype=float)[:, None]
        known = elements()
        neutral = dict(zip(known.symbols, known.partition[0], strict=True))
        partition = np.array([neutral[s] for s in self._symbols])[:, None]
        weight = np.asarray(table["weight"], dtype=float)[:, None]
        self._values = np.where(ratio <= 1.0, peak * ratio**power, 0.0) * weight / partition

    def of(self, gas: IonisationState, helium: bool) -> np.ndarray:
        rows = [i for i, s in enumerate(self._symbols) if (s == "He") == helium]
        number = np.array([gas.number(self._symbols[i], 0) for i in rows])
        scale = E_CHARGE.value / (K_B.value * gas.temperature_k)
        lower = number * np.exp(-self._excitation[rows, None] * scale)
        return lower.T @ self._values[rows]


def _rayleigh(wavelength_m: np.ndarray) -> np.ndarray:
    # Cross-sections of H and H2 in m2; powers of the wavelength in Angstrom, in cm2.
    x = np.maximum(wavelength_m * 1e10, _RAYLEIGH_FROM) ** -2.0
    atom = 5.799e-13 * x**2 + 1.422e-6 * x**3 + 2.784 * x**4
    molecule = 8.14e-13 * x**2 + 1.28e-6 * x**3 + 1.61 * x**4
    return 1e-4 * np.array([atom, molecule])
