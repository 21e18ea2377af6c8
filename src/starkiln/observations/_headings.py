"""What a heading says: a band, a known quantity, its error or its limit flag."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

from starkiln.observations._from_python import nearest
from starkiln.observations._quantities import BY_NAME
from starkiln.passbands import band_names, match_band

__all__ = [
    "NAME_HEADINGS",
    "Meaning",
    "duplicates",
    "heading_key",
    "looks_like_band",
    "meaning_of",
    "split_unit",
]

#: Headings under which catalogues of the trade keep a star's name, best first.
NAME_HEADINGS = (
    "name",
    "star",
    "starname",
    "object",
    "objectname",
    "designation",
    "mainid",
    "sourceid",
    "identifier",
    "target",
    "id",
)
_OTHER_NAMES = {"plx": "parallax"}
#: Archives call the colours G - RP and G - BP so, observers the magnitudes.
_AMBIGUOUS = ("grp", "gbp")
_ERROR_HEADS = ("e_", "err_", "error_", "sigma_", "sig_", "unc_")
_ERROR_TAILS = ("_error", "_err", "_sigma", "_unc", "_uncertainty")
_LIMIT_HEADS = ("l_",)


@dataclass(frozen=True)
class Meaning:
    """What a column is.

    Attributes
    ----------
    role : str
        `value`, `error`, `limit` or `name`.
    target : str
        A band, a quantity of `QUANTITIES`, or empty for the name.
    """

    role: str
    target: str = ""

    @property
    def is_band(self) -> bool:
        """Whether it belongs to a band."""
        return bool(self.target) and self.target not in BY_NAME

    @property
    def heading(self) -> str:
        """The contract's heading for it."""
        return {"value": "", "error": "e_", "limit": "l_", "name": "name"}[self.role] + self.target


def meaning_of(heading: str) -> Meaning | None:
    """Return what a heading means by itself, or None.

    Bands and quantities by their names without regard to case, space, dot, dash
    and underscore; `e_X`, `X_error` and their like for the error of X; `l_X` for
    its limit flag.
    """
    text = heading.strip()
    target = _target(text)
    if target:
        return Meaning("value", target)
    folded = text.casefold()
    for head in _LIMIT_HEADS:
        if folded.startswith(head) and (target := _target(text[len(head) :])):
            return Meaning("limit", target)
    base = _error_base(text)
    if base and (target := _target(base)):
        return Meaning("error", target)
    if heading_key(text) in NAME_HEADINGS:
        return Meaning("name")
    return None


def split_unit(heading: str) -> tuple[str, str]:
    """Split `WISE W3 [mJy]` or `parallax (mas)` into heading and unit; else unit is empty."""
    match = re.fullmatch(r"(.+?)\s*(?:\[([^\[\]]+)\]|\((.+)\))", heading.strip())
    if not match:
        return heading.strip(), ""
    return match[1], match[2] or match[3]


def looks_like_band(heading: str) -> tuple[str, list[str]]:
    """Return what a heading means that looks like a band's and is none.

    Returns
    -------
    str, list of str
        `e_`, `l_` or nothing, and the nearest bands, none if it looks like no band.
    """
    text = heading.strip()
    base = _error_base(text)
    head = "e_" if base else "l_" if text[:2].casefold() == "l_" else ""
    return head, _near_bands(heading_key(base or text.removeprefix(head)))


def _near_bands(key: str) -> list[str]:
    names = {heading_key(name): name for name in band_names()}
    near = [names[word] for word in nearest(key, names, 3)]
    system = next((word for word in _system_words() if key.startswith(word)), None)
    if system is not None:
        # `Gaia X` and `WISE W5` are meant as bands, `gaia_id` and `WISE_ra` are not.
        rest = key.removeprefix(system)
        return near if re.fullmatch(r"[a-z]|[a-z][0-9]|[bgr]p|k[a-z]", rest) else []
    return [n for n in near if len(key) >= 5 and _distance(key, heading_key(n)) <= 1]


@lru_cache(maxsize=1)
def _system_words() -> list[str]:
    """Return how a band's name may begin, the longest first."""
    words = {heading_key(name.rpartition(" ")[0]) for name in band_names()}
    return sorted(words | {"twomass", "allwise", "bessell", "ps1"}, key=len, reverse=True)


def _target(text: str) -> str:
    key = heading_key(text)
    if not key or key in _AMBIGUOUS:
        return ""
    key = _OTHER_NAMES.get(key, key)
    if key in BY_NAME and key != "ebv":
        # E(B-V) may mean the whole line of sight: only a sheet binds it.
        return key
    return match_band(text) or ""


def _error_base(text: str) -> str:
    folded = text.casefold()
    for head in _ERROR_HEADS:
        if folded.startswith(head):
            return text[len(head) :]
    for tail in _ERROR_TAILS:
        if folded.endswith(tail):
            return text[: -len(tail)]
    return ""


def heading_key(text: str) -> str:
    """Return a heading without case, space and punctuation."""
    return re.sub(r"[\s.\-_/()\[\]]", "", text).casefold()


def _distance(one: str, two: str) -> int:
    """Count of single-letter edits between two words (Levenshtein 1966)."""
    row = list(range(len(two) + 1))
    for i, a in enumerate(one, 1):
        previous, row[0] = row[0], i
        for j, b in enumerate(two, 1):
            cost = previous + (a != b)
            previous, row[j] = row[j], min(cost, row[j] + 1, row[j - 1] + 1)
    return row[-1]


def duplicates(words: Iterable[str]) -> list[str]:
    """Return the words that occur more than once, in order of appearance."""
    seen: dict[str, int] = {}
    for word in words:
        seen[word] = seen.get(word, 0) + 1
    return [word for word, count in seen.items() if count > 1]
