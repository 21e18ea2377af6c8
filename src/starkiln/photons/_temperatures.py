"""Temperatures read off a radiance: brightness, colour and Rayleigh-Jeans, and back."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.errors import ConvergenceError, InputError
from starkiln.photons import _kernels as kernels
from starkiln.photons._forms import Case, coordinate, give, kelvin, resolve


def brightness_temperature(
    at: Any,
    value: Any,
    *,
    variable: str = "wavelength",
    form: str = "radiance",
    dilution: Any = 1.0,
) -> Any:
    """Return the temperature of the blackbody that emits `value` at `at`.

    Parameters
    ----------
    at, variable, form, dilution
        As for `planck`, which is the inverse.
    value : Quantity or array_like
        In the SI unit of the form when bare; at least 0.

    Returns
    -------
    Quantity
        K. With n the photons per mode, h nu / k T = ln(1 + 1/n) (Rybicki & Lightman
        1979, section 1.5); 0 where `value` is 0.
    """
    case = resolve(variable, form)
    points = coordinate(at, variable)
    weight = as_array(dilution, "", "dilution", lower=0.0, exclusive=True)
    with np.errstate(all="ignore"):
        occupation = _value(value, case, form) / (
            weight * case.factor * case.law.first * kernels.integer_power(points, case.law.power)
        )
        # Two ways to write ln(1 + 1/n): 1/n overflows for small n, the other cancels for large.
        few = np.log1p(occupation) - np.log(occupation)
        x = np.where(occupation < 1.0, few, np.log1p(1.0 / occupation))
    return give(kernels.temperature_of(case.law, x, points), "K")


def rayleigh_jeans_temperature(
    at: Any, value: Any, *, variable: str = "wavelength", form: str = "radiance"
) -> Any:
    """Return the temperature that the Rayleigh-Jeans law gives to `value` at `at`.

    Arguments as for `brightness_temperature`; the inverse is `rayleigh_jeans`. Radio
    astronomers call it brightness or antenna temperature.
    """
    case = resolve(variable, form)
    unit_temperature = kernels.rayleigh_jeans(case.law, coordinate(at, variable), np.asarray(1.0))
    with np.errstate(divide="ignore", invalid="ignore"):
        return give(_value(value, case, form) / (case.factor * unit_temperature), "K")


def to_rayleigh_jeans(at: Any, temperature: Any, *, variable: str = "wavelength") -> Any:
    """Return J(T) = (h nu / k) / (exp(h nu / k T) - 1), in K.

    The Rayleigh-Jeans temperature of a blackbody (Ulich & Haas 1976, ApJS 30, 247).
    """
    law = resolve(variable, "radiance").law
    temperature_k = kelvin(temperature)
    x = kernels.exponent(law, coordinate(at, variable), temperature_k)
    with np.errstate(all="ignore"):
        ratio = np.where(x > 0.0, x / np.expm1(x), 1.0)
    return give(np.where(np.isinf(x), 0.0, temperature_k * ratio), "K")


def from_rayleigh_jeans(at: Any, temperature: Any, *, variable: str = "wavelength") -> Any:
    """Return the blackbody temperature whose J(T) is given; inverse of `to_rayleigh_jeans`."""
    law = resolve(variable, "radiance").law
    points = coordinate(at, variable)
    given = kelvin(temperature, "Rayleigh-Jeans temperature")
    inverse_occupation = kernels.exponent(law, points, given)
    with np.errstate(all="ignore"):
        found = kernels.temperature_of(law, np.log1p(inverse_occupation), points)
    return give(np.where(inverse_occupation == 0.0, given, found), "K")


def colour_ratio(
    at_1: Any,
    at_2: Any,
    temperature: Any,
    *,
    variable: str = "wavelength",
    form: str = "radiance",
) -> np.ndarray:
    """Return Planck's law at `at_1` over that at `at_2`; arguments as for `planck`.

    A plain number even where both values underflow; NaN at T = 0, where both vanish.
    """
    case = resolve(variable, form)
    temperature_k = kelvin(temperature)
    first, second = coordinate(at_1, variable), coordinate(at_2, variable)
    x_1, x_2 = (kernels.exponent(case.law, q, temperature_k) for q in (first, second))
    with np.errstate(all="ignore"):
        power = kernels.integer_power(first / second, case.law.power)
        return np.asarray(power * np.exp(x_2 - x_1) * np.expm1(-x_2) / np.expm1(-x_1))[()]


def colour_temperature(
    at_1: Any,
    at_2: Any,
    ratio: Any,
    *,
    variable: str = "wavelength",
    form: str = "radiance",
) -> Any:
    """Return the temperature of the blackbody with a given ratio at two points.

    Parameters
    ----------
    at_1, at_2, variable, form
        As for `planck`; the two points must differ.
    ratio : float or array_like
        Value at `at_1` over value at `at_2`; above 0.

    Returns
    -------
    Quantity
        K, the inverse of `colour_ratio`.

    Raises
    ------
    InputError
        The ratio lies beyond that of the Rayleigh-Jeans law: no blackbody has it.
    """
    case = resolve(variable, form)
    points = [coordinate(at, variable) for at in (at_1, at_2)]
    ln_ratio = np.log(as_array(ratio, "", "ratio", lower=0.0, exclusive=True))
    ln_power = case.law.power * (np.log(points[0]) - np.log(points[1]))
    energies = [kernels.exponent(case.law, q, np.asarray(1.0)) for q in points]
    # In the order of falling photon energy a ratio always falls short of its limit.
    if_higher = energies[0] > energies[1]
    shortfall = np.where(if_higher, 1.0, -1.0) * (
        ln_power + np.log(energies[1] / energies[0]) - ln_ratio
    )
    if np.any(energies[0] == energies[1]):
        raise InputError("the two spectral points are the same: give two that differ")
    if np.any(shortfall <= 0.0):
        raise InputError(
            "no blackbody has this ratio: it must lie on the cool side of the "
            "Rayleigh-Jeans limit; check which point comes first"
        )
    high, low = np.maximum(*energies), np.minimum(*energies)
    return give(1.0 / _inverse_temperature(high, low, shortfall), "K")


def _inverse_temperature(high: np.ndarray, low: np.ndarray, shortfall: np.ndarray) -> np.ndarray:
    """Solve ln[(exp(high y) - 1) / (exp(low y) - 1)] - ln(high / low) = shortfall for y.

    The left side is convex and its slope runs from (high - low) / 2 to high - low, so
    Newton's method from the steeper bound's far side comes down without overshoot.
    """
    y = 2.0 * shortfall / (high - low)
    # What rounding leaves of a step when the two points lie close together.
    tolerance = 8.0 * np.finfo(float).eps * high / (high - low)
    for _ in range(100):
        excess = _ln_mean(high * y) - _ln_mean(low * y)
        slope = high / -np.expm1(-high * y) - low / -np.expm1(-low * y)
        step = (excess - shortfall) / slope
        y = y - step
        if np.all(np.abs(step) <= tolerance * y):
            return y
    raise ConvergenceError("the colour temperature did not converge", partial=1.0 / y)


def _ln_mean(x: np.ndarray) -> np.ndarray:
    """Return ln[(exp(x) - 1) / x], accurate at both ends."""
    with np.errstate(over="ignore"):
        moderate = np.log1p(kernels.limit_errors(x)[1])
    return np.where(x < 1.0, moderate, x + np.log(-np.expm1(-x)) - np.log(x))


def _value(value: Any, case: Case, form: str) -> np.ndarray:
    return as_array(value, case.unit, form.replace("_", " "), lower=0.0, upper=math.inf)
