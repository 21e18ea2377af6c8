"""Lines of theory in a Hertzsprung-Russell diagram: zero age, and tracks of given mass."""

from __future__ import annotations

import numpy as np

from starkiln.constants import T_SUN
from starkiln.interiors import load_grid, zero_age_luminosity, zero_age_radius

#: Masses of the tracks in solar masses, inside the grid of models.
MASSES = (2.0, 3.0, 5.0, 9.0, 15.0, 25.0, 40.0, 60.0, 100.0)
#: Metal fraction of the tracks; the zero-age line has its own solar value, 0.02.
METALS = 0.014


def zero_age_line(points: int = 200) -> tuple[np.ndarray, np.ndarray]:
    """Return temperatures in K and luminosities in L_sun of stars of 0.1 to 100 solar masses.

    Tout et al. 1996, MNRAS 281, 257, at Z = 0.02.
    """
    mass = np.geomspace(0.1, 100.0, points)
    luminosity, radius = zero_age_luminosity(mass), zero_age_radius(mass)
    return T_SUN.value * (luminosity / radius**2) ** 0.25, np.asarray(luminosity)


def main_sequence_tracks(points: int = 40) -> dict[float, tuple[np.ndarray, np.ndarray]]:
    """Return mass -> temperatures and luminosities from zero age to the end of hydrogen."""
    grid = load_grid()
    stage = np.linspace(0.0, 1.0, points)
    found = {}
    for mass in MASSES:
        models = grid.at(np.log(mass), stage, np.log(METALS))
        found[mass] = 10.0**models.log_temperature, 10.0**models.log_luminosity
    return found
