"""Vega's spectrum, the zero of bands that have no published Vega zero point."""

from __future__ import annotations

from functools import lru_cache

import numpy as np

from starkiln.errors import BandError
from starkiln.passbands._kernels import spectrum_mean
from starkiln.store import read_data_table

__all__ = ["vega_mean_w_m3"]


def vega_mean_w_m3(
    name: str, wavelength_m: np.ndarray, response: np.ndarray, *, photon: bool
) -> float:
    """Return the band mean of Vega's F_lambda, W m-3.

    Parameters
    ----------
    name : str
        Of the band, for the message.
    wavelength_m, response : numpy.ndarray, shape (n,)
        The curve.
    photon : bool
        Whether the response weights photons.

    Raises
    ------
    BandError
        The band reaches beyond the spectrum (0.0906 to 30 um).
    """
    vega_m, flux = _spectrum()
    if wavelength_m[0] < vega_m[0] or wavelength_m[-1] > vega_m[-1]:
        raise BandError(
            f"no Vega zero point of {name} is known: it reaches beyond Vega's spectrum, "
            f"{vega_m[0] * 1e6:.4g} to {vega_m[-1] * 1e6:.4g} um; give AB magnitudes or fluxes"
        )
    return spectrum_mean((wavelength_m, response), (vega_m, flux), photon=photon)


@lru_cache(maxsize=1)
def _spectrum() -> tuple[np.ndarray, np.ndarray]:
    table = read_data_table("passbands", "vega_spectrum.ecsv")
    return np.asarray(table["wavelength"]) * 1e-6, np.asarray(table["flux"], dtype=float)
