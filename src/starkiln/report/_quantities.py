"""What each fitted or derived quantity is called and measured in, for people and files."""

from __future__ import annotations

from dataclasses import dataclass

from starkiln.errors import InputError


@dataclass(frozen=True)
class Quantity:
    """One quantity of the results.

    Attributes
    ----------
    key : str
        Column name.
    title : str
        In words.
    symbol : str
        In matplotlib's math text, which LaTeX understands too.
    unit : str
        astropy's spelling; empty for a pure number.
    unit_text : str
        The unit as a figure's label prints it.
    ucd : str
        Unified content descriptor (IVOA UCD1+ 1.5).
    logarithmic : bool
        Whether it is better seen on a logarithmic axis.
    """

    key: str
    title: str
    symbol: str
    unit: str
    unit_text: str
    ucd: str
    logarithmic: bool = False

    @property
    def label(self) -> str:
        """Symbol and unit, for an axis."""
        return f"{self.symbol} ({self.unit_text})" if self.unit_text else self.symbol


_ALL = (
    Quantity("temperature", "temperature", r"$T$", "K", "K", "phys.temperature"),
    Quantity(
        "angular_diameter", "angular diameter", r"$\theta$", "mas", "mas", "phys.angSize", True
    ),
    Quantity("av", "extinction at 0.55 um", r"$A_V$", "mag", "mag", "phys.absorption;em.opt.V"),
    Quantity("rv", "total to selective extinction", r"$R_V$", "", "", "phys.absorption"),
    Quantity("misfit", "fractional misfit of the emitter", r"$f$", "", "", "stat.error"),
    Quantity(
        "bolometric_flux",
        "bolometric flux before dust",
        r"$F_\mathrm{bol}$",
        "W m-2",
        r"$\mathrm{W\,m^{-2}}$",
        "phot.flux.bol",
        True,
    ),
    Quantity("distance", "distance", r"$d$", "pc", "pc", "pos.distance", True),
    Quantity("radius", "radius", r"$R$", "solRad", r"$\mathrm{R_\odot}$", "phys.size.radius", True),
    Quantity(
        "luminosity",
        "luminosity",
        r"$L$",
        "solLum",
        r"$\mathrm{L_\odot}$",
        "phys.luminosity",
        True,
    ),
    Quantity("mass", "mass", r"$M$", "solMass", r"$\mathrm{M_\odot}$", "phys.mass", True),
    Quantity("logg", "surface gravity", r"$\log g$", "dex(cm s-2)", "cgs", "phys.gravity"),
    Quantity(
        "feh", "metallicity", r"$[\mathrm{Fe/H}]$", "dex", "dex", "phys.abund.Z"
    ),
    Quantity(
        "temperature_2",
        "temperature of the second component",
        r"$T_2$",
        "K",
        "K",
        "phys.temperature",
    ),
    Quantity(
        "area_ratio", "area of the second component over the first", r"$A_2/A_1$", "", "",
        "phys.area;arith.ratio", True,
    ),
)  # fmt: skip
QUANTITIES = {item.key: item for item in _ALL}

#: Parameters of the posterior in the order in which figures show them.
FITTED = (
    "temperature", "temperature_2", "area_ratio", "angular_diameter", "av", "rv", "logg", "feh",
    "misfit", "distance",
)  # fmt: skip
DERIVED = ("bolometric_flux", "radius", "luminosity")


def quantity(key: str) -> Quantity:
    """Return the description of a quantity.

    Raises
    ------
    InputError
        The quantity is unknown.
    """
    try:
        return QUANTITIES[key]
    except KeyError:
        raise InputError(
            f"the quantity {key!r} is unknown: give one of {', '.join(QUANTITIES)}"
        ) from None
