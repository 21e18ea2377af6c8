"""What the observer looks at and what goes into the paper: figures, tables, one page.

Functions ending in `_figure` draw several panels and return the figure; those
ending in `_plot` take `ax=` and return the axes. None of them needs a display.
"""

from starkiln.report._corner import corner_figure
from starkiln.report._files import STAR_KINDS, rows_of, write_figures
from starkiln.report._sed import sed_figure
from starkiln.report._style import image_bytes, save_figure, style
from starkiln.report._view import FitView, Measurement, run_view, view_of

__all__ = [
    "STAR_KINDS",
    "FitView",
    "Measurement",
    "corner_figure",
    "image_bytes",
    "rows_of",
    "run_view",
    "save_figure",
    "sed_figure",
    "style",
    "view_of",
    "write_figures",
]
