"""`starkiln pressure`: how much of a star's pressure is light."""

from __future__ import annotations

import argparse
from typing import Any

from starkiln.cli._options import quantity
from starkiln.cli._tables import add_format, print_table
from starkiln.errors import InputError

_NOTES = """\
By --mass: homogeneous stars. --model structure (default) solves all four equations of
structure, 1.6 to 120 solMass; --model standard is Eddington's, of any mass, in which light
carries the same share of the pressure everywhere.

By TABLE: targets with two of the columns temperature (K), luminosity (solLum) and radius
(solRad), or luminosity or mass (solMass) alone; where known also logg, mass (dynamical), feh,
name, and the error of each under e_. Where radius and temperature are given, luminosity
follows from them, with its covariance. By --run: the stars of a run with their posterior
draws of temperature and luminosity; --targets adds logg, mass or feh by name. Mass, age and
ratios are then drawn jointly from main-sequence models; _lo and _hi are the 16th and 84th
percentiles.

radiation_fraction is P_rad over the total pressure, radiation_to_gas P_rad over the gas
pressure, each the ratio of the integrals over the star's volume; _core is the same at the
centre; gamma_e is the push of light on free electrons over gravity at the surface.

Exit code 3: some targets are off the grid of models or rejected; their message says why.
"""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.epilog = _NOTES
    parser.add_argument("table", nargs="?", metavar="TABLE", help="table of targets, any format")
    parser.add_argument("--run", metavar="DIR", dest="folder", help="a finished run of `fit`")
    parser.add_argument("--mass", nargs="+", metavar="M", help="mass, solMass")
    parser.add_argument("--targets", metavar="TABLE", help="with --run: logg, mass, feh by name")
    parser.add_argument("--hydrogen", type=float, metavar="X", help="with --mass (default 0.70)")
    parser.add_argument("--metals", type=float, metavar="Z", help="with --mass (default 0.02)")
    parser.add_argument(
        "--mu", type=float, metavar="MU", help="mean particle weight, with --model standard"
    )
    parser.add_argument(
        "--model", choices=["structure", "standard"], help="with --mass (default structure)"
    )
    parser.add_argument(
        "--at", type=float, metavar="Q", help="ratios at this m/M too (0 to 0.99; TABLE, --run)"
    )
    parser.add_argument("--seed", type=int, default=0, metavar="N", help="default 0")
    add_format(parser)


def run(args: argparse.Namespace) -> int:
    """Print the table and return the exit code."""
    sources = {"TABLE": args.table, "--run": args.folder, "--mass": args.mass}
    given = [name for name, value in sources.items() if value is not None]
    if len(given) != 1:
        raise InputError(
            f"give one of --mass, TABLE and --run, not {' and '.join(given) or 'none'}"
        )
    _check_companions(args, given[0])
    if args.mass is not None:
        table = _by_mass(args)
    elif args.table is not None:
        table = _by_table(args)
    else:
        table = _by_run(args)
    print_table(table, args.format)
    return 3 if "status" in table.colnames and any(table["status"] != "ok") else 0


def _check_companions(args: argparse.Namespace, source: str) -> None:
    options = ("hydrogen", "metals", "mu", "model")
    if source != "--mass":
        wrong = [name for name in options if getattr(args, name) is not None]
        if wrong:
            raise InputError(
                f"--{wrong[0]} goes with --mass only; the composition of {source} follows from "
                f"its column feh"
            )
    if args.at is not None and source == "--mass":
        raise InputError("--at goes with TABLE or --run only")
    if args.at is not None and not 0.0 <= args.at <= 0.99:
        raise InputError(f"--at {args.at:g} is out of bounds: give a mass fraction of 0 to 0.99")
    if args.targets is not None and source != "--run":
        raise InputError("--targets goes with --run only")


def _by_mass(args: argparse.Namespace) -> Any:
    from starkiln.derived import ratio_table
    from starkiln.interiors import pressure_ratio

    ratios = pressure_ratio(
        [quantity(word, "solMass", "mass") for word in args.mass],
        hydrogen=0.70 if args.hydrogen is None else args.hydrogen,
        metals=0.02 if args.metals is None else args.metals,
        mu=args.mu,
        model=args.model or "structure",
    )
    return ratio_table(ratios)


def _by_table(args: argparse.Namespace) -> Any:
    from starkiln.derived import pressure_table

    return pressure_table(_columns(args.table), seed=args.seed, at=args.at)


def _by_run(args: argparse.Namespace) -> Any:
    from starkiln.runner import open_run

    known = None if args.targets is None else _columns(args.targets)
    return open_run(args.folder).pressure_table(known, seed=args.seed, at=args.at)


def _columns(path: str) -> dict[str, list[Any]]:
    from starkiln.derived import PRESSURE_INPUTS
    from starkiln.observations import read_columns

    wanted = {"name": ""}
    for name, unit in PRESSURE_INPUTS.items():
        wanted |= {name: unit, f"e_{name}": unit}
    columns = read_columns(path, wanted)
    if not set(columns) & set(PRESSURE_INPUTS):
        raise InputError(f"{path}: no column of {', '.join(PRESSURE_INPUTS)}")
    return columns
