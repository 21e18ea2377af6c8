"""Independent proposals from a density drawn over the starting population.

A kernel density with Student kernels, whose tails are heavier than any posterior
here, so that no walker is stuck where the density underrates the target (Tierney
1994, Ann. Stat. 22, 1701, on independence chains). It is fixed before the chain
begins, so the Metropolis-Hastings ratio is exact.

The posterior is a funnel: where the misfit is small, temperature and diameter are
held tightly, where it is large they are not. So the kernels are shaped in groups of
like misfit, each by its own covariance.
"""

from __future__ import annotations

import numpy as np

#: Groups of like misfit.
_GROUPS = 4
#: Degrees of freedom and dimension of the Student kernels add up to this, so that their
#: density is the inverse fourth power of 1 + d^2/nu.
_NU_AND_DIMENSION = 8
#: Share of the proposals that have kernels as wide as the whole population.
_DEFENCE = 0.15


class PopulationProposal:
    """Proposes points about a population, whatever the walker's place.

    Parameters
    ----------
    population : numpy.ndarray
        Shape (n, n_parameters), close to the target.
    funnel : int or None
        Column along which the other columns' spread changes; None for one group.
    """

    def __init__(self, population: np.ndarray, funnel: int | None) -> None:
        if funnel is not None:
            population = population[np.argsort(population[:, funnel], kind="stable")]
        groups = np.array_split(population, 1 if funnel is None else _GROUPS)
        roots = [_root(group, len(group)) for group in groups]
        weights = [(1.0 - _DEFENCE) * len(group) / len(population) for group in groups]
        # A tail that few of the population reached is proposed by wide kernels all the
        # same, and so can be left again.
        self._points: list[np.ndarray] = [*groups, population[:: len(population) // 64]]
        self._roots = [*roots, _root(population, 1)]
        self._shares = np.cumsum([*weights, _DEFENCE])
        self._inverses = [np.linalg.inv(root) for root in self._roots]
        self._white = [
            points @ inverse.T for points, inverse in zip(self._points, self._inverses, strict=True)
        ]
        self._heights = [
            weight / len(points) / float(np.prod(np.diag(root)))
            for weight, points, root in zip(
                [*weights, _DEFENCE], self._points, self._roots, strict=True
            )
        ]
        self._nu = max(_NU_AND_DIMENSION - population.shape[1], 1)

    def __call__(
        self, coords: np.ndarray, random: np.random.RandomState
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return new points and the ln ratio of proposal densities, old over new.

        The signature that `emcee.moves.MHMove` asks for.
        """
        n, dimension = coords.shape
        group = np.searchsorted(self._shares, random.uniform(size=n) * self._shares[-1])
        place = np.asarray(random.uniform(size=n))
        step = random.standard_normal((n, dimension))
        step *= np.sqrt(self._nu / random.chisquare(self._nu, size=(n, 1)))
        new = np.empty_like(coords)
        for i, (points, root) in enumerate(zip(self._points, self._roots, strict=True)):
            here = group == i
            centre = points[(place[here] * len(points)).astype(int)]
            new[here] = centre + step[here] @ root.T
        return new, self.ln_density(coords) - self.ln_density(new)

    def ln_density(self, x: np.ndarray) -> np.ndarray:
        """Return ln of the density at `x` but for a constant, shape (n,)."""
        total = np.zeros(len(x))
        for white, inverse, height in zip(self._white, self._inverses, self._heights, strict=True):
            own = x @ inverse.T
            square = own @ (-2.0 * white.T)
            square += np.sum(own * own, axis=1)[:, None]
            square += np.sum(white * white, axis=1)
            square *= 1.0 / self._nu
            square += 1.0
            square *= square
            total += height * np.sum(1.0 / (square * square), axis=1)
        return np.log(total)


def _root(points: np.ndarray, n: int) -> np.ndarray:
    dimension = points.shape[1]
    covariance = np.atleast_2d(np.cov(points.T))
    covariance += 1e-12 * np.trace(covariance) * np.eye(dimension)
    # Scott's rule for the kernels' width (Scott 1992, Multivariate Density Estimation,
    # eq. 6.42).
    return np.linalg.cholesky(covariance) * n ** (-1.0 / (dimension + 4.0))
