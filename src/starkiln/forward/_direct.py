"""The band flux by plain integration: slow, readable, the reference of the table."""

from __future__ import annotations

import math

import numpy as np

from starkiln.dust import Dust
from starkiln.emitters import Emitter
from starkiln.passbands import Band, load_band

__all__ = ["band_flux_direct", "extinguished_mean"]

_MAG_TO_LN = 0.4 * math.log(10.0)


def band_flux_direct(
    emitter: Emitter, band: Band | str, dust: Dust, x: np.ndarray, av: np.ndarray
) -> np.ndarray:
    """Integrate the extinguished radiance of an emitter over a band.

    Parameters
    ----------
    emitter : Emitter
        The surface.
    band : Band or str
        The passband.
    dust : Dust
        Law and R_V.
    x : numpy.ndarray, shape (n, p)
        Parameters of the emitter; column 0 is the natural logarithm of the
        temperature in K.
    av : numpy.ndarray, shape (n,)
        A(0.55 um), mag.

    Returns
    -------
    numpy.ndarray, shape (n,)
        ln of the band mean of B_lambda 10^(-0.4 av k(lambda)), in W m-3 sr-1.
    """
    passband = load_band(band) if isinstance(band, str) else band
    x = np.asarray(x, dtype=float)
    parameters = (np.exp(x[:, 0]), *x[:, 1:].T)
    radiance = emitter.radiance(passband.wavelength_m, *parameters)
    ratio = dust.curve(passband.wavelength_m)
    dimmed = radiance * np.exp(-_MAG_TO_LN * np.asarray(av, dtype=float)[:, None] * ratio)
    return np.log(dimmed @ passband.weight)


def extinguished_mean(
    radiance: np.ndarray, ratio: np.ndarray, weight: np.ndarray, av: np.ndarray
) -> np.ndarray:
    """Return the ln band mean at every pair of radiance and extinction.

    `radiance` has shape (n, n_wavelength), `av` shape (m,); the result (n, m).
    """
    dimming = np.exp(-_MAG_TO_LN * av[:, None] * ratio) * weight
    return np.log(radiance @ dimming.T)
