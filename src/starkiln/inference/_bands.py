"""The bands of one star as a likelihood needs them."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from starkiln.inference._band_offsets import emitter_offsets
from starkiln.inference._settings import Settings
from starkiln.observations import Measurement
from starkiln.passbands import load_band

#: mag to ln flux.
MAG = 0.4 * math.log(10.0)


@dataclass(frozen=True)
class Bands:
    """What the likelihood needs of the bands, detections before limits.

    Attributes
    ----------
    names : tuple of str
    n_detections : int
    ln_data, variance : numpy.ndarray
        Log form: ln flux and squared relative error of the detections.
    scaled_data, ln_error : numpy.ndarray
        Flux form: flux over error and ln of the error, of every band.
    sign : numpy.ndarray
        Of the limits: +1 upper, -1 lower, in flux.
    member, offset_variance : numpy.ndarray
        Detections by system, and each system's variance in ln flux.
    limit_offset_variance : numpy.ndarray
        The same for each limit.
    """

    names: tuple[str, ...]
    n_detections: int
    ln_data: np.ndarray
    variance: np.ndarray
    scaled_data: np.ndarray
    ln_error: np.ndarray
    sign: np.ndarray
    member: np.ndarray
    offset_variance: np.ndarray
    limit_offset_variance: np.ndarray


def build_bands(
    detections: list[Measurement], limits: list[Measurement], emitter: Any, settings: Settings
) -> Bands:
    """Return the bands of a star, brought to the emitter's scale, with their errors."""
    used = detections + limits
    bands = [load_band(item.band) for item in used]
    own = np.array([band.zero_point_error_mag * MAG for band in bands])
    own *= settings.system_offsets
    offset_mag, offset_error_mag = emitter_offsets(emitter, used, settings)
    own = np.hypot(own, offset_error_mag * MAG)
    # Data are brought to the model's scale.
    scale = np.exp(offset_mag * MAG)
    flux = np.array([item.flux_w_m3 for item in used]) * scale
    relative = np.array([item.fractional_error for item in detections])
    # A band's own zero-point error is independent of the others', so it adds to the
    # quoted error; the part that a system shares enters as its offset.
    error = np.array([item.error_w_m3 for item in used]) * scale
    error = np.hypot(error, own * np.abs(flux))
    n = len(detections)
    systems = list(dict.fromkeys(band.system for band in bands))
    offset = np.array([_offset(bands, system, settings) for system in systems]) ** 2
    member = np.array([[float(band.system == s) for s in systems] for band in bands])
    with np.errstate(invalid="ignore", divide="ignore"):
        ln_data = np.log(flux[:n])
    return Bands(
        names=tuple(band.name for band in bands),
        n_detections=n,
        ln_data=ln_data,
        variance=relative**2 + own[:n] ** 2,
        scaled_data=flux / error,
        ln_error=np.log(error),
        sign=np.array([1.0 if item.limit == "upper" else -1.0 for item in limits]),
        member=member[:n],
        offset_variance=offset,
        limit_offset_variance=member[n:] @ offset,
    )


def _offset(bands: list[Any], system: str, settings: Settings) -> float:
    """Return the error of a system's common zero point in ln flux."""
    if not settings.system_offsets:
        return 0.0
    if system in settings.system_offset_errors:
        return settings.system_offset_errors[system] * MAG
    return next(band.offset_error_mag for band in bands if band.system == system) * MAG
