"""What matter is made of, and the mean weights of its particles when fully ionised."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.store import read_data_table

#: Name of a solar mixture -> column of `data/solar_mixtures.ecsv`.
MIXTURES = {"Asplund 2009": "asplund2009", "Grevesse 1998": "grevesse1998"}

#: How far X + Y + Z may be from one: printed fractions are rounded.
_SUM_TOLERANCE = 1e-3


@dataclass(frozen=True)
class Composition:
    """Mass fractions of matter, every atom of which has lost all its electrons.

    Attributes
    ----------
    hydrogen, helium, metals : float
        Mass fractions X, Y and Z, whose sum is one.
    metal_ions, metal_electrons : float
        Nuclei and electrons per atomic mass unit of the metals alone; made by
        `composition` from a named mixture or from element abundances.

    Notes
    -----
    Weights are in atomic mass units with atoms at their standard atomic weights,
    so the particles per gram are 1/(mu m_u); rounded weights of the elementary
    formula 2X + 3Y/4 + Z/2 give a mu smaller by 0.6 per cent.
    """

    hydrogen: float
    helium: float
    metals: float
    metal_ions: float
    metal_electrons: float

    @property
    def mu_ion(self) -> float:
        """Mean weight per nucleus."""
        return 1.0 / self._ions

    @property
    def mu_electron(self) -> float:
        """Mean weight per electron."""
        return 1.0 / self._electrons

    @property
    def mu(self) -> float:
        """Mean weight per particle, nuclei and electrons together."""
        return 1.0 / (self._ions + self._electrons)

    @property
    def _ions(self) -> float:
        weights = element_weights()
        light = self.hydrogen / weights["H"] + self.helium / weights["He"]
        return light + self.metals * self.metal_ions

    @property
    def _electrons(self) -> float:
        weights = element_weights()
        light = self.hydrogen / weights["H"] + 2.0 * self.helium / weights["He"]
        return light + self.metals * self.metal_electrons


def composition(
    hydrogen: float = 0.70,
    metals: float = 0.02,
    helium: float | None = None,
    *,
    mixture: str = "Asplund 2009",
) -> Composition:
    """Return the composition of given mass fractions.

    Parameters
    ----------
    hydrogen, metals : float
        Mass fractions X and Z.
    helium : float, optional
        Mass fraction Y; 1 - X - Z where it is left out.
    mixture : str
        Relative abundances of the metals, one of `MIXTURES`.

    Raises
    ------
    InputError
        A fraction is negative or above one, or their sum is not one.
    """
    given = {"X": hydrogen, "Z": metals} | ({} if helium is None else {"Y": helium})
    for name, value in given.items():
        _check_fraction(name, value)
    total = sum(given.values())
    if helium is None:
        if total > 1.0:
            raise InputError(
                f"X + Z = {total:.6g} is above 1 (X = {hydrogen:g}, Z = {metals:g}): give mass "
                f"fractions whose sum is at most 1"
            )
        helium = max(0.0, 1.0 - hydrogen - metals)
    elif abs(total - 1.0) > _SUM_TOLERANCE:
        raise InputError(
            f"X + Y + Z = {total:.6g} is not 1 (X = {hydrogen:g}, Y = {helium:g}, "
            f"Z = {metals:g}): give mass fractions whose sum is 1 within {_SUM_TOLERANCE:g}"
        )
    ions, electrons = _metal_particles(_mixture_abundances(mixture))
    return Composition(float(hydrogen), float(helium), float(metals), ions, electrons)


def composition_from_abundances(abundances: Mapping[str, float] | str) -> Composition:
    """Return the composition of given element abundances.

    Parameters
    ----------
    abundances : mapping or str
        Element symbol -> log10(N/N_H) + 12, or the name of one of `MIXTURES`.
        An element left out is absent.

    Raises
    ------
    InputError
        An unknown element or mixture, hydrogen left out, or a value that is not
        on the scale where hydrogen is 12.
    """
    table = _mixture_abundances(abundances) if isinstance(abundances, str) else dict(abundances)
    _check_abundances(table)
    weights = element_weights()
    mass = {key: weights[key] * 10.0 ** (value - 12.0) for key, value in table.items()}
    total = sum(mass.values())
    hydrogen, helium = mass["H"] / total, mass.get("He", 0.0) / total
    ions, electrons = _metal_particles(table)
    return Composition(hydrogen, helium, 1.0 - hydrogen - helium, ions, electrons)


def hydrogen_of_metals(metals: Any) -> Any:
    """Return X = 0.76 - 3 Z, the enrichment law of Pols et al. 1998, MNRAS 298, 525.

    Y = 0.24 + 2 Z goes with it: X = 0.70 and Y = 0.28 at Z = 0.02.
    """
    return 0.76 - 3.0 * np.asarray(metals, dtype=float)


def element_weights() -> dict[str, float]:
    """Return the standard atomic weight of each element by its symbol."""
    return {symbol: weight for symbol, (_, weight) in _elements().items()}


def _check_fraction(name: str, value: float) -> None:
    number = float(value)
    if not 0.0 <= number <= 1.0:
        percent = 1.0 < number <= 100.0
        remedy = f"; as {number / 100.0:g} if it is in per cent" if percent else ""
        raise InputError(
            f"{name} = {number:.6g} is out of bounds: give a mass fraction between 0 and 1{remedy}"
        )


def _check_abundances(table: Mapping[str, float]) -> None:
    unknown = sorted(set(table) - set(_elements()))
    if unknown:
        raise InputError(
            f"element '{unknown[0]}' is unknown: give symbols of {', '.join(_elements())}"
        )
    if abs(table.get("H", 0.0) - 12.0) > 1e-9:
        raise InputError("abundances are log10(N/N_H) + 12: give 'H' as 12")
    for symbol, value in table.items():
        if not value <= 14.0:
            raise InputError(
                f"abundance of {symbol} = {value} is out of bounds: give log10(N/N_H) + 12, "
                f"at most 14"
            )


@lru_cache(maxsize=1)
def _elements() -> dict[str, tuple[int, float]]:
    table = read_data_table("matter", "solar_mixtures.ecsv")
    return {str(row["element"]): (int(row["number"]), float(row["weight"])) for row in table}


@lru_cache(maxsize=8)
def _mixture_abundances(mixture: str) -> Any:
    if mixture not in MIXTURES:
        raise InputError(f"mixture '{mixture}' is unknown: give one of {', '.join(MIXTURES)}")
    table = read_data_table("matter", "solar_mixtures.ecsv")
    return dict(zip(map(str, table["element"]), map(float, table[MIXTURES[mixture]]), strict=True))


def _metal_particles(abundances: Mapping[str, float]) -> tuple[float, float]:
    """Return nuclei and electrons per atomic mass unit of the metals alone."""
    elements = _elements()
    metals = {key: 10.0**value for key, value in abundances.items() if key not in ("H", "He")}
    mass = sum(number * elements[key][1] for key, number in metals.items())
    if mass == 0.0:
        return _metal_particles(_mixture_abundances("Asplund 2009"))
    ions = sum(metals.values())
    electrons = sum(number * elements[key][0] for key, number in metals.items())
    return ions / mass, electrons / mass
