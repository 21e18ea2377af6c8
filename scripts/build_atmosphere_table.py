"""Write emitters/data/atmosphere.npz: model atmospheres over temperature, log g and [Fe/H].

Run from the root of the source tree; 720 models, under ten minutes on two cores:

    python scripts/build_atmosphere_table.py --workers 2

`--coarse` takes every second temperature, to try things out. At the end models between the
nodes are computed and compared with the interpolated table; the errors go into the file.
"""

from __future__ import annotations

import argparse
import json
import time
from dataclasses import asdict
from multiprocessing import Pool
from pathlib import Path

import numpy as np

from starkiln._version import __version__
from starkiln.atmospheres import Numerics, model_atmosphere
from starkiln.emitters._node_grid import NodeGrid, lowest_logg
from starkiln.errors import ConvergenceError, StarkilnError
from starkiln.matter import LINE_HAZE
from starkiln.passbands import load_band
from starkiln.photons import planck_wavelength
from starkiln.store import atomic_write

TARGET = Path("src/starkiln/emitters/data/atmosphere.npz")
TEMPERATURES = np.concatenate(
    [
        (4200.0, 4500.0, 4900.0, 5400.0, 6000.0, 6600.0, 7200.0, 7800.0, 8400.0, 9200.0, 10300.0),
        (12000.0, 14500.0, 18000.0, 22000.0, 26000.0, 30000.0, 33500.0, 37000.0, 40000.0),
    ]
)
SHARES = np.array([0.0, 0.12, 0.3, 0.53, 0.77, 1.0])
METALS = np.array([-2.5, -2.0, -1.4, -0.7, 0.0, 0.5])
BANDS = ("Johnson U", "Johnson B", "Gaia BP", "Gaia G", "Gaia RP", "2MASS J", "2MASS H")
BANDS += ("2MASS Ks", "WISE W3")
NUMERICS = Numerics()
FLUX_TOLERANCE = 1e-3


def spectrum(point: tuple[float, float, float]) -> tuple[np.ndarray, np.ndarray] | str:
    """Return wavelengths and ln[radiance/B(T_eff)] of one model, or why there is none."""
    temperature, logg, feh = point
    try:
        model = model_atmosphere(temperature, logg, feh=feh, numerics=NUMERICS)
    except ConvergenceError as error:
        # The flux is what counts here: the star's skin may still be trembling.
        model = error.partial
        if np.abs(model.flux_error).max() > FLUX_TOLERANCE:
            return str(error)
        print(f"taken all the same: {error}", flush=True)
    except StarkilnError as error:
        return str(error)
    radiance = np.maximum(model.surface_flux, 1e-300) / np.pi
    return model.wavelength_m, np.log(radiance / planck_wavelength(model.wavelength_m, temperature))


def compute(points: np.ndarray, workers: int) -> tuple[np.ndarray, np.ndarray]:
    """Return wavelengths and ln ratios of every point; stop at one that fails."""
    started, rows, failed, wavelength = time.time(), [], [], np.empty(0)
    with Pool(workers) as pool:
        for n, (point, result) in enumerate(
            zip(points, pool.imap(spectrum, [tuple(p) for p in points], chunksize=4), strict=True),
            1,
        ):
            if isinstance(result, str):
                failed.append(f"{point}: {result}")
                print(failed[-1], flush=True)
            else:
                wavelength = result[0]
                rows.append(result[1])
            if n % 100 == 0:
                print(f"{n} of {len(points)} models, {time.time() - started:.0f} s", flush=True)
    if failed:
        raise SystemExit(f"{len(failed)} models failed; no table written")
    return wavelength, np.array(rows)


