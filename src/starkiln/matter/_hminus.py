"""Absorption by the negative hydrogen ion (John 1988, A&A 193, 189)."""

from __future__ import annotations

from functools import lru_cache

import numpy as np

from starkiln.store import read_data_table

__all__ = ["hminus_bound_free", "hminus_free_free"]

#: Threshold of photo-detachment in um (John 1988, section 2).
_EDGE_UM = 1.6419
#: The bound-free fit starts here, the short free-free fit there; held constant below.
_BF_FROM_UM = 0.125
_FF_FROM_UM = 0.1823
_FF_CHANGE_UM = 0.3645


@lru_cache(maxsize=3)
def _coefficients(process: str) -> tuple[np.ndarray, np.ndarray]:
    table = read_data_table("matter", "hminus_john1988.ecsv")
    rows = table[table["process"] == process]
    values = np.array([rows[c] for c in "ABCDEF"], dtype=float).T
    return np.asarray(rows["n"], dtype=int), values


def hminus_bound_free(wavelength_m: np.ndarray) -> np.ndarray:
    """Return the photo-detachment cross-section of H-.

    Parameters
    ----------
    wavelength_m : numpy.ndarray
        Metres; the fit holds from 0.125 um to the threshold, 1.6419 um.

    Returns
    -------
    numpy.ndarray
        m2 per ion without stimulated emission (John 1988, equations 4 and 5);
        0 above the threshold; below 0.125 um the value there.
    """
    microns = np.maximum(np.asarray(wavelength_m, dtype=float) * 1e6, _BF_FROM_UM)
    x = np.maximum(1.0 / microns - 1.0 / _EDGE_UM, 0.0)
    series = np.polynomial.polynomial.polyval(np.sqrt(x), _coefficients("bf")[1][:, 0])
    return 1e-22 * microns**3 * x**1.5 * series


def hminus_free_free(wavelength_m: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return the coefficients of free-free absorption by H- at each wavelength.

    Parameters
    ----------
    wavelength_m : numpy.ndarray
        Metres, shape (n,); the fit holds from 0.1823 um on, and below stays
        at its value there. In temperature it holds from 1400 to 10080 K.

    Returns
    -------
    half_powers : numpy.ndarray
        Exponents p, shape (6,).
    coefficients : numpy.ndarray
        Shape (6, n): the absorption in m-1, stimulated emission included, is
        n(H) n_e k T times the sum of coefficient times (5040 K/T)^p, densities
        in m-3 (John 1988, equation 6, in SI).
    """
    microns = np.maximum(np.asarray(wavelength_m, dtype=float) * 1e6, _FF_FROM_UM)
    basis = np.array([microns**2, microns**0, 1 / microns, microns**-2, microns**-3, microns**-4])
    out = np.zeros((6, microns.size))
    for process, chosen in (
        ("ff_long", microns >= _FF_CHANGE_UM),
        ("ff_short", microns < _FF_CHANGE_UM),
    ):
        index, values = _coefficients(process)
        out[np.ix_(index - 1, chosen)] = values @ basis[:, chosen]
    # 1 cm4 dyn-1 = 1e-3 m4 N-1.
    return (np.arange(1, 7) + 1) / 2.0, 1e-29 * 1e-3 * out
