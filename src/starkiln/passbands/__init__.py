"""Passbands: response curves, photometric systems, zero points, unit conversions."""

from starkiln.passbands._band import Band
from starkiln.passbands._convert import Conversion, convert
from starkiln.passbands._describe import band_table, describe_band
from starkiln.passbands._file import read_band
from starkiln.passbands._flux import flux_from, flux_to, flux_unit_kind
from starkiln.passbands._library import load_band
from starkiln.passbands._names import band_names, is_band, match_band
from starkiln.passbands._synthetic import synthetic_flux, synthetic_magnitude

__all__ = [
    "Band",
    "Conversion",
    "band_names",
    "band_table",
    "convert",
    "describe_band",
    "flux_from",
    "flux_to",
    "flux_unit_kind",
    "is_band",
    "load_band",
    "match_band",
    "read_band",
    "synthetic_flux",
    "synthetic_magnitude",
]
