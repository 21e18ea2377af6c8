"""Writes that happen whole or not at all, in the order that power loss respects."""

from __future__ import annotations

import contextlib
import errno
import os
import tempfile
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import IO, Any

from starkiln.errors import StorageError

_REMEDY = {
    errno.ENOSPC: "the disk is full; free some space and run the same command again",
    errno.EDQUOT: "the disk quota is used up; free some space and run the same command again",
    errno.EROFS: "the file system is read-only; choose another folder",
    errno.EACCES: "no permission to write there; choose another folder",
    errno.EPERM: "no permission to write there; choose another folder",
    errno.ENOTDIR: "a part of that path is a file, not a folder; choose another folder",
    errno.ENOENT: "the folder does not exist",
}


def atomic_write(path: str | Path, write: Callable[[IO[Any]], object], *, mode: str = "wb") -> Path:
    r"""Write a file under a temporary name, flush it to disk, then rename it.

    Parameters
    ----------
    path : str or pathlib.Path
        Where the file shall stand. Its folder must exist.
    write : callable
        Called once with the open file.
    mode : {"wb", "w"}
        `"w"` opens as UTF-8 text with `\n` line ends.

    Returns
    -------
    pathlib.Path
        `path`. Either the whole new file stands there, or what stood before.

    Raises
    ------
    StorageError
        The folder cannot be written or the disk is full; nothing is left behind.
    """
    target = Path(path)
    text: dict[str, Any] = {} if "b" in mode else {"encoding": "utf-8", "newline": "\n"}
    with _explained(target):
        handle, name = tempfile.mkstemp(prefix=f".{target.name[:40]}.", dir=target.parent)
        temporary = Path(name)
        try:
            with os.fdopen(handle, mode, **text) as stream:
                write(stream)
                stream.flush()
                os.fsync(stream.fileno())
            temporary.chmod(0o666 & ~_umask())
            temporary.replace(target)
        except BaseException:
            temporary.unlink(missing_ok=True)
            raise
        _sync_folder(target.parent)
    return target


@contextlib.contextmanager
def _explained(target: Path) -> Iterator[None]:
    try:
        yield
    except StorageError:
        raise
    except OSError as error:
        remedy = _REMEDY.get(error.errno or 0, error.strerror or str(error))
        raise StorageError(f"cannot write {target}: {remedy}") from error


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask


def _sync_folder(folder: Path) -> None:
    # Makes the rename itself durable; not every platform can open a folder.
    if not hasattr(os, "O_DIRECTORY"):
        return
    handle = os.open(folder, os.O_RDONLY | os.O_DIRECTORY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)
