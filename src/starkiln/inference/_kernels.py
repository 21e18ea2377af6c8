"""The two likelihoods of one star's photometry, on plain arrays; no astropy here.

Both are Gaussian with the misfit f as a further relative error of every band and
with one offset per photometric system, shared by all its bands and marginalised
analytically: the covariance is diagonal plus one rank-one term per system, so the
Sherman-Morrison formula and the matrix determinant lemma give its inverse and
determinant (Sherman & Morrison 1950, Ann. Math. Stat. 21, 124).
"""

from __future__ import annotations

import numpy as np

_LN_2PI = float(np.log(2.0 * np.pi))


def ln_likelihood_log(
    ln_model: np.ndarray,
    misfit: np.ndarray,
    ln_data: np.ndarray,
    variance: np.ndarray,
    member: np.ndarray,
    offset_variance: np.ndarray,
) -> np.ndarray:
    """Return the likelihood that is Gaussian in ln flux.

    Parameters
    ----------
    ln_model : numpy.ndarray
        ln of the model's band fluxes, shape (n, n_bands).
    misfit : numpy.ndarray
        f, shape (n,): added in quadrature to each band's relative error.
    ln_data, variance : numpy.ndarray
        ln of the measured fluxes and their squared relative errors, (n_bands,).
    member : numpy.ndarray
        1 where a band belongs to a system, shape (n_bands, n_systems).
    offset_variance : numpy.ndarray
        Variance of each system's offset in ln flux, (n_systems,).

    Returns
    -------
    numpy.ndarray
        ln of the density of `ln_data`, shape (n,).
    """
    residual = ln_data - ln_model
    weight = 1.0 / (variance + (misfit * misfit)[:, None])
    weighted = weight * residual
    quadratic = np.sum(weighted * residual, axis=1)
    ln_determinant = -np.sum(np.log(weight), axis=1)
    quadratic, ln_determinant = _with_offsets(
        quadratic, ln_determinant, weight @ member, weighted @ member, offset_variance
    )
    return -0.5 * (quadratic + ln_determinant + ln_data.size * _LN_2PI)


def ln_likelihood_flux(
    ln_model: np.ndarray,
    misfit: np.ndarray,
    scaled_data: np.ndarray,
    ln_error: np.ndarray,
    member: np.ndarray,
    offset_variance: np.ndarray,
) -> np.ndarray:
    """Return the likelihood that is Gaussian in flux, variance e^2 + (f F)^2.

    Parameters
    ----------
    ln_model, misfit, member, offset_variance
        As for `ln_likelihood_log`; an offset multiplies the model's flux F.
    scaled_data : numpy.ndarray
        Measured fluxes over their errors, (n_bands,); may be 0 or negative.
    ln_error : numpy.ndarray
        ln of the errors e, in the unit of the model's fluxes, (n_bands,).

    Returns
    -------
    numpy.ndarray
        ln of the density of `scaled_data` (fluxes in units of their errors), (n,).
    """
    model = np.exp(np.minimum(ln_model - ln_error, 300.0))
    residual = scaled_data - model
    weight = 1.0 / (1.0 + (misfit[:, None] * model) ** 2)
    weighted = weight * residual
    quadratic = np.sum(weighted * residual, axis=1)
    ln_determinant = -np.sum(np.log(weight), axis=1)
    quadratic, ln_determinant = _with_offsets(
        quadratic,
        ln_determinant,
        (weight * model * model) @ member,
        (weighted * model) @ member,
        offset_variance,
    )
    return -0.5 * (quadratic + ln_determinant + scaled_data.size * _LN_2PI)


def ln_likelihood_limits(
    ln_model: np.ndarray,
    misfit: np.ndarray,
    scaled_limit: np.ndarray,
    ln_error: np.ndarray,
    sign: np.ndarray,
    offset_variance: np.ndarray,
) -> np.ndarray:
    """Return the probability that every censored band lies beyond its limit.

    Parameters
    ----------
    ln_model, misfit : numpy.ndarray
        As above, shape (n, n_limits) and (n,).
    scaled_limit, ln_error : numpy.ndarray
        The limiting fluxes over their errors and ln of those errors, (n_limits,).
    sign : numpy.ndarray
        +1 for an upper limit of flux, -1 for a lower one, (n_limits,).
    offset_variance : numpy.ndarray
        Variance of the system's offset of each limit, (n_limits,); taken to be
        independent of that of the detections.

    Returns
    -------
    numpy.ndarray
        Sum of ln Phi(sign (limit - F) / sigma), shape (n,): the probability that a
        star of flux F, observed with that error, is measured beyond the limit.
    """
    from scipy.special import log_ndtr

    model = np.exp(np.minimum(ln_model - ln_error, 300.0))
    sigma = np.sqrt(1.0 + (misfit[:, None] ** 2 + offset_variance) * model * model)
    return np.sum(log_ndtr(sign * (scaled_limit - model) / sigma), axis=1)


def _with_offsets(
    quadratic: np.ndarray,
    ln_determinant: np.ndarray,
    information: np.ndarray,
    score: np.ndarray,
    offset_variance: np.ndarray,
) -> tuple[np.ndarray, np.ndarray]:
    growth = 1.0 + offset_variance * information
    quadratic = quadratic - np.sum(offset_variance * score * score / growth, axis=1)
    return quadratic, ln_determinant + np.sum(np.log(growth), axis=1)
