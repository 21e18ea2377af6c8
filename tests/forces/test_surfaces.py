"""Pressure of light on surfaces, near stars and in columns; recoil and motion."""

import math
from functools import partial

import mpmath as mp
import numpy as np
import pytest
from astropy import units as u
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import dblquad, quad

from starkiln import forces
from starkiln.constants import A_RAD, AU, R_SUN, C
from starkiln.errors import InputError
from starkiln.forces import ABSORBER, MIRROR, Surface
from starkiln.photons import dilution_factor

#: Relative, unlike the default, which takes any two small numbers for equal.
approx = partial(pytest.approx, rel=1e-6, abs=0.0)

FLUX = 1361.0


def test_textbook_plates_at_an_angle():
    # A black plate: F/c cos^2 along the normal, F/c sin cos along it. A mirror: 2 F/c cos^2.
    angle = np.array([0.0, 30.0, 60.0])
    cosine, sine = np.cos(np.radians(angle)), np.sin(np.radians(angle))
    normal, along = forces.surface_pressure(FLUX, ABSORBER, angle=angle)
    np.testing.assert_allclose(normal.value, FLUX / C.value * cosine**2, rtol=1e-14)
    np.testing.assert_allclose(along.value, FLUX / C.value * cosine * sine, atol=1e-20)
    normal, along = forces.surface_pressure(FLUX, MIRROR, angle=angle)
    np.testing.assert_allclose(normal.value, 2 * FLUX / C.value * cosine**2, rtol=1e-14)
    np.testing.assert_allclose(along.value, 0.0, atol=1e-25)


def test_force_of_a_black_plate_points_along_the_beam():
    angle = np.array([5.0, 45.0, 85.0])
    normal, along = forces.surface_pressure(FLUX, angle=angle)
    np.testing.assert_allclose(np.degrees(np.arctan2(along.value, normal.value)), angle, rtol=1e-13)


def test_scattering_and_re_emission_recoil():
    # Lambert: the mean cosine of what leaves is 2/3, so head on 1 + 2/3.
    normal, along = forces.surface_pressure(FLUX, Surface(diffuse=1.0), angle=[0.0, 60.0])
    np.testing.assert_allclose(normal.value * C.value / FLUX, [5 / 3, 0.25 + 1 / 3], rtol=1e-14)
    np.testing.assert_allclose(along[1].value * C.value / FLUX, math.sqrt(3) / 4, rtol=1e-14)
    hot_front = Surface(re_emission=2.0 / 3.0)
    assert forces.surface_pressure(FLUX, hot_front)[0].value == approx(
        5 / 3 * FLUX / C.value, rel=1e-14
    )
    clear = Surface(transmitted=1.0)
    assert forces.surface_pressure(FLUX, clear, angle=20.0)[0].value == 0.0


def test_published_sail_model():
    # McInnes 1999, table 2.1 (from memory): an aluminised square sail, r = 0.88, s = 0.94,
    # e_f 0.05, e_b 0.55, B_f 0.79, B_b 0.55; head on F/c (1 + r s + B_f r (1 - s) + ...) = 1.816.
    specular, diffuse = 0.88 * 0.94, 0.88 * 0.06
    recoil = (0.05 * 0.79 - 0.55 * 0.55) / (0.05 + 0.55)
    sail = Surface(specular, diffuse, scattering_moment=0.79, re_emission=recoil)
    normal, along = forces.surface_pressure(FLUX, sail, angle=35.0)
    cosine, sine = math.cos(math.radians(35.0)), math.sin(math.radians(35.0))
    want = (1 + 0.88 * 0.94) * cosine**2 + 0.79 * 0.06 * 0.88 * cosine + 0.12 * recoil * cosine
    assert normal.value * C.value / FLUX == approx(want, rel=1e-13)
    assert along.value * C.value / FLUX == approx((1 - 0.88 * 0.94) * cosine * sine)
    head_on = forces.surface_pressure(FLUX, sail)[0].value * C.value / FLUX
    assert head_on == approx(1.816, abs=0.002)


@pytest.mark.parametrize(
    "surface", [ABSORBER, MIRROR, Surface(diffuse=1.0), Surface(0.3, 0.2, 0.1, 0.7, 0.4)]
)
def test_isotropic_pressure_is_the_mean_over_the_hemisphere(surface):
    # u c / 4 pi of radiance from every direction of half the sky.
    t = 5772.0
    radiance = A_RAD.value * t**4 * C.value / (4 * math.pi)

    def ring(theta):
        normal, _ = forces.surface_pressure(1.0, surface, angle=math.degrees(theta))
        return 2 * math.pi * radiance * normal.value * math.sin(theta)

    total, _ = quad(ring, 0.0, math.pi / 2, epsabs=0, epsrel=1e-12)
    assert forces.isotropic_wall_pressure(t, surface).value == approx(total, rel=1e-11)


