"""Tables printed to standard output, as text to read or in a format to keep."""

from __future__ import annotations

import math
import sys
from argparse import ArgumentParser
from typing import Any, TextIO

import numpy as np

from starkiln.store import FORMATS, table_bytes

__all__ = ["PRINT_FORMATS", "add_format", "print_table", "table_text"]

PRINT_FORMATS = ("text", *FORMATS)

#: Digits of a number that says nothing of its error.
_DIGITS = 6


def add_format(parser: ArgumentParser) -> None:
    """Add `--format` to a command that prints a table."""
    parser.add_argument(
        "--format",
        choices=PRINT_FORMATS,
        default="text",
        help="how the table is printed to standard output (default: text, to read)",
    )


def print_table(table: Any, format: str = "text", stream: TextIO | None = None) -> None:
    """Print a table.

    Parameters
    ----------
    table : astropy.table.Table
    format : str
        One of `PRINT_FORMATS`.
    stream : text stream, optional
        Default: standard output. FITS needs a stream with a byte `buffer`.

    Raises
    ------
    InputError
        Unknown format.
    """
    stream = stream or sys.stdout
    if format == "text":
        stream.write(table_text(table))
        return
    content = table_bytes(table, format)
    if hasattr(stream, "buffer"):
        stream.flush()
        stream.buffer.write(content)
        stream.buffer.flush()
    else:
        stream.write(content.decode())


def table_text(table: Any) -> str:
    """Return a table as aligned text: headings, units where there are any, rows.

    A number with an error (`x`, `e_x`) or an interval (`x`, `x_lo`, `x_hi`) is
    printed to two digits of it, another to six digits or in its column's format.
    """
    columns = [_column_text(table, name) for name in table.colnames]
    heads = [table.colnames]
    units = ["" if table[name].unit is None else str(table[name].unit) for name in table.colnames]
    if any(units):
        heads.append(units)
    right = [table[name].dtype.kind in "fiu" for name in table.colnames]
    rows = [list(cells) for cells in zip(*columns, strict=True)]
    widths = [max(len(row[i]) for row in heads + rows) for i in range(len(columns))]
    lines = [_line(row, widths, right) for row in heads]
    lines.append("  ".join("-" * width for width in widths))
    lines += [_line(row, widths, right) for row in rows]
    return "\n".join(lines) + "\n"


def _line(cells: list[str], widths: list[int], right: list[bool]) -> str:
    parts = [
        cell.rjust(width) if to_right else cell.ljust(width)
        for cell, width, to_right in zip(cells, widths, right, strict=True)
    ]
    return "  ".join(parts).rstrip()


def _column_text(table: Any, name: str) -> list[str]:
    column = table[name]
    if column.dtype.kind != "f":
        return ["-" if cell is np.ma.masked else str(cell) for cell in column]
    if column.format:
        return [
            "-" if _is_nothing(cell) else format(float(cell), column.format.lstrip("%"))
            for cell in column
        ]
    errors = _errors(table, name)
    return [_number(cell, error) for cell, error in zip(column, errors, strict=True)]


def _errors(table: Any, name: str) -> list[float]:
    """Return the error of every number of a column, NaN for none."""
    stem = name.removeprefix("e_").removesuffix("_lo").removesuffix("_hi")
    names = set(table.colnames)
    if {f"{stem}_lo", f"{stem}_hi"} <= names:
        pairs = zip(table[f"{stem}_lo"], table[f"{stem}_hi"], strict=True)
        return [math.nan if _is_nothing(a) or _is_nothing(b) else (b - a) / 2 for a, b in pairs]
    if f"e_{stem}" in names:
        return [math.nan if _is_nothing(e) else float(e) for e in table[f"e_{stem}"]]
    return [math.nan] * len(table)


def _number(cell: Any, error: float) -> str:
    if _is_nothing(cell):
        return "-"
    value = float(cell)
    if not (math.isfinite(value) and math.isfinite(error) and error > 0.0):
        return f"{value:.{_DIGITS}g}"
    decimals = 1 - math.floor(math.log10(error))
    size = max(abs(value), error)
    if 1e-4 <= size < 1e9:
        return f"{round(value, decimals):.{max(decimals, 0)}f}"
    leading = math.floor(math.log10(abs(value))) if value else -decimals
    return f"{value:.{max(leading + decimals, 0)}e}"


def _is_nothing(cell: Any) -> bool:
    return cell is np.ma.masked or math.isnan(float(cell))
