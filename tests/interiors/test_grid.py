import numpy as np
import pytest

from starkiln.errors import InputError
from starkiln.interiors import load_grid, pressure_ratio, standard_model, structure
from starkiln.interiors._evolution import evolve, mixed_fraction, summary
from starkiln.matter import composition, hydrogen_of_metals

#: Schaller et al. 1992, A&AS 96, 269, Table 1 (Z = 0.02): solar mass -> hydrogen burning in
#: 1e6 yr, with overshoot and, at the heavy end, mass loss (MEMORY).
LIFETIMES = {2: 1115.9, 3: 352.5, 5: 94.46, 9: 26.39, 15: 11.58, 20: 8.14, 40: 4.30, 60: 3.45}


@pytest.mark.parametrize(("mass", "myr"), LIFETIMES.items())
def test_lifetimes_of_published_tracks(mass, myr):
    # Honest figure: 17 per cent short at 2 solar masses, within 10 from 5 on.
    found = load_grid().at(np.log(mass), 1.0, np.log(0.02)).lifetime_myr
    assert found == pytest.approx(myr, rel=0.18 if mass < 4 else 0.10)


@pytest.mark.parametrize(("mass", "metals"), [(2.3, 0.012), (11.1, 0.0025), (47.0, 0.021)])
def test_zero_age_agrees_with_a_direct_solution(mass, metals):
    # The engine behind the grid: stated error 0.3 per cent at zero age.
    model = structure(mass, metals=metals)
    point = load_grid().at(np.log(mass), 0.0, np.log(metals))
    assert 10**point.log_luminosity == pytest.approx(model.luminosity.value, rel=3e-3)
    assert 10**point.log_radius == pytest.approx(model.radius.value, rel=3e-3)
    assert point.share_core == pytest.approx(model.radiation_fraction_core, rel=2e-3)
    assert point.share_volume == pytest.approx(model.radiation_fraction, rel=2e-3)
    depths = model.radiation_fraction_at(load_grid().depths)
    assert point.share_at == pytest.approx(depths, rel=5e-3)


@pytest.mark.long
@pytest.mark.parametrize(("mass", "metals"), [(3.1, 0.012), (17.0, 0.0055), (52.0, 0.013)])
def test_evolved_models_agree_with_a_direct_solution(mass, metals):
    # Stated error: 0.5 per cent in L and P_rad/P, 1 in R (3 above 40 solar masses) and in age.
    matter = composition(float(hydrogen_of_metals(metals)), metals)
    grid = load_grid()
    epochs = evolve(mass, matter)
    for epoch in epochs[3:-1:6]:
        stage = grid.stage(epoch.hydrogen / matter.hydrogen)
        point = grid.at(np.log(mass), stage, np.log(metals))
        log_l, log_r, age, core, volume, *_ = summary(epoch)
        assert 10 ** (point.log_luminosity - log_l) == pytest.approx(1.0, rel=0.005)
        limit = 0.03 if mass > 40 else 0.01
        assert 10 ** (point.log_radius - log_r) == pytest.approx(1.0, rel=limit)
        assert point.age_fraction * point.lifetime_myr == pytest.approx(age, rel=0.01)
        assert point.share_core == pytest.approx(10**core, rel=0.005)
        assert point.share_volume == pytest.approx(10**volume, rel=0.005)


@pytest.mark.long
def test_hydrogen_burnt_pays_for_the_light():
    # Conservation: energy radiated is hydrogen burnt times its yield.
    from starkiln.interiors._burning import HYDROGEN_ENERGY

    epochs = evolve(10.0, composition(0.70, 0.02))
    age = np.array([epoch.age_s for epoch in epochs])
    light = [epoch.shells.unknowns[3, -1] * epoch.problem.luminosity_w for epoch in epochs]
    last = epochs[-1].problem
    grid = np.concatenate([[0.0], last.mesh.fraction])
    left = np.trapezoid(np.concatenate([last.hydrogen[:1], last.hydrogen]), grid)
    burnt = (0.70 - left) * last.mass_kg
    assert np.trapezoid(light, age) == pytest.approx(burnt * HYDROGEN_ENERGY, rel=0.01)
    sizes = [mixed_fraction(epoch.problem, epoch.shells) for epoch in epochs]
    assert np.all(np.diff(sizes) < 1e-3)