def test_cavity_walls_feel_a_third_of_the_energy_density():
    third = A_RAD.value * 5772.0**4 / 3
    assert forces.isotropic_pressure(5772.0).value == approx(third, rel=1e-14)
    for surface in (MIRROR, Surface(diffuse=1.0)):
        assert forces.isotropic_wall_pressure(5772.0, surface).value == approx(third)
    # A black wall gives back u/6 by its own glow.
    assert forces.isotropic_wall_pressure(5772.0).value == approx(third / 2, rel=1e-14)


def test_uniform_disc_is_mcinnes_and_brown():
    x = np.array([1.0, 1.0 + 1e-9, 1.001, 1.5, 3.0, 215.0, 1e5])
    field = forces.star_field(1.0, 1.0, x * R_SUN.value * u.m)
    radial = (field.radial_pressure / field.flux).value * C.value
    with mp.workdps(40):
        q = [1 / mp.mpf(float(v)) ** 2 for v in x]
        closed = [float(mp.mpf(2) / 3 * (1 - (1 - v) ** mp.mpf("1.5")) / v) for v in q]
    # Next to the surface, distance over radius itself is rounded by the unit of the door.
    np.testing.assert_allclose(radial, closed, rtol=1e-12)
    # Energy density: 4 pi W I / c with I = F_surface / pi.
    w = dilution_factor(1.0, x)
    energy = (field.energy_density / field.flux).value * C.value
    np.testing.assert_allclose(energy, 4 * w * x**2, rtol=1e-7)
    trace = field.radial_pressure + 2 * field.transverse_pressure
    np.testing.assert_allclose(trace.value, field.energy_density.value, rtol=1e-14)


@pytest.mark.parametrize("law", [(0.6,), (0.4, 0.3), (1.0,), (0.2, 0.1, 0.3)])
@pytest.mark.parametrize("x", [1.0, 1.02, 2.0, 30.0])
def test_limb_darkened_star_against_direct_integration(law, x):
    # Over the sky as seen from the point, in the angle theta from the centre (scipy).
    field = forces.star_field(1.0, 1.0, x * R_SUN.value * u.m, limb_darkening=law)

    def intensity(theta):
        mu = math.sqrt(max(0.0, 1.0 - (x * math.sin(theta)) ** 2))
        return 1.0 - sum(c * (1 - mu) ** k for k, c in enumerate(law, start=1))

    edge = math.asin(1 / x)
    flux, energy, radial = (
        quad(
            lambda t, k=k: intensity(t) * math.cos(t) ** k * math.sin(t),
            0,
            edge,
            epsabs=0,
            epsrel=1e-10,
            limit=400,
        )[0]
        for k in (1, 0, 2)
    )
    got = (field.radial_pressure / field.flux).value * C.value
    assert got == approx(radial / flux, rel=1e-8)
    got = (field.energy_density / field.flux).value * C.value
    assert got == approx(energy / flux, rel=1e-8)


def test_tilted_plate_near_the_star_against_direct_integration():
    x, tilt = 2.0, math.radians(40.0)
    field = forces.star_field(1.0, 1.0, x * R_SUN.value * u.m)
    normal, along = field.plate_pressure(40.0)

    def ray(theta, phi):
        # Directions to the disc; the plate's normal is tilted in the plane phi = 0.
        to_star = np.array(
            [math.sin(theta) * math.cos(phi), math.sin(theta) * math.sin(phi), math.cos(theta)]
        )
        n = to_star @ np.array([math.sin(tilt), 0.0, math.cos(tilt)])
        t = to_star @ np.array([-math.cos(tilt), 0.0, math.sin(tilt)])
        return n, t, math.sin(theta)

    edge = math.asin(1 / x)
    total = [
        dblquad(f, 0, 2 * math.pi, 0, edge, epsrel=1e-9)[0]
        for f in (
            lambda t, p: ray(t, p)[0] ** 2 * ray(t, p)[2],
            lambda t, p: ray(t, p)[0] * ray(t, p)[1] * ray(t, p)[2],
            lambda t, _p: math.cos(t) * math.sin(t),
        )
    ]
    scale = field.flux.value / C.value / total[2]
    assert normal.value == approx(total[0] * scale, rel=1e-8)
    assert along.value == approx(total[1] * scale, rel=1e-8)


def test_column_leaves_the_beam_with_depth():
    column = np.linspace(0.0, 5.0, 6)
    drag = forces.photon_drag(FLUX, 0.7, column, angle=30.0)
    cosine = math.cos(math.radians(30.0))
    left = FLUX * np.exp(-0.7 * column / cosine)
    np.testing.assert_allclose(drag.transmitted.value, left, rtol=1e-13)
    np.testing.assert_allclose(drag.acceleration.value, 0.07 * left / C.value, rtol=1e-13)
    np.testing.assert_allclose(
        drag.normal_pressure.value, (FLUX - left) / C.value * cosine**2, atol=1e-20
    )
    np.testing.assert_allclose(drag.optical_depth, 0.7 * column, rtol=1e-14)


