"""Text tables: ECSV, CDS and IPAC through astropy, delimited text cell by cell.

Delimited text is read as strings, so that a message can show a cell as it stands
in the file, a name keeps its zeros, and a ragged line is reported by its number.
"""

from __future__ import annotations

import csv
import io
import re
import warnings
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from starkiln.errors import CatalogueError
from starkiln.observations._headings import duplicates

__all__ = ["TextTable", "read_text_table"]

_DELIMITERS = {",": "commas", ";": "semicolons", "\t": "tabs", "|": "bars"}
_NUMBER = re.compile(r"[+-]?(\d+[.,]?\d*|[.,]\d+)([eE][+-]?\d+)?")


@dataclass
class TextTable:
    """A text table as read: see `Source` for the attributes."""

    kind: str
    table: Any
    decimal_comma: bool = False
    remarks: list[str] = field(default_factory=list)


def read_text_table(path: Path, raw: bytes) -> TextTable:
    """Read a text table, its format found from its content.

    Raises
    ------
    CatalogueError
        Ragged, or no table at all.
    """
    text, remarks = _decode(raw)
    start = text.lstrip()[:20000]
    if re.match(r"#\s*%ECSV", start):
        return TextTable("ECSV", _astropy(path, text, "ascii.ecsv"), remarks=remarks)
    if re.search(r"^\s*Byte-by-byte Description of file", start, re.M | re.I):
        return TextTable("CDS", _astropy(path, text, "ascii.mrt"), remarks=remarks)
    if start.startswith("\\") or (start.startswith("|") and _is_ipac(start)):
        return TextTable("IPAC", _astropy(path, text, "ascii.ipac"), remarks=remarks)
    found = _delimited(path, text)
    found.remarks[:0] = remarks
    return found


def _decode(raw: bytes) -> tuple[str, list[str]]:
    if raw[:2] in (b"\xff\xfe", b"\xfe\xff"):
        return raw.decode("utf-16", errors="replace"), []
    try:
        return raw.decode("utf-8-sig"), []
    except UnicodeDecodeError:
        return raw.decode("latin-1"), ["the file is not UTF-8; read as Latin-1"]


def _is_ipac(start: str) -> bool:
    lines = [line for line in start.splitlines()[:6] if line.startswith("|")]
    types = {"char", "double", "float", "int", "long", "real", "date"}
    return len(lines) > 1 and any(
        cell.strip() in types for line in lines[1:] for cell in line.split("|")
    )


def _astropy(path: Path, text: str, style: str) -> Any:
    from astropy.table import Table

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        try:
            return Table.read(text.splitlines(), format=style)
        except Exception as error:
            first = (str(error).strip() or type(error).__name__).splitlines()[0]
            name = style.split(".")[1].upper()
            raise CatalogueError(
                f"{path}: it looks like {name}, but cannot be read as that: {first}"
            ) from error


def _delimited(path: Path, text: str) -> TextTable:
    from astropy import units as u
    from astropy.table import MaskedColumn, Table

    lines, comments = _content(text)
    if not lines:
        raise CatalogueError(f"{path}: there are only comments, no table")
    delimiter = _delimiter([line for _, line in lines[:20]])
    rows = _split_rows(lines, delimiter)
    header, units, rows = _header(rows, comments, delimiter)
    while header and not header[-1].strip():
        header.pop()
    if len(header) < 2 and not rows:
        raise CatalogueError(f"{path} is not a table; its only line is {lines[0][1][:60]!r}")
    _check_ragged(path, header, rows, delimiter)
    names = _names(path, header)
    table = Table()
    for place, name in enumerate(names):
        cells = [cells[place].strip() if place < len(cells) else "" for _, cells in rows]
        unit = units[place].strip() if place < len(units) else ""
        known = u.Unit(unit, parse_strict="silent") if unit else None
        table[name] = MaskedColumn(cells, name=name, dtype=str, unit=known)
    kind = "CSV" if delimiter == "," else f"text ({_DELIMITERS.get(delimiter, 'spaces')})"
    return TextTable(kind, table, decimal_comma=delimiter == ";")


def _content(text: str) -> tuple[list[tuple[int, str]], list[str]]:
    """Return the numbered lines that hold cells, and the comments before them."""
    lines: list[tuple[int, str]] = []
    comments: list[str] = []
    for number, line in enumerate(text.splitlines(), 1):
        if line.lstrip().startswith("#"):
            if not lines:
                comments.append(line.lstrip().lstrip("#"))
        elif line.strip():
            lines.append((number, line))
    return lines, comments


def _delimiter(lines: list[str]) -> str:
    counts = {mark: lines[0].count(mark) for mark in _DELIMITERS}
    best = max(counts, key=lambda mark: counts[mark])
    if counts[best]:
        return best
    return " "


def _split_rows(lines: list[tuple[int, str]], delimiter: str) -> list[tuple[int, list[str]]]:
    stream = io.StringIO("\n".join(line for _, line in lines), newline="")
    reader = csv.reader(stream, delimiter=delimiter, skipinitialspace=True)
    rows = []
    for cells in reader:
        number = lines[min(reader.line_num, len(lines)) - 1][0]
        if delimiter == " ":
            cells = [part for cell in cells for part in cell.split("\t") if part]
        rows.append((number, cells))
    return rows


def _header(
    rows: list[tuple[int, list[str]]], comments: list[str], delimiter: str
) -> tuple[list[str], list[str], list[tuple[int, list[str]]]]:
    """Find the heading, which may stand in the last comment, and a line of units."""
    first = rows[0][1]
    if comments and any(_NUMBER.fullmatch(cell.strip()) for cell in first):
        commented = _split_rows([(0, comments[-1].strip())], delimiter)[0][1]
        if len(commented) == len(first):
            return commented, [], rows
    for place in (1, 2):
        # Some archives rule a line of dashes under heading and units.
        if len(rows) > place and all(re.fullmatch(r"-+", c.strip()) for c in rows[place][1]):
            return first, rows[1][1] if place == 2 else [], rows[place + 1 :]
    return first, [], rows[1:]


def _check_ragged(
    path: Path, header: list[str], rows: list[tuple[int, list[str]]], delimiter: str
) -> None:
    for number, cells in rows:
        extra = cells[len(header) :]
        if len(cells) < len(header) or any(cell.strip() for cell in extra):
            raise CatalogueError(
                f"{path}, line {number}: found {len(cells)} cells where the heading has "
                f"{len(header)} (separated by {_DELIMITERS.get(delimiter, 'spaces')}); "
                "leave an empty cell for a missing value and quote text that holds the separator"
            )


def _names(path: Path, header: list[str]) -> list[str]:
    names = [cell.strip() or f"column {place}" for place, cell in enumerate(header, 1)]
    twice = duplicates(names)
    if twice:
        places = [str(i) for i, name in enumerate(names, 1) if name == twice[0]]
        raise CatalogueError(
            f"{path}: the heading '{twice[0]}' stands over columns {' and '.join(places)}; "
            "rename one of them"
        )
    return names
