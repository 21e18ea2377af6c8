"""`starkiln figures DIR`: the figures of a run."""

from __future__ import annotations

import argparse
import sys

_KINDS = ("corner", "sed")

_EPILOG = """\
kinds, one file for each star:
  corner       posterior of each quantity and each pair; dashed: median, 16th and 84th percentile
  sed          photometry, model spectra, and residuals in sigma and per cent

Files go to DIR/figures, named by the star's row and name; their paths are printed. The same
command writes the same bytes.

examples:
  starkiln figures run --star "Kiln 7"
  starkiln figures run --only sed --image png --width two
"""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the arguments of the command."""
    parser.epilog = _EPILOG
    parser.add_argument("folder", metavar="DIR", help="run folder that starkiln fit made")
    parser.add_argument(
        "--star",
        metavar="NAME",
        action="append",
        default=[],
        help="this star only (may be repeated); default: every star",
    )
    parser.add_argument(
        "--only",
        metavar="KIND",
        action="append",
        choices=_KINDS,
        help=f"this kind only (may be repeated): {', '.join(_KINDS)}; default: all",
    )
    parser.add_argument(
        "--image",
        choices=("pdf", "png", "svg"),
        default="pdf",
        help="kind of file (default: %(default)s)",
    )
    parser.add_argument(
        "--width",
        choices=("one", "two"),
        help="width of one or two columns of a journal, 3.4 or 7.1 in (default: as the kind needs)",
    )


def run(args: argparse.Namespace) -> int:
    """Draw, print the path of every file, and tell on standard error what could not be drawn."""
    from starkiln import report
    from starkiln.runner import open_run

    folder = open_run(args.folder)
    rows = report.rows_of(folder, args.star)
    written = 0
    for path, message in report.write_figures(
        folder, kinds=args.only or _KINDS, rows=rows, image=args.image, width=args.width
    ):
        if path is None:
            sys.stderr.write(f"starkiln figures: {message}\n")
        else:
            sys.stdout.write(f"{path}\n")
            written += 1
    return 0 if written else 1
