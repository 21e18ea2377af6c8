"""The sums of `photons` and `force` for the fitted stars of a run, with their posterior."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from starkiln.errors import InputError

#: Seed of the Gaussian draws of what is given beside a run with an error.
_SEED = 1


def add_run_options(parser: argparse.ArgumentParser) -> None:
    """Add the run and the choice of a star."""
    parser.add_argument(
        "--run", dest="folder", metavar="DIR", help="take fitted stars and their draws from a run"
    )
    parser.add_argument("--star", metavar="NAME", help="with --run: this star alone")


def refuse_taken(args: argparse.Namespace, *taken: str) -> None:
    """Refuse an option for what comes from the run."""
    for key in taken:
        given = [getattr(args, f"{kind}_{key}", None) for kind in ("value", "error")]
        if given != [None, None]:
            name = key.replace("_", "-")
            raise InputError(f"--{name} comes from the run: leave it out, or leave out --run")


def answer_run(
    args: argparse.Namespace,
    sums: Callable[..., Any],
    inputs: Mapping[str, Any],
    errors: Mapping[str, float],
    taken: Callable[[Any], dict[str, Any] | str],
) -> int:
    """Work out the sums of every star, print one table, and return the exit code.

    Parameters
    ----------
    args : argparse.Namespace
        With `folder`, `star` and `format`.
    sums, inputs, errors
        As for `starkiln.photons.spread`; an input with an error is drawn from its
        Gaussian, as many times as the star has draws.
    taken : callable
        From a star's draws to the further inputs, or to the reason why it has none.
    """
    from pathlib import Path

    from astropy.table import Table

    from starkiln.cli._tables import print_table
    from starkiln.runner import open_run

    run = open_run(Path(args.folder))
    names = [str(name) for name in run.results["name"]]
    rows = range(1, len(names) + 1) if args.star is None else run.rows_of(args.star)
    lines: list[tuple[Any, ...]] = []
    left_out = 0
    for row in rows:
        draws = run.draws(row)
        drawn = "no draws were kept of it" if draws is None else taken(draws)
        if isinstance(drawn, str):
            left_out += 1
            sys.stderr.write(f"row {row} '{names[row - 1]}' is left out: {drawn}\n")
            continue
        lines += _star_lines(names[row - 1], sums, {**_draw(inputs, errors, len(draws)), **drawn})
    if not lines:
        raise InputError(f"no star of the run {args.folder} has what is asked")
    heads = ("name", "quantity", "value", "unit", "value_lo", "value_hi", "formula", "reference")
    print_table(Table(rows=lines, names=heads), args.format)
    return 3 if left_out else 0


def draws_of(draws: Any, *names: str) -> dict[str, np.ndarray] | None:
    """Return columns of a star's draws by name, None where one is missing."""
    if any(name not in draws.colnames for name in names):
        return None
    return {name: np.asarray(draws[name], dtype=float) for name in names}


def _draw(inputs: Mapping[str, Any], errors: Mapping[str, float], count: int) -> dict[str, Any]:
    rng = np.random.default_rng(_SEED)
    drawn = {
        name: inputs[name] + error * rng.standard_normal(count)
        for name, error in sorted(errors.items())
    }
    return {**inputs, **drawn}


def _star_lines(
    name: str, sums: Callable[..., Any], inputs: Mapping[str, Any]
) -> list[tuple[Any, ...]]:
    from starkiln.derived import interval

    lines = []
    for answer in sums(**inputs):
        value = np.asarray(answer.value, dtype=float)
        middle, low, high = (float(value), np.nan, np.nan) if value.ndim == 0 else interval(value)
        lines.append(
            (
                name,
                answer.quantity,
                middle,
                answer.unit,
                low,
                high,
                answer.formula,
                answer.reference,
            )
        )
    return lines
