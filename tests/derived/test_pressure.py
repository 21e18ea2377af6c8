import csv
from pathlib import Path

import numpy as np
import pytest

from starkiln.derived import (
    Evidence,
    light_from_draws,
    light_from_values,
    pressure_posterior,
    pressure_table,
    pressure_table_of_draws,
)
from starkiln.errors import InputError
from starkiln.interiors import load_grid

BINARIES = Path(__file__).parent.parent / "reference" / "eclipsing_binaries.csv"


def binaries():
    with BINARIES.open(encoding="utf-8") as stream:
        next(stream)
        return [
            {key: value if key == "name" else float(value) for key, value in row.items()}
            for row in csv.DictReader(stream)
        ]


def posterior(evidence, seed=1, size=2000):
    return pressure_posterior(evidence, rng=np.random.default_rng(seed), size=size)


@pytest.mark.parametrize("as_draws", [False, True])
def test_masses_of_eclipsing_binaries(as_draws):
    # tests/reference/eclipsing_binaries.csv: mass from R and T alone; L follows from them.
    inside, offset = [], []
    for star in binaries():
        light = light_from_values(
            (star["temperature"], star["e_temperature"]), None, (star["radius"], star["e_radius"])
        )
        if as_draws:
            rng = np.random.default_rng(5)
            draws = rng.multivariate_normal(light.mean, light.covariance, 256)
            light = light_from_draws(10 ** draws[:, 0], 10 ** draws[:, 1])
        mass = posterior(Evidence(light)).draws["mass"]
        low, middle, high = np.percentile(mass, [2.5, 50.0, 97.5])
        inside.append(low <= star["mass"] <= high)
        offset.append(middle / star["mass"] - 1.0)
    assert np.mean(inside) >= 0.9
    assert abs(np.median(offset)) < 0.04


def test_posterior_is_the_direct_sum_over_a_fine_grid():
    # A slow reference: the same posterior summed over a plain lattice of models.
    star = Evidence(light_from_values((25000.0, 700.0), (9000.0, 900.0)), feh=(0.1, 0.02))
    found = posterior(star, size=8000)
    grid = load_grid()
    mass, stage = np.linspace(6.0, 13.0, 500), np.linspace(0.0, 1.0, 300)
    log_m, u = np.meshgrid(np.log(mass), stage, indexing="ij")
    z = np.log(0.0134 * 10**0.1)  # its error, 0.054 dex, hardly matters
    models = grid.at(log_m, u, z)
    prior = log_m * -1.35 + np.log(models.lifetime_myr * grid.ageing(log_m, u, z))
    d_l = models.log_luminosity - np.log10(9000.0)
    d_t = models.log_temperature - np.log10(25000.0)
    v_l = 0.03**2 + (0.1 / np.log(10.0)) ** 2
    v_t = 0.01**2 + (700.0 / 25000.0 / np.log(10.0)) ** 2
    weight = np.exp(prior - 0.5 * (d_l**2 / v_l + d_t**2 / v_t)) / mass[:, None]
    by_mass = np.cumsum(weight.sum(axis=1))
    quantiles = np.interp([0.16, 0.5, 0.84], by_mass / by_mass[-1], mass)
    assert np.percentile(found.draws["mass"], [16, 50, 84]) == pytest.approx(quantiles, rel=0.01)
    by_age = (weight * models.age_fraction).sum() / weight.sum()
    assert found.draws["age_fraction"].mean() == pytest.approx(by_age, abs=0.02)
    assert found.n_eff > 400


def test_luminosity_from_radius_errs_with_temperature():
    # L = R^2 T^4: d ln L = 2 d ln R + 4 d ln T.
    light = light_from_values((30000.0, 900.0), None, (6.0, 0.12))
    r, t = 0.02, 0.03
    expected = np.array([[4 * r**2 + 16 * t**2, 4 * t**2], [4 * t**2, t**2]]) / np.log(10) ** 2
    assert light.covariance == pytest.approx(expected, rel=1e-12)
    assert light.mean[0] == pytest.approx(np.log10(36.0 * (30000.0 / 5772.0) ** 4), rel=1e-12)


def test_temperature_from_luminosity_and_radius_and_luminosity_alone():
    # T = (L/R^2)^(1/4): d ln T = (d ln L)/4 - (d ln R)/2.
    light = light_from_values(None, (9000.0, 900.0), (5.0, 0.1))
    assert light.mean[1] == pytest.approx(np.log10(5772.0 * (9000.0 / 25.0) ** 0.25), rel=1e-12)
    e_l, e_r = 0.1, 0.02
    shared, own = e_l**2 / 4, (e_l**2 + 4 * e_r**2) / 16
    expected = np.array([[e_l**2, shared], [shared, own]]) / np.log(10) ** 2
    assert light.covariance == pytest.approx(expected, rel=1e-12)
    alone = posterior(Evidence(light_from_values(None, (9000.0, 900.0)))).draws
    both = posterior(Evidence(light_from_values((25000.0, 500.0), (9000.0, 900.0)))).draws
    assert alone["age_fraction"].std() > 1.3 * both["age_fraction"].std()
    assert np.median(alone["mass"]) == pytest.approx(np.median(both["mass"]), rel=0.2)


