"""Extinction laws evaluated: normalised at 0.55 um and continued beyond their end."""

from __future__ import annotations

import warnings
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.dust._catalogue import LawInfo, law_info
from starkiln.errors import DustError

__all__ = ["REFERENCE_M", "Law", "load_law"]

#: Where A_lambda / A is 1 by definition: `av` is the law's own A at 0.55 um.
REFERENCE_M = 0.55e-6

#: Share of wavelength over which a law's slope at its long end is measured.
_SLOPE_SPAN = 0.02


@dataclass(frozen=True, eq=False)
class Law:
    """One law at one R_V.

    Attributes
    ----------
    info : LawInfo
        Name and range.
    model : dust_extinction model
        The law itself.
    scale : float
        The law's A(0.55 um) over its A_V; 1 for a law that does not reach 0.55 um,
        which keeps its published normalisation.
    end_value, end_slope : float
        A_lambda / A(0.55 um) and its slope d ln A / d ln wavelength at the long end.
    """

    info: LawInfo
    model: Any
    scale: float
    end_value: float
    end_slope: float

    def curve(self, wavelength_m: np.ndarray) -> np.ndarray:
        """Return A_lambda over A(0.55 um); see `Dust.curve`."""
        self._check(wavelength_m)
        long_m = self.info.long_um * 1e-6
        value = _evaluate(self.model, np.minimum(wavelength_m, long_m)) / self.scale
        beyond = wavelength_m > long_m
        value[beyond] = self.end_value * (wavelength_m[beyond] / long_m) ** self.end_slope
        return value

    def _check(self, wavelength_m: np.ndarray) -> None:
        info = self.info
        low_um, high_um = wavelength_m.min() * 1e6, wavelength_m.max() * 1e6
        if low_um < info.short_um * (1.0 - 1e-12):
            raise DustError(
                f"the law {info.name} starts at {info.short_um:.4g} um and is asked for "
                f"{low_um:.4g} um: choose a law that reaches it (G23 starts at 0.0912 um) or "
                "leave the band out"
            )
        if high_um > info.long_um * (1.0 + 1e-12) and not info.continued:
            raise DustError(
                f"the law {info.name} ends at {info.long_um:.4g} um, where it is no power law, "
                f"and is asked for {high_um:.4g} um: choose a law that reaches it (G23 ends at "
                "32 um) or leave the band out"
            )


@lru_cache(maxsize=64)
def load_law(name: str, rv: float, f_a: float = 1.0) -> Law:
    """Return the law of that name at that R_V; `f_a` is the mixture of G16.

    Raises
    ------
    DustError
        The name is unknown, R_V is outside the law's range, or the installed
        dust_extinction is older than the law.
    """
    info = law_info(name, rv)
    from dust_extinction import averages, parameter_averages

    kind = getattr(parameter_averages, name, None) or getattr(averages, name, None)
    if kind is None:
        raise DustError(f"the law {name} needs a newer version of the dust_extinction package")
    if name == "G16":
        model = kind(RvA=rv, fA=f_a)
    else:
        model = kind(Rv=rv) if info.rv_range is not None else kind()
    covers = info.short_um <= REFERENCE_M * 1e6 <= info.long_um
    scale = float(_evaluate(model, np.array([REFERENCE_M]))[0]) if covers else 1.0
    if not info.continued:
        return Law(info, model, scale, 0.0, 0.0)
    ends = info.long_um * 1e-6 * np.array([1.0 - _SLOPE_SPAN, 1.0])
    near, end = _evaluate(model, ends) / scale
    return Law(info, model, scale, float(end), float(np.log(near / end) / np.log1p(-_SLOPE_SPAN)))


def _evaluate(model: Any, wavelength_m: np.ndarray) -> np.ndarray:
    from astropy import units as u
    from dust_extinction.warnings import SpectralUnitsWarning

    # Rounding may not push the ends of the range outside it.
    inverse = np.clip(1e-6 / wavelength_m, *model.x_range)
    with warnings.catch_warnings():
        # Some averages evaluate a part of themselves without units and warn of it.
        warnings.simplefilter("ignore", SpectralUnitsWarning)
        return np.asarray(model(inverse / u.um), dtype=float)
