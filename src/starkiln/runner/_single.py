"""One star: from its photometry to a result that can be quoted."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.derived import intervals, quantities_of
from starkiln.dust import Dust
from starkiln.emitters import EMITTERS, AtmosphereEmitter
from starkiln.errors import InputError, SettingsError
from starkiln.inference import (
    ENGINES,
    DistancePosterior,
    Problem,
    Settings,
    build_problem,
    find_edges,
    find_flags,
    fit_probability,
    from_distance,
    from_parallax,
)
from starkiln.observations import Star
from starkiln.runner._result import FitResult
from starkiln.runner._threads import one_thread

#: Nearer than this fraction to where the models end, a median temperature is refused.
_AT_THE_END = 0.01
#: Draws that a result holds unless more are asked for; its percentiles come from all.
_MOST_DRAWS = 4000


def fit(
    star: Star,
    *,
    emitter: Any = "blackbody",
    dust: Dust | None = None,
    engine: str = "ensemble",
    settings: Settings | None = None,
    rng: int | np.random.Generator = 0,
) -> FitResult:
    """Fit one star's photometry.

    Parameters
    ----------
    star : Star
        Its photometry and, where known, parallax or distance and dust.
    emitter : str or emitter
        A name of `starkiln.emitters.EMITTERS`, or an emitter.
    dust : Dust, optional
        Law, R_V and prior; by default those of `settings`.
    engine : str
        A name of `starkiln.inference.ENGINES`.
    settings : Settings, optional
        Priors, likelihood, zero points, distance prior and stopping rule.
    rng : int or numpy.random.Generator
        A seed, from which and from the star itself its random stream is made; or a
        generator, used as it is.

    Returns
    -------
    FitResult

    Raises
    ------
    InputError
        The star has no usable band or contradicts itself, lies beyond the models of the
        emitter, or a name is unknown.
    """
    settings = settings or Settings()
    dust = dust or dust_of(settings)
    emitter = emitter_of(emitter)
    problem = build_problem(star, emitter, dust, settings)
    distance = distance_of(star, settings)
    stream, seed = _stream(star, rng)
    with one_thread():
        samples = engine_of(engine)(problem, stream)
    distance_pc = None if distance is None else distance.draw(stream, len(samples.x), samples.spare)
    draws = quantities_of(problem, samples.x, distance_pc)
    _refuse_beyond(problem, draws["temperature"])
    probability = fit_probability(problem, samples)
    flags = find_flags(problem, samples, probability)
    if distance is not None and distance.sd > 0.7 * distance.prior_sd:
        flags = sorted({*flags, "prior_dominated"}, key=_FLAG_ORDER.index)
    keep = _kept(stream, len(samples.x), settings.draws)
    return FitResult(
        star=star,
        status="ok" if samples.converged else "unconverged",
        message=_message(
            problem,
            distance,
            [*find_edges(problem, samples), samples.message, _emitter_note(problem, draws)],
            flags,
        ),
        flags=tuple(flags),
        engine=engine,
        n_bands=len(problem.bands.names),
        summary=intervals(draws),
        quantities={name: values[keep] for name, values in draws.items()},
        n_eff=samples.n_eff,
        fit_probability=probability,
        log_evidence=samples.ln_evidence,
        seed=seed,
        problem=problem,
        samples=samples,
        distance_posterior=distance,
    )


_FLAG_ORDER = (
    "poor_blackbody",
    "prior_dominated",
    "at_edge",
    "degenerate",
    "few_bands",
    "dust_assumed_zero",
    "saturated",
)


def dust_of(settings: Settings) -> Dust:
    """Return the dust that the settings ask for."""
    return Dust(
        law=settings.dust_law,
        rv=settings.dust_rv,
        prior=settings.dust,
        width=settings.dust_width,
        mean=settings.dust_mean,
    )


def emitter_of(emitter: Any) -> Any:
    """Return the emitter of that name, or the emitter itself."""
    if not isinstance(emitter, str):
        return emitter
    if emitter not in EMITTERS:
        raise SettingsError(f"emitter '{emitter}' is unknown; choose {' or '.join(EMITTERS)}")
    return EMITTERS[emitter]()


def engine_of(engine: str) -> Any:
    """Return the engine of that name."""
    if engine not in ENGINES:
        raise SettingsError(f"engine '{engine}' is unknown; choose {' or '.join(ENGINES)}")
    return ENGINES[engine]


def distance_of(star: Star, settings: Settings) -> DistancePosterior | None:
    """Return the star's distance posterior, None where nothing tells its distance."""
    if star.parallax_mas is not None and star.distance_pc is not None:
        raise InputError("parallax and distance are both given; give one")
    if star.distance_pc is not None:
        return from_distance(star.distance_pc, star.e_distance_pc)
    if star.parallax_mas is None:
        return None
    if star.e_parallax_mas is None:
        raise InputError("parallax without e_parallax; give its error in mas")
    return from_parallax(star.parallax_mas, star.e_parallax_mas, settings)


def _stream(star: Star, rng: int | np.random.Generator) -> tuple[np.random.Generator, int | None]:
    if isinstance(rng, np.random.Generator):
        return rng, None
    if isinstance(rng, bool) or not isinstance(rng, (int, np.integer)) or rng < 0:
        raise SettingsError(f"seed = {rng!r} must be a whole number of at least 0")
    words = np.frombuffer(star.fingerprint(), dtype=np.uint32)
    return np.random.default_rng([int(rng), *map(int, words)]), int(rng)


def _kept(stream: np.random.Generator, n: int, asked: int) -> np.ndarray:
    """Return which draws are kept: `_MOST_DRAWS` at most, or as many as are asked for."""
    order = stream.permutation(n)
    if n < asked:
        order = np.concatenate([order, stream.integers(0, n, asked - n)])
    return order[: max(_MOST_DRAWS, asked)]


def _message(
    problem: Problem, distance: DistancePosterior | None, more: list[str], flags: list[str]
) -> str:
    notes = [*problem.star.notes, *problem.notes]
    if distance is None:
        notes.append("no parallax or distance: no radius, no luminosity")
    if len(problem.bands.names) < 3:
        notes.append(f"only {len(problem.bands.names)} usable band(s)")
    if "poor_blackbody" in flags:
        notes.append(f"the quoted errors alone do not allow this {problem.emitter.name}")
    return "; ".join([*notes, *filter(None, more)])


def _refuse_beyond(problem: Problem, temperature: np.ndarray) -> None:
    """Refuse a star whose temperature piles up where the model atmospheres end."""
    emitter = problem.emitter
    if not isinstance(emitter, AtmosphereEmitter):
        return
    for end in emitter.bounds["temperature"]:
        if abs(float(np.median(temperature)) / end - 1.0) < _AT_THE_END:
            raise InputError(
                f"the temperature piles up at {end:.0f} K, and the star may lie beyond: "
                f"{emitter.limits}; use --emitter blackbody"
            )


def _emitter_note(problem: Problem, draws: dict[str, np.ndarray]) -> str:
    """Return what to be wary of where the posterior lies, by the emitter's own account."""
    if not isinstance(problem.emitter, AtmosphereEmitter):
        return ""
    temperature, logg, feh = (float(np.median(draws[n])) for n in ("temperature", "logg", "feh"))
    return problem.emitter.note(temperature, logg, feh, problem.bands.names)
