"""Luminosity and bolometric magnitude from radius and temperature."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import F_BOL0, L_BOL0, L_SUN, R_SUN, SIGMA_SB
from starkiln.errors import InputError

#: Nodes of each Gaussian when errors are carried: the midpoints of equal shares.
_NODES = 401


def luminosity(radius: Any, temperature: Any) -> Any:
    """Return L = 4 pi R^2 sigma T^4.

    Parameters
    ----------
    radius : astropy.units.Quantity or array_like
        A bare number is in nominal solar radii (IAU 2015 Resolution B3).
    temperature : astropy.units.Quantity or array_like
        Effective temperature; a bare number is in K.

    Returns
    -------
    astropy.units.Quantity
        In nominal solar luminosities; shape of the two broadcast.

    Raises
    ------
    InputError
        Not above 0, or in an incompatible unit.
    """
    from astropy import units as u

    radius_m = radius_in_m(radius)
    temperature_k = as_array(temperature, "K", "temperature", lower=0.0, exclusive=True)
    return u.Quantity(luminosity_w(radius_m, temperature_k) / L_SUN.value, u.solLum)


def luminosity_w(radius_m: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return 4 pi R^2 sigma T^4 in W, of floats in SI units."""
    return 4.0 * np.pi * radius_m**2 * SIGMA_SB.value * temperature_k**4


def radius_in_m(radius: Any) -> np.ndarray:
    """Return a radius in m; a bare number is in nominal solar radii."""
    if hasattr(radius, "to_value"):
        from astropy import units as u

        # astropy's solRad is the nominal one, so the round trip is exact.
        radius = radius.to_value(u.m) / R_SUN.value if radius.unit != u.solRad else radius.value
    plain = as_array(radius, "solRad", "radius", lower=0.0, exclusive=True)
    return plain * R_SUN.value


def bolometric_magnitude(luminosity_watt: np.ndarray) -> np.ndarray:
    """Return M_bol = -2.5 log10(L / L_0), L_0 = 3.0128e28 W (IAU 2015 Resolution B2)."""
    return -2.5 * np.log10(luminosity_watt / L_BOL0.value)


def apparent_bolometric_magnitude(irradiance_w_m2: np.ndarray) -> np.ndarray:
    """Return m_bol = -2.5 log10(f / f_0), f_0 = 2.518e-8 W m-2 (IAU 2015 Resolution B2)."""
    return -2.5 * np.log10(irradiance_w_m2 / F_BOL0.value)


def luminosity_row(
    radius: float, temperature: float, e_radius: float = 0.0, e_temperature: float = 0.0
) -> dict[str, float]:
    """Return radius, temperature, luminosity and M_bol with their 68 per cent intervals.

    Parameters
    ----------
    radius, e_radius : float
        In nominal solar radii.
    temperature, e_temperature : float
        In K. The errors are independent and Gaussian, cut at 0.

    Returns
    -------
    dict of float
        `radius`, `temperature`, `luminosity` (solLum), `mbol` (mag), each with `_lo`
        and `_hi` where an error is given: 16th and 84th percentiles, by summing over
        equal shares of both Gaussians rather than by linear propagation.

    Raises
    ------
    InputError
        A value not above 0 or an error below 0.
    """
    values = {"radius": (radius, e_radius), "temperature": (temperature, e_temperature)}
    for name, (value, error) in values.items():
        unit = "solRad" if name == "radius" else "K"
        if not value > 0.0 or not np.isfinite(value):
            raise InputError(f"{name} = {value:g} {unit} must be above 0 and finite")
        if not error >= 0.0 or not np.isfinite(error):
            raise InputError(f"e_{name} = {error:g} {unit} must be 0 or above, and finite")
    watt = float(luminosity_w(np.array(radius * R_SUN.value), np.array(temperature)))
    row = {
        "radius": radius,
        "temperature": temperature,
        "luminosity": watt / L_SUN.value,
        "mbol": float(bolometric_magnitude(np.array(watt))),
    }
    if e_radius or e_temperature:
        row.update(_intervals(values))
    return row


def _intervals(values: dict[str, tuple[float, float]]) -> dict[str, float]:
    nodes = {name: _gaussian_nodes(*pair) for name, pair in values.items()}
    watt = luminosity_w(
        nodes["radius"][:, None] * R_SUN.value, nodes["temperature"][None, :]
    ).ravel()
    nodes["luminosity"] = watt / L_SUN.value
    nodes["mbol"] = bolometric_magnitude(watt)
    limits = {}
    for name, draws in nodes.items():
        limits[f"{name}_lo"], limits[f"{name}_hi"] = map(float, np.percentile(draws, [16, 84]))
    return limits


def _gaussian_nodes(mean: float, error: float) -> np.ndarray:
    from scipy.special import ndtr, ndtri

    if error == 0.0:
        return np.array([mean])
    floor = ndtr(-mean / error)
    shares = floor + (1.0 - floor) * (np.arange(_NODES) + 0.5) / _NODES
    return mean + error * ndtri(shares)
