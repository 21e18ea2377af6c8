"""`starkiln pressure`: how much of a star's pressure is light."""

from __future__ import annotations

import argparse
import sys
from typing import Any

from starkiln.errors import InputError
from starkiln.interiors import PressureRatio, pressure_ratio

#: Column -> (unit, what it is); the order of the printed table.
_COLUMNS = {
    "mass": ("solMass", "Mass"),
    "mu": ("", "Mean particle weight in atomic mass units"),
    "radiation_fraction": ("", "P_rad/P, ratio of the volume integrals"),
    "radiation_to_gas": ("", "P_rad/P_gas, ratio of the volume integrals"),
    "radiation_fraction_core": ("", "P_rad/P at the centre"),
    "radiation_to_gas_core": ("", "P_rad/P_gas at the centre"),
    "gamma_e": ("", "Eddington factor of electron scattering at the surface"),
    "radius": ("solRad", "Radius of the model"),
    "luminosity": ("solLum", "Luminosity of the model"),
    "temperature": ("K", "Effective temperature of the model"),
}

_FORMATS = {"ecsv": "ascii.ecsv", "votable": "votable", "csv": "ascii.csv"}

_EPILOG = """\
ratios   `radiation_fraction` is P_rad over the total pressure, `radiation_to_gas` P_rad over
         the gas pressure, each the ratio of the integrals over the star's volume; `_core` the
         same at the centre; `gamma_e` the push of light on free electrons over gravity at the
         surface. The standard model takes the same share of light everywhere.
"""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.epilog = _EPILOG
    parser.add_argument(
        "--mass",
        nargs="+",
        required=True,
        metavar="M",
        help="mass, in solMass unless it has a unit",
    )
    parser.add_argument(
        "--hydrogen", type=float, default=0.70, metavar="X", help="mass fraction (default 0.70)"
    )
    parser.add_argument(
        "--metals", type=float, default=0.02, metavar="Z", help="mass fraction (default 0.02)"
    )
    parser.add_argument(
        "--mu", type=float, metavar="MU", help="mean particle weight in place of that of X and Z"
    )
    parser.add_argument(
        "--model", choices=["standard"], default="standard", help="Eddington's standard model"
    )
    parser.add_argument(
        "--format", choices=[*_FORMATS, "fits", "text"], default="text", help="default text"
    )


def run(args: argparse.Namespace) -> int:
    """Print the table and return the exit code."""
    ratios = pressure_ratio(
        _masses(args.mass),
        hydrogen=args.hydrogen,
        metals=args.metals,
        mu=args.mu,
        model=args.model,
    )
    _print_table(_table(ratios), args.format)
    return 0


def _masses(words: list[str]) -> list[float]:
    from astropy import units as u

    masses = []
    for word in words:
        try:
            value = u.Quantity(word)
            masses.append(float(value.value if value.unit == u.one else value.to_value(u.solMass)))
        except (TypeError, ValueError) as error:
            raise InputError(
                f"--mass {word} is not a mass: give a number in solMass, or one with a unit of "
                f"mass such as 20solMass"
            ) from error
    return masses


def _table(ratios: PressureRatio) -> Any:
    from astropy.table import Table

    table = Table()
    table["name"] = [f"{mass:g} solMass" for mass in ratios.mass.value]
    table["name"].description = "Name"
    for name, (unit, description) in _COLUMNS.items():
        column = getattr(ratios, name)
        if column is not None:
            table[name] = getattr(column, "value", column)
            table[name].unit = unit or None
            table[name].description = description
    return table


def _print_table(table: Any, form: str) -> None:
    if form == "text":
        for name in table.colnames[1:]:
            table[name].format = ".6g"
        sys.stdout.write(
            "\n".join(table.pformat(max_lines=-1, max_width=-1, show_unit=True)) + "\n"
        )
    elif form == "fits":
        table.write(sys.stdout.buffer, format="fits")
    else:
        table.write(sys.stdout, format=_FORMATS[form])
