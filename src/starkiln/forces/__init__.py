"""What light pushes: the Eddington limit, surfaces, gas columns, grains, sails, bodies.

Functions take quantities or bare numbers in the unit that they state, broadcast over
arrays (draws of a posterior, for example), and return quantities. The optical
coefficients of a plate are a `Surface`; the field near a star of finite size is a
`StarField`.
"""

from starkiln.forces._bodies import (
    equilibrium_temperature,
    force_coefficient,
    irradiance,
    light_force,
    light_to_gravity,
)
from starkiln.forces._column import PhotonDrag, photon_drag
from starkiln.forces._eddington import (
    eddington_factor,
    eddington_luminosity,
    eddington_mass,
    eddington_temperature,
    electron_opacity,
    gravity_at,
    radiative_acceleration,
    surface_eddington_factor,
)
from starkiln.forces._grains import (
    blowout_size,
    drag_time,
    grain_beta,
    planck_mean,
    pressure_efficiency,
)
from starkiln.forces._motion import (
    Recoil,
    doppler_factor,
    moving_acceleration,
    photon_momentum_flux,
    recoil,
)
from starkiln.forces._sails import (
    SailFlight,
    critical_loading,
    fly_sail,
    lightness_number,
    sail_acceleration,
)
from starkiln.forces._starfield import StarField, star_field
from starkiln.forces._sums import eddington_sums, grain_sums, sail_sums
from starkiln.forces._surface import (
    ABSORBER,
    MIRROR,
    Surface,
    isotropic_pressure,
    isotropic_wall_pressure,
    surface_pressure,
)
from starkiln.forces._surface_sums import body_sums, light_sums, surface_sums, wall_sums

__all__ = [
    "ABSORBER",
    "MIRROR",
    "PhotonDrag",
    "Recoil",
    "SailFlight",
    "StarField",
    "Surface",
    "blowout_size",
    "body_sums",
    "critical_loading",
    "doppler_factor",
    "drag_time",
    "eddington_factor",
    "eddington_luminosity",
    "eddington_mass",
    "eddington_sums",
    "eddington_temperature",
    "electron_opacity",
    "equilibrium_temperature",
    "fly_sail",
    "force_coefficient",
    "grain_beta",
    "grain_sums",
    "gravity_at",
    "irradiance",
    "isotropic_pressure",
    "isotropic_wall_pressure",
    "light_force",
    "light_sums",
    "light_to_gravity",
    "lightness_number",
    "moving_acceleration",
    "photon_drag",
    "photon_momentum_flux",
    "planck_mean",
    "pressure_efficiency",
    "radiative_acceleration",
    "recoil",
    "sail_acceleration",
    "sail_sums",
    "star_field",
    "surface_eddington_factor",
    "surface_pressure",
    "surface_sums",
    "wall_sums",
]
