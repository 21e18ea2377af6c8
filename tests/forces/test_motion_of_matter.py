"""What light moves: Eddington limit, grains, sails, bodies, and their sums."""

import math
from functools import partial

import numpy as np
import pytest
from astropy import units as u
from scipy.integrate import solve_ivp

from starkiln import forces
from starkiln.constants import AU, GM_SUN, L_SUN, SIGMA_SB, SIGMA_T, YEAR, C
from starkiln.errors import ConvergenceError, InputError
from starkiln.forces import MIRROR, Surface

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)

SUN = 4.0 * math.pi * GM_SUN.value * C.value


def test_electron_opacity():
    # sigma_T / u = 0.40062 cm2 g-1 per electron and nucleon.
    nucleon = SIGMA_T.value / 1.66053906892e-27 * 10
    assert forces.electron_opacity(0.0).to_value("cm2/g") == approx(
        nucleon * 2 / 4.002602, rel=1e-6
    )
    np.testing.assert_allclose(
        forces.electron_opacity([0.0, 0.7, 1.0]).to_value("cm2/g"),
        0.2003 * (1 + np.array([0.0, 0.7, 1.0])),
        rtol=0.008,
    )
    # Metals have somewhat less than half an electron per nucleon.
    metals = forces.electron_opacity(0.7, metals=0.02).to_value("cm2/g")
    assert metals == approx(0.3382, abs=5e-5)


def test_eddington_identities():
    mass = np.array([1.0, 30.0, 1e8])
    limit = forces.eddington_luminosity(mass, hydrogen=0.74)
    np.testing.assert_allclose(forces.eddington_factor(limit, mass, hydrogen=0.74), 1.0, rtol=1e-14)
    np.testing.assert_allclose(
        forces.eddington_mass(limit, hydrogen=0.74).to_value("solMass"), mass, rtol=1e-14
    )
    # kappa L / 4 pi G M c by hand, with a user's opacity.
    assert forces.eddington_factor(1.0, 1.0, opacity=0.34) == approx(
        0.034 * L_SUN.value / SUN, rel=1e-14
    )
    # Textbook: log Gamma = -4.815 + log(1 + X) + log(L/M).
    gamma = forces.eddington_factor(1e5, 20.0, opacity=0.2 * 1.7)
    assert math.log10(gamma) == approx(-4.815 + math.log10(1.7 * 1e5 / 20), abs=1e-3)


def test_eddington_factor_without_a_distance():
    # g = G M / R^2 and L = 4 pi R^2 sigma T^4 make both the same.
    radius, mass, t = 10.0 * 6.957e8, 20.0, 35000.0
    gravity = mass * GM_SUN.value / radius**2
    power = 4 * math.pi * radius**2 * SIGMA_SB.value * t**4
    assert forces.surface_eddington_factor(t, gravity) == approx(
        forces.eddington_factor(power * u.W, mass), rel=1e-13
    )
    limit = forces.eddington_temperature(gravity)
    assert forces.surface_eddington_factor(limit, gravity) == approx(1.0, rel=1e-13)
    flux = SIGMA_SB.value * t**4
    push = forces.radiative_acceleration(flux, forces.electron_opacity(0.7))
    assert push.value / gravity == approx(forces.surface_eddington_factor(t, gravity), rel=1e-13)


def test_grain_beta_is_force_over_gravity():
    size, density, q = 2e-6, 2500.0, 0.8
    flux = L_SUN.value / (4 * math.pi * AU.value**2)
    push = q * math.pi * size**2 * flux / C.value
    weight = 4 / 3 * math.pi * size**3 * density * GM_SUN.value / AU.value**2
    assert forces.grain_beta(2.0, 2.5, efficiency=q) == approx(push / weight, rel=1e-14)
    blowout = forces.blowout_size(2.5, efficiency=q, eccentricity=[0.0, 0.4])
    np.testing.assert_allclose(
        forces.grain_beta(blowout, 2.5, efficiency=q), [0.5, 0.3], rtol=1e-14
    )


