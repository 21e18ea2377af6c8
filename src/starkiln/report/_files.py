"""The figures of a run folder: which kinds there are, and their files."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from pathlib import Path
from typing import Any

from starkiln.errors import InputError, StorageError
from starkiln.report._corner import corner_figure
from starkiln.report._sed import sed_figure
from starkiln.report._style import save_figure
from starkiln.report._text import file_stem, plain_line
from starkiln.report._view import run_view

#: Kind of figure -> the function that draws it from one star.
STAR_KINDS: dict[str, Callable[..., Any]] = {"corner": corner_figure, "sed": sed_figure}


def rows_of(run: Any, names: Sequence[str] = ()) -> list[int]:
    """Return the rows (from 1) of the stars of these names, or of all stars.

    Raises
    ------
    InputError
        No star of the run has the name; the message gives the nearest ones.
    """
    known = [str(name) for name in run.results["name"]]
    if not names:
        return list(range(1, len(known) + 1))
    for name in names:
        if name not in known:
            raise InputError(_unknown_star(name, known))
    wanted = set(names)
    return [row for row, name in enumerate(known, start=1) if name in wanted]


def _unknown_star(name: str, known: Iterable[str]) -> str:
    import difflib

    folded = {other.casefold(): other for other in known if other}
    near = difflib.get_close_matches(name.casefold(), folded, n=3, cutoff=0.5)
    hint = ", ".join(repr(plain_line(folded[other])) for other in near)
    return f"the run has no star named {plain_line(name)!r}" + (
        f"; did you mean {hint}?" if hint else ""
    )


def write_figures(
    run: Any,
    *,
    kinds: Sequence[str] = tuple(STAR_KINDS),
    rows: Sequence[int] | None = None,
    image: str = "pdf",
    width: str | float | None = None,
) -> Iterator[tuple[Path | None, str]]:
    """Draw the figures of a run into its `figures/` folder, one after the other.

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
    kinds : sequence of str
        Which kinds.
    rows : sequence of int, optional
        Rows of the stars, counted from 1; all by default.
    image : {"pdf", "png", "svg"}
        Kind of file.
    width : {"one", "two"} or float, optional
        Width of a journal's column, or inches; each kind's own by default.

    Yields
    ------
    path : pathlib.Path or None
        The file written; None where the star has nothing to draw.
    message : str
        Why not, else empty.
    """
    unknown = [kind for kind in kinds if kind not in STAR_KINDS]
    if unknown:
        raise InputError(
            f"the kind of figure {unknown[0]!r} is unknown: give {', '.join(STAR_KINDS)}"
        )
    folder = _figure_folder(run)
    options = {} if width is None else {"width": width}
    for row in rows_of(run) if rows is None else rows:
        view = run_view(run, row)
        for kind in kinds:
            path = folder / f"{file_stem(view.name, row)}_{kind}.{image}"
            try:
                save_figure(STAR_KINDS[kind](view, **options), path)
            except InputError as error:
                yield None, str(error)
            else:
                yield path, ""


def _figure_folder(run: Any) -> Path:
    folder = Path(run.folder) / "figures"
    try:
        folder.mkdir(exist_ok=True)
    except OSError as error:
        raise StorageError(f"cannot make the folder {folder}: {error.strerror}") from error
    return folder
