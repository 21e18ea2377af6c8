"""Names of bands: how one is recognised, and which are offered for a wrong one."""

from __future__ import annotations

import difflib
import re
from functools import lru_cache
from pathlib import Path

from starkiln.errors import BandError
from starkiln.store import read_data_table

__all__ = ["band_names", "canonical_name", "is_band", "is_band_file", "match_band"]

#: Other names of the trade, each of one band only. A bare letter (J, V, g) is none:
#: several systems use it.
_SYNONYMS = {
    "Gaia G": ("Gaia DR3 G", "Gaia EDR3 G"),
    "Gaia BP": ("G_BP", "Gaia G_BP", "Gaia DR3 BP", "Gaia EDR3 BP"),
    "Gaia RP": ("G_RP", "Gaia G_RP", "Gaia DR3 RP", "Gaia EDR3 RP"),
    "2MASS Ks": ("2MASS K", "2MASS K_s"),
    "WISE W1": ("W1", "WISE 1", "AllWISE W1"),
    "WISE W2": ("W2", "WISE 2", "AllWISE W2"),
    "WISE W3": ("W3", "WISE 3", "AllWISE W3"),
    "WISE W4": ("W4", "WISE 4", "AllWISE W4"),
    "Johnson U": ("Bessell U",),
    "Johnson B": ("Bessell B",),
    "Johnson V": ("Bessell V",),
    "Cousins R": ("Bessell R", "R_C", "Rc"),
    "Cousins I": ("Bessell I", "I_C", "Ic"),
    "GALEX FUV": ("FUV",),
    "GALEX NUV": ("NUV",),
    "Euclid VIS": ("VIS",),
}
_SURVEY_SYNONYMS = {
    "Pan-STARRS ": ("PS1 ", "Pan-STARRS1 ", "PanSTARRS1 "),
    "DECam ": ("DES ",),
    "LSST ": ("Rubin ",),
}

#: Bands whose curves could not be sourced: how their names begin, without spaces.
_LEFT_OUT = ("tycho", "hipparcos", "stroemgren", "stromgren", "tess", "kepler", "irac", "spitzer")

#: What the name of a file with a band of the user's own ends in.
BAND_FILE_SUFFIXES = (".ecsv", ".csv", ".vot", ".votable", ".xml")


@lru_cache(maxsize=1)
def band_names() -> tuple[str, ...]:
    """Return the names of all bands, the most important system first."""
    return tuple(str(name) for name in read_data_table("passbands", "zero_points.ecsv")["band"])


def match_band(text: str) -> str | None:
    """Return the name of the band that `text` means, or None.

    Case, space, dot, dash and underscore do not matter; a few synonyms of the
    trade are known (`2MASS K`, `PS1 g`, `W1`). The path of a file with a band of
    the user's own (`read_band`) stands for itself.
    """
    if is_band_file(text) and Path(text).is_file():
        return text
    return _index().get(_key(text))


def is_band_file(text: str) -> bool:
    """Whether `text` is a file name that a band of the user's own can have."""
    return text.lower().endswith(BAND_FILE_SUFFIXES)


def is_band(text: str) -> bool:
    """Whether `text` names a band; see `match_band`."""
    return match_band(text) is not None


def canonical_name(text: str) -> str:
    """Return the name of the band that `text` means.

    Raises
    ------
    BandError
        None does; the nearest names are offered.
    """
    name = match_band(text)
    if name is None and _key(text).startswith(_LEFT_OUT):
        raise BandError(
            f"the curve of '{text}' is not part of starkiln, for want of a source: give a file "
            "with it as the band's name (see `starkiln bands --help`)"
        )
    if name is None:
        near = difflib.get_close_matches(_key(text), list(_index()), n=5, cutoff=0.5)
        offers = list(dict.fromkeys(_index()[key] for key in near))[:3]
        remedy = f"did you mean {' or '.join(offers)}?" if offers else "see `starkiln bands`"
        raise BandError(f"unknown band '{text}': {remedy}")
    return name


@lru_cache(maxsize=1)
def _index() -> dict[str, str]:
    index = {_key(name): name for name in band_names()}
    for name, others in _SYNONYMS.items():
        index.update({_key(other): name for other in others})
    for survey, prefixes in _SURVEY_SYNONYMS.items():
        for name in band_names():
            if name.startswith(survey):
                index.update({_key(p + name.removeprefix(survey)): name for p in prefixes})
    return index


def _key(text: str) -> str:
    return re.sub(r"[\s.\-_]", "", text).lower()
