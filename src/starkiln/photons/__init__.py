"""Planck's law in every form, the photon gas, and the colours of blackbodies.

`planck` takes any spectral variable, form and unit; `planck_wavelength` is the bare
kernel for plain arrays in SI units. Peaks, limits, temperatures read off a radiance,
parts of a band, grey and dilute emission stand beside it; `PhotonGas` has the
thermodynamics, `chromaticity` and `srgb` what the eye sees, and `photon_sums` answers
what is asked daily, each `Answer` with its formula and reference.
"""

from starkiln.photons._answers import INPUT, Answer, echo, spread
from starkiln.photons._colour import chromaticity, srgb
from starkiln.photons._emission import (
    colour_dilution,
    dilution_factor,
    equivalent_temperature,
    irradiance_factor,
)
from starkiln.photons._forms import (
    FORMS,
    VARIABLES,
    limit_errors,
    ln_planck,
    planck,
    rayleigh_jeans,
    reduced_energy,
    wien,
)
from starkiln.photons._fractions import band_exitance, effective_temperature, exitance, fraction
from starkiln.photons._gas import PhotonGas
from starkiln.photons._kernels import planck_wavelength
from starkiln.photons._peaks import peak, temperature_of_peak
from starkiln.photons._sums import photon_sums
from starkiln.photons._temperatures import (
    brightness_temperature,
    colour_ratio,
    colour_temperature,
    from_rayleigh_jeans,
    rayleigh_jeans_temperature,
    to_rayleigh_jeans,
)

__all__ = [
    "FORMS",
    "INPUT",
    "VARIABLES",
    "Answer",
    "PhotonGas",
    "band_exitance",
    "brightness_temperature",
    "chromaticity",
    "colour_dilution",
    "colour_ratio",
    "colour_temperature",
    "dilution_factor",
    "echo",
    "effective_temperature",
    "equivalent_temperature",
    "exitance",
    "fraction",
    "from_rayleigh_jeans",
    "irradiance_factor",
    "limit_errors",
    "ln_planck",
    "peak",
    "photon_sums",
    "planck",
    "planck_wavelength",
    "rayleigh_jeans",
    "rayleigh_jeans_temperature",
    "reduced_energy",
    "spread",
    "srgb",
    "temperature_of_peak",
    "to_rayleigh_jeans",
    "wien",
]
