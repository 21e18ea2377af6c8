"""Varied stars: hot, cool, dusty, faint, limits, few bands, known and free dust, both forms."""

from __future__ import annotations

from starkiln.inference import Settings, build_problem
from starkiln.runner import dust_of, emitter_of

from ._simulate import FAINT, simulate

FREE = Settings(dust="free")
KINDS = {
    "free dust, 12 bands": (FREE, 12),
    "free dust, 8 bands": (FREE, 8),
    "free dust, 5 bands": (FREE, 5),
    "free dust, 3 bands": (FREE, 3),
    "dust from the column": (Settings(), 8),
    "no dust": (Settings(dust="zero"), 6),
    "no misfit": (Settings(dust="free", misfit=False), 8),
    "no offsets": (Settings(dust="free", system_offsets=False), 8),
    "narrow range of temperature": (Settings(dust="free", temperature_range=(5000.0, 9000.0)), 8),
    "faint, in flux, with limits": (
        Settings(dust="free", likelihood="flux", diameter_range=FAINT),
        8,
    ),
}


def varied(rng, i):
    """The i-th star: its kind and its problem; one in three bright stars is fitted in flux."""
    kind = list(KINDS)[i % len(KINDS)]
    settings, n_bands = KINDS[kind]
    one = simulate(rng, settings, dust_of(settings), n_bands)
    if (i // len(KINDS)) % 3 == 2 and settings.likelihood == "log":
        settings = Settings(**{**settings.as_dict(), "likelihood": "flux"})
        kind += ", fitted in flux"
    return kind, build_problem(one.star, emitter_of("blackbody"), dust_of(settings), settings)
