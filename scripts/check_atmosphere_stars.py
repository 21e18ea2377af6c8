"""Fit stars of known temperature and angular diameter with the tabulated atmosphere.

Run from the root of the source tree, a minute:

    python scripts/check_atmosphere_stars.py

Log g and [Fe/H] given, Gaia, 2MASS and W3 photometry of tests/reference/fundamental_stars.ecsv,
no dust unless `--dust WIDTH`. Band offsets come from the calibration half; what is printed for
the test half has not seen them. The posterior is that of a plain grid, so that this check stands
on its own: Gaussian in ln flux with a misfit, log-uniform from 0.03 to 0.1 for the atmosphere,
from 0.005 to 0.3 for a blackbody.
"""

from __future__ import annotations

import argparse
from pathlib import Path

import numpy as np
from astropy.table import Table

from starkiln.dust import Dust
from starkiln.emitters import AtmosphereEmitter, BlackbodyEmitter
from starkiln.passbands import load_band
from starkiln.store import atomic_write

REFERENCE = Path("tests/reference/fundamental_stars.ecsv")
OFFSETS = Path("src/starkiln/emitters/data/atmosphere_band_offsets.ecsv")
BANDS = ("Gaia BP", "Gaia G", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks", "WISE W3")
#: Of stars as bright as these, W3 is off by up to 0.18 mag.
W3_FLOOR = 0.10
ERROR_FLOOR = 0.01
RANGE_K = (4200.0, 9000.0)
MISFIT = {False: np.geomspace(0.03, 0.1, 12), True: np.geomspace(0.005, 0.3, 24)}
#: Only 2MASS magnitudes better than this tell of an offset.
GOOD = 0.06
#: Offsets are drawn towards 0 with this width: the mean dwarf sequence, faint enough for 2MASS,
#: agrees with the models to 0.02 mag in J - Ks and V - Ks. W3 stands by itself.
OFFSET_WIDTH = 0.02
KEYS = (("t", "teff"), ("theta", "theta"))
MAS = 4.84813681109536e-9


def model_magnitudes(row: object, blackbody: bool, av: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return temperatures and magnitudes at theta = 1 mas, (n_temperature, n_av, n_band)."""
    atmosphere = AtmosphereEmitter(float(row["logg"]), max(float(row["feh"]), -2.5))
    emitter = BlackbodyEmitter() if blackbody else atmosphere
    temperature = np.geomspace(
        RANGE_K[0], min(RANGE_K[1], atmosphere.bounds["temperature"][1]), 400
    )
    out = np.empty((temperature.size, av.size, len(BANDS)))
    for k, name in enumerate(BANDS):
        band = load_band(name)
        radiance = emitter.radiance(band.wavelength_m, temperature)
        dimming = 10.0 ** (-0.4 * av[:, None] * Dust().curve(band.wavelength_m))
        flux = (0.25 * np.pi * MAS**2) * (radiance @ (dimming * band.weight).T)
        out[:, :, k] = -2.5 * np.log10(flux / band.zero_flux_w_m3())
    return temperature, out


def photometry(row: object) -> tuple[np.ndarray, np.ndarray]:
    """Return magnitudes and errors; an absent band has an infinite error."""
    m, e = np.full(len(BANDS), 0.0), np.full(len(BANDS), np.inf)
    for k, name in enumerate(BANDS):
        column = name.replace(" ", "_")
        if np.isfinite(row[column]):
            m[k] = row[column]
            own = row[f"e_{column}"] if f"e_{column}" in row.colnames else 0.0
            own = own if np.isfinite(own) else 0.3
            e[k] = np.sqrt(own**2 + ERROR_FLOOR**2 + (W3_FLOOR if name == "WISE W3" else 0.0) ** 2)
    return m, e


def posterior(
    temperature: np.ndarray,
    model: np.ndarray,
    photometry: tuple[np.ndarray, np.ndarray],
    prior: np.ndarray,
    misfit: np.ndarray,
) -> dict[str, np.ndarray]:
    """Return the 16th, 50th and 84th percentiles of temperature and angular diameter (mas)."""
    m, e = photometry
    variance = (e / 1.0857) ** 2 + misfit[:, None] ** 2
    w = 1.0 / variance
    r = (model - m) / 1.0857
    total = w.sum(axis=1)
    mean = np.einsum("tab,fb->taf", r, w) / total
    chi2 = np.einsum("tab,fb->taf", r**2, w) - total * mean**2
    usable = np.isfinite(e)
    ln = -0.5 * chi2 + 0.5 * np.log(w[:, usable]).sum(axis=1) - 0.5 * np.log(total)
    p = np.exp(ln - ln.max()) * prior[None, :, None]
    p /= p.sum()
    # s = 2 ln theta: normal about `mean` with variance 1/total.
    rng = np.random.default_rng(0)
    drawn = rng.choice(p.size, 4000, p=p.ravel())
    i, _, k = np.unravel_index(drawn, p.shape)
    s = mean.ravel()[drawn] + rng.normal(size=drawn.size) / np.sqrt(total[k])
    step = np.log(temperature[1] / temperature[0])
    t = temperature[i] * np.exp(step * rng.uniform(-0.5, 0.5, drawn.size))
    return {
        "t": np.percentile(t, [16, 50, 84]),
        "theta": np.percentile(np.exp(0.5 * s), [16, 50, 84]),
    }


def robust(x: np.ndarray) -> float:
    """Return 1.4826 times the median absolute deviation."""
    return float(1.4826 * np.median(np.abs(x - np.median(x))))


def fit(
    stars: Table,
    models: list[tuple[np.ndarray, np.ndarray]],
    offsets: np.ndarray,
    prior: np.ndarray,
    misfit: np.ndarray,
) -> dict[str, float]:
    """Return bias, scatter and coverage, per cent, and residuals, mag, of a set of stars."""
    off, inside, residual = [], [], []
    for row, (temperature, bare) in zip(stars, models, strict=True):
        m, e = photometry(row)
        model = bare + offsets
        q = posterior(temperature, model, (m, e), prior, misfit)
        off.append([100.0 * (q[k][1] / row[name] - 1.0) for k, name in KEYS])
        # The measured value has an error of its own.
        half = [np.hypot(0.5 * (q[k][2] - q[k][0]), row[f"e_{name}"]) for k, name in KEYS]
        inside.append([abs(q[k][1] - row[n]) < h for (k, n), h in zip(KEYS, half, strict=True)])
        best = model[np.abs(temperature - q["t"][1]).argmin(), 0] - 5.0 * np.log10(q["theta"][1])
        residual += list((m - best)[e < 0.06])
    (t, theta), held = np.array(off).T, np.mean(inside, axis=0)
    return {
        "T bias": float(np.median(t)),
        "T robust": robust(t),
        "theta bias": float(np.median(theta)),
        "theta robust": robust(theta),
        "held T": float(held[0]),
        "held theta": float(held[1]),
        "residual": float(np.std(residual)),
    }


def band_offsets(
    stars: Table, models: list[tuple[np.ndarray, np.ndarray]]
) -> tuple[np.ndarray, np.ndarray]:
    """Return observed minus model at known temperature and diameter, believed part, and error."""
    rows = []
    for row, (temperature, bare) in zip(stars, models, strict=True):
        m, e = photometry(row)
        model = bare[:, 0]
        at = np.array([np.interp(row["teff"], temperature, model[:, k]) for k in range(len(BANDS))])
        floor = np.array([W3_FLOOR if name == "WISE W3" else 0.0 for name in BANDS])
        good = np.sqrt(np.maximum(e**2 - floor**2, 0.0)) < GOOD
        rows.append(np.where(good, m - at + 5 * np.log10(row["theta"]), np.nan))
    table = np.array(rows)
    middle = np.nanmedian(table, axis=0)
    spread = 1.4826 * np.nanmedian(np.abs(table - middle), axis=0)
    error = 1.25 * spread / np.sqrt(np.isfinite(table).sum(axis=0))
    believed = np.where([n == "WISE W3" for n in BANDS], 1.0, 1 / (1 + (error / OFFSET_WIDTH) ** 2))
    return believed * middle, error


def write_offsets(offsets: np.ndarray, errors: np.ndarray, count: int) -> None:
    """Write the table that `AtmosphereEmitter.band_offsets` reads."""
    table = Table(
        [BANDS, np.round(offsets, 4), np.round(errors, 4)], names=("band", "offset", "error")
    )
    table["band"].description = "Passband"
    table["offset"].description = "Observed minus model magnitude, median drawn towards 0"
    table["error"].description = "Standard error of the median before that"
    table["offset"].unit = table["error"].unit = "mag"
    table.meta = {
        "description": "Observed minus model magnitudes at known temperature and angular diameter",
        "reference": f"computed by scripts/check_atmosphere_stars.py from {count} stars of 4,300 "
        "to 7,000 K, the calibration half of Soubiran et al. 2024, A&A 682, A145",
        "licence": "BSD-3-Clause",
        "retrieved": "2026-12-01",
    }
    atomic_write(OFFSETS, lambda f: table.write(f, format="ascii.ecsv"), mode="w")


def main() -> None:
    """Calibrate on one half and print both."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--dust", type=float, default=0.0, help="width of the prior of A_V, mag")
    parser.add_argument("--write", action="store_true", help="ship the atmosphere's offsets")
    args = parser.parse_args()
    stars = Table.read(REFERENCE)
    stars = stars[(stars["teff"] > 4300.0) & (stars["teff"] < 7000.0)]
    av = np.linspace(0.0, 4.0 * args.dust, 41) if args.dust > 0.0 else np.zeros(1)
    prior = np.exp(-0.5 * (av / args.dust) ** 2) if args.dust > 0.0 else np.ones(1)
    for blackbody in (False, True):
        models = [model_magnitudes(row, blackbody, av) for row in stars]
        halves = {}
        for name in ("calibration", "test"):
            chosen = np.flatnonzero(stars["half"] == name)
            halves[name] = (stars[chosen], [models[i] for i in chosen])
        offsets, errors = band_offsets(*halves["calibration"])
        if args.write and not blackbody:
            write_offsets(offsets, errors, len(halves["calibration"][0]))
        print("blackbody" if blackbody else "atmosphere")
        for name, value, error in zip(BANDS, offsets, errors, strict=True):
            print(f"  offset {name:9s} {value:+.3f} +- {error:.3f} mag")
        for name, half in halves.items():
            for label, used in (("plain", 0.0 * offsets), ("with offsets", offsets)):
                result = fit(*half, used, prior, MISFIT[blackbody])
                text = ", ".join(f"{k} {v:.3g}" for k, v in result.items())
                print(f"  {name}, {label}, {len(half[0])} stars: {text}", flush=True)


if __name__ == "__main__":
    main()
