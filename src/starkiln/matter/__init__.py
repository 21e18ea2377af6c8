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
from starkiln.matter._state import GasState, gas_density, gas_state

__all__ = [
    "MIXTURES",
    "Composition",
    "GasState",
    "composition",
    "composition_from_abundances",
    "eddington_factor",
    "element_weights",
    "gas_density",
    "gas_state",
    "hydrogen_of_metals",
    "thomson_opacity",
]
