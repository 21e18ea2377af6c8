"""Luminosity and bolometric magnitude from radius and temperature."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
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
    # astropy's solRad is the nominal radius too.
    return as_array(radius, "solRad", "radius", lower=0.0, exclusive=True) * R_SUN.value


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


#: Columns of the table, with unit and description.
_COLUMNS = {
    "radius": ("solRad", "radius, nominal solar radii (IAU 2015 B3)"),
    "temperature": ("K", "effective temperature"),
    "luminosity": ("solLum", "4 pi R^2 sigma T^4, nominal solar luminosities (IAU 2015 B3)"),
    "mbol": ("mag", "absolute bolometric magnitude (IAU 2015 B2)"),
}


def luminosity_table(columns: Mapping[str, Sequence[Any]]) -> Any:
    """Return luminosities of many stars as a table.

    Parameters
    ----------
    columns : mapping
        `radius` (solRad) and `temperature` (K), and, as far as they are known,
        `name`, `e_radius` and `e_temperature`; equal lengths, NaN for missing.

    Returns
    -------
    astropy.table.Table
        `radius`, `temperature`, `luminosity`, `mbol`, with `_lo` and `_hi` where
        errors are given. A row that cannot be used is masked, and a column
        `message` says why.
    """
    from astropy.table import MaskedColumn, Table

    with_errors = any(f"e_{name}" in columns for name in ("radius", "temperature"))
    rows, messages = [], []
    for i in range(len(columns["radius"])):
        values = {
            key: 0.0 if key.startswith("e_") and np.isnan(columns[key][i]) else columns[key][i]
            for key in ("radius", "temperature", "e_radius", "e_temperature")
            if key in columns
        }
        try:
            rows.append(luminosity_row(**values))
            messages.append("")
        except InputError as error:
            rows.append({})
            messages.append(str(error))
    table = Table()
    if "name" in columns:
        table["name"] = np.array(columns["name"], dtype=str)
    edges = {"": "", "_lo": "16th percentile of ", "_hi": "84th percentile of "}
    for name, (unit, text) in _COLUMNS.items():
        for edge, words in edges.items() if with_errors else [("", "")]:
            numbers = [row.get(name + edge, row.get(name, np.nan)) for row in rows]
            table[name + edge] = MaskedColumn(numbers, mask=np.isnan(numbers), unit=unit)
            table[name + edge].description = words + text
    if any(messages):
        table["message"] = np.array(messages)
    return table


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
