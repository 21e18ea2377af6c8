"""The figures of a run folder: which kinds there are, and their files."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, replace
from functools import partial
from pathlib import Path
from typing import Any

import numpy as np

from starkiln.errors import InputError, StorageError
from starkiln.inference import build_problem
from starkiln.observations import Catalogue, Star
from starkiln.report._chain import autocorrelation_plot, chain_figure
from starkiln.report._checks import predictive_plot, prior_figure
from starkiln.report._comparisons import temperature_figure
from starkiln.report._corner import corner_figure
from starkiln.report._priors import priors_of_problem
from starkiln.report._proposal import proposal_plot
from starkiln.report._sample import hr_plot, misfit_plot
from starkiln.report._sed import sed_figure
from starkiln.report._style import save_figure
from starkiln.report._text import file_stem
from starkiln.report._view import FitView, run_view, view_of
from starkiln.runner import Run, dust_of, fit

#: Figures of one star, and of a whole run; the first two of each are drawn unasked.
STAR_KINDS: dict[str, Callable[..., Any]] = {
    "corner": corner_figure,
    "sed": sed_figure,
    "prior": prior_figure,
    "predictive": predictive_plot,
    "chain": chain_figure,
    "autocorrelation": autocorrelation_plot,
}
RUN_KINDS = ("hr", "misfit", "temperature", "pressure")
#: Kinds that the catalogue of the run must be given for.
CATALOGUE_KINDS = ("chain", "autocorrelation", "temperature")


@dataclass(frozen=True)
class Drawn:
    """One figure that was asked for: its file, or why there is none."""

    path: Path | None
    message: str = ""


def write_figures(
    run: Run,
    kinds: Sequence[str],
    *,
    rows: Sequence[int] | None = None,
    catalogue: Catalogue | None = None,
    image: str = "pdf",
    width: str | float | None = None,
) -> Iterator[Drawn]:
    """Draw figures of a run into its `figures/` folder, one after the other.

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
    kinds : sequence of str
        Of `STAR_KINDS` and `RUN_KINDS`.
    rows : sequence of int, optional
        Rows of the stars, counted from 1; all by default.
    catalogue : starkiln.observations.Catalogue, optional
        The one that was fitted: published temperatures and a row's own priors come from
        it, and a chain, which no run folder keeps, from fitting the star again with the
        same seed.
    image : {"pdf", "png", "svg"}
        Kind of file.
    width : {"one", "two"} or float, optional
        Width of a journal's column, or inches; by default as the kind needs.

    Yields
    ------
    Drawn

    Raises
    ------
    InputError
        A kind is unknown or needs the catalogue, or it is another catalogue.
    StorageError
        The folder cannot be written.
    """
    _check(run, kinds, catalogue)
    folder = _figure_folder(run)
    options = {} if width is None else {"width": width}
    for kind in (kind for kind in RUN_KINDS if kind in kinds):
        path = folder / f"{kind}.{image}"
        yield _draw(path, partial(_run_figure, kind, run, catalogue, options))
    star_kinds = [kind for kind in STAR_KINDS if kind in kinds]
    for row in (rows or range(1, len(run.results) + 1)) if star_kinds else ():
        view = run_view(run, row)
        if not view.draws:
            yield Drawn(None, view.why_no_draws("figure"))
            continue
        if catalogue is not None and "prior" in star_kinds:
            view = _with_priors(view, run, row, catalogue)
        if set(star_kinds) & set(CATALOGUE_KINDS):
            view = _fitted_again(run, row, catalogue)
        for kind in star_kinds:
            path = folder / f"{file_stem(view.name, row)}_{kind}.{image}"
            yield _draw(path, partial(STAR_KINDS[kind], view, **options))


def _check(run: Run, kinds: Sequence[str], catalogue: Catalogue | None) -> None:
    for kind in kinds:
        if kind not in STAR_KINDS and kind not in RUN_KINDS:
            known = ", ".join([*STAR_KINDS, *RUN_KINDS])
            raise InputError(f"the kind of figure {kind!r} is unknown: give one of {known}")
        if kind in CATALOGUE_KINDS and catalogue is None:
            raise InputError(f"figure {kind!r} needs the run's catalogue: give --catalogue FILE")
    if catalogue is not None and catalogue.checksum != run.meta["identity"]["catalogue"]:
        raise InputError(f"{catalogue.path} is not the catalogue of this run, or was changed")


def _draw(path: Path, draw: Callable[[], Any]) -> Drawn:
    try:
        return Drawn(save_figure(draw(), path))
    except InputError as error:
        return Drawn(None, str(error))


def _run_figure(kind: str, run: Run, catalogue: Catalogue | None, options: dict) -> Any:
    if kind == "hr":
        return hr_plot(run, **options)
    if kind == "misfit":
        return misfit_plot(run, **options)
    if kind == "pressure":
        return proposal_plot(run.pressure_table(), **options)
    stars = [] if catalogue is None else catalogue.rows()
    known = [(getattr(star, "teff_k", None), getattr(star, "e_teff_k", None)) for star in stars]
    published, error = np.array(known, dtype=float).reshape(-1, 2).T
    return temperature_figure(run.results, published, error, **options)


def _with_priors(view: FitView, run: Run, row: int, catalogue: Catalogue) -> FitView:
    """Return the view with the priors of its own row: dust, temperature, distance."""
    star = catalogue.rows(row - 1, row)[0]
    if not isinstance(star, Star):
        return view
    problem = build_problem(star, run.emitter, dust_of(run.settings), run.settings)
    return replace(view, priors=priors_of_problem(problem))


def _fitted_again(run: Run, row: int, catalogue: Catalogue | None) -> FitView:
    star = None if catalogue is None else catalogue.rows(row - 1, row)[0]
    if not isinstance(star, Star):
        return run_view(run, row)
    made = run.meta["identity"]
    return view_of(
        fit(star, emitter=made["emitter"], engine=made["engine"], settings=run.settings,
            rng=made["seed"])
    )  # fmt: skip


def _figure_folder(run: Run) -> Path:
    folder = Path(run.folder) / "figures"
    try:
        folder.mkdir(exist_ok=True)
    except OSError as error:
        raise StorageError(f"cannot make the folder {folder}: {error.strerror}") from error
    return folder
