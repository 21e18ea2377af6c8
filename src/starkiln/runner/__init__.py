"""Stars and catalogues fitted: single results, run folders, workers, resumption."""

from starkiln.runner._catalogue import (
    MOST_ROWS_WITH_DRAWS,
    Progress,
    Recipe,
    fit_catalogue,
)
from starkiln.runner._estimate import Estimate, estimate
from starkiln.runner._model import StarModel
from starkiln.runner._result import FitResult, Interval, interval_text
from starkiln.runner._run import Run, open_run
from starkiln.runner._single import dust_of, emitter_of, fit

__all__ = [
    "MOST_ROWS_WITH_DRAWS",
    "Estimate",
    "FitResult",
    "Interval",
    "Progress",
    "Recipe",
    "Run",
    "StarModel",
    "dust_of",
    "emitter_of",
    "estimate",
    "fit",
    "fit_catalogue",
    "interval_text",
    "open_run",
]
