"""`starkiln luminosity`: L and M_bol from radius and effective temperature."""

from __future__ import annotations

import argparse
from typing import Any

from starkiln.cli._options import quantity
from starkiln.cli._tables import add_format, print_table
from starkiln.errors import InputError

_NOTES = """\
Give --radius and --temperature, or a TABLE with the columns radius (solRad) and
temperature (K) and, where known, e_radius, e_temperature and name; other units are
read from the columns. Luminosity is 4 pi R^2 sigma T^4 in nominal solar
luminosities (IAU 2015 Resolution B3), M_bol on the zero point of Resolution B2.
Errors are taken as Gaussian and independent; _lo and _hi are the 16th and 84th
percentiles.

A value may carry its unit: --radius 6.957e8m, --temperature 5772K."""


def configure(parser: argparse.ArgumentParser) -> None:
    """Add the command's options."""
    parser.epilog = _NOTES
    parser.add_argument("table", nargs="?", metavar="TABLE", help="table of stars, any format")
    for name, unit in (("radius", "solRad"), ("temperature", "K")):
        parser.add_argument(f"--{name}", metavar=name[0].upper(), help=f"{name}, {unit}")
        parser.add_argument(f"--e-{name}", metavar="E", help=f"its error, {unit}")
    add_format(parser)


def run(args: argparse.Namespace) -> int:
    """Print the table."""
    table = _table(args)
    if args.table is None and "message" in table.colnames:
        raise InputError(str(table["message"][0]))
    print_table(table, args.format)
    return 3 if "message" in table.colnames else 0


def _table(args: argparse.Namespace) -> Any:
    from starkiln.derived import luminosity_table

    single = {"radius": args.radius, "temperature": args.temperature}
    errors = {"e_radius": args.e_radius, "e_temperature": args.e_temperature}
    given = [key for key, value in {**single, **errors}.items() if value is not None]
    if args.table is not None:
        if given:
            raise InputError(f"give a TABLE or --{given[0].replace('_', '-')}, not both")
        return luminosity_table(_columns(args.table))
    lacking = [key for key, value in single.items() if value is None]
    if lacking:
        raise InputError(f"--{lacking[0]} is missing; give --radius and --temperature, or a TABLE")
    units = {"radius": "solRad", "temperature": "K"}
    values = {
        key: [quantity(text, units[key.removeprefix("e_")], key.replace("_", "-"))]
        for key, text in {**single, **errors}.items()
        if text is not None
    }
    return luminosity_table(values)


def _columns(path: str) -> dict[str, Any]:
    from starkiln.observations import read_columns

    wanted = {"name": "", "radius": "solRad", "temperature": "K"}
    wanted.update({"e_radius": "solRad", "e_temperature": "K"})
    return read_columns(path, wanted, required=("radius", "temperature"))
