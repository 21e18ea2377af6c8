"""Dust grains: radiation against gravity, blow-out and Poynting-Robertson drag."""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import YEAR, C
from starkiln.errors import InputError
from starkiln.forces._inputs import give, gm, metres, watts


def pressure_efficiency(absorption: Any, scattering: Any = 0.0, asymmetry: Any = 0.0) -> np.ndarray:
    """Return Q_pr = Q_abs + Q_sca (1 - g).

    Parameters
    ----------
    absorption, scattering : float or array_like
        Efficiencies, cross-sections over the geometric one; at least 0.
    asymmetry : float or array_like
        g, mean cosine of the scattered light, from -1 to 1.

    Returns
    -------
    numpy.ndarray
        Burns, Lamy & Soter 1979, Icarus 40, 1, section II; 1 for a large black grain
        and for a large white one that scatters isotropically.
    """
    q_abs = as_array(absorption, "", "absorption efficiency", lower=0.0)
    q_sca = as_array(scattering, "", "scattering efficiency", lower=0.0)
    g = as_array(asymmetry, "", "asymmetry", lower=-1.0, upper=1.0)
    return np.asarray(q_abs + q_sca * (1.0 - g))


def planck_mean(wavelength: Any, efficiency: Any, temperature: Any) -> np.ndarray:
    """Return an efficiency averaged over a blackbody's spectrum.

    Parameters
    ----------
    wavelength : Quantity or array_like, shape (n,)
        Rising; m when bare.
    efficiency : array_like, shape (n,)
        At those wavelengths; linear between them and constant beyond the ends.
    temperature : Quantity or array_like
        Of the blackbody, K, above 0.

    Returns
    -------
    numpy.ndarray
        Shape of `temperature`. Each interval is weighted with its exact part of the
        emission, so that a constant efficiency comes back unchanged.
    """
    from starkiln.photons import fraction

    nodes = as_array(wavelength, "m", "wavelength", lower=0.0, exclusive=True)
    q = as_array(efficiency, "", "efficiency", lower=0.0)
    if nodes.ndim != 1 or nodes.shape != q.shape or np.any(np.diff(nodes) <= 0.0):
        raise InputError(
            f"wavelength {nodes.shape} and efficiency {q.shape} must be two vectors of one "
            "length, the wavelengths rising"
        )
    kelvin = as_array(temperature, "K", "temperature", lower=0.0, exclusive=True)
    edges = np.concatenate([[0.0], nodes, [math.inf]])
    means = np.concatenate([[q[0]], 0.5 * (q[1:] + q[:-1]), [q[-1]]])
    parts = fraction(edges[:-1], edges[1:], kelvin[..., np.newaxis])
    return np.asarray(np.sum(parts * means, axis=-1))


def grain_beta(
    size: Any, density: Any, *, efficiency: Any = 1.0, luminosity: Any = 1.0, mass: Any = 1.0
) -> np.ndarray:
    """Return beta, the radiation force on a spherical grain over the star's gravity.

    Parameters
    ----------
    size, density : Quantity or array_like
        Radius in um and density in g cm-3 when bare; above 0.
    efficiency : float or array_like
        Q_pr, at least 0.
    luminosity, mass : Quantity or array_like
        Of the star, solLum and solMass when bare.

    Returns
    -------
    numpy.ndarray
        3 L Q / (16 pi G M c rho s); 5.742e-5 Q / (rho s) in cgs for the Sun, printed as
        5.7e-5 by Burns, Lamy & Soter 1979, Icarus 40, 1.
    """
    radius = as_array(size, "um", "grain radius", lower=0.0, exclusive=True) * 1e-6
    return _beta_times_size(density, efficiency, luminosity, mass) / radius


def blowout_size(
    density: Any,
    *,
    efficiency: Any = 1.0,
    luminosity: Any = 1.0,
    mass: Any = 1.0,
    eccentricity: Any = 0.0,
) -> Any:
    """Return the radius, in um, below which a grain set free is not bound to the star.

    Released at the periastron of a parent body with `eccentricity`, at least 0 and
    below 1, it leaves if beta exceeds (1 - e) / 2 (Burns, Lamy & Soter 1979, section
    on the release of grains; 1/2 from a circular orbit). Others as for `grain_beta`.
    """
    e = as_array(eccentricity, "", "eccentricity", lower=0.0)
    if np.any(e >= 1.0):
        raise InputError(f"eccentricity = {float(np.max(e)):g} is out of bounds: give one below 1")
    size = _beta_times_size(density, efficiency, luminosity, mass) / (0.5 * (1.0 - e))
    return give(size * 1e6, "um")


def drag_time(distance: Any, beta: Any, *, mass: Any = 1.0, final: Any = None) -> Any:
    """Return the Poynting-Robertson time of a grain on a circular orbit, in years.

    Parameters
    ----------
    distance : Quantity or array_like
        Where it starts, au when bare.
    beta : float or array_like
        From `grain_beta`; above 0, below 1 (no circular orbit at or beyond 1).
    mass : Quantity or array_like
        Of the star, solMass when bare.
    final : Quantity or array_like, optional
        Where it ends, au when bare; the star's centre by default.

    Returns
    -------
    Quantity
        c (r_0^2 - r_1^2) / (4 G M beta), Julian years: 400.5 r^2 / beta for the Sun
        (Wyatt & Whipple 1950, ApJ 111, 134; Burns, Lamy & Soter 1979).
    """
    ratio = as_array(beta, "", "beta", lower=0.0, upper=1.0, exclusive=True)
    start = metres(distance)
    end = np.zeros(()) if final is None else metres(final, "final distance")
    if np.any(end > start):
        raise InputError("the final distance is beyond the first: drag only leads inward")
    seconds = C.value * (start - end) * (start + end) / (4.0 * gm(mass) * ratio)
    return give(seconds / YEAR.value, "yr")


def _beta_times_size(density: Any, efficiency: Any, luminosity: Any, mass: Any) -> np.ndarray:
    rho = as_array(density, "g / cm3", "grain density", lower=0.0, exclusive=True) * 1e3
    q = as_array(efficiency, "", "efficiency Q_pr", lower=0.0)
    return np.asarray(3.0 * watts(luminosity) * q / (16.0 * math.pi * gm(mass) * C.value * rho))
