"""One printed number of one band, turned into a flux with its error."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

from starkiln.errors import InputError
from starkiln.observations._units_of_columns import ColumnUnit
from starkiln.passbands import flux_from, load_band

__all__ = [
    "BRIGHTEST",
    "FAINTEST",
    "SATURATED",
    "Measurement",
    "Reading",
    "check_error",
    "measure",
    "zero_flux",
]

#: d ln F / d m.
MAG_TO_LN = 0.4 * math.log(10.0)
#: What may be done with a band brighter than its detector's limit.
SATURATED = ("widen", "drop", "keep")

# A number outside is no magnitude of a star (the Sun has -27) but a code.
BRIGHTEST, FAINTEST = -30.0, 45.0


@dataclass(frozen=True, slots=True)
class Measurement:
    """One band of one star, as understood.

    Attributes
    ----------
    band : str
        Name of the passband.
    flux_w_m3 : float
        Band mean of the flux per wavelength, W m-2 m-1; of a limit, the
        limiting flux.
    error_w_m3 : float
        Its standard error; of a limit, `flux_w_m3 / limit_sigma`.
    fractional_error : float
        Error of ln flux: 0.4 ln(10) times the error of a magnitude, else error
        over flux; infinite for a flux that is not above zero.
    limit : str
        `upper` or `lower` where the flux is only known to lie below or above
        `flux_w_m3`, else empty.
    limit_sigma : float
        At how many sigma the limit is.
    note : str
        What was done to it, such as `saturated: ...`.
    """

    band: str
    flux_w_m3: float
    error_w_m3: float
    fractional_error: float
    limit: str = ""
    limit_sigma: float = 3.0
    note: str = ""

    @property
    def saturated(self) -> bool:
        """Whether the band is brighter than its detector's limit."""
        return self.note.startswith("saturated")


@dataclass(frozen=True)
class Reading:
    """How the numbers of one band are to be read.

    Attributes
    ----------
    band : str
        Name of the passband.
    unit : ColumnUnit
        Of the value.
    error_unit : ColumnUnit or None
        Of the error; None for the same.
    system : str
        `Vega` or `AB` for a magnitude; empty for the band's own.
    limit_sigma : float
        At how many sigma a limit is.
    floor : float
        The smallest error: mag for a magnitude, a fraction for a flux; 0 for none.
    saturated : str
        One of `SATURATED`. `widen` adds to the error what the band's table gives,
        and drops the band where the table gives nothing.
    """

    band: str
    unit: ColumnUnit
    error_unit: ColumnUnit | None = None
    system: str = ""
    limit_sigma: float = 3.0
    floor: float = 0.0
    saturated: str = "widen"


def measure(
    reading: Reading,
    value: float,
    error: float | None,
    limit: str = "",
    *,
    relative: bool = False,
) -> Measurement | str:
    """Turn one printed number into a `Measurement`.

    A limit stands at its flux, with the error that flux over `limit_sigma`.

    Parameters
    ----------
    reading : Reading
    value, error : float
        The number and its error in the units of `reading`; None where no error
        is given. A limit needs none, and one that is given is not used.
    limit : {"", "<", ">"}
        Flag on the printed number: `>` on a magnitude is an upper limit of flux.
    relative : bool
        `error` is mag for a magnitude and a fraction for a flux.

    Returns
    -------
    Measurement or str
        A text says why the band is left out though nothing is wrong with the row.

    Raises
    ------
    InputError
        The number or its error cannot be.
    """
    _check_value(reading, value, limit)
    if limit:
        return _limit(reading, value, limit)
    if error is None:
        return "no error is given"
    check_error(reading, error)
    magnitude = reading.unit.kind == "mag"
    flux = _flux(reading, value)
    if magnitude:
        unit = reading.error_unit or reading.unit
        fraction = MAG_TO_LN * max(error * (1.0 if relative else unit.factor), reading.floor)
        width = fraction * flux
    else:
        width = _flux_error(reading, value, error, relative)
        fraction = width / flux if flux > 0.0 else math.inf
    return _saturation(reading, Measurement(reading.band, flux, width, fraction))


