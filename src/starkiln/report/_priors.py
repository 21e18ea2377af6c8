"""Prior densities of the quantities that figures show.

Priors are stated in the parameters that the engines sample; a density in ln q
becomes one in q by the factor 1/q.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from starkiln.inference import Prior, Problem, Settings, TruncatedNormal, Uniform

Density = Callable[[np.ndarray], np.ndarray]

#: Sampled parameter -> quantity of the results, where the parameter is its logarithm.
_LOGARITHMS = {
    "ln_temperature": "temperature",
    "ln_diameter": "angular_diameter",
    "ln_misfit": "misfit",
}


def priors_of_problem(problem: Problem) -> dict[str, Density]:
    """Return the prior density of every sampled quantity, and of the distance."""
    found = {
        _LOGARITHMS.get(item.name, item.name): _density(item.prior, item.name in _LOGARITHMS)
        for item in problem.parameters
    }
    if problem.star.parallax_mas is not None:
        found["distance"] = _distance(problem.settings)
    return found


def priors_of_settings(settings: Settings, emitter: Any) -> dict[str, Density]:
    """Return the prior densities that are the same for every star of a run of `emitter`.

    A row's own dust, published temperature, log g and metallicity are no part of the
    settings, so the priors made from them are left out.
    """
    ranges = {"angular_diameter": settings.diameter_range}
    if not settings.use_published_temperature:
        low, high = settings.temperature_range
        first, last = emitter.bounds["temperature"]
        ranges["temperature"] = (max(low, first), min(high, last))
    if settings.misfit:
        ranges["misfit"] = settings.misfit_range_of(emitter.name)
    found = {
        key: _density(Uniform(math.log(low), math.log(high)), True)
        for key, (low, high) in ranges.items()
    }
    if settings.dust == "free":
        found["av"] = _density(TruncatedNormal(0.0, settings.dust_width, 0.0, math.inf), False)
    return found


def _density(prior: Prior, logarithm: bool) -> Density:
    if not logarithm:
        return lambda x: np.exp(prior.ln_density(np.asarray(x, dtype=float)))

    def density(x: Any) -> np.ndarray:
        x = np.asarray(x, dtype=float)
        positive = np.maximum(x, np.finfo(float).tiny)
        return np.where(x > 0.0, np.exp(prior.ln_density(np.log(positive))) / positive, 0.0)

    return density


def _distance(settings: Settings) -> Density:
    length = settings.distance_length

    def density(x: Any) -> np.ndarray:
        x = np.asarray(x, dtype=float)
        if settings.distance_prior == "uniform":
            return np.where((x > 0.0) & (x < 10.0 * length), 3.0 * x**2 / (10.0 * length) ** 3, 0.0)
        return np.where(x > 0.0, x**2 * np.exp(-x / length) / (2.0 * length**3), 0.0)

    return density
