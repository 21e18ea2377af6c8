"""How figures and tables for print write each quantity: its symbol and its unit."""

from __future__ import annotations

from dataclasses import dataclass

from starkiln.derived import QUANTITIES
from starkiln.errors import InputError


@dataclass(frozen=True)
class Printed:
    """How one quantity of the results is printed.

    Attributes
    ----------
    key : str
        Column name.
    symbol : str
        In math text, which matplotlib and LaTeX both understand.
    unit : str
        The same; empty for a pure number.
    logarithmic : bool
        Whether it is better seen on a logarithmic axis.
    """

    key: str
    symbol: str
    unit: str = ""
    logarithmic: bool = False

    @property
    def label(self) -> str:
        """Symbol and unit, for an axis."""
        return f"{self.symbol} ({self.unit})" if self.unit else self.symbol

    @property
    def text(self) -> str:
        """What it is, in words."""
        return QUANTITIES[self.key].text


_ALL = (
    Printed("temperature", r"$T$", "K"),
    Printed("temperature_2", r"$T_2$", "K"),
    Printed("area_ratio", r"$A_2/A_1$", logarithmic=True),
    Printed("angular_diameter", r"$\theta$", "mas", logarithmic=True),
    Printed("av", r"$A_V$", "mag"),
    Printed("rv", r"$R_V$"),
    Printed("logg", r"$\log g$", "cgs"),
    Printed("feh", r"$[\mathrm{Fe/H}]$", "dex"),
    Printed("misfit", r"$f$"),
    Printed("distance", r"$d$", "pc", logarithmic=True),
    Printed("bolometric_flux", r"$F_\mathrm{bol}$", r"$\mathrm{W\,m^{-2}}$", logarithmic=True),
    Printed("radius", r"$R$", r"$\mathrm{R_\odot}$", logarithmic=True),
    Printed("luminosity", r"$L$", r"$\mathrm{L_\odot}$", logarithmic=True),
)
#: Units in plain text, where a quantity has one.
HTML_UNITS = {
    "temperature": "K", "temperature_2": "K", "angular_diameter": "mas", "av": "mag",
    "logg": "cgs", "feh": "dex", "distance": "pc", "bolometric_flux": "W m\u207b\u00b2",
    "radius": "R\u2609", "luminosity": "L\u2609",
}  # fmt: skip
PRINTED = {item.key: item for item in _ALL}

#: What follows from the others, so that a corner plot leaves it out unless asked.
_DERIVED = ("bolometric_flux", "radius", "luminosity")
#: Parameters of the posterior in the order in which figures show them.
FITTED = tuple(key for key in PRINTED if key not in _DERIVED)


def printed(key: str) -> Printed:
    """Return how a quantity is printed.

    Raises
    ------
    InputError
        The quantity is unknown.
    """
    if key not in PRINTED:
        raise InputError(f"the quantity {key!r} is unknown: give one of {', '.join(PRINTED)}")
    return PRINTED[key]
