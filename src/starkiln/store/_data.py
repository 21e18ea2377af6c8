"""The project's own data tables: ECSV files that say where each number comes from."""

from __future__ import annotations

from functools import lru_cache
from importlib import resources
from pathlib import Path
from typing import Any

from starkiln.errors import StorageError

_REQUIRED = ("description", "reference", "licence", "retrieved")


def data_path(room: str, name: str) -> Path:
    """Return the path of the data file `name` that the package ships in `room`."""
    path = Path(str(resources.files("starkiln"))) / room / "data" / name
    if not path.is_file():
        raise StorageError(f"the data file {path} is missing; install starkiln again")
    return path


@lru_cache(maxsize=64)
def read_data_table(room: str, name: str) -> Any:
    """Read one of the package's own ECSV tables.

    Parameters
    ----------
    room, name : str
        The room whose `data/` folder holds it, and the file's name.

    Returns
    -------
    astropy.table.Table
        Shared between callers: do not change it.

    Raises
    ------
    StorageError
        The file is missing, or its header lacks a description, reference,
        licence or retrieval date, or a column lacks a description.
    """
    from astropy.table import Table

    path = data_path(room, name)
    table = Table.read(path, format="ascii.ecsv")
    missing = [key for key in _REQUIRED if not table.meta.get(key)]
    missing += [f"a description of column {c}" for c in table.colnames if not table[c].description]
    if missing:
        raise StorageError(f"the data file {path} lacks {', '.join(missing)}")
    return table
