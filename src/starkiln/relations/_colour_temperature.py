"""Effective temperature from one colour by published calibrations: a quick cross-check."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from typing import Any, Literal

import numpy as np

from starkiln._units import as_float
from starkiln.errors import InputError
from starkiln.store import read_data_table

__all__ = ["ColourTemperature", "colour_relations", "temperatures_from_colours"]

Kind = Literal["dwarf", "giant"]


@dataclass(frozen=True)
class ColourRelation:
    """One calibration; see the shipped table for the meaning of the coefficients."""

    calibration: str
    kind: Kind
    bands: tuple[str, str]
    form: str
    coefficients: tuple[float, ...]
    correction: tuple[float, ...]
    colour_range: tuple[float, float]
    feh_range: tuple[float, float]
    scatter_k: float
    reference: str

    def temperature_k(self, colour: float, feh: float) -> float:
        """Return the temperature in K of a dereddened colour."""
        c, x, f = self.coefficients, colour, feh
        if self.form == "poly":
            return float(np.polynomial.polynomial.polyval(x, c))
        theta = c[0] + c[1] * x + c[2] * x * x
        if self.form == "xf":
            theta += c[3] * x * f + c[4] * f + c[5] * f * f
        else:
            theta += c[3] * f + c[4] * f * f + c[5] * f * x
        return 5040.0 / theta + float(np.polynomial.polynomial.polyval(x, self.correction))


@dataclass(frozen=True)
class ColourTemperature:
    """A temperature by one calibration.

    Attributes
    ----------
    calibration, kind, colour, reference : str
        Which, and of what colour.
    temperature_k, error_k : float
        The error holds the calibration's scatter and the colour's error.
    """

    calibration: str
    kind: Kind
    colour: str
    temperature_k: float
    error_k: float
    reference: str


@lru_cache(maxsize=1)
def colour_relations() -> tuple[ColourRelation, ...]:
    """Return every calibration of the shipped table."""
    table = read_data_table("relations", "colour_temperature.ecsv")
    return tuple(
        ColourRelation(
            calibration=str(row["calibration"]),
            kind="giant" if row["kind"] == "giant" else "dwarf",
            bands=(str(row["band_1"]), str(row["band_2"])),
            form=str(row["form"]),
            coefficients=tuple(float(row[f"c{i}"]) for i in range(7)),
            correction=tuple(float(row[f"p{i}"]) for i in range(4)),
            colour_range=(float(row["colour_min"]), float(row["colour_max"])),
            feh_range=(float(row["feh_min"]), float(row["feh_max"])),
            scatter_k=float(row["scatter"]),
            reference=str(row["reference"]),
        )
        for row in table
    )


def temperatures_from_colours(
    magnitudes: Mapping[str, Any],
    errors: Mapping[str, Any] | None = None,
    *,
    kind: Kind,
    feh: float = 0.0,
) -> tuple[ColourTemperature, ...]:
    """Return the temperature by every calibration that the magnitudes allow.

    Parameters
    ----------
    magnitudes, errors : mapping of str to float
        Dereddened magnitudes in their native systems and their errors, by the
        names of the bands (such as `Johnson V`, `2MASS Ks`, `Gaia BP`).
    kind : {"dwarf", "giant"}
        Giants below log g of about 3.5.
    feh : float
        [Fe/H] in dex.

    Returns
    -------
    tuple of ColourTemperature
        In the order of the shipped table; empty if no colour lies within a
        calibration's range. Nothing is extrapolated.

    Raises
    ------
    InputError
        An unknown kind, a negative error, or something that is not a number.
    """
    if kind not in ("dwarf", "giant"):
        raise InputError(f"kind = {kind!r} is unknown: give dwarf or giant")
    metals = as_float(feh, "", "[Fe/H]")
    values = {name: as_float(m, "mag", f"magnitude {name}") for name, m in magnitudes.items()}
    spread = {
        name: as_float(e, "mag", f"error of {name}", lower=0.0)
        for name, e in (errors or {}).items()
    }
    found = (
        _estimate(relation, values, spread, metals)
        for relation in colour_relations()
        if relation.kind == kind and all(band in values for band in relation.bands)
    )
    return tuple(estimate for estimate in found if estimate is not None)


def _estimate(
    relation: ColourRelation, values: dict[str, float], spread: dict[str, float], feh: float
) -> ColourTemperature | None:
    blue, red = relation.bands
    colour = values[blue] - values[red]
    low, high = relation.colour_range
    if not (low <= colour <= high and relation.feh_range[0] <= feh <= relation.feh_range[1]):
        return None
    error = math.hypot(spread.get(blue, 0.0), spread.get(red, 0.0))
    step = 0.01
    slope = relation.temperature_k(colour + step, feh) - relation.temperature_k(colour - step, feh)
    return ColourTemperature(
        calibration=relation.calibration,
        kind=relation.kind,
        colour=f"{blue} - {red}",
        temperature_k=relation.temperature_k(colour, feh),
        error_k=math.hypot(relation.scatter_k, slope / (2.0 * step) * error),
        reference=relation.reference,
    )