def test_stage_and_age_run_from_zero_to_one():
    grid = load_grid()
    assert grid.stage(1.0) == pytest.approx(0.0)
    assert grid.hydrogen_share(grid.stage(0.3)) == pytest.approx(0.3)
    stage = grid.stage_of_age(np.log(10.0), np.array([0.0, 0.5, 1.0]), np.log(0.02))
    assert stage[0] == 0.0
    assert stage[2] == 1.0
    assert grid.at(np.log(10.0), stage[1], np.log(0.02)).age_fraction == pytest.approx(0.5)


def test_light_grows_with_mass_and_age():
    grid = load_grid()
    mass = np.linspace(*grid.log_mass, 60)
    stages = np.linspace(0.0, 1.0, 20)
    point = grid.at(mass[:, None], stages, np.log(0.02))
    assert np.all(np.diff(point.share_volume, axis=0) > 0.0)
    # At 2 solar masses the contracting core's light falls a little at the very end.
    assert np.all(np.diff(point.share_core, axis=1) > -0.015 * point.share_core[:, 1:])
    assert np.all(np.diff(point.age_fraction, axis=1) > 0.0)
    assert np.all(grid.ageing(mass[:, None], stages, np.log(0.02)) >= 0.0)


def test_pressure_ratio_of_an_array_of_masses():
    from astropy import units as u

    mass = [5.0, 20.0, 60.0] * u.solMass
    ratios = pressure_ratio(mass)
    # Independent calculation: the centre holds 1.57, 1.38 and 1.14 times the volume mean.
    excess = ratios.radiation_fraction_core / ratios.radiation_fraction
    assert excess == pytest.approx([1.57, 1.38, 1.14], rel=0.02)
    # Idem: 1 - beta overstates the Eddington factor by 2.0 and 1.44 at 20 and 60.
    share, _ = standard_model(mass, ratios.mu)
    assert (share / ratios.gamma_e)[1:] == pytest.approx([2.0, 1.44], rel=0.03)
    assert ratios.radiation_to_gas == pytest.approx(
        ratios.radiation_fraction / (1 - ratios.radiation_fraction)
    )
    assert ratios.radiation_to_gas_core == pytest.approx(
        ratios.radiation_fraction_core / (1 - ratios.radiation_fraction_core)
    )
    old = pressure_ratio(mass, age_fraction=0.9)
    assert np.all(old.radiation_fraction > ratios.radiation_fraction)
    assert np.all(old.luminosity > ratios.luminosity)


def test_pressure_ratio_off_the_usual_composition_is_solved_directly():
    ratios = pressure_ratio([20.0], hydrogen=0.5, metals=0.02)
    model = structure(20.0, hydrogen=0.5)
    assert ratios.radiation_fraction[0] == pytest.approx(model.radiation_fraction)
    assert ratios.gamma_e[0] == pytest.approx(model.gamma_e, rel=1e-6)


def test_standard_model_by_pressure_ratio():
    ratios = pressure_ratio([1e-3, 10.0, 1e6], model="standard")
    share, gas = standard_model([1e-3, 10.0, 1e6], ratios.mu)
    assert ratios.radiation_to_gas == pytest.approx(share / gas)
    assert np.isnan(ratios.gamma_e[[0, 2]]).all()
    assert ratios.radius is None


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ({"mass": 1.0}, "partial ionisation is left out"),
        ({"mass": 10.0, "mu": 0.6}, "mean particle weight is no composition"),
        ({"mass": 10.0, "model": "magic"}, "'magic' is unknown"),
        ({"mass": 10.0, "model": "standard", "age_fraction": 0.5}, "knows no age"),
        ({"mass": 10.0, "age_fraction": 1.5}, "age_fraction = 1.5"),
        ({"mass": 10.0, "hydrogen": 0.6, "age_fraction": 0.5}, "needs the grid's composition"),
    ],
)
def test_refusals(arguments, words):
    with pytest.raises(InputError, match=words):
        pressure_ratio(**arguments)
