"""68 per cent intervals hold the truth of stars drawn from the priors 68 times in 100.

Outside check: the binomial distribution (scipy); the method is that of Cook, Gelman
& Rubin 2006, J. Comput. Graph. Stat. 15, 675. With the misfit frozen at its smallest
value coverage of the temperature falls to about 0.4, so the test can fail.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import binomtest

from starkiln import fit
from starkiln.inference import Settings
from starkiln.runner import dust_of

from ._simulate import simulate

SETTINGS = Settings(dust="free")
STARS = 200
#: 15 rates are tested: a right program is refused once in 300 runs of other seeds.
SMALLEST_P = 2e-4
QUANTITIES = ("temperature", "angular_diameter", "av", "radius", "luminosity")


def coverage(settings: Settings, n_bands: int, stars: int) -> dict[str, int]:
    rng = np.random.default_rng([20261201, n_bands])
    held = dict.fromkeys(QUANTITIES, 0)
    for _ in range(stars):
        one = simulate(rng, SETTINGS, dust_of(SETTINGS), n_bands)
        result = fit(one.star, settings=settings)
        for name in QUANTITIES:
            _, low, high = result.summary[name]
            held[name] += low <= one.truth[name] <= high
    return held


@pytest.mark.long
@pytest.mark.parametrize("n_bands", [4, 8, 12])
def test_intervals_hold_the_truth_as_often_as_they_say(n_bands: int) -> None:
    held = coverage(SETTINGS, n_bands, STARS)
    chances = {name: binomtest(n, STARS, 0.68).pvalue for name, n in held.items()}
    assert min(chances.values()) > SMALLEST_P, held


@pytest.mark.long
def test_a_model_without_misfit_is_found_out() -> None:
    held = coverage(Settings(dust="free", misfit=False), 12, 60)
    assert binomtest(held["temperature"], 60, 0.68).pvalue < SMALLEST_P, held