def test_blown_out_grain_has_the_energy_to_escape():
    # Released with the speed of its parent at periastron, under gravity times 1 - beta.
    for e in (0.0, 0.3, 0.9):
        beta = 0.5 * (1 - e)
        kinetic = 0.5 * (1 + e)  # G M / r_p = 1
        assert kinetic - (1 - beta) == approx(0.0, abs=1e-15)
        size = forces.blowout_size(1.0, eccentricity=e)
        assert forces.grain_beta(size, 1.0) == approx(beta, rel=1e-14)


def test_drag_time_against_integration_of_the_equations_of_motion():
    # A grain with beta = 0.2 close to a star whose light is made slow (C small) by units:
    # G M = 1, r = 1, c = 2000: t = c (1 - r1^2) / 4 beta, good to order beta / c.
    beta, light = 0.2, 2000.0

    def motion(_t, y):
        r, v_r, v_t = y
        push = beta / r**2
        return (
            v_r,
            v_t**2 / r - 1 / r**2 + push * (1 - 2 * v_r / light),
            -v_r * v_t / r - push * v_t / light,
        )

    def arrived(_t, y):
        return y[0] - 0.8

    arrived.terminal = True
    start = [1.0, 0.0, math.sqrt(1 - beta)]
    flight = solve_ivp(motion, (0, 1e5), start, "DOP853", events=arrived, rtol=1e-10, atol=1e-12)
    formula = light * (1 - 0.8**2) / (4 * beta)
    assert flight.t[-1] == approx(formula, rel=2e-3)
    ours = forces.drag_time(1.0, beta, final=0.8).value * YEAR.value
    physical = C.value * AU.value**2 * (1 - 0.8**2) / (4 * GM_SUN.value * beta)
    assert ours == approx(physical, rel=1e-14)


def test_efficiencies():
    # A black sphere, a white one scattering isotropically, and one that scatters straight on.
    got = forces.pressure_efficiency([1.0, 0.0, 0.0], [0.0, 1.0, 1.0], [0.0, 0.0, 1.0])
    np.testing.assert_array_equal(got, [1.0, 1.0, 0.0])


def test_planck_mean_of_a_power_law():
    # Q proportional to 1/lambda: the mean is that of frequency, zeta(5) 24 / (pi^4/15) k T / h c.
    from starkiln.constants import C2

    at = np.geomspace(1e-8, 1e-2, 6001)
    t = np.array([300.0, 5772.0])
    mean = forces.planck_mean(at, 1e-6 / at, t)
    exact = 24 * 1.0369277551433699 / (math.pi**4 / 15) * t / C2.value * 1e-6
    np.testing.assert_allclose(mean, exact, rtol=2e-6)
    np.testing.assert_allclose(forces.planck_mean([1e-7, 1e-5], [0.3, 0.3], t), 0.3, rtol=1e-13)


def test_sail_acceleration_components():
    # Ideal sail: a = 2 P / loading cos^2 along the normal, which leans by the cone angle.
    radial, forward = forces.sail_acceleration(10.0, 1.0, cone_angle=[0.0, 35.0, -35.0])
    full = 0.90807252
    cosine, sine = np.cos(np.radians([0, 35, -35])), np.sin(np.radians([0, 35, -35]))
    np.testing.assert_allclose(radial.value, full * cosine**3, rtol=1e-8)
    np.testing.assert_allclose(forward.value, full * cosine**2 * sine, rtol=1e-8)
    # A black sail is pushed along the light whatever its angle.
    radial, forward = forces.sail_acceleration(10.0, surface=Surface(), cone_angle=35.0)
    assert forward.value == approx(0.0, abs=1e-15)
    assert radial.value == approx(full / 2 * math.cos(math.radians(35)), rel=1e-8)
    assert forces.lightness_number(1.5313) == approx(1.0, rel=1e-5)
    acceleration = forces.sail_acceleration(forces.critical_loading(), 0.3)[0]
    assert acceleration.to_value("m/s2") == approx(forces.gravity_at(1.0, 0.3).value)


