"""The quadrature engine: lattice rules mapped onto the posterior, for catalogues.

The nodes of `find_nodes` describe the posterior closely: densities of ln f and of
ln T given f, and a cut Gaussian of A_V given both. Randomly shifted lattices
(`_lattice`) are carried through the inverses of these distributions in turn; ln
theta follows from its exact conditional. Each point is then weighted by the exact
posterior over the density it was drawn with, so that the description decides how
fast the engine is and not what it finds. The misfit is summed over Gauss-Legendre
nodes; a draw's f lies within its node's share of the distribution.
"""

from __future__ import annotations

import numpy as np

from starkiln.inference._problem import AV_MAX, Problem
from starkiln.inference._samples import Samples
from starkiln.inference.engines import _truncated
from starkiln.inference.engines._lattice import MULTIPLIERS, shifted_lattices
from starkiln.inference.engines._quadrature_flux import FluxForm
from starkiln.inference.engines._quadrature_log import LogForm
from starkiln.inference.engines._quadrature_nodes import (
    Nodes,
    Target,
    find_nodes,
    interpolated,
)
from starkiln.inference.engines._quadrature_surface import Surface, make_surface

#: Shifts of the lattice; their scatter is the error.
_SHIFTS = 8
#: The standard error of every percentile, in sigma, that is aimed at, and the largest
#: that is called converged.
AIM, TOLERANCE = 0.01, 0.02
#: Smallest share of effective draws that is called converged.
_SHARE = 0.1
_LEVELS = np.array([0.16, 0.5, 0.84])


def run_quadrature(problem: Problem, rng: np.random.Generator) -> Samples:
    """Explore the posterior by quadrature.

    The lattice grows until the standard error of the 16th, 50th and 84th percentiles
    of every parameter, from the scatter of its shifts, is below `AIM` of the
    posterior's sigma.

    Parameters
    ----------
    problem : Problem
    rng : numpy.random.Generator
        Shifts the lattices.

    Returns
    -------
    Samples
        With `ln_evidence`; unconverged where an error stays above `TOLERANCE` or
        fewer than a tenth of the draws count.
    """
    target = _target(problem)
    nodes = find_nodes(target, 48, 16)
    for points in MULTIPLIERS:
        cloud = _cloud(target, nodes, shifted_lattices(rng, points, _SHIFTS))
        error = _percentile_error(cloud[0], cloud[1])
        if error <= AIM:
            break
    return _samples(*cloud, error, rng)


def _target(problem: Problem) -> Target:
    form = LogForm(problem) if problem.form == "log" else FluxForm(problem)
    coefficients = problem.table.coefficients.copy()
    coefficients[0, 0] += form.offset
    coefficients = coefficients @ form.rotation
    surface = make_surface(coefficients, problem.table.ln_temperature, (0.0, AV_MAX))
    if problem.fixed_av is not None:
        low, high = problem.bounds[problem.names.index("ln_temperature")]
        surface = _at_fixed_av(surface, problem.fixed_av)
    return Target(problem, form, surface)


def _at_fixed_av(surface: Surface, av: float) -> Surface:
    basis = np.polynomial.chebyshev.chebvander(
        2.0 * av / AV_MAX - 1.0, surface.coefficients.shape[1] - 1
    ).ravel()
    series = np.einsum("a,tan->tn", basis, surface.coefficients)[:, None, :]
    return Surface(series, np.zeros_like(series), surface.t_range, surface.av_range)


