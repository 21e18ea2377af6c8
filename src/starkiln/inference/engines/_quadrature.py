"""The quadrature engine: lattice rules mapped onto the posterior, for catalogues.

The nodes of `find_nodes` describe the posterior closely: densities of ln T and of
ln f given T, a cut Gaussian of A_V given both, and of ln theta its conditional.
Randomly shifted lattices are carried through the inverses of these distributions,
and each point is weighted by the exact posterior over the density that it was
drawn with: the description decides how fast the engine is, not what it finds. The
misfit is summed over Gauss-Legendre nodes; a draw's f lies within its node's share.
"""

from __future__ import annotations

import numpy as np

from starkiln.errors import SettingsError
from starkiln.inference._problem import AV_MAX, Problem
from starkiln.inference._samples import Samples
from starkiln.inference.engines._lattice import MULTIPLIERS, shifted_lattices
from starkiln.inference.engines._quadrature_cloud import Cloud, Mapping
from starkiln.inference.engines._quadrature_flux import FluxForm
from starkiln.inference.engines._quadrature_log import LogForm
from starkiln.inference.engines._quadrature_nodes import Target, find_nodes
from starkiln.inference.engines._quadrature_surface import make_surface

#: The parameters that the engine integrates over.
_KNOWN = ("ln_temperature", "ln_diameter", "av", "ln_misfit")
#: Nodes in ln T and in ln f.
NODES = (48, 16)
#: Shifts of the lattice; their scatter is the error.
_SHIFTS = 8
#: The standard error of every percentile, in sigma, that is aimed at, and the largest
#: that is called converged.
AIM, TOLERANCE = 0.015, 0.03
#: The smallest share of effective draws that is called converged.
_SHARE = 0.1
#: Below this share a larger lattice is not tried.
_HOPELESS = 0.01
_LEVELS = np.array([0.16, 0.5, 0.84])
#: Half the step in level over which the density at a percentile is measured.
_STEP = 0.04


def run_quadrature(
    problem: Problem,
    rng: np.random.Generator,
    *,
    nodes: tuple[int, int] = NODES,
    aim: float = AIM,
) -> Samples:
    """Explore the posterior by quadrature.

    The lattice grows until the standard error of the 16th, 50th and 84th percentiles
    of every parameter and of the bolometric flux, from the scatter of its shifts, is
    below `aim` of the posterior's sigma.

    Parameters
    ----------
    problem : Problem
    rng : numpy.random.Generator
        Shifts the lattices.
    nodes : tuple of int
        Nodes in ln T and in ln f; more for a reference.
    aim : float
        The standard error aimed at; smaller for a reference.

    Returns
    -------
    Samples
        With `ln_evidence`, `error` and `spare`; unconverged where the error stays
        above `TOLERANCE`, or fewer than a tenth of the draws count.

    Raises
    ------
    SettingsError
        A parameter is free that the engine does not know, such as R_V.
    """
    unknown = [name for name in problem.names if name not in _KNOWN]
    if unknown:
        raise SettingsError(
            f"the quadrature engine cannot vary {', '.join(unknown)}; fix it, or choose the "
            "ensemble engine"
        )
    target = target_of(problem)
    mapping = Mapping(target, find_nodes(target, *nodes))
    for points in MULTIPLIERS:
        samples = _samples(mapping.cloud(shifted_lattices(rng, points, _SHIFTS)), problem, rng)
        if samples.error <= aim or samples.n_eff < _HOPELESS * len(samples.x):
            break
    return samples


def target_of(problem: Problem) -> Target:
    """Return the posterior in the components that its form works with."""
    form = LogForm(problem) if problem.form == "log" else FluxForm(problem)
    coefficients = problem.table.coefficients.copy()
    coefficients[0, 0] += form.offset
    coefficients = coefficients @ form.rotation
    if problem.fixed_av is not None:
        point = 2.0 * problem.fixed_av / AV_MAX - 1.0
        basis = np.polynomial.chebyshev.chebvander(point, coefficients.shape[1] - 1).ravel()
        coefficients = np.einsum("a,tan->tn", basis, coefficients)[:, None, :]
    surface = make_surface(coefficients, problem.table.ln_temperature, (0.0, AV_MAX))
    return Target(problem, form, surface)


def _samples(cloud: Cloud, problem: Problem, rng: np.random.Generator) -> Samples:
    """Turn weighted points into draws of equal weight, in the order of ln T."""
    top = float(cloud.ln_weight.max())
    weight = np.exp(cloud.ln_weight - top)
    n = weight.size
    order = np.argsort(cloud.x[:, 0])
    cumulative = np.cumsum(weight[order])
    levels = (np.arange(n) + rng.uniform()) * (cumulative[-1] / n)
    chosen = order[np.minimum(np.searchsorted(cumulative, levels), n - 1)]
    n_eff = float(weight.sum() ** 2 / (weight @ weight))
    error = _error(cloud, weight, chosen, problem)
    converged = error <= TOLERANCE and n_eff >= _SHARE * n
    message = (
        ""
        if converged
        else f"quadrature: percentiles are uncertain by {error:.2g} sigma ({TOLERANCE:g} wanted) "
        f"and {n_eff:.0f} of {n} draws count; fit this star with the ensemble engine"
    )
    return Samples(
        x=cloud.x[chosen],
        n_eff=n_eff,
        converged=bool(converged),
        message=message,
        ln_evidence=top + float(np.log(weight.mean())),
        error=error,
        spare=cloud.spare[chosen],
    )


def _error(cloud: Cloud, weight: np.ndarray, chosen: np.ndarray, problem: Problem) -> float:
    """Return the largest standard error of a percentile, in sigma of its quantity."""
    flux = 4.0 * problem.column(cloud.x, "ln_temperature")
    flux = flux + 2.0 * problem.column(cloud.x, "ln_diameter")
    weight = weight.reshape(cloud.shifts, -1)
    total = weight.sum(axis=1)
    worst = 0.0
    for values in (*cloud.x.T, flux):
        low, point, high = np.quantile(values[chosen], [_LEVELS - _STEP, _LEVELS, _LEVELS + _STEP])
        rows = values.reshape(cloud.shifts, -1)
        share = np.array([np.einsum("ij,ij->i", weight, rows <= edge) for edge in point]) / total
        scatter = share.std(axis=1, ddof=1) / np.sqrt(cloud.shifts)
        # All draws on a bound (a star that no model fits): no error to be scaled.
        sigma = max(0.5 * (point[2] - point[0]), 1e-12)
        worst = max(worst, float(np.max(scatter * (high - low) / (2.0 * _STEP * sigma))))
    return worst
