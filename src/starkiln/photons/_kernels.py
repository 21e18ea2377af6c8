"""Planck's law on plain arrays, SI units; no astropy here."""

from __future__ import annotations

import numpy as np

from starkiln.constants import C2, C, H

_FIRST = 2.0 * H.value * C.value**2


def planck_wavelength(wavelength_m: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return the spectral radiance B_lambda of a blackbody.

    Parameters
    ----------
    wavelength_m, temperature_k : array_like
        Metres and kelvins, above 0; broadcast against each other.

    Returns
    -------
    numpy.ndarray
        2 h c^2 / lambda^5 / (exp(h c / lambda k T) - 1) in W m-3 sr-1 (Planck
        1901, Ann. Phys. 309, 553); 0 where the exponent overflows.
    """
    wavelength_m = np.asarray(wavelength_m, dtype=float)
    with np.errstate(over="ignore", divide="ignore"):
        x = C2.value / (wavelength_m * np.asarray(temperature_k, dtype=float))
        return _FIRST / wavelength_m**5 / np.expm1(x)
