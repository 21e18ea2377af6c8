"""The result of one star's fit."""

from __future__ import annotations

import html
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from starkiln.derived import QUANTITIES
from starkiln.inference import DistancePosterior, Problem, Samples
from starkiln.observations import Star
from starkiln.runner._model import StarModel


@dataclass(frozen=True)
class Interval:
    """A median and its 68 per cent interval (16th and 84th percentiles).

    Attributes
    ----------
    median, lower, upper : astropy.units.Quantity
    """

    median: Any
    lower: Any
    upper: Any

    def __str__(self) -> str:
        text = interval_text(self.median.value, self.lower.value, self.upper.value)
        return f"{text} {self.median.unit}".rstrip()


@dataclass(frozen=True)
class FitResult:
    """What a fit found, how far it can be trusted, and what it was made from.

    Attributes
    ----------
    star : Star
    status : {"ok", "unconverged"}
    message : str
        What the observer must know of this fit.
    flags : tuple of str
    engine : str
    n_bands : int
        Bands used, limits included.
    summary : dict
        Quantity -> (median, 16th, 84th percentile), in the units of the results.
    n_eff : float
        Effective draws, the smallest over the parameters.
    fit_probability : float
        Posterior predictive probability with the quoted errors alone.
    log_evidence : float
        NaN where the engine gives none.
    seed : int or None
        None where a generator was handed in.
    """

    star: Star
    status: str
    message: str
    flags: tuple[str, ...]
    engine: str
    n_bands: int
    summary: dict[str, tuple[float, float, float]]
    n_eff: float
    fit_probability: float
    log_evidence: float
    seed: int | None
    quantities: dict[str, np.ndarray] = field(repr=False)
    problem: Problem = field(repr=False)
    samples: Samples = field(repr=False)
    distance_posterior: DistancePosterior | None = field(repr=False)

    @property
    def converged(self) -> bool:
        """Whether the engine met its stopping rule."""
        return self.status == "ok"

    @property
    def emitter(self) -> str:
        """The emitter's name."""
        return self.problem.emitter.name

    @property
    def draws(self) -> Any:
        """Posterior draws as an `astropy.table.Table`, one column per quantity."""
        from astropy.table import Table

        table = Table(
            {name: values for name, values in self.quantities.items()},
            units={n: QUANTITIES[n].unit for n in self.quantities if QUANTITIES[n].unit},
        )
        for name in table.colnames:
            table[name].description = QUANTITIES[name].text
        return table

    @property
    def photometry(self) -> Any:
        """The data as understood, one row per measurement (`astropy.table.Table`)."""
        from starkiln.runner._tables import photometry_table

        return photometry_table([self.star])

    @property
    def parameter_names(self) -> tuple[str, ...]:
        """The sampled parameters, in the order of `chain`'s last axis."""
        return self.problem.names

    @property
    def chain(self) -> np.ndarray | None:
        """The ensemble's chain, shape (steps, walkers, parameters), else None."""
        return self.samples.chain

    @property
    def model(self) -> StarModel:
        """The model whose `band_flux(draws)` and `spectrum(wavelength_m, draws)` figures use."""
        return StarModel(self.problem.emitter, self.problem.dust, self.problem.bands.names)

    def interval(self, quantity: str) -> Interval:
        """Return the median and 68 per cent interval of a quantity, with units.

        Raises
        ------
        KeyError
            The fit has no such quantity; `summary` lists those it has.
        """
        from astropy import units as u

        if quantity not in self.summary:
            raise KeyError(f"{quantity!r} is not among {', '.join(self.summary)}")
        unit = u.Unit(QUANTITIES[quantity].unit)
        return Interval(*(value * unit for value in self.summary[quantity]))

    def __getattr__(self, name: str) -> Interval:
        if name in QUANTITIES and name in self.__dict__.get("summary", ()):
            return self.interval(name)
        raise AttributeError(f"this fit has no {name!r}")

    def _repr_html_(self) -> str:
        rows = "".join(
            f"<tr><th>{QUANTITIES[name].text}</th><td>{self.interval(name)}</td></tr>"
            for name in self.summary
        )
        return (
            f"<table><caption>{html.escape(self.star.name)}: {self.status} "
            f"{' '.join(self.flags)}<br>{html.escape(self.message)}</caption>{rows}</table>"
        )

    def __str__(self) -> str:
        lines = [f"{self.star.name}: {self.status} {' '.join(self.flags)}".rstrip()]
        lines += [f"  {name:<17} {self.interval(name)}" for name in self.summary]
        if self.message:
            lines.append(f"  {self.message}")
        return "\n".join(lines)


def interval_text(median: float, low: float, high: float) -> str:
    """Return `median +upper -lower`, with two figures of the smaller error."""
    plus, minus = high - median, median - low
    errors = [error for error in (plus, minus) if error > 0.0]
    if not errors:
        return f"{median:.6g}"
    exponent = 0
    if not 1e-3 <= abs(median) < 1e6:
        exponent = int(np.floor(np.log10(abs(median))))
    scale = 10.0**-exponent
    decimals = 1 - int(np.floor(np.log10(min(errors) * scale)))
    shown = [round(v * scale, decimals) for v in (median, plus, minus)]
    middle, up, down = (f"{v:.{max(decimals, 0)}f}" for v in shown)
    power = f" e{exponent}" if exponent else ""
    return f"{middle} +{up} -{down}{power}"
