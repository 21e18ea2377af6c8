"""What the commands `photons` and `force` share: options with units, and their answers."""

from __future__ import annotations

import argparse
import math
from collections.abc import Callable, Sequence
from typing import Any, NamedTuple

import numpy as np

from starkiln.cli._options import quantity
from starkiln.errors import InputError


class Option(NamedTuple):
    """One number on the command line.

    Attributes
    ----------
    name : str
        As on the command line, without dashes.
    unit : str
        Of a bare number.
    help : str
        What it is.
    default : float, optional
        None where the option may stay away.
    error : bool
        Whether `--e-NAME` takes its standard error.
    letter : str
        Stands for the value in the help; by default the first of the name.
    """

    name: str
    unit: str
    help: str
    default: float | None = None
    error: bool = False
    letter: str = ""

    @property
    def key(self) -> str:
        """Name of the keyword that the sums take."""
        return self.name.replace("-", "_")


UNITS_NOTE = """\
A value may carry its unit, as in {example}; a bare number is
in the unit that stands with the option. Errors are standard errors, taken as
independent: each is moved up and down in turn, and value_lo and value_hi enclose
68 per cent.
A negative value is joined to its option by an equals sign: --NAME=-1deg."""


def add_options(parser: argparse.ArgumentParser, options: Sequence[Option]) -> None:
    """Add the numbers of a command, and their errors."""
    for option in options:
        unit = f", {option.unit}" if option.unit else ""
        default = "" if option.default is None else f" (default: {option.default:g})"
        metavar = option.letter or option.name.rsplit("-", maxsplit=1)[-1][0].upper()
        parser.add_argument(
            f"--{option.name}",
            dest=f"value_{option.key}",
            metavar=metavar,
            help=f"{option.help}{unit}{default}",
        )
        if option.error:
            parser.add_argument(
                f"--e-{option.name}",
                dest=f"error_{option.key}",
                metavar="E",
                help=f"its standard error{unit}",
            )


def read_options(
    args: argparse.Namespace, options: Sequence[Option]
) -> tuple[dict[str, Any], dict[str, float]]:
    """Return the numbers given, and the errors given, as floats in the options' units."""
    inputs: dict[str, Any] = {}
    errors: dict[str, float] = {}
    for option in options:
        text = getattr(args, f"value_{option.key}")
        value = option.default if text is None else _number(text, option, option.name)
        if value is not None:
            inputs[option.key] = value
        error = getattr(args, f"error_{option.key}", None)
        if error is None:
            continue
        if value is None:
            raise InputError(f"--e-{option.name} is the error of --{option.name}: give that too")
        errors[option.key] = _number(error, option, f"e-{option.name}")
    return inputs, errors


def _number(text: str, option: Option, name: str) -> float:
    value = quantity(text, option.unit, name)
    if not math.isfinite(value):
        raise InputError(f"--{name} {text} is not finite: give a finite number")
    return value


def answer(
    sums: Callable[..., Any], inputs: dict[str, Any], errors: dict[str, float], format: str
) -> int:
    """Work out the sums, print them as a table, and return the exit code."""
    from astropy.table import Table

    from starkiln.cli._tables import print_table
    from starkiln.photons import spread

    # An absurd input may overflow; its answer then is inf, which says enough.
    with np.errstate(all="ignore"):
        answers, low, high = spread(sums, inputs, errors)
    columns: dict[str, Any] = {
        "quantity": [row.quantity for row in answers],
        "value": [float(row.value) + 0.0 for row in answers],  # no -0
        "unit": [row.unit for row in answers],
    }
    if errors:
        columns |= {"value_lo": low, "value_hi": high}
    columns["formula"] = [row.formula for row in answers]
    columns["reference"] = [row.reference for row in answers]
    print_table(Table(columns), format)
    return 0
