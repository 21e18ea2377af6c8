"""Momentum that light leaves in an absorbing slab or gas column (photon drag)."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln._units import as_array
from starkiln.constants import C
from starkiln.errors import InputError
from starkiln.forces._inputs import angle_cosine, give


@dataclass(frozen=True, eq=False)
class PhotonDrag:
    """What a beam of light does to an absorbing layer, with depth.

    Attributes
    ----------
    optical_depth : numpy.ndarray
        Along the normal, with one more last axis for the bands if there are any.
    transmitted : Quantity
        Flux normal to the beam that is left at this depth, all bands, W m-2.
    acceleration : Quantity
        Of the matter at this depth, along the beam, m s-2.
    normal_pressure, tangential_pressure : Quantity
        Momentum taken up between the surface and this depth, per area and time, Pa.
    """

    optical_depth: np.ndarray
    transmitted: Any
    acceleration: Any
    normal_pressure: Any
    tangential_pressure: Any


def photon_drag(irradiance: Any, opacity: Any, column: Any, *, angle: Any = 0.0) -> PhotonDrag:
    """Return the force of a beam on a layer that absorbs, or scatters isotropically.

    Parameters
    ----------
    irradiance : Quantity or array_like
        Flux through a plane normal to the beam, W m-2 when bare: one number for grey
        light, a vector with one element per band.
    opacity : Quantity or array_like
        cm2 g-1 when bare; one number, or one per band.
    column : Quantity or array_like
        Mass above each depth, g cm-2 when bare (density times depth); any shape.
    angle : Quantity or float
        Between beam and normal, degrees when bare, 0 to 90.

    Returns
    -------
    PhotonDrag
        Arrays of the shape of `column`, summed over bands. With t = kappa m / cos(angle):
        F exp(-t), kappa F exp(-t) / c, and F cos^2(angle) (1 - exp(-t)) / c.

    Raises
    ------
    InputError
        Irradiance and opacity of different lengths, or a value out of bounds.
    """
    flux = as_array(irradiance, "W / m2", "irradiance", lower=0.0)
    kappa = as_array(opacity, "cm2 / g", "opacity", lower=0.0) * 0.1
    mass = as_array(column, "g / cm2", "column", lower=0.0) * 10.0
    cosine, sine = (float(a) for a in angle_cosine(angle))
    try:
        flux, kappa = np.broadcast_arrays(np.atleast_1d(flux), np.atleast_1d(kappa))
    except ValueError as error:
        raise InputError(
            f"irradiance has {flux.shape} and opacity {kappa.shape} elements: "
            "give one of each per band"
        ) from error
    depth = kappa * mass[..., np.newaxis]
    with np.errstate(divide="ignore", invalid="ignore"):
        slant = np.where(depth > 0.0, depth / cosine, 0.0)
    left = flux * np.exp(-slant)
    taken = np.sum(flux * -np.expm1(-slant), axis=-1) / C.value
    return PhotonDrag(
        optical_depth=depth[..., 0] if flux.size == 1 else depth,
        transmitted=give(np.sum(left, axis=-1), "W / m2"),
        acceleration=give(np.sum(kappa * left, axis=-1) / C.value, "m / s2"),
        normal_pressure=give(taken * cosine**2, "Pa"),
        tangential_pressure=give(taken * cosine * sine, "Pa"),
    )
