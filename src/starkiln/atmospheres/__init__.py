"""Transfer and structure of one plane-parallel, static atmosphere in LTE."""

from starkiln.atmospheres._grey import (
    chandrasekhar_h,
    grey_limb_darkening,
    grey_temperature,
    hopf,
)
from starkiln.atmospheres._model import (
    FEH_RANGE,
    LOGG_RANGE,
    TEMPERATURE_RANGE,
    Atmosphere,
    model_atmosphere,
)
from starkiln.atmospheres._solve import Numerics

__all__ = [
    "FEH_RANGE",
    "LOGG_RANGE",
    "TEMPERATURE_RANGE",
    "Atmosphere",
    "Numerics",
    "chandrasekhar_h",
    "grey_limb_darkening",
    "grey_temperature",
    "hopf",
    "model_atmosphere",
]
