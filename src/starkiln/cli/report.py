"""`starkiln report DIR`: one page of a run, and its tables for papers."""

from __future__ import annotations

import argparse
import sys

_NOTES = """\
DIR/report.html holds everything in one file and asks nothing of the network: what failed and
why, the Hertzsprung-Russell diagram, each star's spectrum and posterior, a table to sort and
filter, the assumptions, and what to cite. Open it in any browser.

--tables adds DIR/tables: results as ECSV, FITS, VOTable and CSV, the machine-readable table of
the journals (results.mrt), two LaTeX tables, provenance.txt and references.bib.

Examples:
  starkiln report run
  starkiln report run --tables --catalogue stars.ecsv
  starkiln report run --samp"""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the arguments of the command."""
    parser.epilog = _NOTES
    parser.add_argument("folder", metavar="DIR", help="run folder that starkiln fit made")
    parser.add_argument("--tables", action="store_true", help="write the tables too")
    parser.add_argument(
        "--catalogue",
        metavar="FILE",
        help="the catalogue that was fitted: its columns then stand in the tables too",
    )
    parser.add_argument("--columns", metavar="SHEET.toml", help="its column sheet")
    parser.add_argument(
        "--samp",
        action="store_true",
        help="send the results to the programs that listen on the SAMP hub (implies --tables)",
    )


def run(args: argparse.Namespace) -> int:
    """Write, and print the path of every file."""
    from starkiln.observations import read_catalogue
    from starkiln.report import open_for_report, send_table, write_page, write_tables

    folder = open_for_report(args.folder)
    catalogue = read_catalogue(args.catalogue, columns=args.columns) if args.catalogue else None
    sys.stdout.write(f"{write_page(folder)}\n")
    if not (args.tables or args.samp or catalogue):
        return 0
    for path in write_tables(folder, catalogue):
        sys.stdout.write(f"{path}\n")
        if args.samp and path.suffix == ".vot":
            told = ", ".join(send_table(path, folder.folder.name))
            sys.stderr.write(f"starkiln report: sent {path.name} to {told}\n")
    return 0
