"""What the headings of archives and observers most likely mean.

Nothing here is taken for granted when a catalogue is read: a letter such as `g`
belongs to several systems. It only proposes what a column sheet may say.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from starkiln.observations._headings import meaning_of
from starkiln.observations._quantities import BY_NAME
from starkiln.passbands import band_names, match_band

__all__ = ["Guess", "guess"]

#: A letter or two alone: the systems that use it, the likeliest first.
_LETTERS = {
    "G": ("Gaia G",),
    "BP": ("Gaia BP",),
    "RP": ("Gaia RP",),
    "J": ("2MASS J",),
    "H": ("2MASS H",),
    "K": ("2MASS Ks",),
    "Ks": ("2MASS Ks",),
    "U": ("Johnson U",),
    "B": ("Johnson B",),
    "V": ("Johnson V",),
    "R": ("Cousins R",),
    "I": ("Cousins I",),
    "u": ("SDSS u",),
    "g": ("SDSS g", "Pan-STARRS g"),
    "r": ("SDSS r", "Pan-STARRS r"),
    "i": ("SDSS i", "Pan-STARRS i"),
    "z": ("SDSS z", "Pan-STARRS z"),
    "y": ("Pan-STARRS y",),
    "FUV": ("GALEX FUV",),
    "NUV": ("GALEX NUV",),
}
#: Words for a system, beside its own name in one word.
_OTHER_SYSTEMS = {
    "twomass": "2MASS",
    "tmass": "2MASS",
    "allwise": "WISE",
    "ps1": "Pan-STARRS",
    "ps": "Pan-STARRS",
    "panstarrs": "Pan-STARRS",
}
#: Words of a heading that say how a magnitude was made, not in which band.
_MAGNITUDE_WORDS = {"mag", "mags", "m", "mpro", "magnitude", "psfmag", "modelmag", "phot"}
_NOISE_WORDS = {"mean", "psf", "model", "auto", "aper", "ap", "petro", "dr2", "dr3", "edr3"}
_ERROR_WORDS = {
    "e", "err", "error", "errs", "sig", "sigma", "msigcom", "cmsig", "msig", "sigmpro", "merr",
    "magerr", "unc", "uncertainty", "std",
}  # fmt: skip
_SCALES = {"ab": "AB", "vega": "Vega"}
_RATIO_WORDS = {"snr", "sn", "over"}
_FLUX_WORDS = {"flux", "f", "fnu", "flam"}

#: Quantities by the headings of archives: heading without punctuation -> meaning.
_QUANTITIES = {
    "rgeo": "distance",
    "rpgeo": "distance",
    "rest": "distance",
    "dist": "distance",
    "distpc": "distance",
    "distancegspphot": "distance",
    "teffgspphot": "teff",
    "logggspphot": "logg",
    "mhgspphot": "feh",
    "metallicity": "feh",
    "mh": "feh",
    "massflame": "mass",
    "radiusflame": "radius",
    "lumflame": "luminosity",
    "lum": "luminosity",
    "rad": "radius",
    "ebv": "ebv",
    "ebminusv": "ebv",
}
_UNITS = {
    "mas": "mas",
    "arcsec": "arcsec",
    "pc": "pc",
    "kpc": "kpc",
    "mag": "mag",
    "k": "K",
    "dex": "dex",
    "msun": "solMass",
    "rsun": "solRad",
    "lsun": "solLum",
}


@dataclass(frozen=True)
class Guess:
    """What a heading may be.

    Attributes
    ----------
    role : str
        `value`, `error` or `signal_to_noise`.
    meanings : tuple of str
        Bands or a quantity, the likeliest first.
    flux : bool
        Whether the heading speaks of a flux, whose unit must then be known.
    unit : str
        Unit that the heading ends with, as in `parallax_mas`.
    system : str
        Magnitude system that the heading names, as in `J_AB`.
    stem : str
        The word of the heading that names the band or the quantity.
    """

    role: str
    meanings: tuple[str, ...]
    flux: bool = False
    unit: str = ""
    system: str = ""
    stem: str = ""

    def text(self) -> str:
        """Return it in words, such as `the error of 2MASS J`."""
        what = {"error": "the error of ", "signal_to_noise": "the signal to noise of "}
        return what.get(self.role, "") + " or ".join(self.meanings)


def guess(heading: str) -> Guess | None:
    """Return what a heading that means nothing by itself most likely is, or None."""
    if found := _quantity(heading):
        return found
    words = _words(heading)
    folded = [word.casefold() for word in words]
    error = any(word in _ERROR_WORDS for word in folded)
    ratio = any(word in _RATIO_WORDS for word in folded)
    flux = any(word in _FLUX_WORDS for word in folded) and not ratio
    system = next((_SCALES[word] for word in folded if word in _SCALES), "")
    dull = _MAGNITUDE_WORDS | _NOISE_WORDS | _ERROR_WORDS | _RATIO_WORDS | _FLUX_WORDS
    dull |= _SCALES.keys()
    # M_G is an absolute magnitude, g_m an apparent one.
    rest = [word for word in words if word.casefold() not in dull or word == "M"]
    named = bool(set(folded) & (dull - {"mean"}))
    survey = _survey(folded)
    if survey == "Gaia" and flux:
        return None  # in electrons per second, which is no flux density
    bands = _bands(rest, survey, named)
    if not bands or not (named or len(words) == 1 or len(rest) > 1):
        return None
    role = "signal_to_noise" if ratio else "error" if error else "value"
    return Guess(role, bands, flux, system=system, stem=rest[0])


def _quantity(heading: str) -> Guess | None:
    quantity = _QUANTITIES.get(re.sub(r"[^a-z]", "", heading.casefold()))
    if quantity:
        return Guess("value", (quantity,), stem=heading)
    stem, _, tail = heading.rpartition("_")
    unit = _UNITS.get(tail.casefold())
    meaning = meaning_of(stem)
    if unit and meaning and meaning.target in BY_NAME:
        return Guess(meaning.role, (meaning.target,), unit=unit, stem=stem)
    return None


def _words(heading: str) -> list[str]:
    """Cut `phot_g_mean_mag`, `Jmag`, `gMeanPSFMagErr`, `w1mpro`, `e_Vmag` into words."""
    text = re.sub(r"[\[(].*?[\])]", " ", heading)
    text = re.sub(r"(?i)(psfmag|modelmag|mag)(err)?", r" \1 \2 ", text)
    text = re.sub(r"(?i)(?<![a-z0-9])(w[1-4])(mpro|sigmpro|snr|flux)", r"\1 \2", text)
    text = re.sub(r"(?i)(?<=[a-z0-9])(err|error|unc)(?![a-z])", r" \1 ", text)
    text = re.sub(r"(?i)2m(?:ass)?(?![a-z])", " 2mass ", text)
    text = re.sub(r"(?<=[a-z])(?=[A-Z][a-z])|(?<=[a-z])(?=PSF)", " ", text)
    return [word for word in re.split(r"[^A-Za-z0-9]+", text) if word]


@lru_cache(maxsize=1)
def _systems() -> dict[str, str]:
    own = {name.rpartition(" ")[0] for name in band_names()}
    return {name.casefold(): name for name in own} | _OTHER_SYSTEMS


def _survey(folded: list[str]) -> str:
    """Return the survey whose archive makes headings of this kind, or nothing."""
    if folded[:1] == ["phot"]:
        return "Gaia"
    return "Pan-STARRS" if {"mean", "psfmag"} <= set(folded) else ""


def _bands(words: list[str], survey: str, named: bool) -> tuple[str, ...]:
    systems = _systems()
    system = next((systems[w.casefold()] for w in words if w.casefold() in systems), survey)
    rest = [word for word in words if word.casefold() not in systems]
    if len(rest) != 1:
        return ()
    letter = rest[0]
    if system:
        band = match_band(f"{system} {letter}")
        return (band,) if band else ()
    if found := match_band(letter):
        return (found,)
    options = _LETTERS.get(letter)
    if options is None and (named or letter in "jhkv"):  # b alone is a latitude
        options = _LETTERS.get(letter.upper()) or _LETTERS.get(letter.capitalize())
    return tuple(band for band in options or () if band in band_names())
