import numpy as np
import pytest

from starkiln.interiors._burning import HYDROGEN_ENERGY, burning_rate
from starkiln.interiors._convection import gradient
from starkiln.interiors._equations import system
from starkiln.interiors._henyey import relax
from starkiln.interiors._local import Local
from starkiln.interiors._mesh import make_mesh
from starkiln.interiors._start import from_polytrope, make_problem
from starkiln.interiors._structure import solve_homogeneous
from starkiln.matter import CALIBRATED, composition, rosseland_opacity, thomson_opacity


def test_mixing_length_cubic_and_its_limits():
    # The root satisfies (xi - U)^3 + (8 U/9)(xi^2 - U^2 - W) = 0, by substitution.
    u = np.array([1e-8, 1e-4, 0.1, 3.0, 1e3])
    radiative, adiabatic = np.full(5, 1.3), np.full(5, 0.35)
    found = gradient(radiative, adiabatic, u)
    xi = np.sqrt(found - adiabatic + u**2)
    left = (xi - u) ** 3 + 8 * u / 9 * (xi**2 - u**2 - 0.95)
    assert np.abs(left / ((xi - u) ** 3 + 8 * u / 9 * 0.95)).max() < 1e-6
    # Deep down convection is adiabatic, in thin layers it carries nothing.
    assert found[0] == pytest.approx(0.35, abs=1e-4)
    assert found[-1] == pytest.approx(1.3, rel=1e-3)
    # Stable layers radiate.
    assert gradient(np.array([0.2]), np.array([0.4]), np.array([1e-6]))[0] == 0.2


def test_energy_at_the_centre_of_the_sun():
    # About 17 erg/g/s in standard solar models (common value, MEMORY), 1.7e-3 W/kg. Honest
    # figure: 2.1e-3, with the CNO rate from before its new measurement of 2004, as the models
    # of Tout et al. 1996 have it, and psi for less helium than the Sun's centre holds.
    rate = burning_rate(152.9e3, 1.567e7, 0.346, 0.02)
    assert rate == pytest.approx(1.7e-3, rel=0.25)


def test_burning_grows_as_the_textbooks_say():
    # pp about T^4 at 1.5e7 K without CNO, CNO about T^18 at 2.5e7 K (Kippenhahn et al.).
    def power(t, metals):
        rates = [np.log(burning_rate(1e4, t * f, 0.7, metals)) for f in (0.99, 1.01)]
        return (rates[1] - rates[0]) / np.log(1.01 / 0.99)

    assert power(1.2e7, 0.0) == pytest.approx(4.3, abs=0.6)
    assert power(2.5e7, 0.02) == pytest.approx(16.5, abs=1.5)
    # 26.73 MeV a helium nucleus less neutrinos: 6.0e14 J/kg.
    assert pytest.approx(6.0e14, rel=0.01) == HYDROGEN_ENERGY


def test_opacity_limits():
    # Thin and hot: Thomson scattering (with its fall of 6 per cent at 2e7 K); the base of the
    # Sun's convection zone: 20 cm2/g, and its centre: 1.2 (common values, MEMORY).
    matter = composition(0.70, 0.02)
    thin = rosseland_opacity(1e-4, 5e6, 0.70, 1e-12)
    assert thin == pytest.approx(thomson_opacity(matter), rel=0.03)
    assert rosseland_opacity(190.0, 2.2e6, 0.735, 0.018) == pytest.approx(2.0, rel=0.25)
    assert rosseland_opacity(150e3, 1.55e7, 0.34, 0.02) == pytest.approx(0.12, rel=0.25)
    # The iron bump: a local maximum at log T = 5.26 of thin matter.
    log_t = np.linspace(5.0, 5.6, 61)
    run = rosseland_opacity(1e-4 * 10 ** (3 * (log_t - 5.26)), 10**log_t, 0.70, 0.02)
    assert log_t[np.argmax(run[10:]) + 10] == pytest.approx(5.26, abs=0.06)


def test_mesh_is_even_in_its_own_variable():
    mesh = make_mesh(200, 1e-8)
    assert mesh.fraction[0] == 1e-6
    assert mesh.fraction[-1] == 1.0
    assert np.all(np.diff(mesh.fraction) > 0.0)
    # The slope is the derivative of the fraction by the point's number.
    middle = (mesh.fraction[2:] - mesh.fraction[:-2]) / 2.0
    assert mesh.slope[3:-3] == pytest.approx(middle[2:-2], rel=0.03)


def test_matrix_is_the_derivative_of_the_residuals():
    # Central differences of the residuals themselves.
    problem = make_problem(20.0, composition(0.70, 0.02), 60, CALIBRATED)
    y = relax(problem, from_polytrope(problem)).unknowns
    _, diagonals = system(problem, y, Local(problem, y, None))
    for point in (0, 7, 30, 59):
        for unknown in range(4):
            sides = []
            for nudge in (1e-5, -1e-5):
                moved = y.copy()
                moved[unknown, point] += nudge
                sides.append(system(problem, moved, Local(problem, moved, None))[0])
            slope = (sides[0] - sides[1]) / 2e-5
            column = 4 * point + unknown
            rows = np.arange(max(0, column - 5), min(slope.size, column + 6))
            matrix = diagonals[5 + rows - column, column]
            assert matrix == pytest.approx(slope[rows], abs=1e-3 * np.abs(slope).max())


def test_error_falls_with_the_square_of_the_points():
    matter = composition(0.70, 0.02)
    radii = []
    for points in (150, 300, 600):
        _, shells = solve_homogeneous(10.0, matter, points=points)
        radii.append(shells.unknowns[0, -1])
    assert (radii[0] - radii[1]) / (radii[1] - radii[2]) == pytest.approx(4.0, rel=0.2)
    assert abs(radii[1] - radii[2]) < 5e-3
