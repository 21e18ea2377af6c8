"""The posterior of one star: its data, its parameters with their priors, its density."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Any

import numpy as np

from starkiln.constants import MAS_RAD
from starkiln.errors import InputError
from starkiln.forward import band_fluxes
from starkiln.inference import _kernels
from starkiln.inference._bands import Bands, build_bands
from starkiln.inference._emitter_priors import emitter_parameters
from starkiln.inference._priors import Parameter, Prior, TruncatedNormal, Uniform
from starkiln.inference._settings import Settings
from starkiln.observations import Measurement, Star

#: Largest A_V that the tables of band fluxes hold, in mag.
AV_MAX = 10.0
#: ln of pi/4 theta^2 for theta of one milliarcsecond.
LN_SOLID_ANGLE = math.log(math.pi / 4.0) + 2.0 * math.log(MAS_RAD.value)


@dataclass(frozen=True)
class Problem:
    """One star's posterior, ready to be explored.

    Attributes
    ----------
    parameters : tuple of Parameter
        In the order of the columns of `x`.
    form : {"log", "flux"}
        The likelihood in use.
    fixed_av : float or None
        A_V where it is not a parameter.
    notes : tuple of str
        What the observer must be told: assumed dust, changed likelihood.
    """

    star: Star
    emitter: Any
    dust: Any
    settings: Settings
    bands: Bands
    parameters: tuple[Parameter, ...]
    form: str
    fixed_av: float | None
    notes: tuple[str, ...]

    @cached_property
    def table(self) -> Any:
        """The tabulated band fluxes of this star's emitter, bands and dust."""
        return band_fluxes(self.emitter, self.bands.names, self.dust, free_rv="rv" in self.names)

    @cached_property
    def names(self) -> tuple[str, ...]:
        """The parameters' names."""
        return tuple(item.name for item in self.parameters)

    @cached_property
    def bounds(self) -> np.ndarray:
        """Lower and upper bounds, shape (n_parameters, 2)."""
        return np.array([(item.prior.lower, item.prior.upper) for item in self.parameters])

    def column(self, x: np.ndarray, name: str) -> np.ndarray:
        """Return the column of `x`, shape (n, n_parameters), that holds `name`."""
        return x[:, self.names.index(name)]

    def draw_prior(self, rng: np.random.Generator, n: int) -> np.ndarray:
        """Return `n` draws from the prior, shape (n, n_parameters)."""
        x = np.column_stack([item.prior.draw(rng, n) for item in self.parameters])
        while not np.all(good := self.reached(x)):
            count = n - int(good.sum())
            x[~good] = np.column_stack([p.prior.draw(rng, count) for p in self.parameters])
        return x

    def reached(self, x: np.ndarray) -> np.ndarray:
        """Return where the emitter's models reach, shape (n,).

        Within the bounds that is everywhere, but for a free log g below the lowest that
        the models have at the temperature.
        """
        if "logg" not in self.names:
            return np.ones(len(x), dtype=bool)
        return self.column(x, "logg") >= self._lowest_logg(x)

    def _lowest_logg(self, x: np.ndarray) -> np.ndarray:
        return self.emitter.lowest_logg(np.exp(self.column(x, "ln_temperature")))

    def ln_prior(self, x: np.ndarray) -> np.ndarray:
        """Return ln of the prior density at `x`, shape (n, n_parameters) -> (n,).

        Where the models end within the bounds it is -inf beyond, and not normalised anew.
        """
        total = np.sum(
            [item.prior.ln_density(x[:, i]) for i, item in enumerate(self.parameters)], axis=0
        )
        return np.where(self.reached(x), total, -np.inf) if "logg" in self.names else total

    def ln_model(self, x: np.ndarray) -> np.ndarray:
        """Return ln of the band fluxes in W m-3 at `x`, shape (n, n_bands).

        Where the emitter's models do not reach, at the lowest log g that they do: the
        prior excludes such a point, whatever the value.
        """
        shape = len(self.emitter.parameters)
        if "logg" in self.names:
            x = x.copy()
            x[:, self.names.index("logg")] = np.maximum(
                self.column(x, "logg"), self._lowest_logg(x)
            )
        free = [self.column(x, "rv")] if "rv" in self.names else []
        ln_flux = self.table.ln_flux(x[:, :shape], self.av(x), *free)
        ln_flux += (LN_SOLID_ANGLE + 2.0 * self.column(x, "ln_diameter"))[:, None]
        return ln_flux

    def av(self, x: np.ndarray) -> np.ndarray:
        """Return A_V in mag at `x`, shape (n,)."""
        if self.fixed_av is None:
            return self.column(x, "av")
        return np.full(len(x), self.fixed_av)

    def misfit(self, x: np.ndarray) -> np.ndarray:
        """Return the misfit f at `x`, shape (n,); 0 where it is left out."""
        if "ln_misfit" in self.names:
            return np.exp(self.column(x, "ln_misfit"))
        return np.zeros(len(x))

    def ln_likelihood(self, x: np.ndarray) -> np.ndarray:
        """Return ln of the likelihood at `x` inside the bounds, shape (n,)."""
        bands, n = self.bands, self.bands.n_detections
        ln_model, misfit = self.ln_model(x), self.misfit(x)
        if self.form == "log":
            return _kernels.ln_likelihood_log(
                ln_model, misfit, bands.ln_data, bands.variance, bands.member, bands.offset_variance
            )
        total = _kernels.ln_likelihood_flux(
            ln_model[:, :n],
            misfit,
            bands.scaled_data[:n],
            bands.ln_error[:n],
            bands.member,
            bands.offset_variance,
        )
        if bands.sign.size:
            total += _kernels.ln_likelihood_limits(
                ln_model[:, n:],
                misfit,
                bands.scaled_data[n:],
                bands.ln_error[n:],
                bands.sign,
                bands.limit_offset_variance,
            )
        return total

    def ln_posterior(self, x: np.ndarray) -> np.ndarray:
        """Return ln of prior times likelihood, -inf outside the bounds, shape (n,).

        Every call evaluates all rows of `x`, so that its cost and rounding depend
        on the number of rows alone.
        """
        prior = self.ln_prior(x)
        inside = np.clip(x, self.bounds[:, 0], self.bounds[:, 1])
        return np.where(np.isfinite(prior), prior + self.ln_likelihood(inside), -np.inf)


