"""What colour a blackbody has to the CIE 1931 standard observer."""

from __future__ import annotations

from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.photons._forms import kelvin
from starkiln.photons._kernels import ln_planck, power_law
from starkiln.store import read_data_table

#: CIE XYZ to linear sRGB, IEC 61966-2-1:1999.
_XYZ_TO_SRGB = np.array(
    [[3.2406, -1.5372, -0.4986], [-0.9689, 1.8758, 0.0415], [0.0557, -0.2040, 1.0570]]
)


def chromaticity(temperature: Any) -> np.ndarray:
    """Return the chromaticity x, y of blackbodies: the Planckian locus.

    Parameters
    ----------
    temperature : Quantity or array_like
        K, above 0.

    Returns
    -------
    numpy.ndarray
        Shape of `temperature` with one more axis of 2. By summation at the 5 nm of
        CIE 15:2004, table 4; within 2e-6 of summation at 1 nm.
    """
    xyz = _tristimulus(kelvin(temperature, exclusive=True))
    return xyz[..., :2] / np.sum(xyz, axis=-1, keepdims=True)


def srgb(temperature: Any) -> np.ndarray:
    """Return the colour of blackbodies for a screen, as sRGB between 0 and 1.

    The chromaticity is the Planckian one; the brightest channel is set to 1, so that
    colours of any temperature can be told apart. A chromaticity outside the screen's
    triangle (below about 1900 K) is clipped to its edge.

    Returns
    -------
    numpy.ndarray
        Shape of `temperature` with one more axis of 3 (IEC 61966-2-1:1999).
    """
    xyz = _tristimulus(kelvin(temperature, exclusive=True))
    linear = np.maximum(xyz @ _XYZ_TO_SRGB.T, 0.0)
    linear = linear / np.max(linear, axis=-1, keepdims=True)
    curved = 1.055 * linear ** (1.0 / 2.4) - 0.055
    return np.minimum(np.where(linear <= 0.0031308, 12.92 * linear, curved), 1.0)


def _tristimulus(temperature_k: np.ndarray) -> np.ndarray:
    wavelength_m, functions = _observer()
    # Through logarithms and relative to the brightest point: a cold body's light underflows.
    law = power_law("wavelength", photons=False)
    ln_light = ln_planck(law, wavelength_m, temperature_k[..., np.newaxis])
    return np.asarray(np.exp(ln_light - np.max(ln_light, axis=-1, keepdims=True)) @ functions)


@lru_cache(maxsize=1)
def _observer() -> tuple[np.ndarray, np.ndarray]:
    table = read_data_table("photons", "cie_1931_2deg.ecsv")
    functions = np.stack([table[c] for c in ("x_bar", "y_bar", "z_bar")], axis=-1)
    return np.asarray(table["wavelength"].quantity.to_value("m")), functions.astype(float)
