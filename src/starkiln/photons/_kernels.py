"""Planck's law on plain arrays, SI units; no astropy here.

Every spectral form is a power law times the mean number of photons per mode:
B_q = first q^power / (exp(x) - 1), with x = h nu / k T. The spectral coordinate q
is the wavelength, the frequency, or a multiple of the frequency.
"""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from starkiln.constants import C2, C, H

#: Where exp(x) comes near its overflow, the product is taken in logarithms.
_FAR = 700.0
#: Elements worked on at a time.
_BLOCK = 8192


class PowerLaw(NamedTuple):
    """Radiance of one spectral form: first * q**power / expm1(x).

    Attributes
    ----------
    first : float
        Coefficient, SI.
    power : int
        -5 or -4 per wavelength, 3 or 2 per frequency and its multiples.
    second : float
        x = second * q / T, or second / (q T) per wavelength.
    """

    first: float
    power: int
    second: float


#: Frequency in hertz that one unit of the coordinate stands for.
HERTZ_PER = {
    "frequency": 1.0,
    "angular_frequency": 0.5 / math.pi,
    "wavenumber": C.value,
    "energy": 1.0 / H.value,
}


def power_law(variable: str, photons: bool) -> PowerLaw:
    """Return the form of Planck's law (1901, Ann. Phys. 309, 553) per `variable`.

    Energy radiance is 2 h c^2 / lambda^5 or 2 h nu^3 / c^2 times the occupation;
    photon radiance is that over h nu.
    """
    if variable == "wavelength":
        first = 2.0 * C.value * (1.0 if photons else H.value * C.value)
        return PowerLaw(first, -4 if photons else -5, C2.value)
    hertz = HERTZ_PER[variable]
    power = 2 if photons else 3
    first = 2.0 * (1.0 if photons else H.value) / C.value**2 * hertz ** (power + 1)
    return PowerLaw(first, power, C2.value / C.value * hertz)


def exponent(law: PowerLaw, coordinate: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return x = h nu / k T; infinite at T = 0, and 0 where the frequency is 0."""
    with np.errstate(all="ignore"):
        if law.power < 0:
            return law.second / (coordinate * temperature_k)
        return law.second * coordinate / temperature_k


def coordinate_of(law: PowerLaw, x: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return the coordinate at which h nu / k T equals `x`."""
    with np.errstate(divide="ignore"):
        if law.power < 0:
            return law.second / (x * temperature_k)
        return x * temperature_k / law.second


def temperature_of(law: PowerLaw, x: np.ndarray, coordinate: np.ndarray) -> np.ndarray:
    """Return the temperature at which h nu / k T equals `x` at `coordinate`."""
    with np.errstate(divide="ignore"):
        if law.power < 0:
            return law.second / (coordinate * x)
        return law.second * coordinate / x


def planck(law: PowerLaw, coordinate: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return the radiance of a blackbody in the form `law`.

    Parameters
    ----------
    law : PowerLaw
        From `power_law`.
    coordinate, temperature_k : numpy.ndarray
        SI, not negative; broadcast against each other.

    Returns
    -------
    numpy.ndarray
        0 at T = 0, at zero frequency and at zero and infinite wavelength, which
        are the limits.
    """
    if max(coordinate.size, temperature_k.size) <= _BLOCK:
        return _planck(law, coordinate, temperature_k)
    # Blocks that stay in the processor's cache take half the time of whole arrays.
    values = np.nditer(
        [coordinate, temperature_k, None],
        flags=["external_loop", "buffered"],
        op_flags=[["readonly"], ["readonly"], ["writeonly", "allocate"]],
        op_dtypes=[float, float, float],
        buffersize=_BLOCK,
    )
    with values:
        for q, t, result in values:
            result[...] = _planck(law, q, t)
        return np.asarray(values.operands[2])


def _planck(law: PowerLaw, coordinate: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    x = exponent(law, coordinate, temperature_k)
    with np.errstate(all="ignore"):
        power = integer_power(coordinate, abs(law.power))
        growth = np.expm1(x)
        result = law.first / (growth * power) if law.power < 0 else law.first * power / growth
        usual = (x < _FAR) & (result > 0.0) & (result < math.inf)
    if np.all(usual):
        return result
    return np.where(usual, result, np.exp(ln_planck(law, coordinate, temperature_k)))[()]


def ln_planck(law: PowerLaw, coordinate: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return the natural logarithm of `planck`, finite where the radiance underflows."""
    x = exponent(law, coordinate, temperature_k)
    with np.errstate(all="ignore"):
        ln_occupation = -x - np.log(-np.expm1(-x))
        result = math.log(law.first) + law.power * np.log(coordinate) + ln_occupation
    # Infinities of opposite sign meet only where the radiance vanishes; a NaN
    # that was handed in stays one.
    vanishes = np.isnan(result) & ~(np.isnan(coordinate) | np.isnan(temperature_k))
    return np.where(vanishes, -math.inf, result)[()]


def wien(law: PowerLaw, coordinate: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return Wien's law (1896), the limit of `planck` at large x."""
    x = exponent(law, coordinate, temperature_k)
    with np.errstate(all="ignore"):
        result = np.exp(math.log(law.first) + law.power * np.log(coordinate) - x)
    return np.where(np.isnan(result) & ~np.isnan(x), 0.0, result)[()]


def rayleigh_jeans(law: PowerLaw, coordinate: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return the law of Rayleigh (1900) and Jeans (1905), the limit at small x."""
    # Written out, since 1/x would be infinite where the frequency is zero.
    sign = 1 if law.power < 0 else -1
    scale = law.first / law.second * temperature_k
    with np.errstate(all="ignore"):
        return scale * integer_power(coordinate, law.power + sign)


def limit_errors(x: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return the relative errors of both limits, (limit - Planck) / Planck.

    Wien: -exp(-x). Rayleigh-Jeans: (exp(x) - 1 - x) / x, by its power series below
    x = 1, where the difference would cancel.
    """
    x = np.asarray(x, dtype=float)
    with np.errstate(all="ignore"):
        small = np.minimum(x, 1.0)
        series = np.zeros_like(small)
        for k in range(19, 1, -1):
            series = (series + 1.0) * small / k
        direct = np.expm1(x) / x - 1.0
        wien_error = -np.exp(-x)
    rayleigh_jeans_error = np.where(x < 1.0, series, np.where(np.isinf(x), math.inf, direct))
    return wien_error, rayleigh_jeans_error[()]


def integer_power(base: np.ndarray, power: int) -> np.ndarray:
    """Return base**power, a whole number from -5 to 5 but 0, by multiplications."""
    magnitude = abs(power)
    if magnitude == 1:
        return base if power > 0 else 1.0 / base
    square = base * base
    result = square * square if magnitude >= 4 else square
    if magnitude in (3, 5):
        result = result * base
    return 1.0 / result if power < 0 else result


_PER_WAVELENGTH = power_law("wavelength", photons=False)


def planck_wavelength(wavelength_m: np.ndarray, temperature_k: np.ndarray) -> np.ndarray:
    """Return the spectral radiance B_lambda of a blackbody.

    Parameters
    ----------
    wavelength_m, temperature_k : array_like
        Metres and kelvins, not negative; broadcast against each other.

    Returns
    -------
    numpy.ndarray
        2 h c^2 / lambda^5 / (exp(h c / lambda k T) - 1) in W m-3 sr-1 (Planck
        1901, Ann. Phys. 309, 553); 0 where it underflows.
    """
    wavelength_m = np.asarray(wavelength_m, dtype=float)
    return planck(_PER_WAVELENGTH, wavelength_m, np.asarray(temperature_k, dtype=float))
