"""A whole catalogue: rows into work units, units into parts, parts into tables."""

from __future__ import annotations

import math
import os
import platform
import shutil
from collections.abc import Callable, Iterator, Mapping
from concurrent.futures import FIRST_COMPLETED, Future, wait
from dataclasses import dataclass, field
from datetime import UTC, datetime
from importlib.metadata import version
from pathlib import Path
from typing import Any

import numpy as np

from starkiln._version import __version__
from starkiln.errors import InputError, SettingsError
from starkiln.inference import Settings, describe_priors
from starkiln.observations import BadRow, Catalogue, Star
from starkiln.runner._executors import make_executor, outcome
from starkiln.runner._folder import (
    PARTS,
    Part,
    done_rows,
    held,
    prepare,
    write_meta,
    write_part,
)
from starkiln.runner._join import join_parts
from starkiln.runner._progress import Progress, Tally
from starkiln.runner._run import Run, open_run
from starkiln.runner._single import dust_of, emitter_of, engine_of, fit
from starkiln.runner._tables import photometry_rows, rejected_row, result_row

#: Catalogues beyond this size keep no draws unless asked to.
MOST_ROWS_WITH_DRAWS = 10_000
_LIBRARIES = ("numpy", "scipy", "astropy", "emcee", "dust_extinction", "speclite")


@dataclass(frozen=True)
class Recipe:
    """What every row of a run shares.

    Attributes
    ----------
    emitter, engine : str
        Registered names.
    settings : Settings
    seed : int
    keep_draws : bool
    """

    emitter: str = "blackbody"
    engine: str = "ensemble"
    settings: Settings = field(default_factory=Settings)
    seed: int = 0
    keep_draws: bool = True


def fit_catalogue(
    catalogue: Catalogue,
    folder: str | Path,
    *,
    recipe: Recipe | None = None,
    workers: int | None = None,
    file_format: str = "ecsv",
    progress: Callable[[Progress], None] | None = None,
    record: Mapping[str, str] | None = None,
) -> Run:
    """Fit every row of a catalogue and leave the results in a run folder.

    A row that cannot be fitted is `rejected` with its message and the others go on.
    The same call on the same folder resumes what was interrupted; results depend on
    neither the order, the number of workers nor the interruptions.

    Parameters
    ----------
    catalogue : Catalogue
        From `read_catalogue`.
    folder : str or pathlib.Path
        The run folder, made when absent.
    recipe : Recipe, optional
        Emitter, engine, settings and seed.
    workers : int, optional
        Processes; by default as many as there are cores, one for a few rows.
    file_format : str
        Of `results` and `photometry`: ecsv, fits, votable or csv.
    progress : callable, optional
        Called with a `Progress` after every part.
    record : mapping, optional
        What else `run.json` shall tell of a new run, such as the `command`.

    Returns
    -------
    Run

    Raises
    ------
    RunFolderError
        The folder holds another run.
    StorageError
        It cannot be written; what was done is kept.
    KeyboardInterrupt
        Interrupted; what was done is kept.
    """
    recipe = recipe or Recipe()
    engine_of(recipe.engine)
    emitter_of(recipe.emitter)
    dust_of(recipe.settings)
    if len(catalogue) == 0:
        raise InputError(f"{catalogue.path} holds no rows")
    target = Path(folder)
    meta = prepare(
        target, _identity(catalogue, recipe, file_format), {**(record or {}), **_described(recipe)}
    )
    if meta["complete"]:
        return open_run(target)
    with held(target):
        _work(catalogue, target, recipe, _worker_count(workers, len(catalogue)), progress)
        join_parts(target, catalogue, recipe.keep_draws, file_format)
        meta["finished"] = _now()
        write_meta(target, {**meta, "complete": True})
        shutil.rmtree(target / PARTS, ignore_errors=True)
    return open_run(target)


def fit_rows(rows: list[Star | BadRow], recipe: Recipe) -> tuple[list, list, list]:
    """Fit rows one by one; return their results, photometry and draws.

    No row's failure reaches another: what goes wrong becomes its message.
    """
    results, photometry, draws = [], [], []
    for row in rows:
        outcome_row, kept = _fit_row(row, recipe)
        results.append(outcome_row)
        draws.append(kept)
        if isinstance(row, Star):
            photometry.extend(photometry_rows([row]))
    return results, photometry, draws


