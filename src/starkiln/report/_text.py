"""Names from catalogues on figures, in file names and in messages: shown, never obeyed."""

from __future__ import annotations

import hashlib
import re
import unicodedata
from functools import lru_cache
from typing import Any

_GREEK_NAMES = (
    "alpha", "beta", "gamma", "delta", "epsilon", "zeta", "eta", "theta", "iota", "kappa",
    "lambda", "mu", "nu", "xi", "omicron", "pi", "rho", "sigma", "sigma", "tau", "upsilon",
    "phi", "chi", "psi", "omega",
)  # fmt: skip
#: Greek letter -> its English name, capitalised as the letter is.
GREEK = {chr(0x3B1 + place): name for place, name in enumerate(_GREEK_NAMES)} | {
    chr(0x391 + place): name.capitalize() for place, name in enumerate(_GREEK_NAMES)
}
#: Names that Windows keeps for devices, whatever their ending.
_DEVICES = {"con", "prn", "aux", "nul"} | {
    f"{kind}{n}" for kind in ("com", "lpt") for n in range(10)
}


def plain_line(text: object, longest: int = 60) -> str:
    """Return `text` as one line without control characters, shortened with an ellipsis."""
    characters = (
        " " if unicodedata.category(letter)[0] in "CZ" else letter for letter in str(text)
    )
    line = " ".join("".join(characters).split())
    return (
        line if len(line) <= longest else line[: longest - 1].rstrip() + "\N{HORIZONTAL ELLIPSIS}"
    )


def star_label(name: object, row: int, longest: int = 60) -> str:
    """Return what a star is called on a figure: its name, else its row."""
    return plain_line(name, longest) or f"row {row}"


def file_stem(name: object, row: int) -> str:
    """Return a file name for a star that is safe on every system and its own.

    The row number (counted from 1) comes first, so two stars of one name, or of
    names that differ only in what a file name cannot hold, never share a file.
    Letters outside ASCII are spelled in their plain form where they have one.
    """
    text = unicodedata.normalize("NFKD", str(name))
    plain = re.sub(r"[^A-Za-z0-9+-]+", "_", text.encode("ascii", "ignore").decode()).strip("_-+")
    if len(plain) > 40:
        digest = hashlib.sha256(str(name).encode("utf-8", "replace")).hexdigest()[:8]
        plain = f"{plain[:40]}_{digest}"
    if plain.lower() in _DEVICES:
        plain += "_"
    return f"{row:05d}_{plain}" if plain else f"{row:05d}"


def ascii_text(text: object) -> str:
    """Return one line of ASCII: Greek letters spelled, accents left away, else `?`."""
    return "".join(map(_ascii_letter, plain_line(text, 400)))


def _ascii_letter(letter: str) -> str:
    if letter.isascii():
        return letter
    plain = unicodedata.normalize("NFKD", letter)
    if plain[0] in GREEK:
        return GREEK[plain[0]]
    return plain.encode("ascii", "ignore").decode() or "?"


def drawable(text: str) -> str:
    """Return `text` with letters that the figures' font lacks shown as a replacement mark."""
    glyphs = _font_glyphs()
    return "".join(
        letter if ord(letter) in glyphs else "\N{REPLACEMENT CHARACTER}" for letter in text
    )


@lru_cache(maxsize=1)
def _font_glyphs() -> Any:
    from matplotlib import font_manager

    return font_manager.get_font(font_manager.findfont("DejaVu Sans")).get_charmap().keys()
