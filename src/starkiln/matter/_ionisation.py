"""Ionisation and dissociation equilibrium of a stellar gas at given pressure and temperature."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike

from starkiln.constants import E_CHARGE, K_B, M_E, M_U, H
from starkiln.store import read_data_table

__all__ = ["IonisationState", "saha_factor", "solve_ionisation"]

#: Electron affinity of hydrogen in eV: Lykke, Murray & Lineberger 1991, PRA 43, 6104.
H_MINUS_EV = 0.7542

#: log10 of p(H)^2/p(H2) in dyn cm-2 by powers of 5040 K/T: Tsuji 1973, A&A 23, 411 (from memory).
_H2_TSUJI = (12.533505, -4.9251644, 0.056191273, -0.0032687661)
#: Below this 5040 K/T the polynomial is not fitted, and no molecule is left in any case.
_H2_THETA_MIN = 0.4

_BISECTIONS = 50


@dataclass(frozen=True)
class Elements:
    """The elements of the gas as plain arrays, in the order of `symbols`."""

    symbols: tuple[str, ...]
    abundance: np.ndarray
    mass: np.ndarray
    chi_ev: np.ndarray
    partition: np.ndarray


@dataclass(frozen=True)
class IonisationState:
    """The gas at each depth; number densities in m-3, arrays of shape (n_depth,).

    Attributes
    ----------
    temperature_k, gas_pressure_pa, density : numpy.ndarray
        Density in kg m-3.
    electron, h_neutral, h_plus, h_minus, h2 : numpy.ndarray
        Number densities of electrons and of the forms of hydrogen.
    nuclei : dict of str to float
        Nuclei of each element per hydrogen nucleus.
    fractions : dict of str to numpy.ndarray
        Shares of the neutral atom, the single and the double ion among the
        atoms of each element, shape (3, n_depth).
    hydrogen_nuclei : numpy.ndarray
        Number density of hydrogen nuclei in every form.
    """

    temperature_k: np.ndarray
    gas_pressure_pa: np.ndarray
    density: np.ndarray
    electron: np.ndarray
    h_neutral: np.ndarray
    h_plus: np.ndarray
    h_minus: np.ndarray
    h2: np.ndarray
    hydrogen_nuclei: np.ndarray
    nuclei: dict[str, float]
    fractions: dict[str, np.ndarray]

    def number(self, symbol: str, stage: int) -> np.ndarray:
        """Return the number density of ion `stage` (0 neutral) of an element, in m-3."""
        return self.hydrogen_nuclei * self.nuclei[symbol] * self.fractions[symbol][stage]


@lru_cache(maxsize=1)
def elements() -> Elements:
    """Return the elements of the shipped table (Asplund et al. 2009, ARA&A 47, 481)."""
    table = read_data_table("matter", "atmosphere_elements.ecsv")
    return Elements(
        tuple(str(s) for s in table["element"]),
        10.0 ** (np.asarray(table["abundance"], dtype=float) - 12.0),
        np.asarray(table["mass"], dtype=float),
        np.array([table["chi_1"], table["chi_2"]], dtype=float),
        np.array([table["u_0"], table["u_1"], table["u_2"]], dtype=float),
    )


def saha_factor(
    temperature_k: ArrayLike, chi_ev: ArrayLike, partition_ratio: ArrayLike
) -> np.ndarray:
    """Return n(ion) n_e / n(atom) in m-3.

    Parameters
    ----------
    temperature_k : numpy.ndarray
        Kelvins.
    chi_ev : array_like
        Ionisation energy in eV; broadcast against `temperature_k`.
    partition_ratio : array_like
        U(ion)/U(atom).

    Returns
    -------
    numpy.ndarray
        2 U(ion)/U(atom) (2 pi m_e k T/h^2)^(3/2) exp(-chi/kT) (Saha 1921,
        Proc. R. Soc. A 99, 135).
    """
    kt = K_B.value * np.asarray(temperature_k, dtype=float)
    waves = (2.0 * np.pi * M_E.value * kt / H.value**2) ** 1.5
    exponent = np.asarray(chi_ev) * E_CHARGE.value / kt
    return 2.0 * np.asarray(partition_ratio) * waves * np.exp(-exponent)


def h_minus_factor(temperature_k: np.ndarray) -> np.ndarray:
    """Return n(H-)/(n(H) n_e) in m3, from Saha's law with U(H) = 2, U(H-) = 1."""
    return 1.0 / saha_factor(temperature_k, H_MINUS_EV, 2.0)


