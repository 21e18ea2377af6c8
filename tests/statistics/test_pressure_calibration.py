"""Simulation-based calibration of the pressure posterior: Talts et al. 2018, arXiv:1804.06788."""

import numpy as np
import pytest

from starkiln.derived import Evidence, light_from_draws, light_from_values, pressure_posterior
from starkiln.derived._pressure import SCATTER_SHARE
from starkiln.derived._pressure_cells import cells, scatter
from starkiln.interiors import load_grid

STARS, DRAWS, BINS = 300, 99, 10
#: 99.9 per cent point of chi-square with 9 degrees of freedom (scipy.stats.chi2).
CRITICAL = 27.88


def simulated(rng):
    """Return the mass of a model from the prior, its own light and its own ratio."""
    tiles, grid = cells(), load_grid()
    feh = np.log10(np.exp(tiles.coordinates[:, 2]) / 0.0134)
    prior = np.exp(tiles.log_prior - 0.5 * feh**2 / (0.2**2 + 0.05**2))
    chosen = rng.choice(prior.size, p=prior / prior.sum())
    point = tiles.coordinates[chosen] + (rng.random(3) - 0.5) * tiles.size
    model = grid.at(*point)
    mass = np.exp(point[0])
    own = np.sqrt(scatter(np.array([mass]))[0])
    light = np.array([model.log_luminosity, model.log_temperature])
    truth = light + own * rng.standard_normal(2)
    ratio = model.share_volume / (1 - model.share_volume)
    return mass, truth, ratio * np.exp(SCATTER_SHARE * rng.standard_normal())


@pytest.mark.long
@pytest.mark.parametrize("kind", ["luminosity", "radius", "draws"])
def test_ranks_of_mass_light_and_ratio_are_even(kind):
    rng = np.random.default_rng(20)
    ranks = []
    while len(ranks) < STARS:
        mass, (log_l, log_t), ratio = simulated(rng)
        e_t, e_other = 0.03, 0.08
        seen_t = 10**log_t * 10 ** (e_t / np.log(10) * rng.standard_normal())
        if kind == "radius":
            radius = 10 ** (0.5 * log_l - 2.0 * (log_t - np.log10(5772.0)))
            seen = radius * 10 ** (e_other / np.log(10) * rng.standard_normal())
            light = light_from_values((seen_t, e_t * seen_t), None, (seen, e_other * seen))
        else:
            seen = 10**log_l * 10 ** (e_other / np.log(10) * rng.standard_normal())
            light = light_from_values((seen_t, e_t * seen_t), (seen, e_other * seen))
        if kind == "draws":
            drawn = rng.multivariate_normal(light.mean, light.covariance, 256)
            light = light_from_draws(10 ** drawn[:, 0], 10 ** drawn[:, 1])
        found = pressure_posterior(Evidence(light), rng=rng, size=DRAWS)
        if found.reason:
            continue
        truths = {"mass": mass, "radiation_to_gas": ratio, "luminosity": 10**log_l}
        ranks.append([int((found.draws[name] < value).sum()) for name, value in truths.items()])
    for column, name in zip(np.array(ranks).T, truths, strict=True):
        counts = np.histogram(column, bins=BINS, range=(-0.5, DRAWS + 0.5))[0]
        statistic = np.sum((counts - STARS / BINS) ** 2 / (STARS / BINS))
        assert statistic < CRITICAL, (name, counts)
