"""Text tables: ECSV, CDS and IPAC through astropy, delimited text cell by cell.

Delimited text is read as strings, so that a message can show a cell as it stands
in the file, a name keeps its zeros, and a ragged line is reported by its number.
"""

from __future__ import annotations

import re
import warnings
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from starkiln.errors import CatalogueError
from starkiln.observations._delimited import delimited

__all__ = ["TextTable", "read_text_table"]

#: First characters of text files that are no tables, and what they are.
_OTHERS = {
    "<!doctype": "a web page",
    "<html": "a web page",
    "<?xml": "an XML file that is no VOTable",
    "{": "a JSON file",
    "%pdf": "a PDF file",
    "{\\rtf": "a word processor's file",
}


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
    for head, what in _OTHERS.items():
        if start[:12].casefold().startswith(head):
            raise CatalogueError(f"{path} is {what}, not a table")
    if re.match(r"#\s*%ECSV", start):
        return TextTable("ECSV", _ecsv(path, text, remarks), remarks=remarks)
    if re.search(r"^\s*Byte-by-byte Description of file", start, re.M | re.I):
        return TextTable("CDS", _astropy(path, text, "mrt"), remarks=remarks)
    if start.startswith("\\") or (start.startswith("|") and _is_ipac(start)):
        return TextTable("IPAC", _astropy(path, text, "ipac"), remarks=remarks)
    table, kind = delimited(path, text, remarks)
    return TextTable(kind, table, "semicolons" in kind, remarks)


def _decode(raw: bytes) -> tuple[str, list[str]]:
    if raw[:2] in (b"\xff\xfe", b"\xfe\xff"):
        return raw.decode("utf-16", errors="replace"), []
    try:
        return raw.decode("utf-8-sig"), []
    except UnicodeDecodeError:
        return raw.decode("latin-1"), ["the file is not UTF-8; read as Latin-1"]


def _is_ipac(start: str) -> bool:
    lines = [line for line in start.splitlines()[:6] if line.startswith("|")]
    types = {"char", "c", "double", "d", "float", "f", "int", "i", "long", "l", "real", "date"}
    return len(lines) > 1 and any(
        all(cell.strip() in types for cell in line.strip().strip("|").split("|"))
        for line in lines[1:]
    )


def _astropy(path: Path, text: str, style: str) -> Any:
    from astropy.table import Table

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")
        try:
            lines = re.split(r"\r\n|\r|\n", text.rstrip())
            return Table.read(lines, format=f"ascii.{style}")
        except Exception as error:  # its readers raise many kinds
            first = (str(error).strip() or type(error).__name__).splitlines()[0]
            raise CatalogueError(
                f"{path}: it looks like {style.upper()}, but cannot be read as that: {first}"
            ) from error


def _ecsv(path: Path, text: str, remarks: list[str]) -> Any:
    """Read ECSV; one that astropy refuses cell by cell, so that one bad row spoils no other."""
    try:
        return _astropy(path, text, "ecsv")
    except CatalogueError as error:
        columns = _ecsv_columns(text)
        if columns is None:
            raise
        table, _ = delimited(path, text, [])
        if table.colnames != list(columns):
            raise
        remarks.append(str(error).removeprefix(f"{path}: ") + "; read as plain text instead")
    for name, column in columns.items():
        table[name].unit = column.get("unit")
        table[name].description = column.get("description")
    return table


def _ecsv_columns(text: str) -> dict[str, Any] | None:
    """Return the columns that the header of an ECSV file describes, if it can be read."""
    from astropy.table import meta

    lines = [line[2:] for line in text.splitlines() if line.startswith("# ")]
    try:
        header = meta.get_header_from_yaml(lines[1:])
        return {column["name"]: column for column in header["datatype"]}
    except (meta.YamlParseError, KeyError, TypeError):
        return None
