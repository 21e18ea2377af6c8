from pathlib import Path

import numpy as np
import pytest

from starkiln.constants import M_U
from starkiln.errors import InputError
from starkiln.matter import Composition, composition, gas_density, gas_state_si
from starkiln.matter import gas_state as state_with_units
from starkiln.matter._state import GasState

REFERENCE = np.loadtxt(
    Path(__file__).parent.parent / "reference" / "gas_state.csv", delimiter=",", skiprows=2
)
STAR = composition(0.70, 0.02)
CARBON_OXYGEN = Composition(0.0, 0.0, 1.0, 0.5 / 12.011 + 0.5 / 15.999, 0.5)

#: Densities (kg m-3) and temperatures (K) over the whole plane.
PLANE = np.meshgrid(10.0 ** np.arange(-6, 13.1, 1.0), 10.0 ** np.arange(4.0, 10.3, 0.5))


def gas_state(density, temperature, matter):
    """Return the state as plain numbers in the documented units."""
    state = state_with_units(density, temperature, matter)
    return GasState(**{key: getattr(value, "value", value) for key, value in vars(state).items()})


def test_against_multiprecision():
    # mpmath at 30 digits: scripts/make_fermi_reference.py.
    eta, temperature, density, *expected = REFERENCE.T
    state = gas_state_si(density, temperature, 0.77, 0.85)
    for name, values in zip(("gas_pressure", "energy", "entropy"), expected, strict=True):
        assert np.abs(getattr(state, name) / values - 1.0).max() < 1e-10, name
    assert np.abs(state.eta - eta).max() < 1e-9 * np.abs(eta).max()


def test_states_of_stars():
    # Independent calculation with the same physics: P_rad/P_gas to three or four digits.
    centre = gas_state([150e3], [1.55e7], composition(0.34, 0.02))
    assert centre.radiation_to_gas[0] == pytest.approx(6.331e-4, rel=5e-4)
    hot = gas_state([9e3, 2.1e3], [3.1e7, 3.93e7], STAR)
    assert hot.radiation_to_gas == pytest.approx([0.0623, 0.544], rel=2e-3)
    dwarf = gas_state([1e9, 1e9], [1e7, 2e9], CARBON_OXYGEN)
    assert dwarf.radiation_to_gas == pytest.approx([9.6e-10, 0.395], rel=0.01)


def test_cold_matter_is_chandrasekhars():
    # Chandrasekhar 1939: P = A f(x), A = 6.00233e21 Pa, rho = 9.73932e8 mu_e x^3 kg m-3.
    x = np.array([0.05, 1.0, 30.0])
    rho = 9.739322e8 * CARBON_OXYGEN.mu_electron * x**3
    f = x * (2 * x**2 - 3) * np.sqrt(1 + x**2) + 3 * np.arcsinh(x)
    state = gas_state(rho, 1e3, CARBON_OXYGEN)
    ions = rho / (CARBON_OXYGEN.mu_ion * M_U.value) * 1.380649e-23 * 1e3
    assert state.gas_pressure - ions == pytest.approx(6.00233e21 * f, rel=3e-5)


def _slope(function, h=1e-3):
    a, b, c, d = (function(np.exp(i * h)) for i in (-2, -1, 1, 2))
    return (8 * (c - b) - (d - a)) / (12 * h)


def test_thermodynamic_identities_over_the_plane():
    # The first law and Maxwell's relation, by five-point differences.
    rho, t = PLANE
    state = gas_state(rho, t, STAR)
    by_t = _slope(lambda f: gas_state(rho, t * f, STAR).entropy)
    assert by_t / state.heat_capacity == pytest.approx(np.ones_like(rho), abs=1e-9)
    by_rho = _slope(lambda f: gas_state(rho * f, t, STAR).entropy)
    maxwell = -state.pressure * state.chi_t / rho
    assert by_rho / (maxwell / t) == pytest.approx(np.ones_like(rho), abs=1e-9)
    heat = _slope(lambda f: gas_state(rho, t * f, STAR).energy)
    scale = np.maximum(1.0, state.energy / (state.heat_capacity * t))
    error = (heat / (state.heat_capacity * t) - 1.0) / scale
    assert np.abs(error).max() < 1e-9
    work = _slope(lambda f: gas_state(rho * f, t, STAR).gas_pressure)
    error = work / (state.chi_rho * state.pressure) - 1.0
    pairs = state.gas_pressure / (state.chi_rho * state.pressure)
    assert np.abs(error / np.maximum(1.0, pairs)).max() < 1e-9


