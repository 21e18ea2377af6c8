"""The table of pressure ratios: its columns, and rows put together."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from starkiln.derived._quantities import interval
from starkiln.interiors import PressureRatio

#: Columns of the answer: unit and what it is.
COLUMNS = {
    "mass": ("solMass", "Mass"),
    "mu": ("", "Mean particle weight of the unburnt matter, atomic mass units"),
    "radiation_fraction": ("", "P_rad/P, ratio of the volume integrals"),
    "radiation_to_gas": ("", "P_rad/P_gas, ratio of the volume integrals"),
    "radiation_fraction_core": ("", "P_rad/P at the centre"),
    "radiation_to_gas_core": ("", "P_rad/P_gas at the centre"),
    "radiation_fraction_at": ("", "P_rad/P at the mass fraction asked for"),
    "radiation_to_gas_at": ("", "P_rad/P_gas at the mass fraction asked for"),
    "gamma_e": ("", "Eddington factor of electron scattering at the surface"),
    "radius": ("solRad", "Radius"),
    "luminosity": ("solLum", "Luminosity"),
    "temperature": ("K", "Effective temperature"),
    "age_fraction": ("", "Age over the length of the main sequence"),
    "age": ("Myr", "Age"),
}

_EDGES = {"": "", "_lo": "16th percentile of: ", "_hi": "84th percentile of: "}


def ratio_table(ratios: PressureRatio) -> Any:
    """Return the ratios of stars of given mass as a table, without intervals."""
    from astropy.table import Table

    table = Table()
    mass = np.atleast_1d(ratios.mass.value)
    table["name"] = [f"{value:g} solMass" for value in mass]
    table["name"].description = "Name"
    for name, (unit, text) in COLUMNS.items():
        values = getattr(ratios, name, None)
        if values is not None:
            table[name] = np.atleast_1d(getattr(values, "value", values))
            table[name].unit = unit or None
            table[name].description = text
    return table


def edges(name: str, draws: np.ndarray) -> dict[str, float]:
    """Return median, 16th and 84th percentile under `name`, `name_lo` and `name_hi`."""
    return dict(zip((name, f"{name}_lo", f"{name}_hi"), interval(draws), strict=True))


def assemble(rows: Sequence[Mapping[str, Any]]) -> Any:
    """Return rows of `pressure_row`, each with a `name`, as a table."""
    from astropy.table import MaskedColumn, Table

    table = Table()
    table["name"] = [row["name"] for row in rows]
    table["name"].description = "Name"
    for name, (unit, text) in COLUMNS.items():
        if name.endswith("_at") and not any(name in row for row in rows):
            continue
        for edge, words in _EDGES.items():
            values = np.array([row.get(name + edge, np.nan) for row in rows], dtype=float)
            column = MaskedColumn(values, mask=np.isnan(values), unit=unit or None)
            column.description = words + text
            table[name + edge] = column
    texts = {
        "status": "ok, off_grid (no main-sequence model agrees) or rejected",
        "flags": "What to keep in mind, space-separated",
        "message": "The same in words, or why there is no answer",
    }
    for name, text in texts.items():
        table[name] = [str(row[name]) for row in rows]
        table[name].description = text
    return table
