"""`starkiln bands`: what is known of passbands, with sources."""

from __future__ import annotations

import argparse
from typing import Any

from starkiln.cli._options import quantity
from starkiln.cli._tables import add_format, print_table

_NOTES = """\
Without NAME all bands are listed, the most important system first. With NAME all that
is known of that band is printed. Case, space, dot, dash and underscore in a name do not
matter.

NAME may be a file with a band of your own, here and wherever a band is named: an ECSV,
CSV or VOTable file with the columns wavelength and response and, as metadata, PARAMs or
lines at the top of a CSV file,

    # response_kind: photon          (or energy: what the response weights)
    # magnitude_system: Vega         (or AB, which needs no zero point)
    # wavelength_unit: nm            (unless the column has a unit)
    # zero_point: 3636               (F_nu of magnitude 0; without it Vega's spectrum
    # zero_point_unit: Jy             through the band is magnitude 0)

and, if wanted, system, source, and zero_point_error, offset_error, saturation,
saturation_error in mag.

With --law, --rv, --temperature or --av the column extinction_ratio is added: the
extinction in the band over that at 0.55 um, of a blackbody of that temperature behind
that much dust (unless given: G23, R_V 3.1, 5772 K, 1 mag); and the column extrapolated,
which tells whether the band reaches beyond the range that the law was published for.
A law that does not reach a band at all leaves it empty.

zero_point_error is the error of the zero point, the part that all bands of a system
share included; both parts enter a fit. The zero points in Jy are those of a source of
constant F_nu."""

_DEFAULTS = {"rv": 3.1, "temperature": 5772.0, "av": 1.0}
_UNITS = {"rv": "", "temperature": "K", "av": "mag"}


def configure(parser: argparse.ArgumentParser) -> None:
    """Add the command's options."""
    parser.epilog = _NOTES
    parser.add_argument("name", nargs="?", metavar="NAME", help="one band, or a file with one")
    parser.add_argument("--law", metavar="LAW", help="dust law, by its published name")
    parser.add_argument("--rv", metavar="R", help="R_V of the law")
    parser.add_argument("--temperature", metavar="T", help="temperature of the star, K")
    parser.add_argument("--av", metavar="A", help="extinction at 0.55 um, mag")
    add_format(parser)


def run(args: argparse.Namespace) -> int:
    """Print the table."""
    from starkiln.passbands import band_names, band_table, describe_band

    bands = band_names() if args.name is None else (args.name,)
    table = band_table() if args.name is None else describe_band(args.name)
    if any(getattr(args, key) is not None for key in ("law", *_DEFAULTS)):
        _add_extinction(table, bands, args)
    if args.name is not None and args.format == "text":
        table = _upright(table)
    print_table(table, args.format)
    return 0


def _add_extinction(table: Any, bands: tuple[str, ...], args: argparse.Namespace) -> None:
    """Put the extinction ratios of the bands into the table, before the sources."""
    from astropy.table import MaskedColumn

    from starkiln.dust import DEFAULT_LAW, Dust
    from starkiln.errors import DustError
    from starkiln.forward import extinction_ratio, extrapolated_bands

    rv, temperature, av = (
        default if getattr(args, key) is None else quantity(getattr(args, key), _UNITS[key], key)
        for key, default in _DEFAULTS.items()
    )
    dust = Dust(law=args.law or DEFAULT_LAW, rv=rv)
    ratios: list[float | None] = []
    outside = []
    for band in bands:
        try:
            ratios.append(float(extinction_ratio(band, temperature, av, dust=dust)))
            outside.append("yes" if extrapolated_bands([band], dust) else "no")
        except DustError:
            if len(bands) == 1:
                raise
            ratios.append(None)
            outside.append("-")
    missing = [ratio is None for ratio in ratios]
    column = MaskedColumn([ratio or 0.0 for ratio in ratios], mask=missing)
    column.description = f"A_band / A(0.55 um): {dust.reference}, R_V {rv:g}, {temperature:g} K"
    place = table.colnames.index("source")
    table.add_column(column, index=place, name="extinction_ratio")
    table.add_column(outside, index=place + 1, name="extrapolated")
    table["extrapolated"].description = "Whether the band reaches beyond the dust law's range"


def _upright(table: Any) -> Any:
    """Turn a table of one row into one row per column, to read."""
    from astropy.table import Table

    cells = [table[name][0] for name in table.colnames]
    units = ["" if table[name].unit is None else str(table[name].unit) for name in table.colnames]
    texts = [_text(cell) for cell in cells]
    return Table({"quantity": table.colnames, "unit": units, "value": texts})


def _text(cell: Any) -> str:
    if isinstance(cell, float):
        return f"{cell:.6g}"
    return "-" if str(cell) == "--" else str(cell)