def test_radial_sail_escapes_where_the_energy_integral_says():
    # Head on, light weakens gravity to 1 - b: v^2/2 - (1 - b)/r is conserved, so that
    # v^2/2 - 1/r = 0 at r = b / (b - 1/2).
    lightness = 0.8
    flight = forces.fly_sail(forces.critical_loading() / lightness, 0.0)
    assert flight.reached == "escape"
    assert flight.distance.to_value("au") == approx(0.8 / 0.3, rel=1e-9)
    r = 0.8 / 0.3
    speed = math.sqrt(2 * GM_SUN.value / (r * AU.value)) / 1e3
    assert flight.speed.to_value("km/s") == approx(speed, rel=1e-9)
    assert flight.energy.value == approx(0.0, abs=1e-3)
    # Angular momentum is conserved too.
    bound = forces.fly_sail(forces.critical_loading() / 0.4, 0.0, time_limit=3.0)
    assert bound.reached == "time limit"
    # Below a half it stays bound: its apastron is 1 / (1 - 2 b).
    assert bound.distance.value <= 1 / (1 - 2 * 0.4) + 1e-9


def test_orbit_under_weakened_gravity_closes_after_its_kepler_period():
    lightness = 0.25
    axis = (1 - lightness) / (1 - 2 * lightness)
    period = (
        axis**1.5 / math.sqrt(1 - lightness) * 2 * math.pi * math.sqrt(AU.value**3 / GM_SUN.value)
    )
    loading = forces.critical_loading() / lightness
    flight = forces.fly_sail(loading, 0.0, time_limit=period * u.s)
    assert flight.distance.to_value("au") == approx(1.0, abs=1e-9)
    assert flight.turns == approx(1.0, abs=1e-9)


def test_spiral_agrees_with_the_logarithmic_spiral():
    # Bacon 1959; McInnes 1999, section 4.3: a heavy sail climbs as
    # r^1.5 - r0^1.5 = 1.5 t b sqrt(mu) * 2 cos^2(a) sin(a), to first order in b.
    cone = math.radians(35.2644)
    lightness = 1e-4
    flight = forces.fly_sail(
        forces.critical_loading() / lightness, math.degrees(cone), target=1.05, time_limit=500.0
    )
    unit = math.sqrt(AU.value**3 / GM_SUN.value)
    seconds = (1.05**1.5 - 1) / (3 * lightness * math.cos(cone) ** 2 * math.sin(cone)) * unit
    assert flight.reached == "target"
    # The start from a circle sets up an oscillation; at b = 1e-3 it moves the time by 1 per cent.
    assert flight.time.to_value("s") == approx(seconds, rel=5e-3)


def test_best_angle_of_a_slow_spiral():
    # cos^2 sin is largest at tan^2 = 1/2, 35.26 degrees (McInnes 1999).
    angle = np.linspace(30.0, 40.0, 1001)
    _, forward = forces.sail_acceleration(10.0, cone_angle=angle)
    assert angle[np.argmax(forward.value)] == approx(35.264, abs=0.01)


def test_flights_that_do_not_arrive():
    inward = forces.fly_sail(10.0, -35.0)
    assert inward.reached == "star"
    assert inward.distance.value == approx(1e-3, rel=1e-6)
    assert forces.fly_sail(10.0, -35.0, target=0.5).reached == "target"
    assert forces.fly_sail(10.0, 35.0, time_limit=0.1).reached == "time limit"


