"""Time the interiors: one structure model, and pressure posteriors as ratios to it.

Run: python scripts/benchmark_interiors.py

Prints milliseconds of processor time. Absolute times depend on the machine; the ratio of a
posterior to a direct solution hardly does. Aims: a model below 300 ms (hoped: 50), a target's
posterior below 1 s, ten thousand targets in minutes.
"""

from __future__ import annotations

import time
from collections.abc import Callable

import numpy as np

from starkiln.derived import Evidence, light_from_draws, light_from_values, pressure_posterior
from starkiln.interiors import load_grid, pressure_ratio, structure


def milliseconds(work: Callable[[], object], repeats: int) -> float:
    """Return the median processor time of one call, after one to warm up."""
    work()
    times = []
    for _ in range(repeats):
        begun = time.process_time()
        work()
        times.append(time.process_time() - begun)
    return 1e3 * float(np.median(times))


def main() -> None:
    """Measure and print."""
    rng = np.random.default_rng(1)
    star = light_from_values((30000.0, 1000.0), None, (6.3, 0.1))
    pairs = rng.multivariate_normal(star.mean, star.covariance, 256)
    drawn = light_from_draws(10 ** pairs[:, 0], 10 ** pairs[:, 1])
    masses = np.geomspace(1.6, 120.0, 10000)
    load_grid()
    rows = {
        "structure, 10 solMass": milliseconds(lambda: structure(10.0), 9),
        "structure, 1.7 solMass": milliseconds(lambda: structure(1.7), 9),
        "structure, 100 solMass": milliseconds(lambda: structure(100.0), 9),
        "pressure_ratio of 10,000 masses": milliseconds(lambda: pressure_ratio(masses), 5),
        "posterior from values": milliseconds(
            lambda: pressure_posterior(Evidence(star), rng=rng), 9
        ),
        "posterior from 256 draws": milliseconds(
            lambda: pressure_posterior(Evidence(drawn), rng=rng), 9
        ),
    }
    direct = rows["structure, 10 solMass"]
    for name, value in rows.items():
        print(f"{name:34s} {value:9.1f} ms   {value / direct:7.2f} direct solutions")


if __name__ == "__main__":
    main()
