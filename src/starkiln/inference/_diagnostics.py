"""Whether a posterior may be believed: predictive check and flags.

The thresholds are choices of this project, stated here and in the README.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.inference._problem import AV_MAX, Problem
from starkiln.inference._samples import Samples

#: `poor_blackbody` below this predictive probability.
POOR_FIT = 0.01
#: `prior_dominated` when a posterior is wider than this share of its prior.
PRIOR_SHARE = 0.7
#: `degenerate` when temperature and A_V are correlated beyond this.
CORRELATION = 0.9
#: `at_edge` when the outermost `EDGE_WIDTH` of a range holds more than `EDGE_SHARE`.
EDGE_WIDTH, EDGE_SHARE = 0.01, 0.02
#: Priors of A_V that come from no knowledge of the star.
_FREE = ("free", "gaussian", "uniform")
#: Parameters as the observer calls them.
_PLAIN = {
    "ln_temperature": "temperature",
    "ln_diameter": "angular diameter",
    "ln_misfit": "misfit",
}
#: `few_bands` below this number of usable bands.
FEW = 3
#: Parameters whose Gaussian prior is knowledge of the star, which the predictive check keeps.
_PULLED = ("av", "logg", "feh")
#: Parameters that photometry may leave as wide as their prior, whose ends then mean nothing.
_LOOSE = ("logg", "feh")
#: Step of the numerical derivatives, in ln T, ln theta and mag.
_STEP = 1e-6


def fit_probability(problem: Problem, samples: Samples) -> float:
    """Return the posterior predictive probability of chi^2 without the misfit.

    The emitter is fitted again with the quoted errors and the zero-point errors
    alone (misfit zero); the probability is that of a replicated chi^2 above the
    observed one, averaged over that posterior, in which chi^2 exceeds its smallest
    value by a chi^2 variate with as many degrees of freedom as parameters (Rubin
    1984, Ann. Stat. 12, 1151; Gelman, Meng & Stern 1996, Stat. Sin. 6, 733).

    Parameters
    ----------
    problem : Problem
    samples : Samples

    Returns
    -------
    float
        Between 0 and 1; small where the star is not what the emitter says. Limits
        take no part.
    """
    from scipy.stats import chi2

    whiten = _whitener(problem)
    columns = [i for i, name in enumerate(problem.names) if name != "ln_misfit"]
    smallest = _smallest_chi2(problem, samples, whiten, columns)
    n = problem.bands.n_detections
    spread = chi2.ppf((np.arange(64) + 0.5) / 64.0, min(len(columns), n))
    return float(np.mean(chi2.sf(smallest + spread, n)))


def find_flags(problem: Problem, samples: Samples, probability: float) -> list[str]:
    """Return the flags of the contract that a posterior of the emitter earns.

    Parameters
    ----------
    problem : Problem
    samples : Samples
    probability : float
        From `fit_probability`.

    Returns
    -------
    list of str
    """
    flags = []
    if probability < POOR_FIT:
        flags.append("poor_blackbody")
    if any(_wide(problem, samples, name) for name in ("ln_temperature", "av")):
        flags.append("prior_dominated")
    if find_edges(problem, samples):
        flags.append("at_edge")
    if "av" in problem.names and problem.dust.prior in _FREE:
        temperature = problem.column(samples.x, "ln_temperature")
        if np.corrcoef(temperature, problem.column(samples.x, "av"))[0, 1] > CORRELATION:
            flags.append("degenerate")
    if len(problem.bands.names) < FEW:
        flags.append("few_bands")
    if problem.dust.prior == "column" and problem.star.av is None:
        flags.append("dust_assumed_zero")
    if problem.star.saturated_bands:
        flags.append("saturated")
    return flags


def find_edges(problem: Problem, samples: Samples) -> list[str]:
    """Return, in words, the bounds of priors on which the posterior leans."""
    return [
        f"{_PLAIN.get(name, name)} leans on {edge}, a bound of its prior"
        for name in problem.names
        if (edge := _edge(problem, samples, name))
    ]


def _whitener(problem: Problem) -> Any:
    """Return a function that turns ln model fluxes, (m, n_bands), into residuals of unit variance.

    The residuals have shape (m, n_detections).
    """
    bands, n = problem.bands, problem.bands.n_detections
    shared = (bands.member * bands.offset_variance) @ bands.member.T
    if problem.form == "log":
        factor = np.linalg.cholesky(np.diag(bands.variance) + shared)
        return lambda ln_model: np.linalg.solve(factor, (bands.ln_data - ln_model).T).T
    scaled = bands.scaled_data[:n]
    factor = np.linalg.cholesky(np.eye(n) + shared * np.outer(scaled, scaled))

    def residual(ln_model: np.ndarray) -> np.ndarray:
        model = np.exp(np.minimum(ln_model[:, :n] - bands.ln_error[:n], 300.0))
        return np.linalg.solve(factor, (scaled - model).T).T

    return residual


def _smallest_chi2(problem: Problem, samples: Samples, whiten: Any, columns: list[int]) -> float:
    from scipy.optimize import least_squares

    thinned = samples.x[:: max(1, len(samples.x) // 256)]
    best = thinned[int(np.argmin(np.sum(whiten(problem.ln_model(thinned)) ** 2, axis=1)))]
    low, high = problem.bounds[columns].T

    def residuals(values: np.ndarray) -> np.ndarray:
        x = np.repeat(best[None], len(values), axis=0)
        x[:, columns] = values
        return np.column_stack([whiten(problem.ln_model(x)), _prior_pull(problem, x)])

    def slopes(values: np.ndarray) -> np.ndarray:
        # All steps at once: a call of the model costs as much for one point as for 64.
        steps = np.where(values + _STEP > high, -_STEP, _STEP)
        points = residuals(np.vstack([values, values + np.diag(steps)]))
        return ((points[1:] - points[0]) / steps[:, None]).T

    start = np.clip(best[columns], low + 1e-9, high - 1e-9)
    solution = least_squares(
        lambda values: residuals(values[None])[0],
        start,
        slopes,
        bounds=(low, high),
        x_scale=0.1,
        xtol=1e-8,
    )
    n = problem.bands.n_detections
    return float(np.sum(solution.fun[:n] ** 2))


def _prior_pull(problem: Problem, x: np.ndarray) -> np.ndarray:
    """Return the pulls of the Gaussian priors on A_V, log g and [Fe/H] as more residuals."""
    pulls = [np.empty((len(x), 0))]
    for name in _PULLED:
        if name in problem.names:
            prior = problem.parameters[problem.names.index(name)].prior
            value = problem.column(x, name)
            width = getattr(prior, "width", AV_MAX)
            pulls.append(((value - getattr(prior, "mean", value)) / width)[:, None])
    return np.hstack(pulls)


def _wide(problem: Problem, samples: Samples, name: str) -> bool:
    if name not in problem.names or (name == "av" and problem.dust.prior not in _FREE):
        return False
    prior = problem.parameters[problem.names.index(name)].prior
    return bool(np.std(problem.column(samples.x, name)) > PRIOR_SHARE * prior.sd)


def _edge(problem: Problem, samples: Samples, name: str) -> str:
    """Return the bound on which a parameter's posterior leans; empty for none."""
    low, high = problem.bounds[problem.names.index(name)]
    if name in _LOOSE and _wide(problem, samples, name):
        return ""
    x = problem.column(samples.x, name)
    span = EDGE_WIDTH * (high - low)
    # A_V = 0 and the smallest misfit are natural ends; only the upper one is a limit.
    at_low = 0.0 if name in ("av", "ln_misfit") else float(np.mean(x < low + span))
    at_high = float(np.mean(x > high - span))
    if at_low + at_high <= EDGE_SHARE:
        return ""
    bound = low if at_low > at_high else high
    return f"{np.exp(bound) if name.startswith('ln_') else bound:.6g}"