def test_bodies():
    assert forces.irradiance(1.0, 1.0).value == approx(1361.17, abs=0.01)
    # 4/9: a Lambert sphere, 2 integral of (2/3) cos^2 sin over the lit hemisphere.
    theta = np.linspace(0, math.pi / 2, 200001)
    recoil = np.trapezoid(2 * (2 / 3) * np.cos(theta) ** 2 * np.sin(theta), theta)
    assert forces.force_coefficient(1.0) == approx(1 + recoil, rel=1e-9)
    assert forces.force_coefficient(0.3) == approx(1 + 0.3 * recoil, rel=1e-9)
    assert forces.force_coefficient(0.0, hot_side_emits=True) == approx(1 + recoil)
    force = forces.light_force(20.0, 1.0, coefficient=1.3)
    assert force.value == approx(20 * 1.3 * 4.5403626e-6, rel=1e-8)
    # A black Earth: 5.79e8 N of light against 3.54e22 N of gravity (by hand).
    ratio = forces.light_to_gravity(forces.light_force(math.pi * 6.371e6**2, 1.0), 5.972e24, 1.0)
    assert ratio == approx(5.79e8 / 3.542e22, rel=2e-3)
    # The Earth without air: 254.6 K at Bond albedo 0.3 (from memory: 255 K).
    assert forces.equilibrium_temperature(1.0, albedo=0.3).value == approx(254.6, abs=0.1)
    plate = forces.equilibrium_temperature(1.0, area_ratio=1.0).value
    assert SIGMA_SB.value * plate**4 == approx(1361.1665, rel=1e-7)


def test_functions_take_draws():
    luminosity = np.array([0.9, 1.0, 1.1])
    for got in (
        forces.eddington_factor(luminosity, 1.0),
        forces.grain_beta(1.0, 3.0, luminosity=luminosity),
        forces.sail_acceleration(10.0, luminosity=luminosity)[0].value,
        forces.light_force(1.0, 1.0, luminosity=luminosity).value,
        forces.star_field(luminosity, 1.0, 1.0).radial_pressure.value,
    ):
        np.testing.assert_allclose(got / got[1], luminosity, rtol=1e-13)
    rows = forces.grain_sums(size=1.0, density=3.0, luminosity=luminosity)
    assert {np.shape(r.value) for r in rows} <= {(), (3,)}


SUMS = [
    lambda: forces.eddington_sums(mass=20.0, luminosity=5e4),
    lambda: forces.eddington_sums(temperature=35000.0, logg=4.0, opacity=0.34),
    lambda: forces.grain_sums(size=1.0, density=3.0),
    lambda: forces.sail_sums(loading=10.0, cone_angle=35.0, until=1.2),
    lambda: forces.sail_sums(loading=1.8, until="escape"),
    lambda: forces.light_sums(luminosity=1.0, distance=1.0, radius=1.0)[0],
    lambda: forces.surface_sums(1361.0, surface=MIRROR, area=2.0, body_mass=3.0),
    lambda: forces.wall_sums(5772.0),
    lambda: forces.body_sums(1361.0, radius=1e6),
]


@pytest.mark.parametrize("sums", SUMS)
def test_every_answer_has_formula_and_reference(sums):
    from starkiln.photons import INPUT

    rows = sums()
    assert len({r.quantity for r in rows}) == len(rows)
    for row in rows:
        assert row.formula
        assert (row.reference == "") == (row.formula == INPUT)
        assert np.isfinite(row.value)
        u.Unit(row.unit)


def test_light_of_a_star_by_temperature_or_luminosity():
    rows, flux = forces.light_sums(temperature=5772.0, radius=1.0, distance=1.0)
    _, same = forces.light_sums(luminosity=1.0, distance=1.0)
    assert flux == approx(same, rel=3e-6)
    assert {"irradiance", "disc_pressure", "energy_density"} <= {r.quantity for r in rows}
    _, isotropic = forces.light_sums(temperature=5772.0)
    assert isotropic is None


