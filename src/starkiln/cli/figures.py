"""`starkiln figures DIR`: the figures of a run."""

from __future__ import annotations

import argparse
import sys

_UNASKED = ("hr", "misfit", "corner", "sed")
_KINDS = (*_UNASKED, "prior", "predictive", "temperature", "pressure", "chain", "autocorrelation")

_NOTES = """\
Kinds, of the whole run:
  hr               Hertzsprung-Russell diagram: posterior ellipses, lines of constant radius,
                   zero-age main sequence
  misfit           residuals of every band over all stars: finds wrong zero points
  temperature      fitted against published temperatures (needs --catalogue)
  pressure         radiation over gas pressure against mass, of the stars on the grid of models
and one file for each star:
  corner           posterior of each quantity and each pair; dashed: median, 16th, 84th percentile
  sed              photometry, model spectra, residuals in sigma and per cent
  prior            posterior over its prior: where they agree, the data say nothing (with
                   --catalogue also the priors of the row's own dust and distance)
  predictive       observed fluxes among those that the posterior predicts
  chain            path of emcee's walkers (needs --catalogue: the star is fitted again, with the
                   same seed and so with the same path)
  autocorrelation  how long the walkers remember where they were (the same)
By default hr, misfit, corner and sed; with --star corner and sed.

Files go to DIR/figures, named by the star's row and name; their paths are printed. The same
command writes the same bytes.

Examples:
  starkiln figures run --star "Kiln 7"
  starkiln figures run --only sed --image png --width two
  starkiln figures run --only temperature --catalogue stars.ecsv"""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the arguments of the command."""
    parser.epilog = _NOTES
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
        help="this kind only (may be repeated)",
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
        help="one or two columns of a journal, 3.4 or 7.1 in (default: as the kind needs)",
    )
    parser.add_argument(
        "--catalogue", metavar="FILE", help="the catalogue that was fitted, for kinds that need it"
    )
    parser.add_argument("--columns", metavar="SHEET.toml", help="its column sheet")


def run(args: argparse.Namespace) -> int:
    """Draw, print the path of every file, and tell on standard error what could not be drawn."""
    from starkiln.observations import read_catalogue
    from starkiln.report import open_for_report, write_figures

    folder = open_for_report(args.folder)
    rows = sorted({row for name in args.star for row in folder.rows_of(name)})
    kinds = args.only or (_UNASKED[2:] if args.star else _UNASKED)
    catalogue = read_catalogue(args.catalogue, columns=args.columns) if args.catalogue else None
    written = 0
    for drawn in write_figures(
        folder, kinds, rows=rows, catalogue=catalogue, image=args.image, width=args.width
    ):
        if drawn.path is None:
            sys.stderr.write(f"starkiln figures: {drawn.message}\n")
            continue
        sys.stdout.write(f"{drawn.path}\n")
        sys.stdout.flush()
        written += 1
    return 0 if written else 1
