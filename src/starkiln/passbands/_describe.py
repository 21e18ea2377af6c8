"""What is known of each band, as tables."""

from __future__ import annotations

import math
from typing import Any

from starkiln.constants import C
from starkiln.passbands._band import Band
from starkiln.passbands._library import load_band
from starkiln.passbands._names import band_names

__all__ = ["band_table", "describe_band"]

_COLUMNS = {
    "band": ("", "Name of the band"),
    "system": ("", "Photometric system, whose bands share a zero-point offset"),
    "response": ("", "photon or energy, what the response weights"),
    "pivot": ("um", "Pivot wavelength"),
    "width": ("um", "Effective width: integral of the response over its peak"),
    "vega_zero_point": ("Jy", "F_nu of Vega magnitude 0"),
    "ab_zero_point": ("Jy", "F_nu of AB magnitude 0"),
    "zero_point_error": ("mag", "Error of the zero point, the part shared by the system included"),
    "source": ("", "Where curve and zero point come from"),
}
_MORE = {
    "mean": ("um", "Mean wavelength of the response"),
    "half_maximum_short": ("um", "Shortest wavelength at half the peak response"),
    "half_maximum_long": ("um", "Longest wavelength at half the peak response"),
    "shortest": ("um", "First wavelength of the curve"),
    "longest": ("um", "Last wavelength of the curve"),
    "native_system": ("", "System of a magnitude given without one"),
    "ab_offset": ("mag", "AB magnitude minus catalogue magnitude, of an AB system"),
    "asinh_softening": ("", "Softening of asinh magnitudes"),
    "vega_zero_flux": ("W / (m2 um)", "Band mean of F_lambda of Vega magnitude 0"),
    "ab_zero_flux": ("W / (m2 um)", "Band mean of F_lambda of AB magnitude 0"),
    "zero_point_error_shared": ("mag", "Part of the zero point's error that the system shares"),
    "saturation": ("mag", "Catalogue magnitude brighter than which the survey saturates"),
    "saturation_error": ("mag", "Error added for a brighter star; empty: the band is dropped"),
    "vega_source": ("", "Where the Vega zero point comes from"),
    "offset_source": ("", "Where the shared part of the error comes from"),
    "saturation_source": ("", "Where the saturation limit comes from"),
}


def band_table() -> Any:
    """Return what is known of all bands.

    Returns
    -------
    astropy.table.Table
        One row per band, the most important system first.
    """
    return _table([_row(load_band(name)) for name in band_names()], _COLUMNS)


def describe_band(band: Band | str) -> Any:
    """Return all that is known of one band.

    Returns
    -------
    astropy.table.Table
        One row: the columns of `band_table`, and more.
    """
    passband = load_band(band) if isinstance(band, str) else band
    return _table([_row(passband) | _more(passband)], _COLUMNS | _MORE)


def _row(band: Band) -> dict[str, Any]:
    return {
        "band": band.name,
        "system": band.system,
        "response": band.response_kind,
        "pivot": band.pivot_m * 1e6,
        "width": band.width_m * 1e6,
        "vega_zero_point": _janskys(band, "Vega"),
        "ab_zero_point": _janskys(band, "AB"),
        "zero_point_error": math.hypot(band.zero_point_error_mag, band.offset_error_mag),
        "source": band.source,
    }


def _more(band: Band) -> dict[str, Any]:
    short, long = band.half_maximum_m
    return {
        "mean": band.mean_m * 1e6,
        "half_maximum_short": short * 1e6,
        "half_maximum_long": long * 1e6,
        "shortest": band.range_m[0] * 1e6,
        "longest": band.range_m[1] * 1e6,
        "native_system": band.native_system,
        "ab_offset": band.ab_offset_mag,
        "asinh_softening": band.asinh_softening,
        "vega_zero_flux": band.zero_flux_w_m3("Vega") * 1e-6,
        "ab_zero_flux": band.zero_flux_w_m3("AB") * 1e-6,
        "zero_point_error_shared": band.offset_error_mag,
        "saturation": band.saturation_mag,
        "saturation_error": band.saturation_error_mag,
        "vega_source": band.vega_source,
        "offset_source": band.offset_source,
        "saturation_source": band.saturation_source,
    }


def _janskys(band: Band, system: str) -> float:
    return band.zero_flux_w_m3(system) * band.pivot_m**2 / C.value * 1e26


def _table(rows: list[dict[str, Any]], columns: dict[str, tuple[str, str]]) -> Any:
    from astropy.table import MaskedColumn, Table

    table = Table()
    for name, (unit, description) in columns.items():
        values = [row[name] for row in rows]
        missing = [value is None for value in values]
        filled = [0.0 if value is None else value for value in values]
        kind = {"mask": missing} if any(missing) else {}
        column = MaskedColumn(filled, name=name, unit=unit or None, **kind)
        column.description = description
        table.add_column(column)
    return table
