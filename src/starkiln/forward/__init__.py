"""Emitter times dust through passbands: band fluxes, tabulated and direct.

`band_fluxes` gives the table that a likelihood evaluates; `band_flux_direct` is
the plain integral that it is held against. Extinction ratios and conversion from
one band to another follow from the same product.
"""

from starkiln.forward._build import AV_RANGE
from starkiln.forward._cache import cache_folder
from starkiln.forward._direct import band_flux_direct
from starkiln.forward._door import band_fluxes, extrapolated_bands
from starkiln.forward._node_table import NodeFluxTable
from starkiln.forward._sources import (
    Source,
    convert_between,
    extinction_ratio,
    spectrum_source,
    star_source,
)
from starkiln.forward._table import BandFluxTable

__all__ = [
    "AV_RANGE",
    "BandFluxTable",
    "NodeFluxTable",
    "Source",
    "band_flux_direct",
    "band_fluxes",
    "cache_folder",
    "convert_between",
    "extinction_ratio",
    "extrapolated_bands",
    "spectrum_source",
    "star_source",
]
