"""`starkiln fit`: the main job."""

from __future__ import annotations

import argparse
import sys
import time
from typing import Any

from starkiln.cli._options import add_catalogue, whole_number

#: Rows up to which the result table is printed; a longer one stands in its file.
_MOST_PRINTED = 60
#: Seconds from which another engine is offered.
_LONG = 180.0
_SHOWN = ("temperature", "angular_diameter", "av", "misfit", "radius", "luminosity")

_NOTES = """\
CATALOGUE has one row per star. A magnitude or flux density stands in a column that
bears its passband's name (`starkiln bands` lists them), its error in the same with
e_ before it, a limit's sign (< or > on the printed number) with l_ before it.
Also read: name, parallax (mas), distance (pc), av (mag), rv, teff (K), each with
e_. Other headings are bound by a column sheet. `starkiln inspect CATALOGUE` tells
what would be understood, and what not.

DIR will hold results.FORMAT (one row per input star, in input order),
photometry.FORMAT (the data as understood), draws.fits (posterior draws) and run.json
(options, priors, seed, versions). The same command on the same DIR resumes.

Dust: 'column' takes each row's av +- e_av, and A_V = 0 where it gives none. 'free'
fits it, with a half-normal prior; a blackbody then takes a cool star's line
blanketing for dust and may come out tens of per cent too hot.

Exit codes: 0 complete, 1 failed, 2 bad command or file, 3 complete with rejected
rows, 130 interrupted and resumable."""


def configure(parser: argparse.ArgumentParser) -> None:
    """Add the command's options."""
    from starkiln.inference import describe_settings

    add_catalogue(parser)
    parser.add_argument("--run", required=True, metavar="DIR", help="run folder, made when absent")
    parser.add_argument(
        "--settings",
        metavar="FILE.toml",
        help="priors, dust, likelihood, zero points, distance, sampling; keys below",
    )
    parser.add_argument(
        "--emitter",
        default="blackbody",
        metavar="NAME",
        help="blackbody (default), or atmosphere: model atmospheres of 4,200 to 40,000 K in "
        "temperature, logg and feh, the last two from the row's columns where it has them",
    )
    parser.add_argument(
        "--engine",
        default="ensemble",
        metavar="NAME",
        help="ensemble (default: emcee) or quadrature (the same posterior, a hundred times faster)",
    )
    parser.add_argument(
        "--dust", choices=("column", "free", "zero"), help="where A_V comes from (default column)"
    )
    parser.add_argument("--law", metavar="NAME", help="extinction law (default G23)")
    parser.add_argument(
        "--likelihood", choices=("log", "flux"), help="Gaussian in ln flux (default) or in flux"
    )
    parser.add_argument(
        "--no-misfit", action="store_true", help="quoted errors alone, no misfit of the emitter"
    )
    parser.add_argument(
        "--seed", type=whole_number(0), default=0, metavar="N", help="random seed (default 0)"
    )
    parser.add_argument(
        "--workers", type=whole_number(1), metavar="N", help="processes (default: one per core)"
    )
    parser.add_argument(
        "--draws",
        type=whole_number(0),
        metavar="N",
        help="posterior draws kept per star (default 256; none beyond 10,000 stars)",
    )
    parser.add_argument(
        "--format",
        choices=("ecsv", "fits", "votable", "csv"),
        default="ecsv",
        help="of results and photometry (default ecsv)",
    )
    parser.add_argument("--quiet", action="store_true", help="no priors and progress")
    parser.epilog = f"{_NOTES}\n\nThe settings file with every default:\n{describe_settings()}"


def run(args: argparse.Namespace) -> int:
    """Fit the catalogue and print its results."""
    from starkiln.inference import describe_priors
    from starkiln.observations import read_catalogue
    from starkiln.runner import MOST_ROWS_WITH_DRAWS, Recipe, estimate, fit_catalogue

    settings = _settings(args)
    catalogue = read_catalogue(args.catalogue, columns=args.columns, rv=settings.dust_rv)
    keep = args.draws is not None or len(catalogue) <= MOST_ROWS_WITH_DRAWS
    recipe = Recipe(args.emitter, args.engine, settings, args.seed, keep and settings.draws > 0)
    if not args.quiet:
        _tell(catalogue, describe_priors(settings, args.emitter))
        _foretell(estimate(catalogue, args.run, recipe, args.workers))
    meter = _Meter(not args.quiet and sys.stderr.isatty())
    try:
        done = fit_catalogue(
            catalogue,
            args.run,
            recipe=recipe,
            workers=args.workers,
            file_format=args.format,
            progress=meter,
            record={"command": args.command_line},
        )
    except KeyboardInterrupt:
        meter.end()
        sys.stderr.write(
            f"starkiln fit: interrupted; what is done is kept in {args.run}: the same command "
            "resumes\n"
        )
        return 130
    meter.end()
    return _report(done, args.quiet)


