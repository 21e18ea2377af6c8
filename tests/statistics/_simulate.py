"""Stars drawn from the stated priors, misfit, offsets and parallax included.

Independent of the package's likelihood: fluxes are made by adding noise to the
model's band fluxes, and handed over as magnitudes.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from starkiln import Star
from starkiln.emitters import BlackbodyEmitter
from starkiln.forward import band_flux_direct
from starkiln.passbands import load_band

MAG = 0.4 * np.log(10.0)
BANDS = (
    "Gaia BP",
    "2MASS J",
    "2MASS Ks",
    "WISE W1",
    "Gaia RP",
    "SDSS g",
    "WISE W2",
    "2MASS H",
    "Gaia G",
    "SDSS r",
    "SDSS i",
    "WISE W3",
)
_MAS = np.pi / 180.0 / 3.6e6
_PC, _RSUN, _LSUN, _SIGMA = 3.0856775814913673e16, 6.957e8, 3.828e26, 5.670374419184e-8


@dataclass(frozen=True)
class Simulated:
    """A star and the truth it was made from, in the results' units."""

    star: Star
    truth: dict[str, float]


def simulate(rng, settings, dust, n_bands: int) -> Simulated:
    """Return a star with `n_bands` bands, drawn from the priors of `settings` and `dust`."""
    low, high = np.log(settings.temperature_range)
    temperature = np.exp(rng.uniform(low, high))
    diameter = np.exp(rng.uniform(np.log(0.003), np.log(0.3)))
    av = 11.0
    while av > 10.0:
        av = abs(rng.normal(0.0, dust.width))
    misfit = np.exp(rng.uniform(*np.log(settings.misfit_range)))
    names = BANDS[:n_bands]
    bands = [load_band(name) for name in names]
    ln_flux = np.array(
        [
            band_flux_direct(
                BlackbodyEmitter(), band, dust, np.array([[np.log(temperature)]]), np.array([av])
            ).item()
            for band in bands
        ]
    )
    ln_flux += np.log(0.25 * np.pi * (diameter * _MAS) ** 2)
    offsets = {band.system: rng.normal(0.0, band.offset_error_mag * MAG) for band in bands}
    ln_flux += [offsets[band.system] for band in bands]
    ln_flux += rng.normal(0.0, [band.zero_point_error_mag * MAG for band in bands])
    ln_flux += misfit * rng.standard_normal(n_bands)
    errors = np.exp(rng.uniform(np.log(0.005), np.log(0.05), n_bands))
    ln_flux += rng.normal(0.0, errors * MAG)
    zero = np.array([band.zero_flux_w_m3() for band in bands])
    magnitudes = -2.5 * np.log10(np.exp(ln_flux) / zero)
    distance = rng.gamma(3.0, settings.distance_length)
    e_parallax = np.exp(rng.uniform(np.log(0.01), np.log(0.5)))
    parallax = rng.normal(1000.0 / distance, e_parallax)
    star = Star(
        f"simulated {rng.integers(2**63)}",
        {n: (m, e) for n, m, e in zip(names, magnitudes, errors, strict=True)},
        parallax=(parallax, e_parallax),
        saturated="keep",
    )
    radius_m = 0.5 * diameter * _MAS * distance * _PC
    return Simulated(
        star,
        {
            "temperature": temperature,
            "angular_diameter": diameter,
            "av": av,
            "misfit": misfit,
            "distance": distance,
            "radius": radius_m / _RSUN,
            "luminosity": 4.0 * np.pi * radius_m**2 * _SIGMA * temperature**4 / _LSUN,
        },
    )
