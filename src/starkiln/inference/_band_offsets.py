"""Band offsets of an emitter: observed minus model magnitudes, with their errors."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from starkiln.emitters import AtmosphereEmitter
from starkiln.inference._settings import Settings
from starkiln.observations import Measurement

#: Bands whose offset is that of stars too bright for the detector, and only theirs.
_SATURATED_ONLY = ("WISE W3",)

#: What the offsets come from, for the screen and `run.json`.
ORIGIN = (
    "medians of 35 stars of 4,300 to 7,000 K with measured diameters (Soubiran et al. 2024, "
    "A&A 682, A145); untested for hotter ones, where they stay below the misfit"
)


def emitter_offsets(
    emitter: Any, measurements: Sequence[Measurement], settings: Settings
) -> tuple[np.ndarray, np.ndarray]:
    """Return the offset of each measurement and its error, mag; 0 where none is known.

    Parameters
    ----------
    emitter : Emitter
    measurements : sequence of Measurement
    settings : Settings

    Returns
    -------
    offset, error : numpy.ndarray, shape (n_measurements,)
    """
    known = (
        emitter.band_offsets
        if settings.atmosphere_offsets and isinstance(emitter, AtmosphereEmitter)
        else {}
    )
    pairs = [
        (0.0, 0.0)
        if item.band in _SATURATED_ONLY and not item.saturated
        else known.get(item.band, (0.0, 0.0))
        for item in measurements
    ]
    offset, error = np.array(pairs).reshape(-1, 2).T
    return offset, error
