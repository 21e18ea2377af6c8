"""Points of a lattice carried onto the posterior, each with its weight.

ln T comes first, from its distribution with the misfit summed over, so that its
percentiles are exact to a step of the lattice; then the node of the misfit given
T, A_V given both, and ln theta from its own conditional.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln.inference._priors import Uniform
from starkiln.inference.engines import _truncated
from starkiln.inference.engines._quadrature_nodes import Nodes, Target, interpolated, legendre

#: Points of the distribution of ln f, interpolated between its nodes.
_FINE = 257
#: Share of the points spread evenly over ln T: mass that the nodes missed shows in their weights.
_SCOUTS = 0.01
#: A conditional of A_V wider than this share of its prior is drawn in part from the prior.
_WEAK = 0.3


@dataclass(frozen=True)
class Cloud:
    """Weighted points of one star's posterior.

    Attributes
    ----------
    x : numpy.ndarray
        Parameters, shape (n, n_parameters).
    ln_weight : numpy.ndarray
        ln of the posterior, not normalised, over the density of the points, (n,).
    spare : numpy.ndarray
        Levels between 0 and 1 that no parameter used, (n,).
    shifts : int
        Equal stretches of the points, each one shift of the lattice.
    """

    x: np.ndarray
    ln_weight: np.ndarray
    spare: np.ndarray
    shifts: int


class Mapping:
    """The distributions that nodes describe, ready to be inverted."""

    def __init__(self, target: Target, nodes: Nodes) -> None:
        k = nodes.ln_misfit.size
        columns = [nodes.ln_mass + nodes.ln_weight, nodes.av, -0.5 * np.log(nodes.precision)]
        self._t, fine = interpolated(nodes.t, np.concatenate(columns, axis=1))
        density = np.exp(fine[:, :k] - fine[:, :k].max())
        cell = 0.5 * (density[1:] + density[:-1]) * np.diff(self._t)[:, None]
        scouts = np.diff(self._t)[:, None] * cell.sum(axis=0) / (self._t[-1] - self._t[0])
        self._cell = ((1.0 - _SCOUTS) * cell + _SCOUTS * scouts) / cell.sum()
        self._av, self._ln_sd = fine[:, k : 2 * k], fine[:, 2 * k :]
        self._target, self._nodes = target, nodes

    def cloud(self, lattices: np.ndarray) -> Cloud:
        """Carry lattices of shape (shifts, n, dimensions) onto the posterior."""
        target, nodes, problem = self._target, self._nodes, self._target.problem
        u = lattices.reshape(-1, lattices.shape[2]).T
        i, part, t = self._temperature(u[0])
        k, level = self._misfit(u[1], i)
        ln_weight = target.t_prior.ln_density(t) + nodes.ln_weight[k]
        ln_weight -= np.log(self._cell[i, k] / (self._t[i + 1] - self._t[i]))
        if target.av_prior is None:
            av = np.full(t.size, problem.fixed_av)
            surface = target.surface
        else:
            av, ln_density = self._extinction(u[2], i, part, k)
            ln_weight += target.av_prior.ln_density(av) - ln_density
            surface = target.surface.restricted((t.min(), t.max()), (av.min(), av.max()))
        diameter, ln_like = target.form.settle(surface.at(t, av), nodes.misfit[k], u[3])
        columns = {"ln_temperature": t, "ln_diameter": diameter, "av": av}
        if "ln_misfit" in problem.names:
            columns["ln_misfit"] = self._ln_misfit(level)
        x = np.column_stack([columns[name] for name in problem.names])
        return Cloud(x, ln_weight + ln_like, u[4], len(lattices))

    def _temperature(self, u: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Return the cell, the place within it (0 to 1) and ln T."""
        mass = self._cell.sum(axis=1)
        cumulative = np.cumsum(mass)
        wanted = u * cumulative[-1]
        i = np.minimum(np.searchsorted(cumulative, wanted), mass.size - 1)
        part = np.clip(1.0 + (wanted - cumulative[i]) / np.maximum(mass[i], 1e-300), 0.0, 1.0)
        return i, part, self._t[i] + part * (self._t[i + 1] - self._t[i])

    def _misfit(self, u: np.ndarray, i: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Return the node of the misfit given the cell, and its level over all cells."""
        cumulative = np.cumsum(self._cell, axis=1)[i]
        wanted = u * cumulative[:, -1]
        k = np.minimum((cumulative < wanted[:, None]).sum(axis=1), cumulative.shape[1] - 1)
        short = np.take_along_axis(cumulative, k[:, None], axis=1)[:, 0] - wanted
        part = np.clip(1.0 - short / np.maximum(self._cell[i, k], 1e-300), 0.0, 1.0)
        share = self._cell.sum(axis=0)
        return k, np.cumsum(share)[k] - (1.0 - part) * share[k]

    def _extinction(
        self, u: np.ndarray, i: np.ndarray, part: np.ndarray, k: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return A_V and ln of the density that it is drawn with."""
        prior = self._target.av_prior
        mean, ln_sd = (
            (1.0 - part) * table[i, k] + part * table[i + 1, k] for table in (self._av, self._ln_sd)
        )
        sd = np.exp(ln_sd)
        low, high = (prior.lower - mean) / sd, (prior.upper - mean) / sd
        share = np.where(sd > _WEAK * prior.sd, self._target.form.defence, 0.0)
        plain = u < share
        z, ln_density = _truncated.draw(np.maximum(u - share, 0.0) / (1.0 - share), low, high)
        av = np.clip(mean + sd * z, prior.lower, prior.upper)
        if not np.any(plain):
            return av, ln_density - ln_sd
        av[plain] = _from_prior(prior, u[plain] / share[plain])
        ln_density[plain] = _truncated.ln_density(
            (av - mean)[plain] / sd[plain], low[plain], high[plain]
        )
        return av, np.logaddexp(
            np.log1p(-share) + ln_density - ln_sd,
            np.log(np.maximum(share, 1e-300)) + prior.ln_density(av),
        )

    def _ln_misfit(self, level: np.ndarray) -> np.ndarray:
        """Return ln f at levels of its distribution, a polynomial's exponential."""
        x = self._nodes.ln_misfit
        unit, weight = legendre(x.size)
        ln_share = np.log(np.maximum(self._cell.sum(axis=0), 1e-300))
        ln_density = ln_share - self._nodes.ln_weight
        ln_density = np.maximum(ln_density - ln_density.max(), -40.0)
        vander = np.polynomial.legendre.legvander(unit, x.size - 1)
        series = (np.arange(x.size) + 0.5) * ((weight * ln_density) @ vander)
        grid = np.linspace(-1.0, 1.0, _FINE)
        density = np.exp(np.polynomial.legendre.legval(grid, series))
        cumulative = np.concatenate([[0.0], np.cumsum(density[1:] + density[:-1])])
        scale = (x[-1] - x[0]) / (unit[-1] - unit[0])
        return np.interp(level, cumulative / cumulative[-1], x[0] + scale * (grid - unit[0]))


def _from_prior(prior: Any, u: np.ndarray) -> np.ndarray:
    """Return the points of a prior of A_V at levels u."""
    if isinstance(prior, Uniform):
        return prior.lower + (prior.upper - prior.lower) * u
    low, high = (
        np.full(u.size, (edge - prior.mean) / prior.width) for edge in (prior.lower, prior.upper)
    )
    z, _ = _truncated.draw(u, low, high)
    return np.clip(prior.mean + prior.width * z, prior.lower, prior.upper)