def _fit_row(row: Star | BadRow, recipe: Recipe) -> tuple[dict, dict | None]:
    labels: dict[str, Any] = {
        "engine": recipe.engine,
        "emitter": recipe.emitter,
        "seed": recipe.seed,
    }
    if isinstance(row, BadRow):
        return rejected_row(row.name, row.message, **labels), None
    try:
        result = fit(
            row,
            emitter=recipe.emitter,
            engine=recipe.engine,
            settings=recipe.settings,
            rng=recipe.seed,
        )
    except (InputError, ArithmeticError, np.linalg.LinAlgError) as error:
        message = str(error) if isinstance(error, InputError) else f"numerical failure: {error}"
        return rejected_row(row.name, message, **labels), None
    count = recipe.settings.draws if recipe.keep_draws else 0
    kept = {name: values[:count] for name, values in result.quantities.items()} if count else None
    return result_row(result), kept


def _work(
    catalogue: Catalogue,
    folder: Path,
    recipe: Recipe,
    workers: int,
    progress: Callable[[Progress], None] | None,
) -> None:
    """Do the rows that no part holds yet, unit by unit; each becomes a part."""
    gaps = _gaps(done_rows(folder), len(catalogue))
    todo = sum(stop - start for start, stop in gaps)
    executor = make_executor(min(workers, max(todo, 1)))
    tally = Tally(todo, len(catalogue), executor.slots)
    units = _units(gaps, tally)
    # One unit waits behind each that is being done; in this process there is no waiting.
    most = 1 if executor.slots == 1 else 2 * executor.slots
    pending: dict[Future, int] = {}
    finished = False
    try:
        while True:
            while len(pending) < most and (unit := next(units, None)):
                future = executor.submit(fit_rows, catalogue.rows(*unit), recipe)
                pending[future] = unit[0]
            if not pending:
                break
            for future in wait(pending, return_when=FIRST_COMPLETED).done:
                part = Part(pending.pop(future), *outcome(future))
                write_part(folder, part)
                state = tally.add(part)
                if progress:
                    progress(state)
        finished = True
    finally:
        executor.stop(at_once=not finished)


def _units(gaps: list[tuple[int, int]], tally: Tally) -> Iterator[tuple[int, int]]:
    """Cut what is to do into units of rows."""
    for start, stop in gaps:
        here = start
        while here < stop:
            size = min(tally.unit_rows, stop - here)
            yield here, here + size
            here += size


def _gaps(done: list[tuple[int, int]], total: int) -> list[tuple[int, int]]:
    gaps, here = [], 0
    for start, stop in done:
        if start > here:
            gaps.append((here, start))
        here = max(here, stop)
    if here < total:
        gaps.append((here, total))
    return gaps


def _worker_count(workers: int | None, rows: int) -> int:
    if workers is None:
        return max(1, min(os.cpu_count() or 1, math.ceil(rows / 4)))
    if workers < 1:
        raise SettingsError(f"workers = {workers} must be at least 1")
    return workers


def _identity(catalogue: Catalogue, recipe: Recipe, file_format: str) -> dict[str, Any]:
    return {
        "catalogue": catalogue.checksum,
        "columns": catalogue.sheet_checksum,
        "emitter": recipe.emitter,
        "engine": recipe.engine,
        "seed": recipe.seed,
        "settings": recipe.settings.as_dict(),
        "draws kept": recipe.keep_draws,
        "format": file_format,
        "versions": {"starkiln": __version__, **{name: version(name) for name in _LIBRARIES}},
    }


def _described(recipe: Recipe) -> dict[str, Any]:
    return {
        "priors": describe_priors(recipe.settings, recipe.emitter),
        "started": _now(),
        "host": platform.node(),
        "python": platform.python_version(),
    }


def _now() -> str:
    return datetime.now(UTC).isoformat(timespec="seconds")