def test_column_pressure_is_the_integral_of_its_acceleration():
    flux, opacity = [100.0, 300.0, 50.0], [0.1, 2.0, 40.0]
    total, _ = quad(
        lambda m: forces.photon_drag(flux, opacity, m / 10).acceleration.value, 0, 12, epsrel=1e-10
    )
    drag = forces.photon_drag(flux, opacity, 1.2)
    assert drag.normal_pressure.value == approx(total, rel=1e-9)
    assert drag.optical_depth.shape == (3,)
    opaque = forces.photon_drag(flux, opacity, 1e6)
    assert opaque.normal_pressure.value == approx(450.0 / C.value, rel=1e-14)
    grey = forces.photon_drag(flux, 0.5, [0.0, 1.0])
    assert grey.transmitted[1].value == approx(450 * math.exp(-0.5), rel=1e-14)


def test_doppler_is_the_first_order_of_special_relativity():
    beta = 1e-4
    v = beta * C.value / 1e3
    still = forces.surface_pressure(FLUX, MIRROR)[0].value
    moving = forces.surface_pressure(FLUX, MIRROR, velocity=v)[0].value
    exact = (1 - beta) / (1 + beta)  # of a receding mirror (Einstein 1905, section 8)
    assert moving / still == approx(exact, abs=3 * beta**2)
    assert abs(moving / still - 1) == approx(2 * beta, rel=1e-9)
    assert forces.doppler_factor(v) == approx(math.sqrt(exact), abs=beta**2)


def test_drag_of_motion():
    radial, transverse = forces.moving_acceleration(1e-3, 3.0, 29.78)
    assert radial.value == approx(1e-3 * (1 - 2 * 3e3 / C.value), rel=1e-14)
    assert transverse.value == approx(-1e-3 * 29.78e3 / C.value, rel=1e-14)


def test_recoil_of_hydrogen():
    # Lyman alpha: 3.2550 m/s (from memory), and momentum over mass by hand.
    recoil = forces.recoil(121.567 * u.nm, 1.00782503 * u.u)
    assert recoil.velocity.value == approx(3.257, abs=0.003)
    assert recoil.energy.value == approx(
        0.5 * recoil.momentum.value * recoil.velocity.value, rel=1e-14
    )
    same = forces.recoil((121.567 * u.nm).to(u.eV, u.spectral()), 1.00782503 * u.u)
    assert same.velocity.value == approx(recoil.velocity.value, rel=1e-13)
    assert forces.recoil(121.567e-9, 1e-27).frequency_shift.unit == u.Hz


@given(st.floats(0, 1), st.floats(0, 1), st.floats(0, 90))
def test_pressure_lies_between_nothing_and_a_mirror(a, b, angle):
    first, second = min(a, b), abs(a - b)
    surface = Surface(first, second, 0.0)
    normal, along = forces.surface_pressure(1.0, surface, angle=angle)
    cosine = math.cos(math.radians(angle))
    assert 0 <= normal.value * C.value <= 2 * cosine + 1e-12
    assert along.value >= 0


BAD = [
    (lambda: forces.surface_pressure(-1.0), "irradiance = -1"),
    (lambda: forces.surface_pressure(1.0, angle=91.0), "angle = 91"),
    (lambda: forces.surface_pressure(1.0, velocity=1e5), "first order in v/c"),
    (lambda: forces.surface_pressure(1 * u.m), "'m'"),
    (lambda: Surface(0.7, 0.5), "add up to at most 1"),
    (lambda: Surface(-0.1), "specular = -0.1"),
    (lambda: forces.star_field(1.0, 1.0, 0.5 * R_SUN.value * u.m), "at least its radius"),
    (lambda: forces.star_field(1.0, 1.0, 1.0, limb_darkening=(1.5,)), "intensity negative"),
    (lambda: forces.star_field(1.0, 1.0, AU.value * u.m).plate_pressure(90.0), "cuts the star"),
    (lambda: forces.photon_drag([1.0, 2.0], [1.0, 2.0, 3.0], 1.0), "one of each per band"),
    (lambda: forces.photon_drag(1.0, -1.0, 1.0), "opacity = -1"),
    (lambda: forces.recoil(0.0, 1.0), "wavelength = 0"),
]


@pytest.mark.parametrize(("call", "says"), BAD, ids=[str(i) for i in range(len(BAD))])
def test_bad_input_gives_one_clear_line(call, says):
    with pytest.raises(InputError) as caught:
        call()
    assert says in str(caught.value)
