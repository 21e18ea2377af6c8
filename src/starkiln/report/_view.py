"""What a figure needs of a fit, wherever the fit comes from.

`view_of` makes a `FitView` from a star of a run folder or from the result of
`starkiln.fit`; the figures know nothing else.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace
from functools import lru_cache
from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.passbands import load_band
from starkiln.report._priors import priors_of_problem, priors_of_settings
from starkiln.runner import FitResult, Run, StarModel


@dataclass(frozen=True)
class Measurement:
    """One row of a star's photometry, in W m-2 um-1 and micrometres."""

    band: str
    wavelength_um: float
    width_um: float
    flux: float
    e_flux: float
    limit: str = ""
    used: bool = True
    note: str = ""


@dataclass(frozen=True)
class FitView:
    """What the figures of one star are drawn from.

    Attributes
    ----------
    name : str
        The star's name as the catalogue gives it.
    row : int
        Its row, counted from 1.
    photometry : tuple of Measurement
        All of it, used or not.
    draws : mapping of str to numpy.ndarray
        Posterior draws by quantity, in the units of the contract; empty when the
        run kept none.
    summary : mapping
        The star's row of the results.
    model : callable or None
        `model(draws)`: band fluxes, shape (n_draws, n_measurements), W m-2 um-1.
    spectrum : callable or None
        `spectrum(wavelength_m, draws)`: shape (n_draws, n_wavelengths), W m-2 um-1.
    priors : mapping of str to callable
        Density of each prior that is known, by quantity, up to a factor.
    chain : numpy.ndarray or None
        Walkers' path, shape (steps, walkers, parameters).
    chain_names : tuple of str
        The chain's parameters.
    burn_in : int
        Steps of the chain that the posterior leaves out.
    """

    name: str
    row: int
    photometry: tuple[Measurement, ...]
    draws: Mapping[str, np.ndarray] = field(default_factory=dict)
    summary: Mapping[str, Any] = field(default_factory=dict)
    model: Callable[[Mapping[str, np.ndarray]], np.ndarray] | None = None
    spectrum: Callable[[np.ndarray, Mapping[str, np.ndarray]], np.ndarray] | None = None
    priors: Mapping[str, Callable[[np.ndarray], np.ndarray]] = field(default_factory=dict)
    chain: np.ndarray | None = None
    chain_names: tuple[str, ...] = ()
    burn_in: int = 0

    def some_draws(self, count: int) -> dict[str, np.ndarray]:
        """Return `count` draws (or all, where fewer), evenly picked from the kept ones."""
        kept = len(next(iter(self.draws.values())))
        pick = np.linspace(0, kept - 1, min(count, kept)).round().astype(int)
        return {key: np.asarray(values)[pick] for key, values in self.draws.items()}

    def interval(self, key: str) -> tuple[float, float, float]:
        """Return median, 16th and 84th percentile: those of the results, else of the draws."""
        found = tuple(
            float(self.summary.get(f"{key}{end}", math.nan)) for end in ("", "_lo", "_hi")
        )
        if all(math.isfinite(value) for value in found):
            return found[0], found[1], found[2]
        low, middle, high = np.percentile(self.draws[key], [16.0, 50.0, 84.0])
        return float(middle), float(low), float(high)

    def need_draws(self, what: str) -> None:
        """Raise `InputError` where the run kept no posterior draws of this star."""
        if not self.draws:
            raise InputError(self.why_no_draws(what))

    def why_no_draws(self, what: str) -> str:
        """Return why there is no `what` of this star."""
        reason = "the run kept no posterior draws; fit again with --draws 256"
        if self.summary.get("status") == "rejected":
            reason = f"it was rejected: {self.summary.get('message', '')}"
        return f"no {what} of star {self.name!r} (row {self.row}): {reason}"


