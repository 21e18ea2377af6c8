"""From samples to samples: what follows from temperature, diameter and distance."""

from starkiln.derived._luminosity import (
    apparent_bolometric_magnitude,
    bolometric_magnitude,
    luminosity,
    luminosity_row,
    luminosity_table,
)
from starkiln.derived._pressure import (
    PressurePosterior,
    light_from_draws,
    light_from_values,
    pressure_posterior,
)
from starkiln.derived._pressure_cells import Evidence, Light
from starkiln.derived._pressure_cells import assumptions as pressure_assumptions
from starkiln.derived._pressure_columns import ratio_table
from starkiln.derived._pressure_table import INPUTS as PRESSURE_INPUTS
from starkiln.derived._pressure_table import pressure_table, pressure_table_of_draws
from starkiln.derived._quantities import (
    QUANTITIES,
    bolometric_flux,
    interval,
    intervals,
    quantities_of,
)

__all__ = [
    "PRESSURE_INPUTS",
    "QUANTITIES",
    "Evidence",
    "Light",
    "PressurePosterior",
    "apparent_bolometric_magnitude",
    "bolometric_flux",
    "bolometric_magnitude",
    "interval",
    "intervals",
    "light_from_draws",
    "light_from_values",
    "luminosity",
    "luminosity_row",
    "luminosity_table",
    "pressure_assumptions",
    "pressure_posterior",
    "pressure_table",
    "pressure_table_of_draws",
    "quantities_of",
    "ratio_table",
]
