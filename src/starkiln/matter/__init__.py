"""What stars are made of: composition, equation of state, ionisation, opacity."""

from starkiln.matter._composition import (
    MIXTURES,
    Composition,
    composition,
    composition_from_abundances,
    element_weights,
    hydrogen_of_metals,
)
from starkiln.matter._continuum_opacity import (
    ABSORPTION_SOURCES,
    SCATTERING_SOURCES,
    ContinuumOpacity,
    bound_free_edges,
)
from starkiln.matter._hminus import hminus_bound_free, hminus_free_free
from starkiln.matter._hydrogen_lines import HydrogenLines, line_wavelength
from starkiln.matter._hydrogenic import bound_free_gaunt, free_free_gaunt, oscillator_strength
from starkiln.matter._ionisation import IonisationState, saha_factor, solve_ionisation
from starkiln.matter._line_haze import LINE_HAZE, LineHaze
from starkiln.matter._opacity import CALIBRATED, OpacityLaw, rosseland_opacity
from starkiln.matter._scattering import eddington_factor, thomson_opacity
from starkiln.matter._state import GasState, gas_density, gas_state, gas_state_si

__all__ = [
    "ABSORPTION_SOURCES",
    "CALIBRATED",
    "LINE_HAZE",
    "MIXTURES",
    "SCATTERING_SOURCES",
    "Composition",
    "ContinuumOpacity",
    "GasState",
    "HydrogenLines",
    "IonisationState",
    "LineHaze",
    "OpacityLaw",
    "bound_free_edges",
    "bound_free_gaunt",
    "composition",
    "composition_from_abundances",
    "eddington_factor",
    "element_weights",
    "free_free_gaunt",
    "gas_density",
    "gas_state",
    "gas_state_si",
    "hminus_bound_free",
    "hminus_free_free",
    "hydrogen_of_metals",
    "line_wavelength",
    "oscillator_strength",
    "rosseland_opacity",
    "saha_factor",
    "solve_ionisation",
    "thomson_opacity",
]
