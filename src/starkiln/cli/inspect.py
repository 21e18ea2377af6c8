"""`starkiln inspect CATALOGUE`: what a catalogue holds, before anything is fitted."""

from __future__ import annotations

import sys
from argparse import ArgumentParser, Namespace
from collections import Counter
from typing import Any

from starkiln.cli._options import add_catalogue
from starkiln.cli._tables import add_format, print_table, table_text

_CHUNK = 5000
#: The most rows that are listed one by one.
_LISTED = 200

_HELP = """\
Tells what was understood of each column, then every row that cannot be used and why, and
proposes a column sheet for headings that look like bands. It writes nothing.

Columns known by their headings (case, space, dot, dash and underscore do not matter):
  a band's name, such as 'Gaia G', '2MASS Ks', 'WISE W1', 'SDSS g', 'Johnson V': a magnitude in
  the band's own system, or a flux density if the column's unit says so ('2MASS J [mJy]');
  the same with e_ before it: its error; with l_: its limit flag, < or > on the printed number;
  name; parallax, e_parallax (mas); distance, e_distance (pc); av, e_av (mag); rv;
  logg, feh, teff (K), mass, radius, luminosity (solar), each with e_.
Everything else is said in a column sheet (TOML):
  missing = [-999, 99.99, "--"]         # values that mean missing
  leave_out = ["WISE W4"]               # headings or bands that are not to be used
  floor = 0.02                          # the smallest error: mag, or a fraction of a flux
  limit_sigma = 3                       # at how many sigma limits are
  without_error = "limit"               # a value whose error is empty is an upper limit
  distance_from = "parallax"            # or "distance", where a row has both
  saturated = "widen"                   # or "drop", "keep": bands too bright for the survey
  [columns]
  Vmag = "Johnson V"                    # a heading and what it is: a band, its e_ or l_, ...
  gmag = { means = "SDSS g", error = "g_err", system = "AB", unit = "mag", floor = 0.01 }
A table also takes limit, signal_to_noise (headings), error = 0.02 (one for all rows), and
missing, limit_sigma, saturated and without_error for that column alone.

The format of the catalogue (ECSV, CSV and other separated text, FITS, VOTable, CDS, IPAC) is
found from its content. Exit code: 0, 2 the catalogue cannot be used, 3 some rows cannot.
"""


def configure(parser: ArgumentParser) -> None:
    """Add the arguments of the command."""
    parser.epilog = _HELP
    add_catalogue(parser)
    add_format(parser)


def run(args: Namespace) -> int:
    """Run the command."""
    from starkiln.observations import survey_catalogue

    catalogue = survey_catalogue(args.catalogue, columns=args.columns)
    if args.format != "text":
        print_table(_columns(catalogue), args.format)
        out = sys.stderr
    else:
        out = sys.stdout
        sheet = f", column sheet {args.columns}" if args.columns else ""
        out.write(f"{catalogue.path}: {catalogue.format}, {len(catalogue)} rows{sheet}\n\n")
        out.write(table_text(_columns(catalogue)))
    for warning in catalogue.warnings:
        out.write(f"\nwarning: {warning}\n")
    rejected = 0 if catalogue.errors else _rows(catalogue, out)
    proposal = catalogue.proposal()
    if proposal:
        out.write(f"\n{proposal}")
    for error in catalogue.errors:
        sys.stderr.write(f"starkiln inspect: {error}\n")
    if catalogue.errors:
        return 2
    return 3 if rejected else 0


def _columns(catalogue: Any) -> Any:
    from astropy.table import MaskedColumn, Table

    columns = catalogue.columns
    filled = catalogue.filled()
    counts = [filled.get(column.heading) for column in columns]
    table = Table()
    for key in ("heading", "meaning", "unit", "system"):
        table[key] = [getattr(column, key) for column in columns]
    table["used"] = ["yes" if column.used else "no" for column in columns]
    for key, values in (
        ("values", counts),
        ("missing", [None if n is None else len(catalogue) - n for n in counts]),
    ):
        mask = [value is None for value in values]
        table[key] = MaskedColumn([value or 0 for value in values], mask=mask, dtype=int)
    table["remark"] = [column.remark for column in columns]
    return table


def _rows(catalogue: Any, out: Any) -> int:
    """Write which rows cannot be used and what is left out of others; return how many."""
    from starkiln.observations import BadRow

    bad: list[BadRow] = []
    left_out: Counter[str] = Counter()
    for start in range(0, len(catalogue), _CHUNK):
        for star in catalogue.rows(start, start + _CHUNK):
            if isinstance(star, BadRow):
                bad.append(star)
                continue
            left_out.update(_summary(star))
    if left_out:
        out.write("\nIn rows that can be used:\n")
        for text, count in sorted(left_out.items()):
            out.write(f"  {text}: {count} row{'s' if count > 1 else ''}\n")
    out.write(f"\n{len(catalogue) - len(bad)} of {len(catalogue)} rows can be fitted")
    out.write(".\n" if not bad else f"; {len(bad)} cannot:\n")
    for row in bad[:_LISTED]:
        out.write(f"  {row.name}: {row.message}\n")
    if len(bad) > _LISTED:
        out.write(f"  ... and {len(bad) - _LISTED} more\n")
    return len(bad)


def _summary(star: Any) -> set[str]:
    """Return what was done to a star's data, without the numbers."""
    acts = {
        f"{m.band}: saturated, {m.note.rpartition(', ')[2]}" for m in star.measurements if m.note
    }
    acts |= {f"{m.band}: {m.limit} limit of flux" for m in star.measurements if m.limit}
    acts |= {f"{band}: left out, {why.split(':')[0]}" for band, why in star.left_out}
    return acts | {remark.split(" is ")[0] + " from E(B-V)" for remark in star.remarks}
