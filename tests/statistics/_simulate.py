"""Stars drawn from the stated priors, misfit, offsets and parallax included.

Independent of the package's likelihood: fluxes are made by adding noise to the
model's band fluxes, and handed over as magnitudes.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from astropy import units as u

from starkiln import Star
from starkiln.dust import Dust
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
#: Angular diameters of stars in the flux form, mas: from invisible to well measured.
FAINT = (1e-4, 1e-2)
_MAS = np.pi / 180.0 / 3.6e6
_PC, _RSUN, _LSUN, _SIGMA = 3.0856775814913673e16, 6.957e8, 3.828e26, 5.670374419184e-8


@dataclass(frozen=True)
class Simulated:
    """A star and the truth it was made from, in the results' units."""

    star: Star
    truth: dict[str, float]


def simulate(rng, settings, dust, n_bands: int) -> Simulated:
    """Return a star with `n_bands` bands, drawn from the priors of `settings` and `dust`.

    In the log form errors are relative and quoted beside magnitudes. In the flux form
    they are absolute and do not know the star (else they would tell its flux), the
    misfit and the offsets multiply the true flux, and what lies below 3 sigma is
    quoted as a limit. With dust from the row's column, a quoted value and error are
    drawn first and the truth from them.
    """
    low, high = np.log(settings.temperature_range)
    temperature = np.exp(rng.uniform(low, high))
    limits = FAINT if settings.likelihood == "flux" else (0.003, 0.3)
    diameter = np.exp(rng.uniform(*np.log(limits)))
    av, known = _extinction(rng, dust)
    misfit = np.exp(rng.uniform(*np.log(settings.misfit_range))) if settings.misfit else 0.0
    names = BANDS[:n_bands]
    bands = [load_band(name) for name in names]
    ln_flux = [
        band_flux_direct(
            BlackbodyEmitter(), band, dust, np.array([[np.log(temperature)]]), np.array([av])
        ).item()
        for band in bands
    ]
    flux = np.exp(ln_flux) * 0.25 * np.pi * (diameter * _MAS) ** 2
    offsets = {band.system: rng.normal(0.0, band.offset_error_mag * MAG) for band in bands}
    departure = np.array([offsets[band.system] for band in bands])
    departure += misfit * rng.standard_normal(n_bands)
    own = rng.normal(0.0, [band.zero_point_error_mag * MAG for band in bands])
    photometry = (_in_flux if settings.likelihood == "flux" else _in_magnitudes)(
        rng, bands, flux, departure, own
    )
    distance = rng.gamma(3.0, settings.distance_length)
    e_parallax = np.exp(rng.uniform(np.log(0.01), np.log(0.5)))
    parallax = rng.normal(1000.0 / distance, e_parallax)
    star = Star(
        f"simulated {rng.integers(2**63)}",
        dict(zip(names, photometry, strict=True)),
        parallax=(parallax, e_parallax),
        saturated="keep",
        **known,
    )
    radius_m = 0.5 * diameter * _MAS * distance * _PC
    truth = {
        "temperature": temperature,
        "angular_diameter": diameter,
        "av": av,
        "misfit": misfit,
        "distance": distance,
        "radius": radius_m / _RSUN,
        "luminosity": 4.0 * np.pi * radius_m**2 * _SIGMA * temperature**4 / _LSUN,
    }
    return Simulated(star, truth)


def _extinction(rng, dust) -> tuple[float, dict]:
    if dust.prior == "zero":
        return 0.0, {}
    centre, width, known = 0.0, dust.width, {}
    if dust.prior == "column":
        centre, width = rng.uniform(0.0, 2.0), np.exp(rng.uniform(np.log(0.03), np.log(0.5)))
        known = {"av": (centre, width)}
    while True:
        av = rng.normal(centre, width)
        av = abs(av) if dust.prior == "free" else av
        if 0.0 <= av <= 10.0:
            return av, known


def _in_magnitudes(rng, bands, flux, departure, own) -> list:
    errors = np.exp(rng.uniform(np.log(0.005), np.log(0.05), len(bands)))
    ln_flux = np.log(flux) + departure + own + rng.normal(0.0, errors * MAG)
    zero = np.array([band.zero_flux_w_m3() for band in bands])
    return list(zip(-2.5 * np.log10(np.exp(ln_flux) / zero), errors, strict=True))


def _in_flux(rng, bands, flux, departure, own) -> list:
    # Depths of about the flux of a star of 8000 K in the middle of `FAINT`.
    middle = 0.25 * np.pi * (np.sqrt(FAINT[0] * FAINT[1]) * _MAS) ** 2
    ln_depth = [
        band_flux_direct(
            BlackbodyEmitter(), band, Dust(), np.array([[np.log(8000.0)]]), np.zeros(1)
        ).item()
        for band in bands
    ]
    errors = np.exp(ln_depth) * middle * np.exp(rng.uniform(np.log(0.02), np.log(0.6), len(bands)))
    seen = flux * (1.0 + departure) + errors * rng.standard_normal(len(bands))
    seen *= 1.0 + own
    unit = u.W / u.m**3
    quoted = [(f * unit, e * unit) for f, e in zip(seen, errors, strict=True)]
    hidden = seen < 3.0 * errors
    hidden[0] = False  # one band must be measured, below zero or not
    return [
        ("<", 3.0 * e * unit) if below else pair
        for pair, e, below in zip(quoted, errors, hidden, strict=True)
    ]
