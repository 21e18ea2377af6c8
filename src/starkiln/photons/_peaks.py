"""Where Planck's law peaks, in every variable and form, and its inverse."""

from __future__ import annotations

import math
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.photons import _kernels as kernels
from starkiln.photons._forms import VARIABLES, coordinate, give, kelvin, resolve


def peak(
    temperature: Any,
    *,
    variable: str = "wavelength",
    form: str = "radiance",
    unit: Any = None,
) -> Any:
    """Return where Planck's law peaks: Wien's displacement law.

    Parameters
    ----------
    temperature : Quantity or array_like
        K, at least 0.
    variable, form : str
        As for `planck`; the peak moves with both.
    unit : str or Unit, optional
        Unit of the result, one of the variable's own kind.

    Returns
    -------
    Quantity
        lambda T = 2.897771955e-3 m K and nu / T = 5.878925758e10 Hz / K for
        energy; in general h nu / k T = n + W(-n exp(-n)), W Lambert's function, n
        the magnitude of the power of Planck's law (5 or 3; 4 or 2 for photons).
    """
    case = resolve(variable, form)
    x = np.asarray(peak_exponent(abs(case.law.power)))
    where = kernels.coordinate_of(case.law, x, kelvin(temperature))
    return give(where, VARIABLES[variable], unit)


def temperature_of_peak(at: Any, *, variable: str = "wavelength", form: str = "radiance") -> Any:
    """Return the temperature of the blackbody that peaks at `at`; the inverse of `peak`."""
    case = resolve(variable, form)
    x = np.asarray(peak_exponent(abs(case.law.power)))
    return give(kernels.temperature_of(case.law, x, coordinate(at, variable)), "K")


@lru_cache
def peak_exponent(n: int) -> float:
    """Return the positive root of x = n (1 - exp(-x)), 4.965114231744276 for n = 5.

    The iteration contracts by n exp(-x) < 0.41 for n of at least 2.
    """
    x = float(n)
    for _ in range(60):
        x = -n * math.expm1(-x)
    return x
