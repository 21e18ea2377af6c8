"""The engines that explore a posterior, by name."""

from collections.abc import Callable

import numpy as np

from starkiln.inference._problem import Problem
from starkiln.inference._samples import Samples
from starkiln.inference.engines._ensemble import run_ensemble
from starkiln.inference.engines._quadrature import run_quadrature

#: Name -> function of a problem and a random generator.
ENGINES: dict[str, Callable[[Problem, np.random.Generator], Samples]] = {
    "ensemble": run_ensemble,
    "quadrature": run_quadrature,
}

__all__ = ["ENGINES"]
