"""One star's posterior: settings, priors, likelihood, engines, diagnostics."""

from starkiln.inference._describe import describe_priors
from starkiln.inference._diagnostics import find_edges, find_flags, fit_probability
from starkiln.inference._distance import (
    DistancePosterior,
    from_distance,
    from_parallax,
)
from starkiln.inference._priors import Parameter, Prior, TruncatedNormal, Uniform
from starkiln.inference._problem import Problem, build_problem
from starkiln.inference._samples import Samples
from starkiln.inference._settings import Settings, describe_settings, read_settings
from starkiln.inference.engines import ENGINES

__all__ = [
    "ENGINES",
    "DistancePosterior",
    "Parameter",
    "Prior",
    "Problem",
    "Samples",
    "Settings",
    "TruncatedNormal",
    "Uniform",
    "build_problem",
    "describe_priors",
    "describe_settings",
    "find_edges",
    "find_flags",
    "fit_probability",
    "from_distance",
    "from_parallax",
    "read_settings",
]
