"""A run folder: what it was made with, and the parts that have been done.

`run.json` is written before the first part. A part is one `.npz` file that holds
the results, photometry and draws of a stretch of rows; it is written whole under a
temporary name, flushed and renamed, so that whatever stands in `parts/` is done,
and whatever does not stand there is not.
"""

from __future__ import annotations

import contextlib
import json
import zipfile
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np

from starkiln.errors import RunFolderError, StorageError
from starkiln.store import atomic_write

try:
    import fcntl
except ImportError:  # not on Windows, where a folder is not locked
    fcntl = None  # type: ignore[assignment]

RUN_FILE = "run.json"
PARTS = "parts"
DRAWS = "draws.fits"
#: How a difference between two runs is named.
_WHAT = {
    "catalogue": "catalogue",
    "columns": "column sheet",
    "settings": "settings",
    "versions": "version of",
    "seed": "seed",
}


@dataclass
class Part:
    """The outcome of a stretch of rows.

    Attributes
    ----------
    start : int
        First row, counted from 0.
    results : list of dict
        One per row, in order.
    photometry : list of dict
        One per measurement.
    draws : list of dict of numpy.ndarray, or None
        One per row; None where no draws are kept, and for a rejected row.
    """

    start: int
    results: list[dict[str, Any]] = field(default_factory=list)
    photometry: list[dict[str, Any]] = field(default_factory=list)
    draws: list[dict[str, np.ndarray] | None] = field(default_factory=list)

    @property
    def stop(self) -> int:
        """The row after the last."""
        return self.start + len(self.results)


def prepare(folder: Path, identity: Mapping[str, Any], described: Mapping[str, Any]) -> dict:
    """Open a folder for a run: a new one, or the same run again.

    Parameters
    ----------
    folder : pathlib.Path
        Made when absent.
    identity : dict
        Everything that decides the results: JSON values by name.
    described : dict
        What else `run.json` shall tell: priors in words, start, host.

    Returns
    -------
    dict
        The content of `run.json`; `complete` tells whether nothing is left to do.

    Raises
    ------
    RunFolderError
        The folder holds another run (the difference is named), or files that are none.
    StorageError
        It cannot be made or written.
    """
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise StorageError(f"cannot make the run folder {folder}: {error.strerror}") from error
    path = folder / RUN_FILE
    if path.exists():
        meta = read_meta(folder)
        _refuse_difference(folder, meta.get("identity", {}), identity)
        return meta
    strangers = sorted(item.name for item in folder.iterdir() if not item.name.startswith("."))
    if strangers:
        raise RunFolderError(
            f"{folder} holds '{strangers[0]}' but no {RUN_FILE}: not a run folder; "
            "give an empty or a new folder with --run"
        )
    meta = {**described, "identity": dict(identity), "complete": False}
    write_meta(folder, meta)
    (folder / PARTS).mkdir(exist_ok=True)
    return meta


@contextlib.contextmanager
def held(folder: Path) -> Iterator[None]:
    """Hold a run folder for this process alone; the lock ends with the process.

    Raises
    ------
    RunFolderError
        Another process works in it.
    """
    if fcntl is None:
        yield
        return
    with (folder / ".lock").open("w") as stream:
        try:
            fcntl.flock(stream, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            raise RunFolderError(
                f"another starkiln fit is at work in {folder}; wait for its end, or stop it"
            ) from None
        yield


def read_meta(folder: Path) -> dict[str, Any]:
    """Return the content of a folder's `run.json`."""
    path = folder / RUN_FILE
    try:
        return json.loads(path.read_text(encoding="utf-8"))
    except FileNotFoundError:
        raise RunFolderError(
            f"{folder} holds no {RUN_FILE}: not a run folder; make one with starkiln fit"
        ) from None
    except OSError as error:
        raise RunFolderError(f"cannot read {path}: {error.strerror}") from error
    except ValueError as error:
        raise RunFolderError(f"{path} is damaged ({error}); use a new folder") from error


def write_meta(folder: Path, meta: Mapping[str, Any]) -> None:
    """Write `run.json`."""
    text = json.dumps(meta, indent=2, ensure_ascii=False, allow_nan=False) + "\n"
    atomic_write(folder / RUN_FILE, lambda stream: stream.write(text), mode="w")


def write_part(folder: Path, part: Part) -> None:
    """Write one part, whole or not at all."""
    arrays: dict[str, np.ndarray] = {
        "results": _json_array(part.results),
        "photometry": _json_array(part.photometry),
    }
    for i, draws in enumerate(part.draws):
        if draws is not None:
            arrays[f"draws{i}"] = np.array(list(draws.values()), dtype=np.float32)
            arrays[f"names{i}"] = np.array(list(draws))
    path = folder / PARTS / f"rows-{part.start + 1:09d}-{part.stop:09d}.npz"
    path.parent.mkdir(exist_ok=True)
    atomic_write(path, lambda stream: np.savez(stream, allow_pickle=False, **arrays))


def read_parts(folder: Path) -> Iterator[Part]:
    """Yield the parts of a folder in the order of their rows.

    Raises
    ------
    RunFolderError
        A part is damaged; its name is told.
    """
    for path in sorted((folder / PARTS).glob("rows-*.npz")):
        try:
            with path.open("rb") as stream, np.load(stream, allow_pickle=False) as stored:
                results = json.loads(str(stored["results"]))
                draws = [
                    dict(zip(map(str, stored[f"names{i}"]), stored[f"draws{i}"], strict=True))
                    if f"draws{i}" in stored
                    else None
                    for i in range(len(results))
                ]
                photometry = json.loads(str(stored["photometry"]))
        except (OSError, ValueError, KeyError, zipfile.BadZipFile) as error:
            raise RunFolderError(
                f"{path} is damaged ({error}); delete that file and run the same command again"
            ) from error
        yield Part(int(path.stem.split("-")[1]) - 1, results, photometry, draws)


def done_rows(folder: Path) -> list[tuple[int, int]]:
    """Return the stretches (start, stop), counted from 0, that are done, in order."""
    names = sorted(path.stem for path in (folder / PARTS).glob("rows-*.npz"))
    return [(int(name.split("-")[1]) - 1, int(name.split("-")[2])) for name in names]


def _json_array(value: Any) -> np.ndarray:
    # JSON keeps every double exactly (repr round trip) and needs no pickle.
    return np.array(json.dumps(value, ensure_ascii=False))


def _refuse_difference(folder: Path, old: Mapping[str, Any], new: Mapping[str, Any]) -> None:
    for key in [*new, *(key for key in old if key not in new)]:
        before, after = old.get(key), new.get(key)
        if before == after:
            continue
        if isinstance(before, Mapping) and isinstance(after, Mapping):
            inner = next(k for k in [*after, *before] if before.get(k) != after.get(k))
            label = f"{_WHAT.get(key, key)} {inner}"
            before, after = before.get(inner), after.get(inner)
        else:
            label = _WHAT.get(key, key)
        raise RunFolderError(
            f"{folder} holds another run: {label} was {before!r}, now {after!r}; "
            "use another folder, or the command that it was begun with"
        )
