"""Where a posterior lies: nodes in misfit and temperature, and A_V along its ridge.

At nodes of ln T and ln f the conditional of A_V is a Gaussian (of the model made
linear in A_V at its own peak) cut at the bounds of A_V, so that the sharp edge at
A_V = 0 is integrated exactly. The nodes are set anew, pass by pass, on the ranges
of ln T where the posterior is not negligible; there may be several.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from typing import Any, NamedTuple

import numpy as np

from starkiln.inference._priors import Uniform
from starkiln.inference._problem import Problem
from starkiln.inference.engines import _truncated
from starkiln.inference.engines._quadrature_surface import Surface

_LN_2PI = math.log(2.0 * math.pi)
#: Cells between two nodes of ln T, over which the density is interpolated.
CELLS = 8


class _Pass(NamedTuple):
    """Nodes in ln T and ln f, Newton steps in A_V, depth at which ln of the density is cut."""

    n_t: int
    n_f: int
    steps: int
    depth: float


#: The last is repeated until what is held is `_SETTLED` of the range.
_PASSES = (_Pass(96, 6, 6, 40.0), _Pass(48, 8, 4, 25.0), _Pass(48, 10, 3, 18.0))
_MOST_PASSES, _SETTLED = 6, 0.3
#: The longest step in A_V, mag.
_LONGEST = 3.0
#: The last step is below this share of the conditional's width.
_NEAR = 0.1
#: Where neither data nor prior hold A_V its conditional is so many times its range wide.
_FLAT = 30.0
#: ln of the density of the misfit, below its largest, at which its range is cut.
_MISFIT_DEPTH = 11.0


@dataclass(frozen=True)
class Nodes:
    """The posterior at nodes of ln T (j) and ln f (k).

    Attributes
    ----------
    t : numpy.ndarray
        ln T, shape (j,).
    ln_misfit, ln_weight : numpy.ndarray
        ln f and ln of its weight times its prior, shape (k,).
    misfit : numpy.ndarray
        f, shape (k,).
    ln_mass : numpy.ndarray
        ln of the density in ln T for each f, A_V and theta integrated out, (j, k).
    av, precision : numpy.ndarray
        Centre and inverse variance of the conditional of A_V before its cut, (j, k).
    """

    t: np.ndarray
    ln_misfit: np.ndarray
    ln_weight: np.ndarray
    misfit: np.ndarray
    ln_mass: np.ndarray
    av: np.ndarray
    precision: np.ndarray


@dataclass(frozen=True)
class Target:
    """A star's posterior as the passes see it.

    Attributes
    ----------
    problem : Problem
    form
        `LogForm` or `FluxForm`.
    surface : Surface
        The components of the model over the whole table.
    """

    problem: Problem
    form: Any
    surface: Surface

    @property
    def av_prior(self) -> Any:
        """The prior of A_V, None where it is fixed."""
        if self.problem.fixed_av is not None:
            return None
        return self.problem.parameters[self.problem.names.index("av")].prior

    @property
    def t_prior(self) -> Any:
        """The prior of ln T."""
        return self.problem.parameters[self.problem.names.index("ln_temperature")].prior

    @property
    def misfit_bounds(self) -> tuple[float, float] | None:
        """The range of ln f, None where the misfit is left out."""
        if "ln_misfit" not in self.problem.names:
            return None
        low, high = self.problem.bounds[self.problem.names.index("ln_misfit")]
        return float(low), float(high)


def find_nodes(target: Target, n_t: int, n_f: int) -> Nodes:
    """Return `n_t` by `n_f` nodes that follow the posterior.

    Parameters
    ----------
    target : Target
    n_t, n_f : int
        Nodes in ln T and in ln f of the last pass.
    """
    t = np.linspace(target.t_prior.lower, target.t_prior.upper, _PASSES[0].n_t)
    f_range, nodes = target.misfit_bounds, None
    for i in range(_MOST_PASSES):
        this, following = (_PASSES[min(j, len(_PASSES) - 1)] for j in (i, i + 1))
        nodes = evaluate(target, t, misfit_nodes(target, f_range, this.n_f), this.steps, nodes)
        fine_t, height = interpolated(nodes.t, nodes.ln_mass + nodes.ln_weight)
        held = _held(height.max(axis=1), this.depth)
        if i > 0:
            f_range = _narrowed(target, nodes, fine_t, height)
            if held @ np.diff(fine_t) > _SETTLED * (t[-1] - t[0]):
                break
        t = _spread(fine_t, held, following.n_t)
    # Half of the last nodes evenly, half where the density is.
    peak = np.exp((height.max(axis=1) - height.max()) / 3.0)
    peak = 0.5 * (peak[1:] + peak[:-1]) * held
    step = np.diff(fine_t)
    t = _spread(fine_t, peak / (peak @ step) + held / (held @ step), n_t)
    return evaluate(target, t, misfit_nodes(target, f_range, n_f), _PASSES[-1].steps, nodes)


def _held(height: np.ndarray, depth: float) -> np.ndarray:
    """Return 1 for cells with an end above the cut, 0 for the others."""
    keep = height > height.max() - depth
    return (keep[1:] | keep[:-1]).astype(float)


@lru_cache(maxsize=16)
def legendre(n: int) -> tuple[np.ndarray, np.ndarray]:
    """Return the Gauss-Legendre nodes and weights on [-1, 1]."""
    return np.polynomial.legendre.leggauss(n)


def misfit_nodes(
    target: Target, f_range: tuple[float, float] | None, n: int
) -> tuple[np.ndarray, np.ndarray]:
    """Return Gauss-Legendre nodes of ln f and ln of their weights times the prior."""
    bounds = target.misfit_bounds
    if bounds is None or f_range is None:
        return np.array([-np.inf]), np.zeros(1)
    unit, weight = legendre(n)
    half = 0.5 * (f_range[1] - f_range[0])
    return f_range[0] + half * (unit + 1.0), np.log(weight * half / (bounds[1] - bounds[0]))


def evaluate(
    target: Target,
    t: np.ndarray,
    misfit: tuple[np.ndarray, np.ndarray],
    steps: int,
    start: Nodes | None,
) -> Nodes:
    """Return the posterior at nodes: Gauss-Newton in A_V, then the mass of its conditional."""
    ln_f, ln_weight = misfit
    f = np.exp(ln_f)
    series, slopes = target.surface.along(t)
    prior = target.av_prior
    shape = (t.size, f.size)
    ln_prior_t = target.t_prior.ln_density(t)[:, None]
    if prior is None:
        av = np.full(shape, target.problem.fixed_av)
        value = target.surface.across(series, av)
        ln_like, _, _ = target.form.fit_av(value, np.zeros_like(value), f)
        return Nodes(t, ln_f, ln_weight, f, ln_like + ln_prior_t, av, np.ones(shape))
    mean = _first_av(prior, shape, t, ln_f, start)
    centre, narrowness = _pull(prior)
    for _ in range(steps):
        av = np.clip(mean, prior.lower, prior.upper)
        value = target.surface.across(series, av)
        slope = target.surface.across(slopes, av)
        ln_like, score, information = target.form.fit_av(value, slope, f)
        precision = np.maximum(
            information + narrowness, (_FLAT * (prior.upper - prior.lower)) ** -2
        )
        score = score + (centre - av) * narrowness
        mean = av + np.clip(score / precision, -_LONGEST, _LONGEST)
        ahead = np.clip(mean, prior.lower, prior.upper) - av
        if np.all(ahead * ahead * precision < _NEAR**2):
            break
    sd = 1.0 / np.sqrt(precision)
    ln_mass = _truncated.ln_mass((prior.lower - mean) / sd, (prior.upper - mean) / sd)
    ln_mass += ln_like + prior.ln_density(av) + 0.5 * precision * (mean - av) ** 2
    ln_mass += 0.5 * (_LN_2PI - np.log(precision)) + ln_prior_t
    # A peak that is not reached yet is not to be believed as high as it is extrapolated.
    ln_mass -= np.maximum(ahead * (score - 0.5 * precision * ahead) - 1.0, 0.0)
    return Nodes(t, ln_f, ln_weight, f, ln_mass, mean, precision)


def interpolated(t: np.ndarray, values: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Interpolate values at nodes t, shape (j, ...), by cubics to `CELLS` cells per gap."""
    first = np.clip(np.arange(t.size - 1) - 1, 0, t.size - 4)
    support = first[:, None] + np.arange(4)
    x = t[:-1, None] + np.diff(t)[:, None] * np.arange(CELLS) / CELLS
    near = t[support]
    basis = np.ones((t.size - 1, CELLS, 4))
    for a in range(4):
        for b in range(4):
            if a != b:
                basis[:, :, a] *= (x - near[:, b : b + 1]) / (near[:, a] - near[:, b])[:, None]
    fine = np.matmul(basis, values[support]).reshape(-1, values.shape[1])
    return np.append(x.ravel(), t[-1]), np.concatenate([fine, values[-1:]])


