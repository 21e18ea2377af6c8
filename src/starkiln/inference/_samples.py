"""What an engine hands back: draws of the parameters, and how far they can be trusted."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True)
class Samples:
    """Equally weighted draws of one star's parameters.

    Attributes
    ----------
    x : numpy.ndarray
        Shape (n, n_parameters).
    n_eff : float
        Effective number of draws, the smallest over the parameters.
    converged : bool
        Whether the engine met its own rule.
    message : str
        Why not, where it did not.
    ln_evidence : float
        ln of the evidence; NaN where the engine gives none.
    chain : numpy.ndarray or None
        Ensemble engine: the whole chain, shape (steps, walkers, n_parameters).
    burn_in : int
        Steps of `chain` before those in `x`.
    autocorrelation : numpy.ndarray or None
        Ensemble engine: autocorrelation time of each parameter, in steps.
    error : float
        Quadrature engine: the largest standard error of a percentile, in sigma of its
        quantity; else NaN.
    spare : numpy.ndarray or None
        Quadrature engine: levels between 0 and 1, one per draw and spread as evenly as
        `x`, from which one further, independent quantity may be drawn.
    """

    x: np.ndarray
    n_eff: float
    converged: bool
    message: str
    ln_evidence: float
    chain: np.ndarray | None = None
    burn_in: int = 0
    autocorrelation: np.ndarray | None = None
    error: float = np.nan
    spare: np.ndarray | None = None
