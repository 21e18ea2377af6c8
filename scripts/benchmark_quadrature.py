"""Time the quadrature engine against a plain script and against the ensemble engine.

The plain script is what an observer writes in an afternoon: Planck's law and the
extinction curve in numpy, integrated through the passbands at every evaluation, and
emcee with 32 walkers for 3,000 steps. It is timed on a short stretch and scaled, as
its cost per evaluation is constant. All ways take turns within one run; the medians
of the repeats are printed, in seconds of one core.

Run: python scripts/benchmark_quadrature.py [--stars 12] [--repeats 3]
"""

from __future__ import annotations

import argparse
import time
from collections.abc import Callable, Sequence

import numpy as np

from starkiln import Star, fit
from starkiln.constants import K_B, C, H
from starkiln.dust import Dust
from starkiln.forward import band_fluxes
from starkiln.inference import ENGINES, Settings, build_problem
from starkiln.passbands import load_band
from starkiln.runner import dust_of, emitter_of

BANDS = (
    *("Gaia BP", "Gaia G", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks"),
    *("WISE W1", "WISE W2", "WISE W3", "SDSS g", "SDSS r", "SDSS i"),
)
WALKERS, STEPS = 32, 3000
#: Steps of the plain script that are timed.
SHORT = 20
LOG = Settings(dust="free", system_offsets=False)
FLUX = Settings(dust="free", system_offsets=False, likelihood="flux")
FULL = Settings(dust="free")
SOLID = np.log(np.pi / 4.0) + 2.0 * np.log(np.pi / 180.0 / 3.6e6)


def invented_stars(n: int, rng: np.random.Generator) -> list[Star]:
    """Return stars of 4,000 to 20,000 K behind half a magnitude, 2 per cent errors."""
    table = band_fluxes(emitter_of("blackbody"), BANDS, Dust())
    stars = []
    for i in range(n):
        t, av = rng.uniform(np.log(4000.0), np.log(20000.0)), abs(rng.normal(0.0, 0.5))
        ln_flux = table.ln_flux(np.array([[t]]), np.array([av]))[0] + SOLID
        ln_flux += 2.0 * np.log(0.05) + rng.normal(0.0, 0.05, len(BANDS))
        zero = [load_band(name).zero_flux_w_m3() for name in BANDS]
        magnitudes = -2.5 * np.log10(np.exp(ln_flux) / zero)
        photometry = {b: (m, 0.02) for b, m in zip(BANDS, magnitudes, strict=True)}
        known = {"parallax": (1.0 + i % 5, 0.05)}
        stars.append(Star(f"invented {i}", photometry, saturated="keep", **known))
    return stars


class PlainScript:
    """The posterior of one star, written in numpy without tables."""

    def __init__(self, star: Star) -> None:
        self.data = np.log([item.flux_w_m3 for item in star.measurements])
        self.variance = np.array([item.fractional_error for item in star.measurements]) ** 2
        bands = [load_band(item.band) for item in star.measurements]
        self.curves = [
            (b.wavelength_m, b.weight / np.sum(b.weight), Dust().curve(b.wavelength_m))
            for b in bands
        ]

    def __call__(self, x: np.ndarray) -> float:
        """Return ln of the posterior at (ln T, ln theta, A_V, ln f)."""
        t, s, av, ln_f = x
        if not (8.0 < t < 10.82 and -20.0 < s < 5.0 and 0.0 <= av < 10.0 and -5.3 < ln_f < -1.2):
            return -np.inf
        model = []
        for wavelength, weight, curve in self.curves:
            exponent = H.value * C.value / (wavelength * K_B.value * np.exp(t))
            planck = 2.0 * H.value * C.value**2 / wavelength**5 / np.expm1(exponent)
            model.append(np.log(np.sum(weight * planck * 10.0 ** (-0.4 * av * curve))))
        variance = self.variance + np.exp(2.0 * ln_f)
        residual = self.data - np.array(model) - SOLID - 2.0 * s
        return float(-0.5 * (np.sum(residual**2 / variance + np.log(variance)) + av * av))


def plain_seconds(star: Star) -> float:
    """Return the time of the plain script for a star, scaled from a short stretch."""
    import emcee

    script = PlainScript(star)
    rng = np.random.default_rng(1)
    start = np.array([9.0, -3.0, 0.5, -3.0]) + 1e-2 * rng.standard_normal((WALKERS, 4))
    sampler = emcee.EnsembleSampler(WALKERS, 4, script)
    begun = time.process_time()
    sampler.run_mcmc(start, SHORT)
    return (time.process_time() - begun) * STEPS / SHORT


def seconds(call: Callable[[Star], object], stars: Sequence[Star]) -> float:
    """Return the time per star of a call."""
    begun = time.process_time()
    for star in stars:
        call(star)
    return (time.process_time() - begun) / len(stars)


def engine_call(engine: str, settings: Settings) -> Callable[[Star], object]:
    """Return a function that explores one star's posterior, and nothing else."""

    def call(star: Star) -> object:
        problem = build_problem(star, emitter_of("blackbody"), dust_of(settings), settings)
        return ENGINES[engine](problem, np.random.default_rng(0))

    return call


def main() -> None:
    """Print the ratios."""
    parser = argparse.ArgumentParser(description=__doc__.split("\n")[0])
    parser.add_argument("--stars", type=int, default=12)
    parser.add_argument("--repeats", type=int, default=3)
    args = parser.parse_args()
    stars = invented_stars(args.stars, np.random.default_rng(5))
    ways: dict[str, Callable[[], float]] = {
        "plain script, emcee 32 x 3000 (scaled)": lambda: plain_seconds(stars[0]),
        "ensemble engine": lambda: seconds(engine_call("ensemble", LOG), stars[:3]),
        "quadrature, ln flux": lambda: seconds(engine_call("quadrature", LOG), stars),
        "quadrature, flux": lambda: seconds(engine_call("quadrature", FLUX), stars),
        "quadrature, ln flux, offsets": lambda: seconds(engine_call("quadrature", FULL), stars),
        "whole fit: offsets, parallax, checks": lambda: seconds(
            lambda star: fit(star, engine="quadrature", settings=FULL), stars
        ),
    }
    for name, way in ways.items():
        if "plain" not in name:
            way()
    taken = {name: [] for name in ways}
    for _ in range(args.repeats):
        for name, way in ways.items():
            taken[name].append(way())
    plain = np.median(taken["plain script, emcee 32 x 3000 (scaled)"])
    for name, times in taken.items():
        middle = float(np.median(times))
        print(f"{name:<42} {middle:9.4f} s per star   {plain / middle:8.0f} times faster")


if __name__ == "__main__":
    main()