def test_adiabatic_exponents_have_their_limits():
    # Monatomic gas 5/3 and 2/5; light 4/3 and 1/4.
    gas, light = (gas_state([rho], [t], STAR) for rho, t in ((10.0, 1e5), (1e-9, 1e6)))
    assert gas.gamma_1[0] == pytest.approx(5 / 3, abs=2e-4)
    assert gas.adiabatic_gradient[0] == pytest.approx(0.4, abs=2e-4)
    assert light.gamma_1[0] == pytest.approx(4 / 3, abs=1e-6)
    assert light.adiabatic_gradient[0] == pytest.approx(0.25, abs=1e-6)
    # u = 3 P of light.
    assert light.energy * light.density == pytest.approx(3 * light.radiation_pressure, rel=1e-6)


def test_relativistic_degenerate_matter_tends_to_four_thirds():
    state = gas_state([1e14], [1e6], STAR)
    assert state.gamma_1[0] == pytest.approx(4 / 3, abs=1e-3)


def test_density_from_pressure():
    rho, t = PLANE
    state = gas_state(rho, t, STAR)
    # Where light or pairs leave less than 1e-4 of the pressure to density it is not determined.
    good = state.chi_rho > 1e-4
    found = gas_density(state.pressure[good], t[good], STAR).to_value("kg m-3")
    assert found / rho[good] == pytest.approx(np.ones(good.sum()), abs=1e-10)


def test_quantities_and_broadcasting():
    from astropy import units as u

    state = state_with_units(150 * u.g / u.cm**3, [1e7, 1.5e7] * u.K, STAR)
    assert state.pressure.shape == (2,)
    plain = gas_state(150e3, [1e7, 1.5e7], STAR)
    assert state.pressure.to_value(u.Pa) == pytest.approx(plain.pressure)
    assert state.heat_capacity_p.unit.is_equivalent(u.J / u.K / u.kg)
    assert state.gamma_1 == pytest.approx(plain.gamma_1)


@pytest.mark.parametrize(
    ("density", "temperature", "words"),
    [
        (0.0, 1e7, "density = 0"),
        (-1.0, 1e7, "density = -1"),
        (1.0, 1e12, "temperature = 1e\\+12"),
        (1.0, np.nan, "temperature = nan"),
    ],
)
def test_bad_states_are_refused(density, temperature, words):
    with pytest.raises(InputError, match=words):
        gas_state(density, temperature, STAR)


def test_pressure_below_that_of_light_is_refused():
    with pytest.raises(InputError, match="light and pairs alone press more"):
        gas_density(1e10, 1e8, STAR)


def test_centre_and_run_of_the_sun():
    # Bahcall, Serenelli & Basu 2005, model BS05(OP): P_rad/P_gas from its table of T, rho, P
    # and composition. Coulomb forces, left out here, lower P_gas by about one per cent.
    rows = np.array(
        [
            # rho (g/cc), T (K), X, Y, P_rad/P_gas
            [152.9, 1.567e7, 0.34608, 0.63368, 6.4554e-4],
            [128.4, 1.488e7, 0.41315, 0.56663, 6.1517e-4],
            [35.29, 9.393e6, 0.68401, 0.29646, 4.4748e-4],
            [12.37, 6.822e6, 0.70759, 0.27111, 4.8234e-4],
            [3.885, 5.109e6, 0.71324, 0.26789, 6.4369e-4],
            [0.5, 3.125e6, 0.71827, 0.26322, 1.1406e-3],
            [0.0899, 1.352e6, 0.74045, 0.24248, 5.0695e-4],
            [0.02598, 5.967e5, 0.74045, 0.24248, 1.5219e-4],
        ]
    )
    for rho, t, x, y, expected in rows:
        state = gas_state([rho * 1e3], [t], composition(x, 1.0 - x - y))
        assert state.radiation_to_gas[0] == pytest.approx(expected, rel=0.03)
