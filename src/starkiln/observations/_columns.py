"""Plain columns of a table, in fixed units: for commands that need no photometry."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from difflib import get_close_matches
from pathlib import Path
from typing import Any

import numpy as np

from starkiln.errors import CatalogueError
from starkiln.observations._files import Source, open_source

__all__ = ["read_columns"]


def read_columns(
    path: str | Path, units: Mapping[str, str], *, required: Sequence[str] = ()
) -> dict[str, list[Any]]:
    """Read some columns of a table of stars.

    Parameters
    ----------
    path : str or pathlib.Path
        Any format that `read_catalogue` reads.
    units : mapping
        Heading -> unit in which its numbers are wanted; `name` is text. A column
        without a unit is taken to be in that unit. Case does not matter.
    required : sequence of str
        Headings without which the table is of no use.

    Returns
    -------
    dict of list
        The columns that the table has; a missing or masked number is NaN.

    Raises
    ------
    CatalogueError
        The file cannot be read, a required heading is absent, a unit does not
        convert, or a cell holds no number.
    """
    source = open_source(path)
    headings = {heading.strip().lower(): heading for heading in source.headings}
    for name in required:
        if name not in headings:
            close = get_close_matches(name, list(headings), n=2)
            hint = f"; nearest: {', '.join(close)}" if close else ""
            raise CatalogueError(f"{source.path}: no column '{name}'{hint}")
    found = {name: headings[name] for name in units if name in headings}
    return {
        name: _texts(source, heading) if name == "name" else _numbers(source, heading, units[name])
        for name, heading in found.items()
    }


def _texts(source: Source, heading: str) -> list[str]:
    return [str(cell).strip() for cell in source.cells(heading, 0, len(source))]


def _numbers(source: Source, heading: str, unit: str) -> list[float]:
    factor = _factor(source, heading, unit)
    values = []
    for row, cell in enumerate(source.cells(heading, 0, len(source)), 1):
        text = "" if cell is np.ma.masked else str(cell).strip()
        if source.decimal_comma:
            text = text.replace(",", ".")
        try:
            values.append(float(text) * factor if text else np.nan)
        except ValueError:
            raise CatalogueError(
                f"{source.path}, row {row}, column {heading}: '{text}' is not a number"
            ) from None
    return values


def _factor(source: Source, heading: str, unit: str) -> float:
    given = source.unit(heading)
    if not given or given == unit:
        return 1.0
    from astropy import units as u

    try:
        return float(u.Unit(given).to(u.Unit(unit)))
    except (ValueError, u.UnitConversionError):
        wanted = f"'{unit}' or a unit that converts to it" if unit else "no unit"
        raise CatalogueError(
            f"{source.path}, column {heading}: unit '{given}' is not {wanted}"
        ) from None
