"""Simulation-based calibration of whole fits with the quadrature engine.

Outside check: for stars drawn from the priors the rank of the truth among posterior
draws is uniform (Talts et al. 2018, arXiv:1804.06788; Cook, Gelman & Rubin 2006, J.
Comput. Graph. Stat. 15, 675), which chi-square (scipy) tests. The last test breaks
the misfit, the dust prior and the parallax prior in turn and sees each found out.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import chisquare

from starkiln import fit
from starkiln.inference import Settings
from starkiln.runner import dust_of

from ._simulate import FAINT, simulate

BINS = 20
#: About 40 rates are tested: a right program is refused once in 100 runs of other seeds.
SMALLEST_P = 2.5e-4
CASES = {
    "free dust": Settings(dust="free"),
    "dust from the column": Settings(),
    "no misfit": Settings(dust="free", misfit=False),
    "faint, in flux, with limits": Settings(dust="free", likelihood="flux", diameter_range=FAINT),
}
QUANTITIES = (
    "temperature",
    "angular_diameter",
    "av",
    "misfit",
    "distance",
    "radius",
    "luminosity",
)


def ranks(truth: Settings, believed: Settings, stars: int, names=QUANTITIES):
    """Levels of the truths in the posteriors, and the share of unconverged fits."""
    rng = np.random.default_rng([20261202, stars])
    levels = {name: [] for name in names if name != "misfit" or truth.misfit}
    failed = 0
    for i in range(stars):
        one = simulate(rng, truth, dust_of(truth), (4, 8, 12)[i % 3])
        result = fit(one.star, engine="quadrature", settings=believed, rng=1)
        failed += not result.converged
        for name, values in levels.items():
            values.append(np.mean(result.quantities[name] < one.truth[name]))
    return levels, failed / stars


def chances(levels):
    """Chi-square probability of uniform levels, by quantity."""
    counts = {n: np.histogram(v, bins=BINS, range=(0.0, 1.0))[0] for n, v in levels.items()}
    return {name: float(chisquare(count).pvalue) for name, count in counts.items()}


@pytest.mark.long
@pytest.mark.parametrize("case", CASES)
def test_ranks_of_the_truth_are_uniform(case: str) -> None:
    faint = case.startswith("faint")
    levels, failed = ranks(CASES[case], CASES[case], 600 if faint else 2000)
    found = chances(levels)
    # Stars that hardly any band sees may stay unconverged, and say so.
    assert failed < (0.05 if faint else 0.002)
    assert min(found.values()) > SMALLEST_P, found


@pytest.mark.long
@pytest.mark.parametrize(
    ("broken", "quantity"),
    [
        ({"misfit": False}, "temperature"),
        ({"dust_width": 0.4}, "av"),
        ({"distance_length": 4000.0}, "distance"),
    ],
    ids=["misfit", "dust prior", "parallax prior"],
)
def test_what_is_broken_is_found_out(broken: dict, quantity: str) -> None:
    levels, _ = ranks(
        Settings(dust="free"), Settings(**({"dust": "free"} | broken)), 400, (quantity,)
    )
    assert chances(levels)[quantity] < SMALLEST_P, chances(levels)