def _pull(prior: Any) -> tuple[float, float]:
    """Return the centre of a prior and its inverse variance, 0 where it is flat."""
    if isinstance(prior, Uniform):
        return 0.5 * (prior.lower + prior.upper), 0.0
    return prior.mean, prior.width**-2


def _first_av(
    prior: Any, shape: tuple[int, int], t: np.ndarray, ln_f: np.ndarray, start: Nodes | None
) -> np.ndarray:
    if start is None:
        return np.full(shape, np.clip(_pull(prior)[0], min(0.5, 0.5 * prior.upper), prior.upper))
    clipped = np.clip(start.av, prior.lower, prior.upper)
    columns = [np.interp(t, start.t, column) for column in clipped.T]
    nearest = np.abs(ln_f[:, None] - start.ln_misfit).argmin(axis=1) if ln_f.size > 1 else [0]
    return np.array(columns)[nearest].T


def _narrowed(
    target: Target, nodes: Nodes, fine_t: np.ndarray, fine: np.ndarray
) -> tuple[float, float] | None:
    """Return the range of ln f that holds the posterior."""
    bounds = target.misfit_bounds
    if bounds is None:
        return None
    top = fine.max()
    step = np.diff(fine_t)
    cells = np.exp(fine - top)
    mass = step @ (0.5 * (cells[1:] + cells[:-1]))
    ln_density = np.log(np.maximum(mass, 1e-300)) - nodes.ln_weight
    low, high = bounds
    grid = np.linspace(low, high, 65)
    shape = np.interp(grid, nodes.ln_misfit, ln_density)
    for side in (0, -1):
        _extend(shape, grid, nodes.ln_misfit, ln_density, side)
    inside = np.flatnonzero(shape > shape.max() - _MISFIT_DEPTH)
    return float(grid[max(inside[0] - 1, 0)]), float(grid[min(inside[-1] + 1, 64)])


