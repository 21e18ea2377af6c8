"""What a catalogue may tell of a star beside its photometry, and its bounds."""

from __future__ import annotations

import math
from dataclasses import dataclass

__all__ = ["BY_NAME", "QUANTITIES", "RV_MEAN", "Known", "av_from_ebv"]


@dataclass(frozen=True)
class Known:
    """One quantity that a catalogue column or `Star(...)` may give.

    Attributes
    ----------
    name : str
        Heading of its column; the error's heading has `e_` before it.
    unit : str
        Unit of a bare number; the value is kept in it.
    field : str
        Attribute of `Star`; the error's attribute has `e_` before it.
    meaning : str
        What it is, in words.
    lower, upper : float
        Values outside are no such quantity: most often a code for "missing".
    strict : bool
        The lower bound itself is refused too.
    error : str
        `required`, `optional`, `exact` (optional, and 0 is allowed) or `none`.
    """

    name: str
    unit: str
    field: str
    meaning: str
    lower: float = -math.inf
    upper: float = math.inf
    strict: bool = False
    error: str = "optional"


#: 768.5 mas is the largest parallax of any star (Proxima Centauri, Gaia DR3); a
#: noisy negative one is data, but -999 is a code.
QUANTITIES = (
    Known("parallax", "mas", "parallax_mas", "parallax", -800.0, 800.0, error="required"),
    Known("distance", "pc", "distance_pc", "distance", 0.0, 1e10, strict=True, error="required"),
    Known("av", "mag", "av", "extinction at 0.55 um", -1.0, 10.0, error="exact"),
    Known("ebv", "mag", "ebv", "colour excess E(B-V)", -0.4, 40.0, error="exact"),
    Known("rv", "", "rv", "ratio of extinction to colour excess", 1.0, 10.0, error="none"),
    Known("logg", "dex", "logg", "log10 of surface gravity in cm s-2", -3.0, 16.0),
    Known("feh", "dex", "feh", "metallicity [Fe/H]", -8.0, 2.0),
    Known("teff", "K", "teff_k", "published temperature", 0.0, 1e6, strict=True),
    Known("mass", "solMass", "mass_msun", "mass", 0.0, 1e4, strict=True),
    Known("radius", "solRad", "radius_rsun", "radius", 0.0, 1e5, strict=True),
    Known("luminosity", "solLum", "luminosity_lsun", "luminosity", 0.0, 1e9, strict=True),
)

#: R_V with which E(B-V) turns into A_V where nothing else is said: the mean of the
#: diffuse Milky Way (Cardelli, Clayton & Mathis 1989, ApJ 345, 245).
RV_MEAN = 3.1

BY_NAME = {known.name: known for known in QUANTITIES}


def av_from_ebv(values: dict[str, float], rv: float) -> str:
    """Add A_V = R_V E(B-V) to the values of a star that has E(B-V) and no A_V.

    Parameters
    ----------
    values : dict
        Attributes of a star; its own `rv` goes before the argument.
    rv : float

    Returns
    -------
    str
        What was done; empty for nothing.
    """
    if "ebv" not in values or "av" in values:
        return ""
    ratio = values.get("rv", rv)
    values["av"] = ratio * values["ebv"]
    if "e_ebv" in values:
        values["e_av"] = ratio * values["e_ebv"]
    return f"av is {ratio:g} E(B-V)"
