"""From samples to samples: what follows from temperature, diameter and distance."""

from starkiln.derived._luminosity import (
    apparent_bolometric_magnitude,
    bolometric_magnitude,
    luminosity,
    luminosity_row,
    luminosity_table,
)
from starkiln.derived._quantities import (
    QUANTITIES,
    bolometric_flux,
    interval,
    intervals,
    quantities_of,
)

__all__ = [
    "QUANTITIES",
    "apparent_bolometric_magnitude",
    "bolometric_flux",
    "bolometric_magnitude",
    "interval",
    "intervals",
    "luminosity",
    "luminosity_row",
    "luminosity_table",
    "quantities_of",
]
