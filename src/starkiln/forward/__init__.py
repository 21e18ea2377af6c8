"""Emitter times dust through passbands: band fluxes, tabulated and direct.

`band_fluxes` gives the table that a likelihood evaluates; `band_flux_direct` is
the plain integral that it is held against.
"""

from starkiln.forward._direct import band_flux_direct
from starkiln.forward._table import AV_RANGE, BandFluxTable, band_fluxes, extrapolated_bands

__all__ = [
    "AV_RANGE",
    "BandFluxTable",
    "band_flux_direct",
    "band_fluxes",
    "extrapolated_bands",
]
