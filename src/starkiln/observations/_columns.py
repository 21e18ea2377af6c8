"""Plain columns of a table, in fixed units: for commands that need no photometry."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

from starkiln.errors import CatalogueError, InputError
from starkiln.observations._cells import numbers_of, texts_of
from starkiln.observations._files import Source, open_source
from starkiln.observations._from_python import nearest
from starkiln.observations._plan import Cells
from starkiln.observations._units_of_columns import factor_to, parse_unit

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
            close = nearest(name, headings, 2)
            hint = f"; nearest: {', '.join(close)}" if close else ""
            raise CatalogueError(f"{source.path}: no column '{name}'{hint}")
    found = {name: headings[name] for name in units if name in headings}
    return {
        name: texts_of(source, heading, 0, len(source))
        if name == "name"
        else _numbers(source, heading, units[name])
        for name, heading in found.items()
    }


def _numbers(source: Source, heading: str, unit: str) -> list[float]:
    try:
        given = source.unit(heading)
        factor = factor_to(parse_unit(given), unit) if given else 1.0
    except InputError as error:
        raise CatalogueError(f"{source.path}, column '{heading}': {error}") from error
    values = []
    for row, number in enumerate(numbers_of(source, Cells(heading), 0, len(source)), 1):
        if isinstance(number, str):
            raise CatalogueError(
                f"{source.path}, row {row}, column '{heading}': '{number}' is not a number"
            )
        values.append(math.nan if number is None else number * factor)
    return values
