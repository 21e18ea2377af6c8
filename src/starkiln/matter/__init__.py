"""What stars are made of: composition, equation of state, opacity of interiors."""

from starkiln.matter._composition import (
    MIXTURES,
    Composition,
    composition,
    composition_from_abundances,
    element_weights,
    hydrogen_of_metals,
)
from starkiln.matter._opacity import CALIBRATED, OpacityLaw, rosseland_opacity
from starkiln.matter._scattering import eddington_factor, thomson_opacity
from starkiln.matter._state import GasState, gas_density, gas_state, gas_state_si

__all__ = [
    "CALIBRATED",
    "MIXTURES",
    "Composition",
    "GasState",
    "OpacityLaw",
    "composition",
    "composition_from_abundances",
    "eddington_factor",
    "element_weights",
    "gas_density",
    "gas_state",
    "gas_state_si",
    "hydrogen_of_metals",
    "rosseland_opacity",
    "thomson_opacity",
]
