import mpmath
import numpy as np
import pytest

from starkiln.errors import InputError
from starkiln.interiors import (
    central_light_limit,
    standard_mass,
    standard_model,
    standard_profile,
)
from starkiln.interiors._standard import limit_scale, mass_scale


def test_mass_scales():
    # Independent calculation with CODATA constants: 18.28715 and 5.54868 solar masses;
    # 0.00299025 is the coefficient of Eddington's quartic with the atomic mass constant.
    assert mass_scale() == pytest.approx(18.28715, abs=1e-5)
    assert limit_scale() == pytest.approx(5.54868, abs=1e-5)
    assert mass_scale() ** -2 == pytest.approx(0.00299025, abs=1e-8)


@pytest.mark.parametrize("mass", np.logspace(-6, 8, 29))
def test_quartic_to_machine_precision(mass):
    # mpmath root of the quartic at 40 digits.
    light, gas = standard_model(mass, 0.62)
    with mpmath.workdps(40):
        q = (mpmath.mpf(float(mass)) * mpmath.mpf(0.62) ** 2 / mpmath.mpf(mass_scale())) ** 2
        start = mpmath.log(mpmath.mpf(float(light)) / mpmath.mpf(float(gas)))
        z = mpmath.findroot(lambda t: t + 3 * mpmath.log1p(mpmath.e**t) - mpmath.log(q), start)
        exact_light, exact_gas = 1 / (1 + mpmath.e**-z), 1 / (1 + mpmath.e**z)
        assert abs(float(light / exact_light - 1)) < 1e-15
        assert abs(float(gas / exact_gas - 1)) < 1e-15


def test_mass_of_given_share():
    # M mu^2 by independent calculation, printed to four digits.
    shares = [0.01, 0.03, 0.1, 0.2, 0.3, 0.5, 0.9]
    masses = [1.866, 3.366, 7.139, 12.78, 20.44, 51.72, 1735.0]
    assert standard_mass(shares, 1.0).value == pytest.approx(masses, rel=3e-4)
    light, _ = standard_model(standard_mass(shares, 0.6), 0.6)
    assert light == pytest.approx(shares, rel=1e-13)


def test_capella_of_1926():
    # Eddington 1926, section 105: M = 4.18, mu = 2.11 give 1 - beta = 0.283 with the
    # coefficient 0.00309 of his time, which stands for a larger mass here.
    scaled = 4.18 * np.sqrt(0.00309) * mass_scale()
    assert standard_model(scaled, 2.11)[0] == pytest.approx(0.283, abs=5e-4)


def test_profile_holds_the_share_of_light_and_the_gas_law():
    # Identities: a T^4/3 = (1 - beta) P and rho k T/(mu m_u) = beta P everywhere.
    from astropy import constants
    from astropy import units as u

    profile = standard_profile(10.0, 4.0, 0.62)
    light, gas = standard_model(10.0, 0.62)
    a_rad = 4 * constants.sigma_sb / constants.c
    photons = (a_rad * profile.temperature**4 / 3).to(u.Pa)
    ideal = (profile.density * constants.k_B * profile.temperature / (0.62 * constants.u)).to(u.Pa)
    inside = slice(0, -1)
    assert (photons[inside] / profile.pressure[inside]).value == pytest.approx(
        float(light), rel=1e-9
    )
    assert (ideal[inside] / profile.pressure[inside]).value == pytest.approx(float(gas), rel=2e-6)


def test_central_limit_is_above_the_standard_model():
    masses = np.logspace(-2, 4, 50)
    assert np.all(central_light_limit(masses, 0.62) > standard_model(masses, 0.62)[0])
    # Limit for M mu^2 = C*, where sqrt(y)/(1 - y)^2 = 1.
    y = central_light_limit(limit_scale(), 1.0)
    assert np.sqrt(y) == pytest.approx((1 - y) ** 2, rel=1e-12)


@pytest.mark.parametrize(("mass", "mu"), [(0.0, 0.6), (-1.0, 0.6), (np.inf, 0.6), (1.0, 0.0)])
def test_bad_values_are_refused(mass, mu):
    with pytest.raises(InputError, match="out of bounds"):
        standard_model(mass, mu)
