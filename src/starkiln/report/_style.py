"""The project's own look of a figure, and files that come out the same every time.

Colours are chosen so that neighbours differ in lightness too: a figure printed in
grey or seen by a colour-blind reader tells the same story. Every series also has a
marker or a line style of its own.
"""

from __future__ import annotations

import contextlib
import io
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from starkiln._version import __version__
from starkiln.errors import InputError
from starkiln.store import atomic_write

#: Widths in inches that journals print: one column, two columns.
WIDTHS = {"one": 3.4, "two": 7.1}
IMAGES = ("pdf", "png", "svg")

#: Dark to light; the lightness (CIE L*) of each stands beside it.
INK = "#1a1a1a"  # 9
MODEL = "#005f9e"  # 39
ACCENT = "#c4500a"  # 48
GREEN = "#2f8f6f"  # 54
QUIET = "#7d7d7d"  # 52
BAND = "#9cc9ea"  # 78
PALE = "#d9d9d9"  # 86

_STYLE: dict[Any, Any] = {
    "font.family": "DejaVu Sans",
    "mathtext.fontset": "dejavusans",
    "text.usetex": False,
    "font.size": 7.5,
    "axes.labelsize": 7.5,
    "axes.titlesize": 8,
    "xtick.labelsize": 6.5,
    "ytick.labelsize": 6.5,
    "legend.fontsize": 6.5,
    "legend.frameon": False,
    "axes.linewidth": 0.6,
    "axes.edgecolor": INK,
    "axes.labelcolor": INK,
    "axes.formatter.useoffset": False,
    "xtick.direction": "in",
    "ytick.direction": "in",
    "xtick.top": True,
    "ytick.right": True,
    "xtick.major.width": 0.6,
    "ytick.major.width": 0.6,
    "xtick.minor.width": 0.4,
    "ytick.minor.width": 0.4,
    "lines.linewidth": 0.9,
    "lines.markersize": 3.5,
    "patch.linewidth": 0.6,
    "errorbar.capsize": 1.5,
    "figure.dpi": 150,
    "savefig.dpi": 300,
    # Type 42 embeds the outlines of a font as they are; glyphs of an SVG are paths.
    "pdf.fonttype": 42,
    "ps.fonttype": 42,
    "svg.fonttype": "path",
    "svg.hashsalt": "starkiln",
}


@contextlib.contextmanager
def style() -> Iterator[None]:
    """Draw in the project's style, whatever the reader's own matplotlib settings are."""
    import matplotlib as mpl

    with mpl.rc_context():
        mpl.rcdefaults()
        mpl.rcParams.update(_STYLE)
        yield


def width_inches(width: str | float) -> float:
    """Return a figure's width in inches from `"one"`, `"two"` or a number."""
    if isinstance(width, str):
        if width not in WIDTHS:
            raise InputError(f"width = {width!r} is unknown: give one, two or inches")
        return WIDTHS[width]
    if not 1.0 <= width <= 40.0:
        raise InputError(f"width = {width:g} in is out of bounds: give 1 to 40 inches")
    return float(width)


@contextlib.contextmanager
def drawing(ax: Any = None, *, width: str | float = "one", aspect: float = 0.8) -> Iterator[Any]:
    """Yield the caller's axes, in the caller's style, or new ones in the project's."""
    if ax is not None:
        yield ax
        return
    with new_figure(width=width, aspect=aspect) as figure:
        yield figure.subplots()


@contextlib.contextmanager
def new_figure(
    figure: Any = None,
    *,
    width: str | float = "one",
    aspect: float = 0.8,
    layout: Any = "constrained",
) -> Iterator[Any]:
    """Yield the caller's figure, or a new one in the project's style without pyplot."""
    if figure is not None:
        yield figure
        return
    from matplotlib.figure import Figure

    inches = width_inches(width)
    with style():
        yield Figure(figsize=(inches, inches * aspect), layout=layout)


def image_bytes(figure: Any, image: str = "pdf") -> bytes:
    """Return a figure as the bytes of a PDF, PNG or SVG; the same each time.

    Raises
    ------
    InputError
        `image` is none of `"pdf"`, `"png"`, `"svg"`.
    """
    if image not in IMAGES:
        raise InputError(f"image = {image!r} is unknown: give one of {', '.join(IMAGES)}")
    creator = f"starkiln {__version__}"
    metadata: dict[str, dict[str, str | None]] = {
        "pdf": {"Creator": creator, "Producer": None, "CreationDate": None},
        "png": {"Software": creator},
        "svg": {"Creator": creator, "Date": None},
    }
    stream = io.BytesIO()
    with style():
        figure.savefig(stream, format=image, metadata=metadata[image])
    return stream.getvalue()


def save_figure(figure: Any, path: str | Path) -> Path:
    """Write a figure (or the figure of axes) whole; the file's ending says how.

    Parameters
    ----------
    figure : matplotlib.figure.Figure or matplotlib.axes.Axes
        What a function of `starkiln.report` returned.
    path : str or pathlib.Path
        Ends in `.pdf`, `.png` or `.svg`; its folder must exist.

    Returns
    -------
    pathlib.Path
        `path`.
    """
    target = Path(path)
    drawn = image_bytes(getattr(figure, "figure", figure), target.suffix.lstrip(".").lower())
    return atomic_write(target, lambda stream: stream.write(drawn))
