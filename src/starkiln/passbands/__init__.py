"""Passbands: response curves, photometric systems, zero points, unit conversions."""

from starkiln.passbands._band import Band
from starkiln.passbands._flux import flux_from, flux_unit_kind
from starkiln.passbands._library import load_band
from starkiln.passbands._names import band_names, is_band, match_band

__all__ = [
    "Band",
    "band_names",
    "flux_from",
    "flux_unit_kind",
    "is_band",
    "load_band",
    "match_band",
]
