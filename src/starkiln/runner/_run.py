"""A finished run, opened again: its tables, its draws and the model behind them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from pathlib import Path
from typing import Any

import numpy as np

from starkiln.derived import pressure_table_of_draws
from starkiln.errors import InputError, RunFolderError
from starkiln.inference import Settings
from starkiln.runner._folder import DRAWS, read_meta
from starkiln.runner._model import StarModel
from starkiln.runner._single import dust_of, emitter_of
from starkiln.store import read_table, table_name


@dataclass(frozen=True)
class Run:
    """A run folder whose fits are complete.

    Attributes
    ----------
    folder : pathlib.Path
    meta : dict
        The content of `run.json`.
    """

    folder: Path
    meta: Mapping[str, Any]

    @cached_property
    def results(self) -> Any:
        """One row per input star, in input order (`astropy.table.Table`)."""
        return self._table("results")

    @cached_property
    def photometry(self) -> Any:
        """The data as understood, one row per measurement (`astropy.table.Table`)."""
        return self._table("photometry")

    @cached_property
    def settings(self) -> Settings:
        """The settings of the run."""
        stored: Mapping[str, Any] = self.meta["identity"]["settings"]
        return Settings(**stored)

    def draws(self, row: int) -> Any:
        """Return the posterior draws of input row `row`, counted from 1, or None.

        Returns
        -------
        astropy.table.Table or None
            One column per quantity; None for a rejected row or where none were kept.
        """
        from astropy.table import Table

        stored = self._all_draws
        if stored is None:
            return None
        one = stored[self._index(row)]
        kept = {
            name: np.asarray(one[name], dtype=float)
            for name in stored.colnames
            if name != "name" and np.all(np.isfinite(one[name]))
        }
        if not kept:
            return None
        table = Table(kept)
        for name in table.colnames:
            table[name].unit = stored[name].unit
            table[name].description = stored[name].description
        return table

    def model(self, row: int) -> StarModel:
        """Return the model of input row `row`, counted from 1, over its used bands."""
        self._index(row)
        used = self.photometry[(self.photometry["row"] == row) & self.photometry["used"]]
        # The fit takes detections before limits; the photometry keeps the input's order.
        return StarModel(self.emitter, self._dust(row), tuple(map(str, used["band"])))

    def pressure_table(
        self,
        known: Mapping[str, Sequence[Any]] | None = None,
        *,
        seed: int = 0,
        at: float | None = None,
    ) -> Any:
        """Return mass, age and light pressure of every star from its draws.

        See `starkiln.derived.pressure_table_of_draws` for the parameters and the table.
        """
        names = [str(name) for name in self.results["name"]]
        draws = [self.draws(row) for row in range(1, len(names) + 1)]
        return pressure_table_of_draws(names, draws, known, seed=seed, at=at)

    @cached_property
    def emitter(self) -> Any:
        """The emitter of the run."""
        return emitter_of(self.meta["identity"]["emitter"])

    def rows_of(self, name: str) -> list[int]:
        """Return the input rows, counted from 1, of the stars called `name`.

        Raises
        ------
        InputError
            No star is called so.
        """
        names = np.asarray(self.results["name"], dtype=str)
        found = np.flatnonzero(names == name) + 1
        if not found.size:
            from difflib import get_close_matches

            close = get_close_matches(name, list(names), n=3)
            hint = f"; nearest: {', '.join(close)}" if close else ""
            raise InputError(f"no star '{name}' in the run {self.folder}{hint}")
        return [int(row) for row in found]

    @cached_property
    def _all_draws(self) -> Any:
        path = self.folder / DRAWS
        return read_table(path, "fits") if path.exists() else None

    def _dust(self, row: int) -> Any:
        dust = dust_of(self.settings)
        if "rv" in self.results.colnames:
            value = self.results["rv"][self._index(row)]
            if value is not np.ma.masked:
                return replace(dust, rv=float(value))
        return dust

    def _index(self, row: int) -> int:
        if not 1 <= row <= len(self.results):
            raise InputError(f"row = {row} is out of bounds: 1 to {len(self.results)}")
        return row - 1

    def _table(self, name: str) -> Any:
        file_format = self.meta["identity"]["format"]
        return read_table(self.folder / table_name(name, file_format), file_format)


def open_run(folder: str | Path) -> Run:
    """Open a run folder.

    Parameters
    ----------
    folder : str or pathlib.Path
        Made by `fit_catalogue` or by `starkiln fit`.

    Returns
    -------
    Run

    Raises
    ------
    RunFolderError
        It is no run folder, or its run is not complete.
    """
    target = Path(folder)
    if not target.is_dir():
        raise RunFolderError(f"{target} is no folder; give the folder of a run")
    meta = read_meta(target)
    if not meta.get("complete"):
        raise RunFolderError(
            f"the run in {target} is not complete; finish it with the same starkiln fit command"
        )
    return Run(target, meta)
