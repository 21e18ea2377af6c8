"""A start for the ensemble: a population carried from the prior to the posterior.

The likelihood is raised to a power that grows from 0 to 1 in steps small enough
that half of the population survives each; after each step differential-evolution
moves spread it anew (sequential Monte Carlo: Del Moral, Doucet & Jasra 2006, J. R.
Stat. Soc. B 68, 411; move: ter Braak 2006, Stat. Comput. 16, 239). Every mode is
found with about its weight, and the ensemble starts close to its target.
"""

from __future__ import annotations

import numpy as np

from starkiln.inference._problem import Problem

POPULATION = 256
_MOVES = 4
_MAX_STAGES = 200


def tempered_start(problem: Problem, rng: np.random.Generator) -> np.ndarray:
    """Return a population near the posterior.

    Parameters
    ----------
    problem : Problem
    rng : numpy.random.Generator

    Returns
    -------
    numpy.ndarray
        Shape (max(POPULATION, walkers), n_parameters), in random order.
    """
    x = problem.draw_prior(rng, max(POPULATION, problem.settings.walkers))
    low, high = problem.bounds.T
    ln_prior, ln_like = problem.ln_prior(x), problem.ln_likelihood(x)
    power = 0.0
    for _ in range(_MAX_STAGES):
        step = _next_step(ln_like, 1.0 - power)
        weight = np.exp(step * (ln_like - ln_like.max()))
        power += step
        chosen = _resample(weight, rng)
        x, ln_prior, ln_like = x[chosen], ln_prior[chosen], ln_like[chosen]
        for _ in range(_MOVES):
            proposal = _propose(x, rng)
            inside = np.all((proposal >= low) & (proposal <= high), axis=1)
            clipped = np.clip(proposal, low, high)
            new_prior, new_like = problem.ln_prior(clipped), problem.ln_likelihood(clipped)
            gain = new_prior - ln_prior + power * (new_like - ln_like)
            take = inside & (np.log(rng.uniform(size=len(x))) < gain)
            x = np.where(take[:, None], clipped, x)
            ln_prior = np.where(take, new_prior, ln_prior)
            ln_like = np.where(take, new_like, ln_like)
        if power >= 1.0:
            break
    return rng.permutation(x)


def _next_step(ln_like: np.ndarray, most: float) -> float:
    """Return the rise in power that leaves half of the population effective."""
    excess = ln_like - ln_like.max()

    def effective(step: float) -> float:
        weight = np.exp(step * excess)
        return float(weight.sum() ** 2 / (weight @ weight)) / len(weight)

    if effective(most) >= 0.5:
        return most
    low, high = 0.0, most
    for _ in range(60):
        middle = 0.5 * (low + high) if low else high * 1e-3
        if effective(middle) >= 0.5:
            low = middle
        else:
            high = middle
        if low and high < 1.02 * low:
            break
    return low or high


def _resample(weight: np.ndarray, rng: np.random.Generator) -> np.ndarray:
    """Systematic resampling: one uniform number decides all."""
    levels = (np.arange(len(weight)) + rng.uniform()) / len(weight)
    cumulative = np.cumsum(weight) / weight.sum()
    return np.minimum(np.searchsorted(cumulative, levels), len(weight) - 1)


def _propose(x: np.ndarray, rng: np.random.Generator) -> np.ndarray:
    n, k = x.shape
    first = (np.arange(n) + rng.integers(1, n, n)) % n
    second = (first + rng.integers(1, n, n)) % n
    # One step in ten is a whole difference, which carries from mode to mode.
    scale = np.where(rng.uniform(size=n) < 0.1, 1.0, 2.38 / np.sqrt(2.0 * k))
    jitter = 1e-6 * rng.standard_normal((n, k))
    return x + scale[:, None] * (x[first] - x[second]) + jitter
