"""Points that fill the unit cube evenly: randomly shifted lattice rules.

A rank-1 lattice integrates smooth functions far better than as many random points
(Sloan & Joe 1994, Lattice Methods for Multiple Integration, Oxford); several
random shifts of it make the estimate unbiased and tell its error (Cranley &
Patterson 1976, SIAM J. Numer. Anal. 13, 904).
"""

from __future__ import annotations

import numpy as np

DIMENSIONS = 5
#: Points -> Korobov multiplier that makes P_2 in five dimensions (weights 0.7; Sloan &
#: Joe 1994, eq. 4.6) smallest among 300 candidates; searched for this project.
MULTIPLIERS = {512: 25, 1024: 189, 2048: 659, 8192: 3013}


def shifted_lattices(rng: np.random.Generator, points: int, shifts: int) -> np.ndarray:
    """Return `shifts` randomly shifted copies of a lattice, (shifts, points, DIMENSIONS)."""
    generator = [1]
    for _ in range(DIMENSIONS - 1):
        generator.append(generator[-1] * MULTIPLIERS[points] % points)
    lattice = np.outer(np.arange(points), generator) / points
    # No level is 0, where an unbounded distribution has no point.
    return np.maximum((lattice + rng.uniform(size=(shifts, 1, DIMENSIONS))) % 1.0, 2.0**-53)
