import math
from pathlib import Path

import numpy as np
import pytest

from starkiln.errors import InputError
from starkiln.interiors import Polytrope

REFERENCE = np.loadtxt(
    Path(__file__).parent.parent / "reference" / "lane_emden.csv", delimiter=",", skiprows=2
)


@pytest.mark.parametrize("row", REFERENCE, ids=lambda row: f"n={row[0]:g}")
def test_against_multiprecision(row):
    # tests/reference/lane_emden.csv: printed to 12 digits (xi_1, omega), 9 and 8 the rest.
    star = Polytrope(row[0])
    assert star.xi_1 == pytest.approx(row[1], rel=4e-12)
    assert star.omega == pytest.approx(row[2], rel=3e-12)
    assert star.density_ratio == pytest.approx(row[3], rel=2e-9)
    assert star.radius_coefficient == pytest.approx(row[4], rel=4e-8)
    assert star.pressure_coefficient == pytest.approx(row[5], rel=4e-8)


@pytest.mark.parametrize(
    ("n", "xi_1", "omega"),
    # Analytic: theta = 1 - xi^2/6 and sin(xi)/xi.
    [(0.0, math.sqrt(6.0), 2.0 * math.sqrt(6.0)), (1.0, math.pi, math.pi)],
)
def test_analytic_solutions(n, xi_1, omega):
    star = Polytrope(n)
    assert star.xi_1 == pytest.approx(xi_1, rel=1e-12)
    assert star.omega == pytest.approx(omega, rel=1e-12)


def test_inner_solution_near_index_five():
    # At n = 5 theta = (1 + xi^2/3)^(-1/2); xi_1 -> 32 sqrt(3)/(pi (5 - n)).
    star = Polytrope(4.9999)
    assert star.xi_1 * 1e-4 == pytest.approx(32.0 * math.sqrt(3.0) / math.pi, rel=1e-4)
    profile = star.profile(1.0, 1.0, points=400)
    xi = profile.radius.value * star.xi_1
    inside = xi < 10.0
    assert np.allclose(profile.theta[inside], (1 + xi[inside] ** 2 / 3) ** -0.5, rtol=2e-4)


@pytest.mark.parametrize("n", [0.0, 0.5, 1.5, 2.7, 3.0, 4.5])
def test_profile_keeps_hydrostatic_balance_and_the_virial_theorem(n):
    # Identity: 3 * integral of P dV = -(gravitational energy) of a star at rest.
    star = Polytrope(n)
    profile = star.profile(2.0, 3.0, points=6001)
    radius, pressure = profile.radius.to_value("m"), profile.pressure.to_value("Pa")
    thermal = 3.0 * np.trapezoid(pressure * 4 * np.pi * radius**2, radius)
    assert thermal == pytest.approx(-star.gravitational_energy(2.0, 3.0).value, rel=3e-6)
    assert profile.mass.value[-1] == pytest.approx(2.0, rel=1e-12)
    assert profile.radius.value[-1] == pytest.approx(3.0, rel=1e-12)
    mass = np.trapezoid(profile.density.value * 4 * np.pi * radius**2, radius)
    assert mass == pytest.approx(profile.mass.to_value("kg")[-1], rel=1e-5)


@pytest.mark.parametrize("n", [-0.1, 5.0, 7.0, float("nan"), "three"])
def test_bad_index_is_refused(n):
    with pytest.raises(InputError, match="index n"):
        Polytrope(n)


def test_bad_star_is_refused():
    with pytest.raises(InputError, match="mass"):
        Polytrope(3).profile(0.0, 1.0)
    with pytest.raises(InputError, match="at least 10"):
        Polytrope(3).profile(1.0, 1.0, points=3)
