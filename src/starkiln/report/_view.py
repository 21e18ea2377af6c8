"""What a figure needs of a fit, wherever the fit comes from.

`view_of` makes a `FitView` from a star of a run folder or from the result of
`starkiln.fit`; the figures know nothing else.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from starkiln.errors import InputError


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
        Unnormalised density of each prior that has one, by quantity.
    chain : numpy.ndarray or None
        Walkers' path, shape (steps, walkers, parameters).
    chain_names : tuple of str
        The chain's parameters.
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

    def some_draws(self, count: int) -> dict[str, np.ndarray]:
        """Return `count` draws (or all, where fewer), evenly picked from the kept ones."""
        kept = len(next(iter(self.draws.values())))
        pick = np.linspace(0, kept - 1, min(count, kept)).round().astype(int)
        return {key: np.asarray(values)[pick] for key, values in self.draws.items()}

    def need_draws(self, what: str) -> None:
        """Raise `InputError` where the run kept no posterior draws of this star."""
        if not self.draws:
            status = str(self.summary.get("status", ""))
            reason = (
                f"it was rejected: {self.summary.get('message', '')}"
                if status == "rejected"
                else "the run kept no posterior draws; fit again with --draws 256"
            )
            raise InputError(f"no {what} of star {self.name!r} (row {self.row}): {reason}")


def view_of(fit: Any) -> FitView:
    """Return `fit` as a `FitView`; a `FitResult` of `starkiln.fit` is understood too."""
    if isinstance(fit, FitView):
        return fit
    if not all(hasattr(fit, name) for name in ("star", "draws", "photometry")):
        raise InputError(
            f"{type(fit).__name__} is no fit: give what starkiln.fit returned, or "
            "run_view(run, row) for a star of a run folder"
        )
    chain = getattr(fit, "chain", None)
    return FitView(
        name=str(fit.star.name or ""),
        row=1,
        photometry=_measurements(fit.photometry),
        draws=_columns(fit.draws),
        summary=_record(fit.summary),
        model=lambda draws: fit.model(_table(draws)),
        spectrum=lambda wavelength_m, draws: fit.spectrum(wavelength_m, _table(draws)),
        chain=None if chain is None else np.asarray(chain),
        chain_names=tuple(getattr(fit, "parameter_names", ())),
    )


def run_view(run: Any, row: int) -> FitView:
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
    if not 1 <= row <= len(run.results):
        raise InputError(f"row {row} is not in the run: it has rows 1 to {len(run.results)}")
    summary = _record(run.results[row - 1])
    model = run.model(row) if summary.get("status") != "rejected" else None
    photometry = run.photometry[np.asarray(run.photometry["row"]) == row]
    return FitView(
        name=str(summary.get("name", "")),
        row=row,
        photometry=_measurements(photometry),
        draws=_columns(run.draws(row)),
        summary=summary,
        model=None if model is None else lambda draws: model(_table(draws)),
        spectrum=lambda wavelength_m, draws: run.spectrum(row, wavelength_m, _table(draws)),
    )


def _measurements(photometry: Any) -> tuple[Measurement, ...]:
    from starkiln.passbands import load_band

    found = []
    for line in photometry:
        band = load_band(str(line["band"]))
        found.append(
            Measurement(
                band=band.name,
                wavelength_um=band.pivot.to_value("um"),
                width_um=band.width.to_value("um"),
                flux=_number(line["flux"]),
                e_flux=_number(line["e_flux"]),
                limit=str(line["limit"]),
                used=bool(line["used"]),
                note=str(line["note"]),
            )
        )
    return tuple(found)


def _number(value: Any) -> float:
    return float(np.ma.filled(np.ma.asarray(value, dtype=float), np.nan))


def _columns(draws: Any) -> dict[str, np.ndarray]:
    if draws is None:
        return {}
    return {key: np.asarray(draws[key], dtype=float) for key in draws.colnames}


def _record(line: Any) -> dict[str, Any]:
    return {key: line[key] for key in line.colnames}


def _table(draws: Mapping[str, np.ndarray]) -> Any:
    from astropy.table import Table

    return Table(dict(draws))