def test_draws_keep_their_mean_and_covariance():
    rng = np.random.default_rng(2)
    pairs = rng.multivariate_normal([4.0, 4.4], [[0.01, 0.004], [0.004, 0.002]], 256)
    light = light_from_draws(10 ** pairs[:, 0], 10 ** pairs[:, 1])
    assert light.mean == pytest.approx(pairs.mean(axis=0), rel=1e-9)
    assert light.total_covariance == pytest.approx(np.cov(pairs.T, bias=True), rel=1e-6)


def test_draws_keep_most_of_their_skewness():
    # A kernel estimate of width h keeps (1 - h^2)^(3/2) of it: 0.77 for 256 draws in a plane.
    from scipy.stats import skew

    rng = np.random.default_rng(4)
    log_l = 4.0 + 0.1 * rng.gamma(1.5, size=256)
    light = light_from_draws(10**log_l, 10 ** (4.3 + 0.01 * rng.standard_normal(256)))
    share = light.total_covariance[0, 0] / np.var(light.centres[:, 0])
    kept = skew(light.centres[:, 0]) / share**1.5 / skew(log_l)
    assert kept == pytest.approx(0.77, abs=0.02)


def test_prior_of_mass_is_the_mass_function_times_the_lifetime():
    # Salpeter 1955 and stars born evenly in time: p(M) ~ M^-2.35 t_MS(M), by direct sum.
    grid = load_grid()
    mass = np.linspace(1.6, 60.0, 4000)
    lifetime = grid.at(np.log(mass), 1.0, np.log(0.0134)).lifetime_myr
    weight = mass**-2.35 * lifetime * np.exp(-0.5 * ((mass - 20.0) / 3.0) ** 2)
    total = np.cumsum(weight)
    expected = np.interp([0.25, 0.5, 0.75], total / total[-1], mass)
    found = posterior(Evidence(mass=(20.0, 3.0), feh=(0.0, 0.01)), size=8000).draws["mass"]
    assert np.percentile(found, [25, 50, 75]) == pytest.approx(expected, rel=0.02)


def test_a_dynamical_mass_narrows_and_gravity_ages():
    light = light_from_values((25000.0, 800.0), (9000.0, 1500.0))
    plain = posterior(Evidence(light)).draws
    weighed = posterior(Evidence(light, mass=(9.0, 0.1))).draws
    assert weighed["mass"].std() < 0.5 * plain["mass"].std()
    assert weighed["radiation_to_gas"].std() < 0.8 * plain["radiation_to_gas"].std()
    low = posterior(Evidence(light, logg=(3.7, 0.05))).draws
    high = posterior(Evidence(light, logg=(4.1, 0.05))).draws
    assert np.median(low["age_fraction"]) > np.median(high["age_fraction"]) + 0.1


def test_a_mass_alone_keeps_the_prior_of_age():
    draws = posterior(Evidence(mass=(15.0, 0.01)), size=6000).draws
    share = draws["age_fraction"]
    assert share.mean() == pytest.approx(0.5, abs=0.03)
    assert np.percentile(share, [25, 75]) == pytest.approx([0.25, 0.75], abs=0.04)
    assert draws["mass"].mean() == pytest.approx(15.0, abs=0.01)


def test_stars_with_no_model_are_told_why():
    def reason(temperature, luminosity, **more):
        light = light_from_values((temperature, 0.03 * temperature), (luminosity, 0.1 * luminosity))
        return posterior(Evidence(light, **more)).reason

    assert "white dwarf" in reason(25000.0, 0.05) or "fainter" in reason(25000.0, 0.05)
    assert "giant" in reason(4500.0, 300.0)
    assert "stripped" in reason(60000.0, 1e4)
    assert "brighter" in reason(50000.0, 1e7)
    # A cool hypergiant, which swollen models of the heaviest stars would match.
    assert "supergiant" in reason(5000.0, 1.5e6)
    assert "contradict" in reason(25000.0, 9000.0, mass=(30.0, 0.5))
    assert "1.6 to 120" in posterior(Evidence(mass=(0.8, 0.02))).reason
    assert reason(25000.0, 9000.0) == ""


