"""Grey and dilute radiation: a blackbody's spectrum at less than its full strength."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.errors import InputError
from starkiln.photons._forms import give, kelvin


def dilution_factor(radius: Any, distance: Any) -> np.ndarray:
    """Return W = (1 - sqrt(1 - (R/r)^2)) / 2, the share of the sky that a star fills.

    Parameters
    ----------
    radius, distance : Quantity or array_like
        m when bare; the distance is from the star's centre, at least the radius.

    Returns
    -------
    numpy.ndarray
        1/2 at the surface, (R / 2r)^2 far away (Mihalas 1978, Stellar Atmospheres,
        section 5-3). W times the radiance is the mean intensity.
    """
    ratio = _ratio(radius, distance)
    # 1 - sqrt(1 - q) = q / (1 + sqrt(1 - q)) keeps its digits far away.
    square = ratio**2
    return 0.5 * square / (1.0 + np.sqrt(1.0 - square))


def equivalent_temperature(temperature: Any, dilution: Any) -> Any:
    """Return W^(1/4) T, the temperature of full radiation with the same energy density."""
    weight = as_array(dilution, "", "dilution", lower=0.0)
    return give(weight**0.25 * kelvin(temperature), "K")


def colour_dilution(effective: Any, colour: Any) -> np.ndarray:
    """Return (T_eff / T_colour)^4, the dilution of a spectrum of that colour and flux.

    `planck(at, colour, dilution=...)` then carries the flux sigma T_eff^4, as for an
    atmosphere whose spectrum is hardened by scattering.
    """
    return (kelvin(effective) / kelvin(colour, "colour temperature", exclusive=True)) ** 4


def irradiance_factor(radius: Any, distance: Any) -> np.ndarray:
    """Return (R/r)^2, by which a star's surface flux falls to that at a distance."""
    return _ratio(radius, distance) ** 2


def _ratio(radius: Any, distance: Any) -> np.ndarray:
    size = as_array(radius, "m", "radius", lower=0.0)
    far = as_array(distance, "m", "distance", lower=0.0, exclusive=True)
    ratio = np.asarray(size / far)
    if np.any(ratio > 1.0):
        raise InputError(
            "the distance is measured from the star's centre and must be at least its "
            f"radius; distance / radius = {1.0 / float(ratio[ratio > 1.0].flat[0]):.6g}"
        )
    return ratio
