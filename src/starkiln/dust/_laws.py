"""Extinction laws by their published names, normalised at 0.55 um and continued."""

from __future__ import annotations

import difflib
import warnings
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.errors import DustError

__all__ = ["REFERENCE_M", "Law", "law_names", "load_law"]

#: Where A_lambda / A is 1 by definition: `av` is the law's own A at 0.55 um.
REFERENCE_M = 0.55e-6

#: Share of wavelength over which a law's slope at its long end is measured.
_SLOPE_SPAN = 0.02

#: A law is continued as a power law only from the infrared, where extinction is one, and
#: only if it falls there.
_POWER_LAW_FROM_M = 3.0e-6

#: Laws of the Milky Way, whose shape depends on R_V, and single averages.
_WITH_RV = ("CCM89", "O94", "F99", "F04", "VCG04", "GCC09", "M14", "F19", "D22", "G23")
_AVERAGES = (
    "RL85_MWGC",
    "RRP89_MWGC",
    "B92_MWAvg",
    "G03_SMCBar",
    "G03_LMCAvg",
    "G03_LMC2",
    "I05_MWAvg",
    "CT06_MWGC",
    "CT06_MWLoc",
    "GCC09_MWAvg",
    "F11_MWGC",
    "G21_MWAvg",
    "D22_MWAvg",
    "G24_SMCAvg",
    "G24_SMCBumps",
)


@dataclass(frozen=True, eq=False)
class Law:
    """One law at one R_V.

    Attributes
    ----------
    name : str
        Published name, as in dust_extinction.
    short_m, long_m : float
        The wavelengths that the law was published for.
    """

    name: str
    short_m: float
    long_m: float
    model: Any
    scale: float
    end_value: float
    end_slope: float

    @property
    def continued(self) -> bool:
        """Whether the law is continued beyond its long end."""
        falls = self.end_value > 0.0 and self.end_slope < 0.0
        return falls and self.long_m >= _POWER_LAW_FROM_M

    def curve(self, wavelength_m: np.ndarray) -> np.ndarray:
        """Return A_lambda over A(0.55 um); see `Dust.curve`."""
        if np.any(wavelength_m < self.short_m):
            raise DustError(
                f"the law {self.name} starts at {self.short_m * 1e6:.4g} um and is asked for "
                f"{float(wavelength_m.min()) * 1e6:.4g} um: choose a law that reaches it (G23 "
                "starts at 0.0912 um) or leave the band out"
            )
        beyond = wavelength_m > self.long_m
        if np.any(beyond) and not self.continued:
            raise DustError(
                f"the law {self.name} ends at {self.long_m * 1e6:.4g} um, where it is no power "
                f"law, and is asked for {float(wavelength_m.max()) * 1e6:.4g} um: choose a law "
                "that reaches it (G23 ends at 32 um) or leave the band out"
            )
        value = _evaluate(self.model, np.minimum(wavelength_m, self.long_m)) / self.scale
        power = self.end_value * (wavelength_m[beyond] / self.long_m) ** self.end_slope
        value[beyond] = power
        return value


def law_names() -> tuple[str, ...]:
    """Return the names of all laws."""
    return _WITH_RV + _AVERAGES


@lru_cache(maxsize=64)
def load_law(name: str, rv: float) -> Law:
    """Return the law of that name at that R_V.

    Raises
    ------
    DustError
        The name is unknown, or R_V is outside the law's range.
    """
    if name not in law_names():
        near = difflib.get_close_matches(name.upper(), law_names(), n=3, cutoff=0.4)
        remedy = f"did you mean {' or '.join(near)}?" if near else f"use {', '.join(law_names())}"
        raise DustError(f"unknown dust law '{name}': {remedy}")
    from dust_extinction import averages, parameter_averages

    if name in _WITH_RV:
        kind = getattr(parameter_averages, name)
        low, high = kind.Rv_range
        if not low <= rv <= high:
            raise DustError(
                f"R_V = {rv:g} is outside the law {name}: give a number between {low:g} and "
                f"{high:g}"
            )
        model = kind(Rv=rv)
    else:
        model = getattr(averages, name)()
    return _normalised(name, model)


def _normalised(name: str, model: Any) -> Law:
    short_m, long_m = 1e-6 / model.x_range[1], 1e-6 / model.x_range[0]
    # A law that does not reach 0.55 um keeps its published A_lambda / A_V.
    covers = short_m <= REFERENCE_M <= long_m
    scale = float(_evaluate(model, np.array([REFERENCE_M]))[0]) if covers else 1.0
    near, end = _evaluate(model, np.array([long_m * (1.0 - _SLOPE_SPAN), long_m])) / scale
    falls = 0.0 < end < near
    slope = float(np.log(end / near) / -np.log1p(-_SLOPE_SPAN)) if falls else 0.0
    return Law(name, short_m, long_m, model, scale, float(end), slope)


def _evaluate(model: Any, wavelength_m: np.ndarray) -> np.ndarray:
    from astropy import units as u
    from dust_extinction.warnings import SpectralUnitsWarning

    # Rounding may not push the ends of the range outside it.
    inverse = np.clip(1e-6 / wavelength_m, *model.x_range)
    with warnings.catch_warnings():
        # Some averages evaluate a part of themselves without units and warn of it.
        warnings.simplefilter("ignore", SpectralUnitsWarning)
        return np.asarray(model(inverse / u.um), dtype=float)
