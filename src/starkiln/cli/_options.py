"""Options that several commands share, and what they mean."""

from __future__ import annotations

import argparse
from typing import Any

from starkiln.errors import InputError


def add_catalogue(parser: argparse.ArgumentParser) -> None:
    """Add the catalogue and its column sheet."""
    parser.add_argument(
        "catalogue",
        metavar="CATALOGUE",
        help="table of stars: ECSV, CSV or other delimited text, FITS or VOTable",
    )
    parser.add_argument(
        "--columns",
        metavar="SHEET.toml",
        help="column sheet that says what foreign headings mean (see the README)",
    )


def whole_number(low: int) -> Any:
    """Return an argparse type: a whole number of at least `low`."""

    def convert(text: str) -> int:
        try:
            number = int(text)
        except ValueError:
            raise argparse.ArgumentTypeError(f"'{text}' is not a whole number") from None
        if number < low:
            raise argparse.ArgumentTypeError(f"{number} is below {low}")
        return number

    return convert


def quantity(text: str, unit: str, name: str) -> float:
    """Return a command-line value such as `0.4um` or `5772` as a float in `unit`.

    A bare number is in `unit`; anything else must be a number directly followed by
    a unit that astropy knows.

    Raises
    ------
    InputError
        Not a number, or in a unit that cannot be converted.
    """
    try:
        return float(text)
    except ValueError:
        pass
    from astropy import units as u

    try:
        return float(u.Quantity(text).to_value(unit or u.one))
    except (TypeError, ValueError, u.UnitConversionError) as error:
        wanted = f" in '{unit}' or a unit that converts to it" if unit else ""
        raise InputError(f"--{name} {text} is not a number{wanted}") from error