def build_problem(star: Star, emitter: Any, dust: Any, settings: Settings) -> Problem:
    """Return the posterior of `star`.

    Parameters
    ----------
    star : Star
    emitter, dust
        A registered emitter and a `starkiln.dust.Dust`.
    settings : Settings

    Returns
    -------
    Problem

    Raises
    ------
    InputError
        No usable band, or a value that the prior excludes.
    """
    detections = [item for item in star.measurements if not item.limit]
    limits = [item for item in star.measurements if item.limit]
    if not detections:
        raise InputError(
            "no usable band: at least one measured magnitude or flux density is needed"
        )
    notes: list[str] = []
    form = _choose_form(detections, limits, settings, notes)
    fixed_av, av_prior = _dust_of(star, dust, notes)
    emitter, parameters = emitter_parameters(star, emitter, settings, notes)
    low, high = settings.diameter_range
    parameters.append(Parameter("ln_diameter", Uniform(math.log(low), math.log(high))))
    dust = dust if star.rv is None else replace(dust, rv=star.rv)
    if av_prior is not None:
        parameters.append(Parameter("av", av_prior))
        if settings.dust_rv_error:
            parameters.append(Parameter("rv", _rv_prior(dust, settings.dust_rv_error)))
    if settings.misfit:
        low, high = settings.misfit_range_of(emitter.name)
        parameters.append(Parameter("ln_misfit", Uniform(math.log(low), math.log(high))))
    return Problem(
        star=star,
        emitter=emitter,
        dust=dust,
        settings=settings,
        bands=build_bands(detections, limits, emitter, settings),
        parameters=tuple(parameters),
        form=form,
        fixed_av=fixed_av,
        notes=tuple(notes),
    )


def _choose_form(
    detections: list[Measurement],
    limits: list[Measurement],
    settings: Settings,
    notes: list[str],
) -> str:
    if settings.likelihood == "flux":
        return "flux"
    faint = [item.band for item in detections if item.flux_w_m3 <= 0.0]
    if not limits and not faint:
        return "log"
    why = [f"limit in {item.band}" for item in limits] + [f"flux <= 0 in {b}" for b in faint]
    notes.append(f"likelihood in flux ({', '.join(why)})")
    return "flux"


def _dust_of(star: Star, dust: Any, notes: list[str]) -> tuple[float | None, Prior | None]:
    """Return the fixed A_V or its prior."""
    if dust.prior == "zero":
        return 0.0, None
    if dust.prior == "free":
        return None, TruncatedNormal(0.0, dust.width, 0.0, AV_MAX)
    if dust.prior == "gaussian":
        return None, TruncatedNormal(dust.mean, dust.width, 0.0, AV_MAX)
    if dust.prior == "uniform":
        return None, Uniform(0.0, dust.width)
    if star.av is None:
        notes.append("no av given: A_V = 0 assumed")
        return 0.0, None
    if star.av > AV_MAX:
        raise InputError(
            f"av = {star.av:g} mag is above {AV_MAX:g} mag, the most that is tabulated"
        )
    if not star.e_av:
        if star.av < 0.0:
            notes.append(f"av = {star.av:g} mag taken as 0")
        return max(star.av, 0.0), None
    prior = TruncatedNormal(star.av, star.e_av, 0.0, AV_MAX)
    if prior.mean < -6.0 * prior.width:
        raise InputError(
            f"av = {star.av:g} +- {star.e_av:g} mag is negative by more than 6 sigma; "
            "correct it or use --dust zero"
        )
    return None, prior


def _rv_prior(dust: Any, width: float) -> Prior:
    if dust.rv_range is None:
        raise InputError(
            f"dust law {dust.law} has no R_V; set dust.rv_error = 0 or choose another law"
        )
    return TruncatedNormal(dust.rv, width, *dust.rv_range)
