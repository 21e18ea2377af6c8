import numpy as np
import pytest

from starkiln.constants import A_RAD, G
from starkiln.errors import InputError
from starkiln.interiors import (
    standard_model,
    structure,
    zero_age_luminosity,
    zero_age_radius,
)


@pytest.fixture(scope="module")
def ten():
    return structure(10.0)


@pytest.mark.parametrize("mass", [1.6, 2.0, 3.0, 5.0, 8.0, 15.0, 25.0, 40.0, 60.0, 100.0])
def test_zero_age_luminosity_and_radius(mass):
    # Tout et al. 1996, eqs. 1 and 2, at Z = 0.02 (in-sample: the opacity is calibrated on them).
    model = structure(mass)
    assert model.luminosity.value == pytest.approx(zero_age_luminosity(mass), rel=0.05)
    assert model.radius.value == pytest.approx(zero_age_radius(mass), rel=0.05)


@pytest.mark.parametrize("metals", [0.01, 0.03])
@pytest.mark.parametrize("mass", [2.0, 7.0, 30.0])
def test_other_metal_fractions(mass, metals):
    # The same relation: 10 per cent in L and 6 in R.
    model = structure(mass, metals=metals)
    assert model.luminosity.value == pytest.approx(zero_age_luminosity(mass, metals), rel=0.10)
    assert model.radius.value == pytest.approx(zero_age_radius(mass, metals), rel=0.06)


@pytest.mark.parametrize(
    ("mass", "temperature", "density", "centre", "volume"),
    # An independent shooting code with the same physics and classical opacity; shares of light
    # depend on opacity hardly at all.
    [
        (10.0, 30.1e6, 8.18, 0.0592, 0.0390),
        (40.0, 37.4e6, 2.43, 0.288, 0.240),
        (100.0, 41.0e6, 1.43, 0.475, 0.440),
    ],
)
def test_centres_of_independent_models(mass, temperature, density, centre, volume):
    model = structure(mass)
    assert model.shell_temperature.value[0] == pytest.approx(temperature, rel=0.01)
    assert model.density.to_value("g cm-3")[0] == pytest.approx(density, rel=0.02)
    assert model.radiation_fraction_core == pytest.approx(centre, rel=0.01)
    assert model.radiation_fraction == pytest.approx(volume, rel=0.01)


def test_standard_model_is_the_volume_mean():
    # Independent calculation: equal to 3 per cent at 5-20 solar masses, 1 per cent above 40.
    for mass, tolerance in ((5.0, 0.03), (20.0, 0.03), (60.0, 0.01)):
        model = structure(mass)
        share, _ = standard_model(mass, model.matter.mu)
        assert model.radiation_fraction == pytest.approx(float(share), rel=tolerance)


def test_virial_theorem(ten):
    # Identity: 3 times the volume integral of P is minus the gravitational energy.
    radius, mass = ten.shell_radius.to_value("m"), ten.mass.to_value("kg") * ten.mass_fraction
    thermal = 3.0 * np.trapezoid(ten.pressure.value, 4.0 / 3.0 * np.pi * radius**3)
    gravity = np.trapezoid(G.value * mass / radius, mass)
    surface = 4.0 * np.pi * radius[-1] ** 3 * ten.pressure.value[-1]
    assert thermal - surface == pytest.approx(gravity, rel=2e-3)


def test_surface_and_light(ten):
    # Stefan-Boltzmann, and P_rad = a T^4/3.
    from astropy import constants
    from astropy import units as u

    shine = 4 * np.pi * ten.radius**2 * constants.sigma_sb * ten.temperature**4
    assert shine.to_value(u.L_sun) == pytest.approx(ten.luminosity.value, rel=1e-5)
    light = A_RAD.value * ten.shell_temperature.value**4 / 3.0
    assert ten.radiation_pressure.value == pytest.approx(light, rel=1e-12)
    # Grey photosphere at tau = 2/3: P = (2/3) g/kappa above a T^4/6 (Eddington's approximation).
    gravity = (constants.G * ten.mass / ten.radius**2).to_value("m s-2")
    top = 2.0 / 3.0 * gravity / ten.opacity.value[-1] + 0.5 * light[-1]
    assert ten.pressure.value[-1] == pytest.approx(top, rel=1e-4)
    assert ten.radiation_fraction_at(0.0) == ten.radiation_fraction_core
    assert ten.convective[0]
    assert not ten.convective[150]


def test_more_helium_means_more_light():
    # Eddington: light's share grows with M mu^2.
    rich, poor = structure(20.0, hydrogen=0.4), structure(20.0, hydrogen=0.7)
    assert rich.radiation_fraction > 1.3 * poor.radiation_fraction
    share, _ = standard_model(20.0, rich.matter.mu)
    assert rich.radiation_fraction == pytest.approx(float(share), rel=0.03)


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ({"mass": 1.0}, "partial ionisation is left out"),
        ({"mass": 150.0}, "mass loss is left out"),
        ({"mass": -1.0}, "above 0"),
        ({"mass": 10.0, "hydrogen": 0.1}, "between 0.3 and 0.77"),
        ({"mass": 10.0, "metals": 0.05, "hydrogen": 0.7}, "between 0.0001 and 0.03"),
        ({"mass": [5.0, 6.0]}, "one number"),
    ],
)
def test_refusals(arguments, words):
    with pytest.raises(InputError, match=words):
        structure(**arguments)