def check_error(reading: Reading, error: float) -> None:
    """Refuse an error that is not above zero."""
    if math.isfinite(error) and error > 0.0:
        return
    unit = (reading.error_unit or reading.unit).text
    raise InputError(
        f"error {error:g} {unit} is not above zero and finite; leave the cell empty where it is "
        "not known"
    )


def _check_value(reading: Reading, value: float, limit: str) -> None:
    unit = reading.unit
    kind = "magnitude" if unit.kind == "mag" else "flux"
    if not math.isfinite(value):
        raise InputError(f"an infinite {kind} is no measurement; leave the cell empty")
    if kind == "magnitude" and not BRIGHTEST <= value * unit.factor <= FAINTEST:
        raise InputError(
            f"{value:g} {unit.text} is no magnitude of a star ({BRIGHTEST:g} to "
            f"{FAINTEST:g} mag); if it means missing, say so in a column sheet: "
            f"missing = [{value:g}]"
        )
    if kind == "flux" and limit and value <= 0.0:
        raise InputError(f"a limit must be a flux above zero, not {value:g} {unit.text}")


def _limit(reading: Reading, value: float, flag: str) -> Measurement:
    flux = _flux(reading, value)
    fainter_is_larger = reading.unit.kind == "mag"
    side = "upper" if (flag == ">") == fainter_is_larger else "lower"
    sigma = reading.limit_sigma
    return Measurement(reading.band, flux, flux / sigma, 1.0 / sigma, side, sigma)


def _flux(reading: Reading, value: float) -> float:
    unit = reading.unit
    if unit.kind == "mag":
        return zero_flux(reading) * 10.0 ** (-0.4 * value * unit.factor)
    return _unit_flux(reading.band, unit) * value


def _flux_error(reading: Reading, value: float, error: float, relative: bool) -> float:
    scale = abs(value) * _unit_flux(reading.band, reading.unit)
    unit = reading.error_unit or reading.unit
    width = error * (scale if relative else _unit_flux(reading.band, unit))
    width = max(width, reading.floor * scale)
    if width <= 0.0:
        raise InputError("a flux of zero needs an error in its own unit")
    return width


def _saturation(reading: Reading, found: Measurement) -> Measurement | str:
    limit, widening = _saturates(reading.band)
    if reading.saturated == "keep" or limit is None or found.flux_w_m3 <= 0.0:
        return found
    magnitude = -2.5 * math.log10(found.flux_w_m3 / _zero_flux(reading.band, ""))
    if magnitude >= limit:
        return found
    where = f"saturated: {magnitude:.2f} mag is brighter than {limit:g} mag"
    if reading.saturated == "drop" or widening is None:
        return f"{where}, left out"
    fraction = math.hypot(found.fractional_error, MAG_TO_LN * widening)
    note = f"{where}, error widened by {widening:g} mag" if widening else f"{where}, error kept"
    return Measurement(found.band, found.flux_w_m3, fraction * found.flux_w_m3, fraction, note=note)


def zero_flux(reading: Reading) -> float:
    """Return the flux of magnitude 0 in the system of `reading`, in W m-3.

    Raises
    ------
    BandError
        The band has no zero point in that system.
    """
    return _zero_flux(reading.band, reading.system or reading.unit.system)


@lru_cache(maxsize=512)
def _saturates(band: str) -> tuple[float | None, float | None]:
    found = load_band(band)
    return found.saturation_mag, found.saturation_error_mag


@lru_cache(maxsize=512)
def _zero_flux(band: str, system: str) -> float:
    return float(flux_from(0.0, 1.0, "mag", band, magnitude_system=system or None)[0])


@lru_cache(maxsize=512)
def _unit_flux(band: str, unit: ColumnUnit) -> float:
    if unit.kind == "per wavelength":
        return unit.factor
    return unit.factor * float(flux_from(1.0, 1.0, "Jy", band)[0])
