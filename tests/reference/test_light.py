"""Published values of blackbody radiation, colours and light pressure (light.csv).

Every row names its source; `memory` in its status means that no copy of the source
was seen.
"""

import csv
import math
from pathlib import Path

import numpy as np
import pytest
from astropy import units as u

from starkiln import constants as k
from starkiln import forces, photons
from starkiln.photons._gas import MEAN_ENERGY, NUMBER
from starkiln.photons._kernels import power_law
from starkiln.photons._peaks import peak_exponent

ROWS = list(csv.DictReader((Path(__file__).parent / "light.csv").read_text().splitlines()))
SUN_AT_1_AU = forces.irradiance(1.0, 1.0)
CMB = photons.PhotonGas(2.7255)


def illuminant_a():
    # The standard defines it with c2 = 1.4350e-2 m K at 2848 K: that is 1.4388/1.4350 hotter now.
    return photons.chromaticity(2848.0 * k.C2.value / 1.4350e-2)


def hydrogen_limit():
    opacity = k.SIGMA_T.value / k.M_P.value * u.m**2 / u.kg
    return forces.eddington_luminosity(1.0, opacity=opacity).to_value("W")


COMPUTED = {
    "planck": lambda: k.H.value,
    "light_speed": lambda: k.C.value,
    "boltzmann": lambda: k.K_B.value,
    "stefan_boltzmann": lambda: photons.exitance(1.0).to_value("W / m2"),
    "second_radiation": lambda: power_law("wavelength", False).second,
    "first_radiation_radiance": lambda: power_law("wavelength", False).first,
    "wien_wavelength": lambda: photons.peak(1.0).to_value("m"),
    "wien_frequency": lambda: photons.peak(1.0, variable="frequency").to_value("Hz"),
    "wien_exponent_5": lambda: peak_exponent(5),
    "wien_exponent_3": lambda: peak_exponent(3),
    "mean_photon_energy": lambda: MEAN_ENERGY,
    "photon_number": lambda: NUMBER,
    "solar_radius": lambda: k.R_SUN.value,
    "solar_irradiance": lambda: k.S_SUN.value,
    "solar_luminosity": lambda: k.L_SUN.value,
    "solar_temperature": lambda: k.T_SUN.value,
    "solar_mass_parameter": lambda: k.GM_SUN.value,
    "zero_luminosity": lambda: k.L_BOL0.value,
    "zero_irradiance": lambda: k.F_BOL0.value,
    "solar_mbol": lambda: -2.5 * math.log10(k.L_SUN.value / k.L_BOL0.value),
    "solar_consistency": lambda: (
        4 * math.pi * k.R_SUN.value**2 * photons.exitance(5772.0).value / k.L_SUN.value
    ),
    "solar_angular_diameter": lambda: math.degrees(2 * k.R_SUN.value / k.AU.value) * 3600,
    "solar_logg": lambda: math.log10(100 * k.GM_SUN.value / k.R_SUN.value**2),
    "solar_mass": lambda: k.M_SUN.value,
    "illuminant_a": illuminant_a,
    "light_pressure_black": lambda: forces.surface_pressure(SUN_AT_1_AU)[0].to_value("Pa"),
    "light_pressure_mirror": lambda: forces.surface_pressure(SUN_AT_1_AU, forces.MIRROR)[0].value,
    "critical_loading": lambda: forces.critical_loading().to_value("g / m2"),
    "sail_acceleration": lambda: forces.sail_acceleration(10.0)[0].to_value("mm / s2"),
    "grain_coefficient": lambda: forces.grain_beta(1.0 * u.cm, 1.0),
    "drag_time_coefficient": lambda: forces.drag_time(1.0, 0.5).to_value("yr") * 0.5,
    "drag_time_grain": lambda: forces.drag_time(1.0, forces.grain_beta(1.0, 3.0)).value / 3e-4,
    "eddington_hydrogen": hydrogen_limit,
    "eddington_sun": lambda: forces.eddington_factor(1.0, 1.0, opacity=0.2 * 1.7374),
    "electron_opacity": lambda: forces.electron_opacity(0.7).to_value("cm2 / g"),
    "photosphere_pressure": lambda: forces.isotropic_pressure(5772.0).to_value("Pa"),
    "photosphere_momentum": lambda: forces.photon_momentum_flux(photons.exitance(5772.0)).value,
    "sodium_recoil": lambda: forces.recoil(589.158 * u.nm, 22.98977 * u.u).velocity.to_value(
        "cm / s"
    ),
    "cmb_number": lambda: CMB.number.to_value("cm-3"),
    "cmb_energy": lambda: CMB.energy.to_value("eV / cm3"),
    "cmb_peak": lambda: photons.peak(2.7255, variable="frequency").to_value("GHz"),
}


def compute(key):
    if key.startswith("fraction_"):
        return photons.fraction(0.0, float(key.split("_")[1]) * 1e-6, 1.0)
    if key.startswith("chromaticity_"):
        return photons.chromaticity(float(key.split("_")[1]))
    return COMPUTED[key]()


@pytest.mark.parametrize("row", ROWS, ids=[f"{i}-{r['key']}" for i, r in enumerate(ROWS)])
def test_agrees_with_the_published_value(row):
    published = np.array([float(v) for v in row["value"].split(";")])
    np.testing.assert_allclose(
        compute(row["key"]), np.squeeze(published), rtol=2e-16, atol=float(row["tolerance"])
    )


def test_every_computation_has_a_row():
    assert set(COMPUTED) <= {row["key"] for row in ROWS}
