"""A run folder opened for drawing: one of another version says so at once."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from starkiln._version import __version__
from starkiln.errors import RunFolderError, SettingsError
from starkiln.inference import Settings
from starkiln.runner import Run, open_run

_NEEDED = ("catalogue", "emitter", "engine", "seed", "settings", "versions", "format")


def open_for_report(folder: str | Path) -> Run:
    """Open a run folder and see that it holds what figures, tables and page need.

    Raises
    ------
    RunFolderError
        It is no run folder, half a run, or one of a version that kept other things.
    """
    run = open_run(folder)
    identity: Any = run.meta.get("identity", {})
    missing = [key for key in _NEEDED if key not in identity]
    missing += [] if "priors" in run.meta else ["priors"]
    if missing:
        raise RunFolderError(_other_version(run, f"run.json lacks {', '.join(missing)}"))
    _read_settings(run)
    return run


def _read_settings(run: Run) -> Settings:
    try:
        return run.settings
    except (TypeError, SettingsError) as error:
        raise RunFolderError(_other_version(run, str(error))) from error


def _other_version(run: Run, what: str) -> str:
    versions: Any = run.meta.get("identity", {}).get("versions", {})
    made = versions.get("starkiln", "of unknown version")
    return (
        f"the run in {run.folder} was made by starkiln {made} and cannot be read by {__version__} "
        f"({what}): use that version, or fit again into a new folder"
    )