TARGETS = {
    "name": ["a", "giant", "bad", "half", "heavy", "weighed"],
    "temperature": [25000.0, 4500.0, -3.0, np.nan, 45000.0, 25000.0],
    "e_temperature": [800.0, 100.0, np.nan, np.nan, 1500.0, 800.0],
    "luminosity": [9000.0, 150.0, 3.0, 3.0, 8e5, 9000.0],
    "e_luminosity": [900.0, 15.0, np.nan, np.nan, 8e4, 900.0],
    "mass": [np.nan, 2.0, np.nan, np.nan, np.nan, 9.4],
    "e_mass": [np.nan, 0.2, np.nan, np.nan, np.nan, 0.2],
}


def test_table_answers_every_row():
    table = pressure_table(TARGETS)
    assert list(table["name"]) == TARGETS["name"]
    assert list(table["status"]) == ["ok", "off_grid", "rejected", "off_grid", "ok", "ok"]
    assert table["radiation_to_gas_lo"][0] < table["radiation_to_gas"][0]
    assert table["radiation_to_gas"][0] < table["radiation_to_gas_hi"][0]
    # The giant: gamma_e = 10^-4.815 (1 + X) L/M from the luminosity and mass given.
    assert table["gamma_e"][1] == pytest.approx(10**-4.815 * 1.72 * 75.0, rel=0.06)
    assert table["radiation_to_gas"].mask[1]
    assert "temperature = -3" in table["message"][2]
    assert table["mass"].mask[3]
    assert "fainter" in table["message"][3]
    assert "mass_from_luminosity" in table["flags"][0]
    assert "companion" in table["message"][0]
    assert "mass_from_luminosity" not in table["flags"][5]
    assert {"no_mass_loss", "electron_limit"} <= set(table["flags"][4].split())


def test_a_row_depends_on_its_own_values_alone():
    whole = pressure_table(TARGETS)
    alone = pressure_table({key: values[4:5] for key, values in TARGETS.items()})
    assert alone["mass"][0] == whole["mass"][4]
    assert pressure_table(TARGETS, seed=1)["mass"][0] != whole["mass"][0]


def test_table_from_draws():
    rng = np.random.default_rng(3)
    draws = {
        "temperature": 25000.0 * np.exp(0.03 * rng.standard_normal(256)),
        "luminosity": 9000.0 * np.exp(0.1 * rng.standard_normal(256)),
    }
    names = ["a", "b", "c"]
    without = {"temperature": draws["temperature"]}
    table = pressure_table_of_draws(names, [draws, None, without])
    assert list(table["status"]) == ["ok", "rejected", "rejected"]
    assert table["mass"][0] == pytest.approx(pressure_table(TARGETS)["mass"][0], rel=0.03)
    assert "no draws" in table["message"][1]
    assert "distance" in table["message"][2]
    known = {"name": ["a"], "mass": [9.4], "e_mass": [0.1]}
    weighed = pressure_table_of_draws(names, [draws, None, without], known)
    assert weighed["mass_hi"][0] - weighed["mass_lo"][0] < 0.3
    with pytest.raises(InputError, match="no star 'z'"):
        pressure_table_of_draws(names, [draws, None, without], {"name": ["z"], "mass": [1.0]})


def test_bad_evidence_is_refused():
    with pytest.raises(InputError, match="give a temperature"):
        posterior(Evidence())
    with pytest.raises(InputError, match="luminosity or a radius"):
        light_from_values((1e4, 1.0))
    with pytest.raises(InputError, match="luminosity or a radius"):
        light_from_values(None, None, (1.0, 0.1))
    with pytest.raises(InputError, match="too few"):
        light_from_draws(np.ones(3), np.ones(3))


def test_light_at_a_mass_fraction():
    # The run of a direct model of the same star, and the ends of the tabulated depths.
    found = posterior(Evidence(mass=(20.0, 0.01), feh=(0.0, 0.05)))
    assert found.radiation_fraction_at(0.0) == pytest.approx(found.draws["radiation_fraction_core"])
    at_half = found.radiation_fraction_at(0.5)
    assert at_half == pytest.approx(found.draws["radiation_fraction_at_0.5"])
    model = load_grid().at(np.log(20.0), 0.0, np.log(0.0134))
    young = found.draws["age_fraction"] < 0.05
    assert np.median(at_half[young]) == pytest.approx(model.share_at[2], rel=0.03)
    table = pressure_table({"mass": [20.0]}, at=0.5)
    assert table["radiation_to_gas_at"][0] < table["radiation_to_gas_core"][0]
    with pytest.raises(InputError, match=r"0 to 0\.99"):
        found.radiation_fraction_at(1.0)