def band_magnitudes(
    wavelength_m: np.ndarray, ln_ratio: np.ndarray, temperature: np.ndarray
) -> np.ndarray:
    """Return -2.5 log10 of the band means, (n, n_band)."""
    out = []
    for name in BANDS:
        band = load_band(name)
        x = np.log(band.wavelength_m)
        ratio = np.array([np.interp(x, np.log(wavelength_m), row) for row in ln_ratio])
        radiance = np.exp(ratio) * planck_wavelength(band.wavelength_m, temperature[:, None])
        out.append(-2.5 * np.log10(radiance @ band.weight))
    return np.array(out).T


def check(
    grid: NodeGrid, coefficients: np.ndarray, count: int, workers: int
) -> dict[str, list[float]]:
    """Return root mean square and largest error of interpolation, mag, by band and range."""
    rng = np.random.default_rng(8)
    low_t, high_t = np.log(grid.temperature_k[[0, -1]])
    temperature = np.exp(rng.uniform(low_t, high_t, count))
    low = lowest_logg(temperature)
    logg = low + rng.uniform(size=count) * (5.0 - low)
    feh = rng.uniform(grid.feh[0], grid.feh[-1], count)
    points = np.array([temperature, logg, feh]).T
    wavelength, truth = compute(points, workers)
    index, weight = grid.weights(temperature, logg, feh)
    guess = np.einsum("nk,nkw->nw", weight, coefficients[index])
    error = band_magnitudes(wavelength, guess, temperature) - band_magnitudes(
        wavelength, truth, temperature
    )
    report = {}
    for label, chosen in (
        ("below 9000 K", temperature < 9000.0),
        ("above 9000 K", temperature >= 9000.0),
    ):
        for k, band in enumerate(BANDS):
            values = error[chosen, k]
            rms, worst = np.sqrt(np.mean(values**2)), np.abs(values).max()
            report[f"{band}, {label}"] = [round(float(rms), 4), round(float(worst), 4)]
            print(f"{band:10s} {label}: rms {rms:.4f}, largest {worst:.4f} mag")
    for k in np.argsort(-np.abs(error[:, 2]))[:8]:
        print("worst BP:", np.round(points[k], 2), np.round(error[k], 4))
    return report


def main() -> None:
    """Compute, check and write."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--workers", type=int, default=2)
    parser.add_argument("--coarse", action="store_true")
    parser.add_argument("--check", type=int, default=60, help="models between the nodes")
    parser.add_argument("--output", type=Path, default=TARGET)
    args = parser.parse_args()
    started = time.time()
    step = 2 if args.coarse else 1
    grid = NodeGrid(TEMPERATURES[::step], SHARES, METALS)
    wavelength, ln_ratio = compute(grid.nodes, args.workers)
    seconds = time.time() - started
    print(f"{len(ln_ratio)} models in {seconds:.0f} s")
    errors = check(grid, grid.prefilter(ln_ratio), args.check, args.workers)
    low, high = ln_ratio.min(axis=0), ln_ratio.max(axis=0)
    width = np.maximum(high - low, 1e-6) / 65535.0
    meta = {
        "description": "ln of disc-averaged radiance over the blackbody's of the same temperature",
        "reference": "computed by scripts/build_atmosphere_table.py with starkiln " + __version__,
        "licence": "BSD-3-Clause",
        "retrieved": "2026-12-01",
        "line_haze": asdict(LINE_HAZE),
        "numerics": asdict(NUMERICS),
        "models": len(ln_ratio),
        "seconds": round(seconds),
        "interpolation_error_mag": errors,
        "note": "errors are [rms, largest] of models drawn uniformly in ln T, log g, [Fe/H]",
    }
    arrays = {
        "meta": np.array(json.dumps(meta)),
        "wavelength_m": wavelength,
        "temperature_k": grid.temperature_k,
        "share": grid.share,
        "feh": grid.feh,
        "low": low,
        "step": width,
        "ln_ratio": np.rint((ln_ratio - low) / width).astype(np.uint16),
    }
    atomic_write(args.output, lambda stream: np.savez_compressed(stream, **arrays))
    print(f"{args.output}: {args.output.stat().st_size / 1e6:.2f} MB")


if __name__ == "__main__":
    main()
