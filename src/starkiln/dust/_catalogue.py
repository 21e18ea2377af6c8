"""The published extinction laws: ranges, R_V and references.

Names, ranges and R_V are those of the dust_extinction package; a test keeps them so.
They stand here as well, so that a setting is checked without importing it.
"""

from __future__ import annotations

import difflib
from dataclasses import dataclass

from starkiln.errors import DustError

__all__ = ["LAWS", "LawInfo", "law_info"]

#: A law that ends between these, um, or beyond the last is continued as a power law:
#: outside them it ends where extinction is none (the optical, or inside the silicate
#: features at 10 and 20 um).
_POWER_LAW_ENDS_UM = (3.0, 8.0, 25.0)


@dataclass(frozen=True)
class LawInfo:
    """What is known of one law without evaluating it.

    Attributes
    ----------
    name, reference : str
        Published name as in dust_extinction, and where it was published.
    short_um, long_um : float
        Range that it was published for.
    rv_range : tuple of float or None
        Range of R_V; None for a single average.
    own_rv : float or None
        R_V of a single average.
    no_tail : bool
        Whether the law ends flat, near zero or below it, so that no power law
        continues it.
    """

    name: str
    reference: str
    short_um: float
    long_um: float
    rv_range: tuple[float, float] | None = None
    own_rv: float | None = None
    no_tail: bool = False

    @property
    def continued(self) -> bool:
        """Whether the law is continued beyond its long end, as a power law."""
        low, high, last = _POWER_LAW_ENDS_UM
        return not self.no_tail and (low <= self.long_um <= high or self.long_um >= last)


def _law(
    name: str, reference: str, inverse_um: tuple[float, float], rv: object, *, no_tail: bool = False
) -> LawInfo:
    low, high = inverse_um
    span = rv if isinstance(rv, tuple) else None
    own = float(rv) if isinstance(rv, float) else None
    return LawInfo(name, reference, 1.0 / high, 1.0 / low, span, own, no_tail)


_WIDE = (0.3, 10.0)
_ANY = (2.0, 6.0)

#: Every average law of dust_extinction; the range in 1/um, as published, then R_V.
LAWS: dict[str, LawInfo] = {
    law.name: law
    for law in (
        _law("G23", "Gordon et al. 2023, ApJ 950, 86", (1 / 32.0, 1 / 0.0912), (2.3, 5.6)),
        _law("F19", "Fitzpatrick et al. 2019, ApJ 886, 108", (0.3, 8.7), _ANY),
        _law("F99", "Fitzpatrick 1999, PASP 111, 63", _WIDE, _ANY),
        _law("F04", "Fitzpatrick 2004, ASP Conf. Ser. 309, 33", _WIDE, _ANY),
        _law("O94", "O'Donnell 1994, ApJ 422, 158", _WIDE, _ANY),
        _law("CCM89", "Cardelli, Clayton & Mathis 1989, ApJ 345, 245", _WIDE, _ANY),
        _law("M14", "Maiz Apellaniz et al. 2014, A&A 564, A63", (0.3, 3.3), _ANY),
        _law("G16", "Gordon et al. 2016, ApJ 826, 104", _WIDE, _ANY),
        _law("D22", "Decleir et al. 2022, ApJ 930, 15", (0.25, 1.25), (2.5, 5.5)),
        _law("VCG04", "Valencic, Clayton & Gordon 2004, ApJ 616, 912", (3.3, 8.0), _ANY),
        _law("GCC09", "Gordon, Cartledge & Clayton 2009, ApJ 705, 1320", (3.3, 11.0), _ANY),
        _law(
            "GCC09_MWAvg",
            "Gordon, Cartledge & Clayton 2009, ApJ 705, 1320",
            (0.3, 1 / 0.0912),
            3.1,
        ),
        _law("B92_MWAvg", "Bastiaansen 1992, A&AS 93, 449", (1 / 0.7873, 1 / 0.3402), 3.1),
        _law("G03_SMCBar", "Gordon et al. 2003, ApJ 594, 279", _WIDE, 2.74),
        _law("G03_LMCAvg", "Gordon et al. 2003, ApJ 594, 279", _WIDE, 3.41),
        _law("G03_LMC2", "Gordon et al. 2003, ApJ 594, 279", _WIDE, 2.76),
        _law("G24_SMCAvg", "Gordon et al. 2024, ApJ 970, 51", _WIDE, 3.02),
        _law("G24_SMCBumps", "Gordon et al. 2024, ApJ 970, 51", _WIDE, 2.55, no_tail=True),
        _law("C25_M31Avg", "Clayton et al. 2025, ApJ 989, 61", _WIDE, 3.2, no_tail=True),
        _law("G26_M33Avg", "Gordon et al. 2026, ApJ, submitted", _WIDE, 4.66),
        _law("RL85_MWGC", "Rieke & Lebofsky 1985, ApJ 288, 618", (1 / 13.0, 0.8), 3.09),
        _law("RRP89_MWGC", "Rieke, Rieke & Paul 1989, ApJ 336, 752", (1 / 13.0, 1 / 0.9), 3.09),
        _law(
            "I05_MWAvg",
            "Indebetouw et al. 2005, ApJ 619, 931",
            (1 / 7.76, 1 / 1.24),
            3.1,
            no_tail=True,
        ),
        _law("CT06_MWGC", "Chiar & Tielens 2006, ApJ 637, 774", (1 / 27.0, 1 / 1.24), 3.1),
        _law("CT06_MWLoc", "Chiar & Tielens 2006, ApJ 637, 774", (1 / 27.0, 1 / 1.24), 3.1),
        _law("F11_MWGC", "Fritz et al. 2011, ApJ 737, 73", (1 / 19.062, 1 / 1.282), 3.1),
        _law("G21_MWAvg", "Gordon et al. 2021, ApJ 916, 33", (1 / 32.0, 1.0), 3.17),
        _law("D22_MWAvg", "Decleir et al. 2022, ApJ 930, 15", (0.2, 1.25), 3.12),
    )
}


def law_info(name: str, rv: float | None = None) -> LawInfo:
    """Return what is known of a law, checked against an R_V.

    Raises
    ------
    DustError
        The name is unknown, or R_V is outside the law's range.
    """
    if name not in LAWS:
        near = difflib.get_close_matches(name.upper(), LAWS, n=3, cutoff=0.4)
        remedy = f"did you mean {' or '.join(near)}?" if near else f"use {', '.join(LAWS)}"
        raise DustError(f"unknown dust law '{name}': {remedy}")
    law = LAWS[name]
    if rv is not None and law.rv_range is not None:
        low, high = law.rv_range
        if not low <= rv <= high:
            raise DustError(
                f"R_V = {rv:g} is outside the law {name}: give a number between {low:g} and "
                f"{high:g}"
            )
    return law