def h2_factor(temperature_k: np.ndarray) -> np.ndarray:
    """Return n(H2)/n(H)^2 in m3 (Tsuji 1973, A&A 23, 411, polynomial of Kp)."""
    theta = 5040.0 / temperature_k
    log_kp_cgs = np.polynomial.polynomial.polyval(theta, _H2_TSUJI)
    factor = K_B.value * temperature_k / (0.1 * 10.0**log_kp_cgs)
    return np.where(theta > _H2_THETA_MIN, factor, 0.0)


def solve_ionisation(
    gas_pressure_pa: np.ndarray, temperature_k: np.ndarray, *, feh: float = 0.0
) -> IonisationState:
    """Solve Saha's law for every element, H- and H2, for the electron density.

    Parameters
    ----------
    gas_pressure_pa, temperature_k : numpy.ndarray
        Pressure of all particles, electrons included, in Pa and kelvins;
        shape (n_depth,).
    feh : float
        log10 of the metals' abundance over the Sun's; helium is kept.

    Returns
    -------
    IonisationState
        Charge balance holds to one part in 10^9 of the electron density.

    Notes
    -----
    At a trial electron density all ion shares are known and the number of
    neutral hydrogen atoms follows from a quadratic equation; the balance of
    charge is bisected in ln n_e at all depths at once. Partition functions are
    constants, and molecules other than H2 take no atoms away.
    """
    pressure = np.asarray(gas_pressure_pa, dtype=float)
    temperature = np.asarray(temperature_k, dtype=float)
    balance = _Balance(pressure, temperature, feh)
    total = pressure / (K_B.value * temperature)
    high = np.log(total * (1.0 - 1e-12))
    low = high - 40.0
    for _ in range(_BISECTIONS):
        middle = 0.5 * (low + high)
        too_few = balance.excess(np.exp(middle)) > 0.0
        low = np.where(too_few, middle, low)
        high = np.where(too_few, high, middle)
    return balance.state(np.exp(0.5 * (low + high)))


class _Balance:
    """Balance of charge at fixed pressure and temperature."""

    def __init__(self, pressure: np.ndarray, temperature: np.ndarray, feh: float) -> None:
        table = elements()
        self.pressure, self.temperature = pressure, temperature
        self.symbols = table.symbols[1:]
        scale = np.where(np.array(self.symbols) == "He", 1.0, 10.0**feh)
        self.nuclei = (table.abundance[1:] * scale)[:, None]
        self.mass_per_h = table.mass[0] + float(np.sum(self.nuclei[:, 0] * table.mass[1:]))
        ratios = table.partition[1:] / table.partition[:-1]
        chi = table.chi_ev[..., None]
        factors = saha_factor(temperature, chi, ratios[..., None])
        self.hydrogen = factors[0, 0]
        self.first, self.second = factors[0, 1:], factors[1, 1:]
        self.minus, self.molecule = h_minus_factor(temperature), h2_factor(temperature)
        self.total = pressure / (K_B.value * temperature)

    def _shares(self, electron: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        once = self.first / electron
        twice = once * (self.second / electron)
        neutral = 1.0 / (1.0 + once + twice)
        return neutral, once * neutral, twice * neutral

    def _hydrogen(self, electron: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        # Particles other than electrons: (1 + A) times the forms with one nucleus,
        # (1 + 2 A) times H2, with A the other nuclei per hydrogen nucleus.
        others = float(np.sum(self.nuclei))
        single = 1.0 + self.hydrogen / electron + self.minus * electron
        a = self.molecule * (1.0 + 2.0 * others)
        b = single * (1.0 + others)
        c = self.total - electron
        neutral = 2.0 * c / (b + np.sqrt(b * b + 4.0 * a * c))
        return neutral, neutral * single + 2.0 * self.molecule * neutral**2

    def excess(self, electron: np.ndarray) -> np.ndarray:
        """Return the positive less the negative charges at a trial electron density."""
        neutral, nuclei = self._hydrogen(electron)
        _, once, twice = self._shares(electron)
        metals = nuclei * np.sum(self.nuclei * (once + 2.0 * twice), axis=0)
        return neutral * (self.hydrogen / electron - self.minus * electron) + metals - electron

    def state(self, electron: np.ndarray) -> IonisationState:
        """Return everything at the electron density found."""
        neutral, nuclei = self._hydrogen(electron)
        shares = np.array(self._shares(electron))
        return IonisationState(
            temperature_k=self.temperature,
            gas_pressure_pa=self.pressure,
            density=nuclei * self.mass_per_h * M_U.value,
            electron=electron,
            h_neutral=neutral,
            h_plus=neutral * self.hydrogen / electron,
            h_minus=neutral * self.minus * electron,
            h2=self.molecule * neutral**2,
            hydrogen_nuclei=nuclei,
            nuclei={s: float(a) for s, a in zip(self.symbols, self.nuclei[:, 0], strict=True)},
            fractions={s: shares[:, i] for i, s in enumerate(self.symbols)},
        )