def _settings(args: argparse.Namespace) -> Any:
    from starkiln.inference import Settings, read_settings

    chosen = {
        "dust": args.dust,
        "dust_law": args.law,
        "likelihood": args.likelihood,
        "misfit": False if args.no_misfit else None,
        "draws": args.draws,
    }
    chosen = {key: value for key, value in chosen.items() if value is not None}
    return read_settings(args.settings, **chosen) if args.settings else Settings(**chosen)


def _tell(catalogue: Any, priors: dict[str, str]) -> None:
    write = sys.stderr.write
    write(f"{catalogue.path}: {len(catalogue)} rows; bands {', '.join(catalogue.bands)}\n")
    for warning in catalogue.warnings:
        write(f"warning: {warning}\n")
    width = max(map(len, priors))
    for name, text in priors.items():
        write(f"  {name:<{width}}  {text}\n")


def _foretell(expected: Any) -> None:
    if expected is None:
        return
    text = f"{expected.rows} rows will take about {_span(expected.seconds)}"
    quick = expected.quadrature_seconds
    if quick is not None and expected.seconds > _LONG:
        text += f"; --engine quadrature would take about {_span(quick)}"
    sys.stderr.write(f"{text}\n")


class _Meter:
    """Progress on standard error: rows, rate, time left, rejected rows."""

    def __init__(self, active: bool) -> None:
        self._active, self._shown, self._last = active, False, 0.0

    def __call__(self, state: Any) -> None:
        now = time.monotonic()
        if not self._active or (now - self._last < 0.2 and state.done < state.total):
            return
        self._last, self._shown = now, True
        rate = state.fresh / max(state.elapsed_s, 1e-9)
        left = (state.total - state.done) / rate if rate else 0.0
        line = (
            f"{state.done} of {state.total} stars, {rate:.3g} per second, {_span(left)} left, "
            f"{state.rejected} rejected"
        )
        sys.stderr.write(f"\r{line:<76}")
        sys.stderr.flush()

    def end(self) -> None:
        """Leave the line."""
        if self._shown:
            sys.stderr.write("\n")
            self._shown = False


def _span(seconds: float) -> str:
    if seconds < 90.0:
        return f"{seconds:.0f} s"
    if seconds < 5400.0:
        return f"{seconds / 60.0:.0f} min"
    return f"{seconds / 3600.0:.1f} h"


def _short(results: Any) -> Any:
    """Return the results as a table to read: each quantity with its interval in one column."""
    import numpy as np
    from astropy.table import Table

    from starkiln.runner import interval_text

    table = Table({"name": results["name"], "status": results["status"]})
    for quantity in _SHOWN:
        if quantity not in results.colnames:
            continue
        edges = [
            np.ma.filled(np.ma.asarray(results[quantity + edge]), np.nan)
            for edge in ("", "_lo", "_hi")
        ]
        rows = zip(*edges, strict=True)
        table[quantity] = [interval_text(*row) if np.all(np.isfinite(row)) else "-" for row in rows]
        table[quantity].unit = results[quantity].unit
    table["flags"] = results["flags"]
    return table


def _report(done: Any, quiet: bool) -> int:
    from starkiln.cli._tables import print_table

    results = done.results
    statuses = [str(status) for status in results["status"]]
    if len(results) <= _MOST_PRINTED:
        print_table(_short(results), "text")
        for row in results:
            if str(row["status"]) != "ok":
                sys.stdout.write(f"{row['name']}: {row['status']}: {row['message']}\n")
    counts = ", ".join(
        f"{statuses.count(word)} {word}" for word in ("ok", "unconverged", "rejected")
    )
    if not quiet:
        sys.stderr.write(f"{len(results)} stars: {counts}; written to {done.folder}\n")
    return 3 if "rejected" in statuses else 0
