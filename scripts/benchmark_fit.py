"""One star to 1,000 effective draws, against the script that an observer would write.

    python scripts/benchmark_fit.py [--repeats N] [--steps N]

Both run in turn, in one process, on one thread, on the same star (12 bands, 6,500 K,
A_V = 1 mag, misfit 5 per cent). The plain script: numpy's Planck function integrated
through the passbands at each call, a fixed dust curve, emcee with one call per walker,
32 walkers x 3,000 steps. Prints the ratio of the two times, pair by pair.
"""

import argparse
import os
import time

os.environ.setdefault("OMP_NUM_THREADS", "1")
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import emcee
import numpy as np

from starkiln import Dust, Star, fit, load_band
from starkiln.inference import Settings

BANDS = (
    "Gaia BP",
    "Gaia G",
    "Gaia RP",
    "2MASS J",
    "2MASS H",
    "2MASS Ks",
    "WISE W1",
    "WISE W2",
    "WISE W3",
    "SDSS g",
    "SDSS r",
    "SDSS i",
)
H, C, K = 6.62607015e-34, 299792458.0, 1.380649e-23
WALKERS = 32


def planck(wavelength, temperature):
    """B_lambda in W m-3 sr-1, as an observer writes it."""
    x = H * C / (wavelength * K * temperature)
    return 2.0 * H * C**2 / wavelength**5 / np.expm1(x)


def plain_model(bands, curves, temperature, ln_diameter, av):
    """Band fluxes in W m-3 by integration through every band."""
    solid = 0.25 * np.pi * np.exp(2.0 * ln_diameter) * (np.pi / 180.0 / 3.6e6) ** 2
    return np.array(
        [
            solid
            * np.sum(band.weight * planck(band.wavelength_m, temperature) * 10 ** (-0.4 * av * k))
            for band, k in zip(bands, curves, strict=True)
        ]
    )


def make_star():
    """Return the star's fluxes and their errors."""
    bands = [load_band(name) for name in BANDS]
    curves = [Dust().curve(band.wavelength_m) for band in bands]
    truth = plain_model(bands, curves, 6500.0, np.log(0.05), 1.0)
    rng = np.random.default_rng(1)
    flux = truth * np.exp(0.05 * rng.standard_normal(len(BANDS)))
    return bands, curves, flux, 0.02 * flux


def plain_script(steps):
    """Fit as the plain script does; return seconds and effective draws."""
    bands, curves, flux, error = make_star()

    def ln_probability(x):
        t, s, av, ln_f = x
        inside = 3000.0 < t < 50000.0 and 0.0 <= av < 10.0 and np.log(0.005) < ln_f < np.log(0.3)
        if not inside:
            return -np.inf
        model = plain_model(bands, curves, t, s, av)
        variance = (error / flux) ** 2 + np.exp(2.0 * ln_f)
        residual = np.log(flux / model)
        ln_prior = -0.5 * av**2 - np.log(t)
        return ln_prior - 0.5 * np.sum(residual**2 / variance + np.log(variance))

    rng = np.random.default_rng(2)
    start = np.array([6500.0, np.log(0.05), 1.0, np.log(0.05)])
    walkers = start + rng.normal(0.0, [100.0, 0.02, 0.1, 0.1], (WALKERS, 4))
    begun = time.perf_counter()
    sampler = emcee.EnsembleSampler(WALKERS, 4, ln_probability)
    sampler.run_mcmc(walkers, steps)
    seconds = time.perf_counter() - begun
    tau = emcee.autocorr.integrated_time(sampler.get_chain(discard=steps // 3), tol=0).max()
    return seconds, WALKERS * (steps - steps // 3) / tau


def ours():
    """Fit with starkiln; return seconds and effective draws."""
    bands, _, flux, error = make_star()
    from astropy import units as u

    unit = u.W / u.m**3
    photometry = {b.name: (f * unit, e * unit) for b, f, e in zip(bands, flux, error, strict=True)}
    star = Star("benchmark", photometry, saturated="keep")
    begun = time.perf_counter()
    result = fit(star, settings=Settings(dust="free", effective_draws=1000))
    return time.perf_counter() - begun, result.n_eff


def main():
    """Print the times and their ratios."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--repeats", type=int, default=3)
    parser.add_argument("--steps", type=int, default=3000, help="of the plain script")
    args = parser.parse_args()
    ours()  # tables built and libraries loaded, as for the second star of a catalogue
    ratios = []
    for _ in range(args.repeats):
        slow, slow_draws = plain_script(args.steps)
        slow *= 3000.0 / args.steps
        fast, fast_draws = ours()
        ratios.append(slow / fast)
        print(
            f"plain script {slow:7.2f} s ({slow_draws:.0f} effective draws)   "
            f"starkiln {fast:6.3f} s ({fast_draws:.0f})   ratio {ratios[-1]:.1f}"
        )
    print(f"median ratio {np.median(ratios):.1f}")


if __name__ == "__main__":
    main()
