"""One electron in the field of a nucleus: levels, Gaunt factors, cross-sections, line strengths."""

from __future__ import annotations

from functools import lru_cache

import numpy as np

from starkiln.constants import C2, E_CHARGE, C, H
from starkiln.store import read_data_table

__all__ = ["bound_free_gaunt", "free_free_gaunt", "oscillator_strength"]

#: Rydberg constant of hydrogen (reduced mass) in m-1: CODATA 2022 R_inf / (1 + m_e/m_p).
RYDBERG_H = 10967758.34
#: Ionisation energy of hydrogen in eV that goes with it.
RYDBERG_EV = RYDBERG_H * H.value * C.value / E_CHARGE.value
#: Kramers' cross-section of the ground state at its threshold in m2:
#: 64 pi alpha a_0^2/(3 sqrt 3) (Kramers 1923, Phil. Mag. 46, 836).
KRAMERS_M2 = 7.9070e-22
#: pi e^2/(m_e c) in m2 Hz.
LINE_M2_HZ = 2.6540e-6


def _johnson(n: int) -> tuple[float, float, float]:
    # Johnson 1972, ApJ 174, 227, Table 1.
    if n == 1:
        return 1.1330, -0.4059, 0.07014
    if n == 2:
        return 1.0785, -0.2319, 0.02947
    return (
        0.9935 + 0.2328 / n - 0.1296 / n**2,
        -(0.6282 - 0.5598 / n + 0.5299 / n**2) / n,
        (0.3887 - 1.181 / n + 1.470 / n**2) / n**2,
    )


def bound_free_gaunt(n: int, energy_ratio: np.ndarray) -> np.ndarray:
    """Return the bound-free Gaunt factor of level `n`.

    Parameters
    ----------
    n : int
        Principal quantum number.
    energy_ratio : numpy.ndarray
        Photon energy over the level's ionisation energy; a ratio below 1 gives
        the continuation into the lines, for levels dissolved by the plasma.

    Returns
    -------
    numpy.ndarray
        g_0 + g_1/x + g_2/x^2 (Johnson 1972, ApJ 174, 227, equation 4).
    """
    g0, g1, g2 = _johnson(n)
    x = np.asarray(energy_ratio, dtype=float)
    return g0 + g1 / x + g2 / x**2


def oscillator_strength(n: int, m: int) -> float:
    """Return the absorption oscillator strength of the line n -> m of hydrogen.

    32/(3 sqrt(3) pi) n/m^3 x^-3 g(n, x), x = 1 - (n/m)^2 (Johnson 1972, ApJ 174,
    227, equation 3).
    """
    x = 1.0 - (n / m) ** 2
    kramers = 32.0 / (3.0 * np.sqrt(3.0) * np.pi) * n / m**3 / x**3
    return float(kramers * bound_free_gaunt(n, np.asarray(x)))


def bound_free(n: int, wavelength_m: np.ndarray, charge: int = 1) -> np.ndarray:
    """Return the photo-ionisation cross-section of level `n` in m2 (not cut at its edge).

    Kramers' n Z^-2 (lambda/lambda_n)^3 sigma_1 times the Gaunt factor.
    """
    edge = n**2 / (RYDBERG_H * charge**2)
    ratio = edge / np.asarray(wavelength_m, dtype=float)
    return KRAMERS_M2 * n / charge**2 * ratio**-3 * bound_free_gaunt(n, ratio)


@lru_cache(maxsize=1)
def _free_free_table() -> tuple[float, float, float, np.ndarray]:
    table = read_data_table("matter", "free_free_gaunt.ecsv")
    gamma2 = np.unique(np.asarray(table["log_gamma2"], dtype=float))
    u = np.unique(np.asarray(table["log_u"], dtype=float))
    values = np.asarray(table["gaunt"], dtype=float).reshape(gamma2.size, u.size)
    return gamma2[0], u[0], u[1] - u[0], np.log(values)


def free_free_gaunt(
    wavelength_m: np.ndarray, temperature_k: np.ndarray, charge: int = 1
) -> np.ndarray:
    """Return the free-free Gaunt factor averaged over Maxwell's distribution.

    Parameters
    ----------
    wavelength_m, temperature_k : numpy.ndarray
        Metres and kelvins, broadcast against each other.
    charge : int
        Charge of the ion.

    Returns
    -------
    numpy.ndarray
        Karzas & Latter 1961 (ApJS 6, 167), exact but for 1 per cent of linear
        interpolation in the shipped table; the nearest entry outside it.
    """
    gamma2_0, u_0, step, table = _free_free_table()
    temperature = np.asarray(temperature_k, dtype=float)
    rows = (np.log10(charge**2 * RYDBERG_H * C2.value / temperature) - gamma2_0) / step
    log_u = np.log10(C2.value / np.asarray(wavelength_m)) - np.log10(temperature)
    i, y = _cell(rows, table.shape[0])
    k, x = _cell((log_u - u_0) / step, table.shape[1])
    low = (1.0 - x) * table[i, k] + x * table[i, k + 1]
    high = (1.0 - x) * table[i + 1, k] + x * table[i + 1, k + 1]
    return np.exp((1.0 - y) * low + y * high)


def _cell(position: np.ndarray, size: int) -> tuple[np.ndarray, np.ndarray]:
    position = np.clip(position, 0.0, size - 1.0)
    index = np.minimum(position.astype(int), size - 2)
    return index, position - index
