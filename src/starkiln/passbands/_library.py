"""The library of bands: speclite's curves joined to the project's zero points."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from pathlib import Path
from typing import Any

from starkiln.passbands._band import Band, zero_flux_w_m3
from starkiln.passbands._file import read_band
from starkiln.passbands._kernels import curve_nodes
from starkiln.passbands._names import canonical_name, is_band_file
from starkiln.store import read_data_table

__all__ = ["load_band"]

_ANGSTROM_M = 1e-10


def load_band(name: str | Path) -> Band:
    """Return the passband of that name, or that of a file.

    Parameters
    ----------
    name : str or pathlib.Path
        Name of the trade, such as `2MASS Ks`; case, space, dot, dash and
        underscore do not matter. Or the path of a file that holds a band of the
        user's own, see `read_band`.

    Returns
    -------
    Band
        Shared between callers.

    Raises
    ------
    BandError
        The name is unknown (the nearest names are offered), or the file cannot
        be used.
    """
    if is_band_file(str(name)):
        path = Path(name)
        stamp = path.stat() if path.is_file() else None
        return _load_file(str(name), (stamp.st_mtime_ns, stamp.st_size) if stamp else None)
    return _load(canonical_name(str(name)))


@cache
def _load_file(path: str, stamp: tuple[int, int] | None) -> Band:
    # The stamp is part of the cache's key, so that an edited file is read again.
    return read_band(path)


@cache
def _load(name: str) -> Band:
    zero_points = read_data_table("passbands", "zero_points.ecsv")
    row = next(r for r in zero_points if r["band"] == name)
    systems = read_data_table("passbands", "systems.ecsv")
    system = next(s for s in systems if s["system"] == row["system"])
    wavelength_m, response, step_m = _curve(str(system["curve_group"]), str(row["curve"]))
    kind: Any = str(system["response"])
    bare = Band(name, str(system["system"]), kind, wavelength_m, response, step_m)
    vega = _optional(row["vega_zero_point"])
    return replace(
        bare,
        native_system=str(system["native"]),
        published_vega_zero_w_m3=(
            None if vega is None else zero_flux_w_m3(vega, str(row["vega_unit"]), bare.pivot_m)
        ),
        ab_offset_mag=float(row["ab_offset"]),
        asinh_softening=_optional(row["asinh_softening"]),
        zero_point_error_mag=float(row["zero_point_error"]),
        offset_error_mag=float(system["offset_error"]),
        saturation_mag=_optional(row["saturation"]),
        saturation_error_mag=_optional(row["saturation_error"]),
        curve_source=str(system["curve_source"]),
        zero_point_source=str(row["zero_point_source"]),
        offset_source=str(system["offset_source"]),
        saturation_source=str(row["saturation_source"]),
    )


def _curve(group: str, curve: str) -> tuple[Any, Any, Any]:
    from speclite.filters import load_filter

    # speclite stores wavelengths in Angstrom, trimmed to where the response is not zero.
    published = load_filter(curve if "-" in curve else f"{group}-{curve}")
    nodes, values, steps = curve_nodes(published.wavelength * _ANGSTROM_M, published.response)
    for array in (nodes, values, steps):
        array.flags.writeable = False
    return nodes, values, steps


def _optional(value: Any) -> float | None:
    from numpy.ma import masked

    return None if value is masked else float(value)
