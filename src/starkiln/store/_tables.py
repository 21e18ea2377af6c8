"""Tables written in open formats, the same bytes for the same table."""

from __future__ import annotations

import io
import unicodedata
import warnings
from pathlib import Path
from typing import Any

from starkiln.errors import InputError
from starkiln.store._atomic import atomic_write

__all__ = ["FORMATS", "table_bytes", "write_table"]

#: Formats of table files; each is also the suffix of the file's name.
FORMATS = ("ecsv", "fits", "votable", "csv")


def write_table(table: Any, path: str | Path, format: str) -> Path:
    """Write a table whole or not at all.

    Parameters
    ----------
    table : astropy.table.Table
        Masked cells stay masked, but for texts in VOTable and CSV, which come
        back empty.
    path : str or pathlib.Path
    format : {"ecsv", "fits", "votable", "csv"}
        FITS holds ASCII text only: Greek letters are written by name, accents are
        left away, anything else becomes `?`. A unit that FITS does not know stands in the
        column's description (TCOMM). CSV has no units.

    Returns
    -------
    pathlib.Path
        `path`.

    Raises
    ------
    InputError
        Unknown format.
    StorageError
        The file cannot be written.
    """
    content = table_bytes(table, format)
    return atomic_write(path, lambda stream: stream.write(content))


def table_bytes(table: Any, format: str) -> bytes:
    """Return the content of a table file; see `write_table`."""
    if format not in FORMATS:
        raise InputError(f"format '{format}' is none of {', '.join(FORMATS)}")
    if format == "fits":
        return _fits(table)
    if format == "votable":
        return _votable(table)
    stream = io.StringIO()
    table.write(stream, format=f"ascii.{format}")
    return stream.getvalue().encode()


def _fits(table: Any) -> bytes:
    from astropy.io import fits

    plain = table.copy()
    plain.meta = {}
    for name in plain.colnames:
        column = plain[name]
        if column.dtype.kind in "UO":
            plain.replace_column(name, _ascii_column(column))
        elif column.unit is not None and not _fits_unit(column.unit):
            plain[name].description = f"{column.description or name} [{column.unit}]"
            plain[name].unit = None
    hdu = fits.table_to_hdu(plain)
    for place, name in enumerate(plain.colnames, 1):
        if plain[name].description:
            hdu.header[f"TCOMM{place}"] = _ascii(plain[name].description)
    for key, value in table.meta.items():
        hdu.header.add_comment(_ascii(f"{key}: {value}"))
    stream = io.BytesIO()
    fits.HDUList([fits.PrimaryHDU(), hdu]).writeto(stream)
    return stream.getvalue()


def _votable(table: Any) -> bytes:
    from astropy.io.votable import from_table
    from astropy.io.votable.tree import Info

    with warnings.catch_warnings():
        # An ID made from a name with a space, and units beyond the standard's list,
        # are both read back as they were.
        warnings.simplefilter("ignore")
        document = from_table(table)
        for key, value in table.meta.items():
            if key != "description":
                document.resources[0].infos.append(Info(name=str(key), value=str(value)))
        stream = io.BytesIO()
        document.to_xml(stream)
    return stream.getvalue()


def _ascii_column(column: Any) -> Any:
    from astropy.table import Column

    filled = column.filled("") if hasattr(column, "filled") else column
    texts = [_ascii(str(text)) for text in filled]
    return Column(texts, description=column.description, dtype=str)


def _fits_unit(unit: Any) -> bool:
    try:
        unit.to_string("fits")
    except (ValueError, AttributeError):
        return False
    return True


def _ascii(text: str) -> str:
    if text.isascii():
        return text
    return "".join(map(_ascii_letter, text))


def _ascii_letter(letter: str) -> str:
    if letter.isascii():
        return letter
    words = unicodedata.name(letter, "").split()
    if words[:1] == ["GREEK"] and "LETTER" in words:
        greek = words[words.index("LETTER") + 1].lower()
        return greek.capitalize() if "CAPITAL" in words else greek
    plain = unicodedata.normalize("NFKD", letter).encode("ascii", "ignore").decode()
    return plain or "?"