def view_of(fit: Any) -> FitView:
    """Return `fit` as a `FitView`; the result of `starkiln.fit` is understood too.

    Raises
    ------
    InputError
        It is neither.
    """
    if isinstance(fit, FitView):
        return fit
    if not isinstance(fit, FitResult):
        raise InputError(
            f"{type(fit).__name__} is no fit: give what starkiln.fit returned, or "
            "run_view(run, row) for a star of a run folder"
        )
    photometry = _measurements(fit.photometry)
    model, spectrum = _model_functions(fit.model, photometry)
    summary: dict[str, Any] = {"status": fit.status, "message": fit.message}
    for key, (middle, low, high) in fit.summary.items():
        summary |= {key: middle, f"{key}_lo": low, f"{key}_hi": high}
    return FitView(
        name=fit.star.name,
        row=fit.star.row or 1,
        photometry=photometry,
        draws=_columns(fit.draws),
        summary=summary,
        model=model,
        spectrum=spectrum,
        priors=priors_of_problem(fit.problem),
        chain=fit.chain,
        chain_names=fit.parameter_names,
        burn_in=fit.samples.burn_in,
    )


def run_view(run: Run, row: int) -> FitView:
    """Return one star of a run folder as a `FitView`.

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
    row : int
        The star's row in the catalogue, counted from 1.

    Raises
    ------
    InputError
        The run has no such row.
    """
    draws = _columns(run.draws(row))
    line = run.results[row - 1]
    summary = {key: plain_value(line[key]) for key in line.colnames}
    photometry = _measurements(run.photometry[_slice_of(run, row)])
    fitted = summary["status"] != "rejected"
    model, spectrum = _model_functions(run.model(row), photometry) if fitted else (None, None)
    return FitView(
        name=summary["name"],
        row=row,
        photometry=photometry,
        draws=draws,
        summary=summary,
        model=model,
        spectrum=spectrum,
        priors=priors_of_settings(run.settings, run.emitter),
    )


def _model_functions(model: StarModel, photometry: tuple[Measurement, ...]) -> Any:
    """Return band fluxes of all measurements, also of those left out, and the spectrum."""
    every = replace(model, bands=tuple(item.band for item in photometry))
    return every.band_flux, replace(every, dust=_RememberedDust(model.dust)).spectrum


@dataclass(frozen=True)
class _RememberedDust:
    """Dust whose curve is worked out once per grid: most stars of a run share both."""

    dust: Any

    def curve(self, wavelength_m: np.ndarray) -> np.ndarray:
        return _curve(self.dust, np.asarray(wavelength_m, dtype=float).tobytes())


@lru_cache(maxsize=64)
def _curve(dust: Any, wavelengths: bytes) -> np.ndarray:
    return dust.curve(np.frombuffer(wavelengths))


def _slice_of(run: Run, row: int) -> slice:
    """Return where a star's measurements stand; the table is in the order of the rows."""
    rows = np.asarray(run.photometry["row"])
    return slice(*np.searchsorted(rows, [row, row + 1]))


def _measurements(photometry: Any) -> tuple[Measurement, ...]:
    # Lists, since a table's cells are slow one by one; a masked cell is None there.
    names = ("band", "flux", "e_flux", "limit", "used", "note")
    columns = [photometry[name].tolist() for name in names]
    found = []
    for band_name, flux, e_flux, limit, used, note in zip(*columns, strict=True):
        band = load_band(band_name)
        found.append(
            Measurement(
                band=band.name,
                wavelength_um=band.pivot_m * 1e6,
                width_um=band.width_m * 1e6,
                flux=math.nan if flux is None else flux,
                e_flux=math.nan if e_flux is None else e_flux,
                limit=limit or "",
                used=bool(used),
                note=note or "",
            )
        )
    return tuple(found)


def plain_value(cell: Any) -> Any:
    """Return a table's cell as a str, int, bool or float; NaN or "" where it is masked."""
    kind = np.asarray(cell).dtype.kind
    if kind in "US":
        return plain_text(cell)
    if np.ma.is_masked(cell):
        return math.nan
    return {"b": bool, "i": int, "u": int}.get(kind, float)(cell)


def plain_text(cell: Any) -> str:
    """Return a table's cell of text, "" where it is masked."""
    return "" if np.ma.is_masked(cell) else str(cell)


def numbers(column: Any) -> np.ndarray:
    """Return a column or an array as floats, NaN where it is masked."""
    return np.ma.filled(np.ma.asarray(getattr(column, "value", column), dtype=float), np.nan)


def _columns(draws: Any) -> dict[str, np.ndarray]:
    if draws is None:
        return {}
    return {key: np.asarray(draws[key], dtype=float) for key in draws.colnames}
