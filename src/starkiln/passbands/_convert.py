"""Conversion between units of photometry of one band, with errors."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.passbands._band import Band
from starkiln.passbands._flux import flux_from, flux_to
from starkiln.passbands._photometric_units import parse_unit

__all__ = ["Conversion", "convert", "plain_values"]


@dataclass(frozen=True, eq=False)
class Conversion:
    """Photometry in its new unit.

    Attributes
    ----------
    value, error : numpy.ndarray
        In `unit`, shape of what was given; `error` is None where none was given.
    unit : str
        The new unit, as it was asked for.
    """

    value: np.ndarray
    error: np.ndarray | None
    unit: str

    @property
    def quantity(self) -> Any:
        """The value as a quantity; a magnitude of any system in `mag`."""
        from astropy import units as u

        kind = parse_unit(self.unit).kind
        return u.Quantity(self.value, u.mag if "magnitude" in kind else u.Unit(self.unit))


def convert(
    value: Any,
    to: Any,
    band: Band | str,
    *,
    unit: Any = None,
    error: Any = None,
    magnitude_system: str | None = None,
) -> Conversion:
    """Convert photometry of one band to another unit.

    Parameters
    ----------
    value : float, array_like, astropy.units.Quantity or astropy.table.Column
        A number, or a whole column; NaN and masked values stay NaN.
    to : str or astropy.units.Unit
        Unit wanted, see `flux_unit_kind`.
    band : Band or str
        The passband.
    unit : str or astropy.units.Unit
        Unit of `value` and `error`; may be left out where `value` has one.
    error : float or array_like, optional
        Error of `value`, in the same unit (mag for a magnitude).
    magnitude_system : {"Vega", "AB", "ST"}, optional
        Of magnitudes whose unit states none; default: the catalogue's own.

    Returns
    -------
    Conversion

    Raises
    ------
    InputError
        No unit is known, a unit is no photometry, or the magnitude is asked for of
        one flux that is not positive (in an array it is NaN).
    BandError
        The band is unknown, or has no zero point in the system.
    """
    given, own_unit = plain_values(value)
    unit = unit if unit is not None else own_unit
    if unit is None:
        raise InputError("the value has no unit: give unit=, for example 'mag' or 'mJy'")
    errors = np.zeros(()) if error is None else plain_values(error)[0]
    if np.any(errors < 0.0):
        raise InputError(
            f"an error of {errors[errors < 0.0].flat[0]:g} is negative; give 0 or more"
        )
    flux, flux_error = flux_from(given, errors, unit, band, magnitude_system)
    new, new_error = flux_to(flux, flux_error, to, band, magnitude_system)
    if new.shape == () and np.isnan(new) and not np.isnan(given):
        raise InputError(
            f"a flux of {float(given):g} {unit} is not positive and has no magnitude: convert it "
            "to a flux density, or for SDSS bands to mag(asinh)"
        )
    return Conversion(new, None if error is None else new_error, str(to))


def plain_values(value: Any) -> tuple[np.ndarray, str | None]:
    """Return a number, quantity or column as floats, masked ones NaN, and its unit."""
    unit = getattr(value, "unit", None)
    plain = value.value if hasattr(value, "to_value") else value
    try:
        filled: np.ndarray = np.ma.filled(np.ma.asarray(plain, dtype=float), np.nan)
    except (TypeError, ValueError) as error:
        raise InputError(f"{value!r} is not a number") from error
    return np.asarray(filled), None if unit is None else str(unit)
