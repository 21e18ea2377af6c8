"""Inside a star: polytropes, the standard model, and how much of the pressure is light."""

from starkiln.interiors._grid import Grid, MainSequence, load_grid
from starkiln.interiors._polytropes import Polytrope, PolytropeProfile
from starkiln.interiors._ratios import PressureRatio, pressure_ratio
from starkiln.interiors._standard import (
    StandardProfile,
    central_light_limit,
    standard_mass,
    standard_model,
    standard_profile,
)
from starkiln.interiors._structure import StructureModel, structure
from starkiln.interiors._zero_age import zero_age_luminosity, zero_age_radius

__all__ = [
    "Grid",
    "MainSequence",
    "Polytrope",
    "PolytropeProfile",
    "PressureRatio",
    "StandardProfile",
    "StructureModel",
    "central_light_limit",
    "load_grid",
    "pressure_ratio",
    "standard_mass",
    "standard_model",
    "standard_profile",
    "structure",
    "zero_age_luminosity",
    "zero_age_radius",
]