def test_values_of_sums_agree_with_the_functions():
    rows = {r.quantity: r.value for r in forces.grain_sums(size=1.0, density=3.0, distance=2.0)}
    assert rows["light_acceleration"] == approx(rows["beta"] * rows["gravity"], rel=1e-14)
    assert rows["gravity"] == approx(5.93e-3 / 4, rel=1e-4)
    assert rows["blowout_size"] == approx(2 * rows["beta"], rel=1e-14)
    rows = {r.quantity: r.value for r in forces.sail_sums(loading=10.0, distance=0.5)}
    assert rows["radial_acceleration"] == approx(4 * rows["characteristic_acceleration"], rel=1e-14)
    assert rows["pressure_head_on"] == approx(4 * 9.0807e-6, rel=1e-5)
    rows = {
        r.quantity: r.value
        for r in forces.surface_sums(
            1361.0, area=2.0, body_mass=3.0, angle=60.0, mass=1.0, distance=1.0
        )
    }
    assert rows["force"] == approx(rows["momentum_flux"] * 2.0 * 0.5, rel=1e-14)
    assert rows["acceleration"] == approx(rows["force"] / 3.0, rel=1e-14)
    assert rows["force_to_gravity"] == approx(rows["acceleration"] / 5.93e-3, rel=1e-4)


def test_planet():
    rows = {
        r.quantity: r.value
        for r in forces.body_sums(
            1361.17, radius=6.371e6, albedo=0.3, body_mass=5.972e24, mass=1.0, distance=1.0
        )
    }
    black = 1361.17 / C.value * math.pi * 6.371e6**2
    assert rows["force"] == approx(black * (1 + 0.3 * 4 / 9), rel=1e-14)
    assert rows["equilibrium_temperature"] == approx(254.6, abs=0.1)
    assert rows["force_to_gravity"] == approx(rows["force"] / 3.542e22, rel=1e-3)


def test_grain_that_light_overcomes_never_spirals():
    rows = {r.quantity: r.value for r in forces.grain_sums(size=[0.05, 1.0], density=1.0)}
    assert np.isnan(rows["drag_time"][0])
    assert rows["drag_time"][1] == approx(400.5 / rows["beta"][1], rel=1e-3)


BAD = [
    (lambda: forces.eddington_luminosity(0.0), "mass = 0 solMass"),
    (lambda: forces.eddington_luminosity(1.0, hydrogen=1.2), "hydrogen mass fraction = 1.2"),
    (lambda: forces.eddington_luminosity(1.0, opacity=0.0), "opacity = 0"),
    (lambda: forces.electron_opacity(0.9, metals=0.3), "helium mass fraction"),
    (lambda: forces.grain_beta(0.0, 1.0), "grain radius = 0 um"),
    (lambda: forces.blowout_size(1.0, eccentricity=1.0), "eccentricity = 1"),
    (lambda: forces.drag_time(1.0, 1.0), "beta = 1"),
    (lambda: forces.drag_time(1.0, 0.1, final=2.0), "only leads inward"),
    (lambda: forces.planck_mean([2e-6, 1e-6], [1, 1], 300.0), "the wavelengths rising"),
    (lambda: forces.sail_acceleration(-1.0), "loading = -1"),
    (lambda: forces.sail_acceleration(1.0, cone_angle=95.0), "cone angle = 95"),
    (lambda: forces.fly_sail(10.0, 35.0, target=1.0), "the one the flight starts from"),
    (lambda: forces.equilibrium_temperature(1.0, albedo=1.1), "albedo = 1.1"),
    (lambda: forces.light_force(1 * u.kg, 1.0), "'kg'"),
    (lambda: forces.eddington_sums(luminosity=1.0), "give a mass"),
    (lambda: forces.eddington_sums(mass=1.0, logg=4.0), "together"),
    (lambda: forces.light_sums(luminosity=1.0), "give the distance"),
    (lambda: forces.light_sums(radius=1.0), "give the light as"),
    (lambda: forces.light_sums(irradiance=1.0, distance=1.0), "twice over"),
]


@pytest.mark.parametrize(("call", "says"), BAD, ids=[str(i) for i in range(len(BAD))])
def test_bad_input_gives_one_clear_line(call, says):
    with pytest.raises(InputError) as caught:
        call()
    assert says in str(caught.value)


def test_sail_that_does_not_arrive_says_so():
    with pytest.raises(ConvergenceError, match="does not reach its target") as caught:
        forces.sail_sums(loading=100.0, cone_angle=20.0, until=30.0, time_limit=2.0)
    assert caught.value.partial.reached == "time limit"
