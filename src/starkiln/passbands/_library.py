"""The library of bands: speclite's curves joined to the project's zero points."""

from __future__ import annotations

from functools import cache
from typing import Any

from starkiln.constants import C
from starkiln.passbands._band import AB_ZERO_W_M2_HZ, Band
from starkiln.passbands._kernels import curve_nodes
from starkiln.passbands._names import canonical_name
from starkiln.store import read_data_table

__all__ = ["load_band"]

_ANGSTROM_M = 1e-10
_JY = 1e-26


def load_band(name: str) -> Band:
    """Return the passband of that name.

    Parameters
    ----------
    name : str
        Name of the trade, such as `2MASS Ks`; case, space, dot, dash and
        underscore do not matter.

    Returns
    -------
    Band
        Shared between callers.

    Raises
    ------
    BandError
        The name is unknown; the nearest names are offered.
    """
    return _load(canonical_name(name))


@cache
def _load(name: str) -> Band:
    zero_points = read_data_table("passbands", "zero_points.ecsv")
    row = next(r for r in zero_points if r["band"] == name)
    systems = read_data_table("passbands", "systems.ecsv")
    system = next(s for s in systems if s["system"] == row["system"])
    wavelength_m, response, step_m = _curve(f"{system['curve_group']}-{row['curve']}")
    bare = Band(name, str(system["system"]), system["response"], wavelength_m, response, step_m)
    return Band(
        name=name,
        system=bare.system,
        response_kind=bare.response_kind,
        wavelength_m=wavelength_m,
        response=response,
        step_m=step_m,
        native_system=str(system["native"]),
        vega_zero_w_m3=_vega_zero(row, bare),
        ab_offset_mag=float(row["ab_offset"]),
        zero_point_error_mag=float(row["zero_point_error"]),
        offset_error_mag=float(system["offset_error"]),
        saturation_mag=_optional(row["saturation"]),
        saturation_error_mag=_optional(row["saturation_error"]),
        source=f"curve: {system['curve_source']}; zero point: {row['zero_point_source']}",
    )


def _curve(curve: str) -> tuple[Any, Any, Any]:
    from speclite.filters import load_filter

    # speclite stores wavelengths in Angstrom, trimmed to where the response is not zero.
    published = load_filter(curve)
    nodes, values, steps = curve_nodes(published.wavelength * _ANGSTROM_M, published.response)
    for array in (nodes, values, steps):
        array.flags.writeable = False
    return nodes, values, steps


def _vega_zero(row: Any, band: Band) -> float | None:
    """Band mean of F_lambda of Vega magnitude 0, from the form in which it is published."""
    from astropy import units as u

    value = _optional(row["vega_zero_point"])
    if value is None:
        return None
    unit = u.Unit(str(row["vega_unit"]))
    if unit == u.mag:
        return AB_ZERO_W_M2_HZ * 10.0 ** (-0.4 * value) * C.value / band.pivot_m**2
    if unit.is_equivalent(u.Jy):
        return float(unit.to(u.Jy, value)) * _JY * C.value / band.pivot_m**2
    return float(unit.to(u.W / u.m**3, value))


def _optional(value: Any) -> float | None:
    from numpy.ma import masked

    return None if value is masked else float(value)
