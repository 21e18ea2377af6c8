"""What stars are made of: composition, equation of state, opacity of interiors."""

from starkiln.matter._composition import (
    MIXTURES,
    Composition,
    composition,
    composition_from_abundances,
    element_weights,
    hydrogen_of_metals,
)
from starkiln.matter._scattering import eddington_factor, thomson_opacity

__all__ = [
    "MIXTURES",
    "Composition",
    "composition",
    "composition_from_abundances",
    "eddington_factor",
    "element_weights",
    "hydrogen_of_metals",
    "thomson_opacity",
]
