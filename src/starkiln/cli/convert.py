"""`starkiln convert`: photometry from one unit, or one band, to another."""

from __future__ import annotations

import argparse
import re
import sys
from typing import Any

from starkiln.cli._options import quantity
from starkiln.cli._tables import add_format, print_table
from starkiln.errors import InputError

_NOTES = """\
VALUE is a number, which may carry its unit (3.2mJy, 14.1mag), or with --column a table
of which one column is converted.

Units: mag (of the band's own catalogue), mag(Vega), mag(AB), mag(ST), mag(asinh) of the
SDSS bands; any flux density per wavelength or frequency (Jy, mJy, W m-2 um-1,
erg s-1 cm-2 A-1, erg s-1 cm-2 Hz-1); photons of the band, photon s-1 cm-2 A-1 or, for
the response as published, photon s-1 m-2. SDSS catalogue magnitudes are not quite AB:
mag and mag(AB) differ by 0.04 in u and 0.02 in z.

--to-band converts to another band for a stated source: a blackbody of --temperature
behind --av of dust, or the spectrum in --spectrum, a table with the columns wavelength
(um) and flux (W m-2 um-1; other units are read from the columns). The source is taken to
be exact.

A flux that is not positive has no magnitude: a single one is an error, in a table it is
left empty."""

_NUMBER = re.compile(r"\s*([-+]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?)\s*(.*)$")


def configure(parser: argparse.ArgumentParser) -> None:
    """Add the command's options."""
    parser.epilog = _NOTES
    add = parser.add_argument
    add("value", metavar="VALUE", help="a number, with its unit or without, or a table")
    add("--band", metavar="NAME", required=True, help="the passband, or a file with one")
    add("--from", dest="unit", metavar="UNIT", help="unit of VALUE, unless VALUE carries it")
    add("--to", metavar="UNIT", required=True, help="unit wanted")
    add("--error", metavar="E", help="error of VALUE, in its unit")
    add("--column", metavar="HEADING", help="VALUE is a table: the column to convert")
    add("--error-column", metavar="HEADING", help="the column with its errors")
    add("--to-band", metavar="NAME", help="convert to this band, for a stated source")
    add("--temperature", metavar="T", help="source: temperature of a blackbody, K")
    add("--av", metavar="A", help="source: extinction at 0.55 um, mag (default 0)")
    add("--law", metavar="LAW", help="source: dust law (default G23)")
    add("--rv", metavar="R", help="source: R_V (default 3.1)")
    add("--spectrum", metavar="FILE", help="source: table of wavelength and flux")
    add_format(parser)


def run(args: argparse.Namespace) -> int:
    """Print the converted value or column."""
    names, value, error, unit = _column(args) if args.column else _single(args)
    result = _converted(args, value, error, unit)
    lost = int(((result.value != result.value) & (value == value)).sum())
    if lost and not args.column:
        raise InputError(f"a flux of {value[0]:g} {unit} is not positive and has no magnitude")
    if lost:
        sys.stderr.write(
            f"starkiln convert: {lost} rows left empty: a flux that is not positive has no "
            "magnitude\n"
        )
    print_table(_table(names, result), args.format)
    return 0


def _single(args: argparse.Namespace) -> tuple[None, Any, Any, str]:
    import numpy as np

    if args.error_column:
        raise InputError("--error-column needs --column, the column that it is the error of")
    match = _NUMBER.match(args.value)
    if match is None:
        raise InputError(f"VALUE {args.value} is not a number; to convert a table give --column")
    number, own_unit = float(match[1]), match[2].strip()
    if own_unit and args.unit and own_unit != args.unit:
        raise InputError(f"VALUE is in '{own_unit}' but --from says '{args.unit}'")
    unit = own_unit or args.unit
    if not unit:
        raise InputError("VALUE has no unit: give --from, for example --from mag")
    error = None if args.error is None else np.array([quantity(args.error, "", "error")])
    return None, np.array([number]), error, unit


def _column(args: argparse.Namespace) -> tuple[list[str] | None, Any, Any, str]:
    import numpy as np

    from starkiln.observations import read_columns
    from starkiln.passbands import flux_unit_kind

    if args.error is not None:
        raise InputError("--error is of one value; give --error-column for a table")
    if not args.unit:
        raise InputError("give --from, the unit of the column, for example --from mag")
    # A column in mag may be of any magnitude system, which --from tells.
    plain = "mag" if "magnitude" in flux_unit_kind(args.unit) else args.unit
    wanted = [h.strip().lower() for h in (args.column, args.error_column) if h]
    units = {"name": "", **dict.fromkeys(wanted, plain)}
    columns = read_columns(args.value, units, required=wanted)
    values = [np.asarray(columns[heading], dtype=float) for heading in wanted]
    return columns.get("name"), values[0], values[1] if args.error_column else None, args.unit


def _converted(args: argparse.Namespace, value: Any, error: Any, unit: str) -> Any:
    from starkiln.passbands import convert

    if args.to_band is None:
        stray = [k for k in ("temperature", "av", "law", "rv", "spectrum") if getattr(args, k)]
        if stray:
            raise InputError(f"--{stray[0]} describes a source, which only --to-band needs")
        return convert(value, args.to, args.band, unit=unit, error=error)
    from starkiln.forward import convert_between

    return convert_between(
        value, args.band, args.to_band, _source(args), unit=unit, to=args.to, error=error
    )


def _source(args: argparse.Namespace) -> Any:
    from starkiln.dust import DEFAULT_LAW, Dust
    from starkiln.forward import spectrum_source, star_source
    from starkiln.observations import read_columns

    if (args.temperature is None) == (args.spectrum is None):
        raise InputError("--to-band needs a source: give --temperature or --spectrum")
    if args.spectrum is not None:
        units = {"wavelength": "um", "flux": "W / (m2 um)"}
        columns = read_columns(args.spectrum, units, required=tuple(units))
        return spectrum_source(columns["wavelength"], columns["flux"])
    rv = 3.1 if args.rv is None else quantity(args.rv, "", "rv")
    av = 0.0 if args.av is None else quantity(args.av, "mag", "av")
    dust = Dust(law=args.law or DEFAULT_LAW, rv=rv)
    return star_source(quantity(args.temperature, "K", "temperature"), av=av, dust=dust)


def _table(names: list[str] | None, result: Any) -> Any:
    from astropy.table import MaskedColumn, Table

    table = Table()
    if names is not None:
        table["name"] = names
    for key, array in (("value", result.value), ("error", result.error)):
        if array is not None:
            table[key] = MaskedColumn(array, mask=array != array, format="%.10g")
    table.add_column([result.unit] * len(table), name="unit", index=table.index_column("value") + 1)
    return table
