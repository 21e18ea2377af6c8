"""Tables kept on disk between runs, named by what they were made from."""

from __future__ import annotations

import contextlib
import hashlib
import io
import os
import sys
import warnings
from collections.abc import Callable
from pathlib import Path

import numpy as np

from starkiln.errors import StorageError
from starkiln.store import atomic_write

__all__ = ["cache_folder", "cached_array"]

#: Environment variable with another folder for the cache; `off` for none.
CACHE_VARIABLE = "STARKILN_CACHE"

_DIGEST_BYTES = 32


def cache_folder() -> Path | None:
    """Return the folder of the cache: the platform's own, unless `STARKILN_CACHE` names one.

    Returns
    -------
    pathlib.Path or None
        None where there is none, or `STARKILN_CACHE` is `off`.
    """
    chosen = os.environ.get(CACHE_VARIABLE)
    if chosen:
        return None if chosen == "off" else Path(chosen)
    try:
        home = Path.home()
    except RuntimeError:
        return None
    if sys.platform == "win32":
        base = os.environ.get("LOCALAPPDATA") or home / "AppData" / "Local"
    elif sys.platform == "darwin":
        base = home / "Library" / "Caches"
    else:
        base = os.environ.get("XDG_CACHE_HOME") or home / ".cache"
    return Path(base) / "starkiln"


def cached_array(key: str, build: Callable[[], np.ndarray]) -> np.ndarray:
    """Return the array kept under `key`, building and keeping it if there is none.

    Parameters
    ----------
    key : str
        A digest of everything that the array follows from.
    build : callable
        Makes the array.

    Returns
    -------
    numpy.ndarray

    Notes
    -----
    The file holds the array in numpy's format and the SHA-256 of that. It is written
    whole or not at all, so that two processes at once both leave a good one. A file
    that is damaged is made again, with a warning; a folder that cannot be written
    only costs time.
    """
    folder = cache_folder()
    if folder is None:
        return build()
    path = folder / "band-fluxes" / f"{key}.npy"
    kept = _read(path)
    if kept is not None:
        return kept
    array = build()
    with contextlib.suppress(OSError, StorageError):
        path.parent.mkdir(parents=True, exist_ok=True)
        atomic_write(path, lambda stream: stream.write(_packed(array)))
    return array


def _packed(array: np.ndarray) -> bytes:
    buffer = io.BytesIO()
    np.save(buffer, array, allow_pickle=False)
    return buffer.getvalue() + hashlib.sha256(buffer.getvalue()).digest()


def _read(path: Path) -> np.ndarray | None:
    try:
        data = path.read_bytes()
    except OSError:
        return None
    content, digest = data[:-_DIGEST_BYTES], data[-_DIGEST_BYTES:]
    if hashlib.sha256(content).digest() == digest:
        return np.load(io.BytesIO(content), allow_pickle=False)
    warnings.warn(f"the cached table {path} is damaged and is made again", stacklevel=2)
    return None