def _cloud(
    target: Target, nodes: Nodes, unit: np.ndarray
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Return points, ln weights and the spare levels, (shifts, n, ...)."""
    problem = target.problem
    u = unit.reshape(-1, unit.shape[2])
    fine_t, fine = interpolated(
        nodes.t, np.concatenate([nodes.ln_mass + nodes.ln_weight, nodes.av, np.log(nodes.precision)], axis=1)
    )
    k_count = nodes.ln_misfit.size
    ln_h = fine[:, :k_count]
    h = np.exp(ln_h - ln_h.max())
    step = np.diff(fine_t)
    cell = 0.5 * (h[1:] + h[:-1]) * step[:, None]
    share = cell.sum(axis=0)
    # Every misfit keeps a little of the draws.
    share = share / share.sum()
    cdf_f = np.cumsum(share)
    k = np.minimum(np.searchsorted(cdf_f, u[:, 0]), k_count - 1)
    cdf = np.cumsum(cell, axis=0) / cell.sum(axis=0)
    flat = (cdf + np.arange(k_count)).T.ravel()
    n_cell = step.size
    pos = np.clip(np.searchsorted(flat, u[:, 1] + k) - k * n_cell, 0, n_cell - 1)
    prob = cell / cell.sum(axis=0)
    below = cdf[pos, k] - prob[pos, k]
    frac = np.clip((u[:, 1] - below) / np.maximum(prob[pos, k], 1e-300), 0.0, 1.0)
    t = fine_t[pos] + frac * step[pos]
    ln_q = np.log(prob[pos, k] / step[pos]) + np.log(share[k])
    f = nodes.misfit[k]
    ln_p = nodes.ln_weight[k] + target.t_prior.ln_density(t)
    prior = target.av_prior
    if prior is None:
        av = np.full(t.size, problem.fixed_av)
    else:
        mean = (1 - frac) * fine[pos, k_count + k] + frac * fine[pos + 1, k_count + k]
        sd = np.exp(-0.5 * ((1 - frac) * fine[pos, 2 * k_count + k] + frac * fine[pos + 1, 2 * k_count + k]))
        z, ln_qa = _truncated.draw(u[:, 2], (prior.lower - mean) / sd, (prior.upper - mean) / sd)
        av = np.clip(mean + sd * z, prior.lower, prior.upper)
        ln_q += ln_qa - np.log(sd)
        ln_p += prior.ln_density(av)
    surface = target.surface
    if prior is not None:
        surface = surface.restricted((t.min(), t.max()), (av.min(), av.max()))
    value = surface.at(t, av)
    diameter, ln_like = target.form.settle(value, f, u[:, 3])
    ln_w = ln_p + ln_like - ln_q
    columns = {"ln_temperature": t, "ln_diameter": diameter, "av": av}
    if k_count > 1:
        columns["ln_misfit"] = _misfit_draws(target, nodes, share, u[:, 0])
    x = np.column_stack([columns[name] for name in problem.names])
    return x.reshape(*unit.shape[:2], -1), ln_w.reshape(unit.shape[:2]), unit[:, :, 4]


def _misfit_draws(target, nodes, share, u):
    """ln f at levels u: interpolated distribution through the nodes' shares."""
    x, n = nodes.ln_misfit, nodes.ln_misfit.size
    ln_density = np.log(np.maximum(share, 1e-300)) - nodes.ln_weight
    unit, _ = np.polynomial.legendre.leggauss(n)
    half = (x[-1] - x[0]) / (unit[-1] - unit[0])
    mid = x[0] - unit[0] * half
    grid = np.linspace(-1, 1, 257)
    from scipy.interpolate import barycentric_interpolate
    dens = np.exp(barycentric_interpolate(unit, ln_density - ln_density.max(), grid))
    c = np.concatenate([[0], np.cumsum(0.5 * (dens[1:] + dens[:-1]))])
    return np.interp(u, c / c[-1], mid + half * grid)


def _percentile_error(x: np.ndarray, ln_w: np.ndarray) -> float:
    w = np.exp(ln_w - ln_w.max())
    flat_w = w.ravel()
    worst = 0.0
    for i in range(x.shape[2]):
        v = x[:, :, i]
        order = np.argsort(v.ravel())
        c = np.cumsum(flat_w[order])
        c = (c - 0.5 * flat_w[order]) / c[-1]
        probe = np.concatenate([_LEVELS, _LEVELS - 0.04, _LEVELS + 0.04])
        q = np.interp(probe, c, v.ravel()[order])
        sd = 0.5 * (q[2] - q[0])
        slope = (q[6:] - q[3:6]) / 0.08
        per = np.array([[np.sum(wr * (vr <= qq)) / wr.sum() for qq in q[:3]] for wr, vr in zip(w, v)])
        err = per.std(axis=0, ddof=1) / np.sqrt(len(w)) * slope / sd
        worst = max(worst, err.max())
    return float(worst)


def _samples(x, ln_w, spare, error, rng):
    n = ln_w.size
    top = ln_w.max()
    w = np.exp(ln_w - top).ravel()
    ln_evidence = float(top + np.log(w.mean()))
    n_eff = float(w.sum() ** 2 / (w @ w))
    flat = x.reshape(n, -1)
    order = np.argsort(flat[:, 0])
    c = np.cumsum(w[order])
    chosen = order[np.minimum(np.searchsorted(c / c[-1], (np.arange(n) + rng.uniform()) / n), n - 1)]
    ok = error <= TOLERANCE and n_eff >= _SHARE * n
    return Samples(flat[chosen], n_eff, ok, "" if ok else f"error {error}", ln_evidence)
