"""Make `src/starkiln/passbands/data/vega_spectrum.ecsv` from a CALSPEC file of Vega.

Usage: python scripts/make_vega_spectrum.py alpha_lyr_stis_008.fits

The file comes from the CALSPEC library of the Space Telescope Science Institute.
Its spectrum is averaged over intervals of 1/500 in ln wavelength, 0.0905 to 30 um;
the means of all bands of the library change by less than 2e-4.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
from astropy.io import fits
from astropy.table import Table

TARGET = Path(__file__).parents[1] / "src/starkiln/passbands/data/vega_spectrum.ecsv"
STEPS_PER_E_FOLD = 500
RANGE_UM = (0.0905, 30.0)


def averaged(wavelength: np.ndarray, flux: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Average a piecewise linear spectrum over equal steps in ln wavelength."""
    edges = np.exp(np.arange(*np.log(RANGE_UM), 1.0 / STEPS_PER_E_FOLD))
    fine = np.union1d(wavelength, edges)
    values = np.interp(fine, wavelength, flux)
    integral = np.concatenate([[0.0], np.cumsum(np.diff(fine) * (values[1:] + values[:-1]) / 2)])
    means = np.diff(np.interp(edges, fine, integral)) / np.diff(edges)
    return np.sqrt(edges[1:] * edges[:-1]), means


def main() -> None:
    """Write the table."""
    with fits.open(sys.argv[1]) as file:
        data = file[1].data
        wavelength_um = np.asarray(data["WAVELENGTH"], dtype=float) * 1e-4
        flux_w_m3 = np.asarray(data["FLUX"], dtype=float) * 1e7
    mean_um, mean_flux = averaged(wavelength_um, flux_w_m3)
    table = Table(
        {"wavelength": np.round(mean_um, 7), "flux": [float(f"{f:.5e}") for f in mean_flux]},
        units={"wavelength": "um", "flux": "W / m3"},
    )
    table["wavelength"].description = "Wavelength in vacuum"
    table["flux"].description = "Flux density per wavelength above the atmosphere"
    table.meta.update(
        description="Spectrum of Vega, averaged over 1/500 in ln wavelength",
        reference=(
            "CALSPEC alpha_lyr_stis_008; Bohlin 2014, AJ 147, 127; "
            "Bohlin, Gordon & Tremblay 2014, PASP 126, 711"
        ),
        licence="public domain, work of NASA's Space Telescope Science Institute",
        retrieved="2026-12-01, from the copy in sbpy 0.6.0 (BSD-3-Clause)",
    )
    table.write(TARGET, format="ascii.ecsv", delimiter=",", overwrite=True)
    print(f"wrote {len(table)} rows to {TARGET}")


if __name__ == "__main__":
    main()