def _extend(shape: np.ndarray, grid: np.ndarray, x: np.ndarray, y: np.ndarray, side: int) -> None:
    """Carry the outermost slope of y(x) on to the end of `grid`, in place."""
    other = 1 if side == 0 else -2
    slope = (y[other] - y[side]) / (x[other] - x[side])
    beyond = grid < x[0] if side == 0 else grid > x[-1]
    shape[beyond] = y[side] + slope * (grid[beyond] - x[side])


def _spread(x: np.ndarray, density: np.ndarray, n: int) -> np.ndarray:
    """Return n points, the ends of the support among them, spaced by a density per cell."""
    cumulative = np.concatenate([[0.0], np.cumsum(density * np.diff(x))])
    held = np.flatnonzero(density > 0.0)
    cumulative, x = cumulative[held[0] : held[-1] + 2], x[held[0] : held[-1] + 2]
    # Gaps between modes keep a little, or the inverse would not be one.
    cumulative = cumulative + 1e-9 * cumulative[-1] * (x - x[0]) / (x[-1] - x[0])
    points = np.interp(np.linspace(cumulative[0], cumulative[-1], n), cumulative, x)
    # A thousandth of even spacing, so that no two points are one.
    return 0.999 * points + 0.001 * np.linspace(x[0], x[-1], n)
