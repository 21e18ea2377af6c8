"""Tables read back."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from starkiln.errors import StorageError

_ASTROPY = {"ecsv": "ascii.ecsv", "csv": "ascii.csv", "fits": "fits", "votable": "votable"}


def table_name(stem: str, format: str) -> str:
    """Return the file name of a table in a format of `FORMATS`."""
    return f"{stem}.{format}"


def read_table(path: str | Path, format: str) -> Any:
    """Read a table that `write_table` wrote.

    Parameters
    ----------
    path : str or pathlib.Path
    format : {"ecsv", "fits", "votable", "csv"}

    Returns
    -------
    astropy.table.Table
        Texts are never masked.

    Raises
    ------
    StorageError
        It is absent or damaged.
    """
    from astropy.table import Table

    try:
        table = Table.read(path, format=_ASTROPY[format])
    except FileNotFoundError:
        raise StorageError(f"{path} is missing; make the run again") from None
    except (OSError, ValueError, IndexError) as error:
        raise StorageError(f"{path} cannot be read ({error}); make the run again") from error
    for name in table.colnames:
        # ECSV and CSV read an empty text back as a masked one.
        if table[name].dtype.kind in "UO" and hasattr(table[name], "filled"):
            table[name] = table[name].filled("")
    return table
