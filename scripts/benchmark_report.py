"""Time the page of a run: how long it takes to build, how large it is, how fast it opens.

python3 scripts/benchmark_report.py [STARS ...]     1000 and 10000 by default

Forty invented stars are fitted, and their rows repeated until the run has as many
stars as asked for; the page is then built as `starkiln report` builds it. Wanted: 1,000
stars in under 20 s, 10 MB and opened in under 2 s; 10,000 in under 120 s and 30 MB.
The time to open is left out where playwright or Chromium is missing.
"""

from __future__ import annotations

import shutil
import sys
import tempfile
import time
from pathlib import Path

import numpy as np
from astropy.table import Table, vstack

from starkiln.forward import band_fluxes
from starkiln.observations import read_catalogue
from starkiln.passbands import load_band
from starkiln.report import write_page
from starkiln.runner import dust_of, emitter_of, fit_catalogue, open_run

BANDS = (
    "Gaia BP", "Gaia G", "Gaia RP", "2MASS J", "2MASS H", "2MASS Ks", "WISE W1", "WISE W2",
    "SDSS g", "SDSS r", "SDSS i", "WISE W3",
)  # fmt: skip
FITTED = 40


def main():
    """Fit, repeat, build, measure."""
    sizes = [int(word) for word in sys.argv[1:]] or [1000, 10_000]
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        run = fit_catalogue(read_catalogue(catalogue(folder)), folder / "run", workers=1)
        for size in sizes:
            repeated = repeat(run, folder / f"run{size}", size)
            begun, worked = time.perf_counter(), time.process_time()
            path = write_page(open_run(repeated))
            seconds, worked = time.perf_counter() - begun, time.process_time() - worked
            opened = seconds_to_open(path)
            shown = "not measured" if opened is None else f"{opened:.2f} s"
            megabytes = path.stat().st_size / 1e6
            print(
                f"{size} stars: built in {seconds:.1f} s ({worked:.1f} s of processor), "
                f"{megabytes:.1f} MB, opened in {shown}"
            )


def catalogue(folder):
    """Write invented blackbodies with errors of 2 per cent and a misfit of 5."""
    from starkiln.inference import Settings

    rng = np.random.default_rng(7)
    temperature = np.exp(rng.uniform(np.log(3500), np.log(25000), FITTED))
    table = band_fluxes(emitter_of("blackbody"), BANDS, dust_of(Settings()))
    flux = np.exp(table.ln_flux(np.log(temperature)[:, None], np.full(FITTED, 0.2))) * 1e-20
    flux *= np.exp(0.054 * rng.standard_normal(flux.shape))
    columns = {"name": [f"Kiln {row}" for row in range(FITTED)]}
    for band, values in zip(BANDS, flux.T, strict=True):
        columns[band] = -2.5 * np.log10(values / load_band(band).zero_flux_w_m3())
        columns[f"e_{band}"] = np.full(FITTED, 0.02)
    columns |= {"parallax": np.full(FITTED, 4.0), "e_parallax": np.full(FITTED, 0.05)}
    columns |= {"av": np.full(FITTED, 0.2), "e_av": np.full(FITTED, 0.05)}
    path = folder / "stars.ecsv"
    Table(columns).write(path)
    return path


def repeat(run, folder, size):
    """Write a run folder whose rows are those of `run`, over and over."""
    times = -(-size // len(run.results))
    folder.mkdir()
    shutil.copy(run.folder / "run.json", folder)
    many = vstack([run.results] * times, metadata_conflicts="silent")[:size]
    many.write(folder / "results.ecsv")
    parts = []
    for index in range(times):
        part = run.photometry.copy()
        part["row"] += index * len(run.results)
        parts.append(part)
    photometry = vstack(parts, metadata_conflicts="silent")
    photometry[photometry["row"] <= size].write(folder / "photometry.ecsv")
    draws = Table.read(run.folder / "draws.fits")
    vstack([draws] * times, metadata_conflicts="silent")[:size].write(folder / "draws.fits")
    return folder


def seconds_to_open(path):
    """Return the seconds until the page stands and its script has run."""
    try:
        from playwright.sync_api import sync_playwright
    except ImportError:
        return None
    browser_path = shutil.which("chromium")
    if browser_path is None:
        return None
    with sync_playwright() as playwright:
        browser = playwright.chromium.launch(executable_path=browser_path, args=["--no-sandbox"])
        page = browser.new_page()
        begun = time.perf_counter()
        page.goto(path.as_uri())
        page.wait_for_selector("#table tbody tr")
        seconds = time.perf_counter() - begun
        browser.close()
    return seconds


if __name__ == "__main__":
    main()
