"""A run made with numpy alone: blackbodies through narrow bands, Gaussian posteriors.

It offers what `starkiln.report` reads of a run folder, so that figures, tables and
the page are tested without a fit, and come out the same every time.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from astropy.table import Table

from starkiln.emitters import BlackbodyEmitter
from starkiln.inference import Settings
from starkiln.passbands import load_band

H, C, K = 6.62607015e-34, 299792458.0, 1.380649e-23
MAS = np.pi / 180 / 3600 / 1000

BANDS = (
    "SDSS u", "SDSS g", "Gaia BP", "Johnson V", "SDSS r", "Gaia G", "Gaia RP", "2MASS J",
    "2MASS H", "2MASS Ks", "WISE W1", "WISE W2",
)  # fmt: skip


def pivot_um(band):
    return load_band(band).pivot_m * 1e6


def blackbody_flux(wavelength_um, temperature, angular_diameter, av=0.0):
    """Flux density in W m-2 um-1; a power law stands for the dust."""
    wavelength = np.asarray(wavelength_um) * 1e-6
    radiance = 2 * H * C**2 / wavelength**5 / np.expm1(H * C / wavelength / K / temperature)
    dust = 10 ** (-0.4 * av * (0.55 / np.asarray(wavelength_um)) ** 1.3)
    return np.pi / 4 * (angular_diameter * MAS) ** 2 * radiance * 1e-6 * dust


def make_draws(temperature, *, count=256, seed=1, distance=None, av=0.3):
    """Posterior draws with the correlations that photometry leaves."""
    rng = np.random.default_rng(seed)
    z = rng.standard_normal((4, count))
    t = temperature * np.exp(0.02 * z[0])
    theta = 0.2 * (5800 / temperature) * np.exp(-0.012 * z[0] + 0.01 * z[1])
    draws = Table()
    draws["temperature"] = t
    draws["angular_diameter"] = theta
    draws["av"] = np.abs(av + 0.08 * z[2] + 0.05 * z[0])
    draws["misfit"] = np.exp(-3.3 + 0.3 * z[3])
    draws["bolometric_flux"] = 5.670374e-8 * t**4 * (theta * MAS) ** 2 / 4
    if distance:
        draws["distance"] = distance * np.exp(0.02 * z[1] + 0.01 * z[3])
        draws["radius"] = theta * MAS / 2 * draws["distance"] * 3.0856776e16 / 6.957e8
        draws["luminosity"] = draws["radius"] ** 2 * (t / 5772) ** 4
    return draws


@dataclass(frozen=True)
class FakeModel:
    """Blackbody behind a power law of dust, through infinitely narrow bands."""

    bands: tuple[str, ...]
    dust: object = None

    def band_flux(self, draws):
        return self._flux(np.array([pivot_um(band) for band in self.bands]), draws)

    def spectrum(self, wavelength_m, draws):
        return self._flux(np.asarray(wavelength_m) * 1e6, draws)

    @staticmethod
    def _flux(wavelength_um, draws):
        t, theta, av = (
            np.asarray(draws[key])[:, None] for key in ("temperature", "angular_diameter", "av")
        )
        return blackbody_flux(wavelength_um[None, :], t, theta, av)


class FakeRun:
    """Stars of given temperatures; the last is rejected, the one before unconverged."""

    def __init__(self, names, temperatures, *, folder=None, bands=BANDS, limits=True):
        self.names, self.temperatures, self.bands = list(names), list(temperatures), list(bands)
        self.folder = folder
        self.meta = META
        self._draws = [self._draw(row) for row in range(1, len(self.names) + 1)]
        self.photometry = self._photometry(limits)
        self.results = self._results()

    def _draw(self, row):
        if row == len(self.names):
            return None
        distance = None if row == 2 else 80.0 + row
        return make_draws(self.temperatures[row - 1], seed=row, distance=distance)

    def draws(self, row):
        return self._draws[row - 1]

    def model(self, row):
        return FakeModel(self.bands)

    @property
    def settings(self):
        return Settings()

    @property
    def emitter(self):
        return BlackbodyEmitter()

    def rows_of(self, name):
        return [row for row, known in enumerate(self.names, start=1) if known == name]

    def _photometry(self, limits):
        lines = []
        for row, temperature in enumerate(self.temperatures, start=1):
            rng = np.random.default_rng(1000 + row)
            for index, band in enumerate(self.bands):
                wavelength = pivot_um(band)
                flux = blackbody_flux(wavelength, temperature, 0.2 * 5800 / temperature, 0.3)
                error = (0.01 + 0.01 * index) * flux
                flux = flux + rng.standard_normal() * np.hypot(error, 0.03 * flux)
                limit, used, note = "", row != len(self.names), ""
                if limits and band == "WISE W2":
                    limit, flux = "upper", 1.6 * flux
                if limits and band == "SDSS g":
                    # A band that is left out may keep its flux or not.
                    used, note = False, "saturated"
                    flux, error = (0.75 * flux, error) if row % 2 else (np.nan, np.nan)
                lines.append((row, self.names[row - 1], band, flux, error, limit, used, note))
        names = ("row", "name", "band", "flux", "e_flux", "limit", "used", "note")
        table = Table(rows=lines, names=names, masked=True)
        for key in ("flux", "e_flux"):
            table[key].mask = np.isnan(table[key])
        table["flux"].unit = table["e_flux"].unit = "W m-2 um-1"
        return table

    def _results(self):
        rows = [self._result(row) for row in range(1, len(self.names) + 1)]
        table = Table({key: [line[key] for line in rows] for key in rows[0]})
        for key in table.colnames:
            if table[key].dtype.kind == "f":
                table[key] = np.ma.masked_invalid(table[key])
            table[key].description = f"what {key} is"
        for key in QUANTITIES:
            for end in ("", "_lo", "_hi"):
                table[f"{key}{end}"].unit = UNITS.get(key)
        return table

    def _result(self, row):
        status = {len(self.names): "rejected", len(self.names) - 1: "unconverged"}.get(row, "ok")
        line = {
            "name": self.names[row - 1],
            "status": status,
            "message": MESSAGES[status],
            "flags": {"ok": "", "unconverged": "degenerate at_edge", "rejected": ""}[status],
            "engine": "ensemble",
            "emitter": "blackbody",
            "n_bands": 0 if status == "rejected" else len(self.bands),
        }
        draws = self._draws[row - 1]
        for key in QUANTITIES:
            kept = draws is not None and key in draws.colnames
            values = np.percentile(draws[key], [50, 16, 84]) if kept else [np.nan] * 3
            line |= dict(zip((key, f"{key}_lo", f"{key}_hi"), values, strict=True))
        return line | {"n_eff": 1200.0, "fit_probability": 0.4, "seed": 1}


QUANTITIES = (
    "temperature", "angular_diameter", "av", "misfit", "bolometric_flux", "distance", "radius",
    "luminosity",
)  # fmt: skip
UNITS = {
    "temperature": "K", "angular_diameter": "mas", "av": "mag", "bolometric_flux": "W / m2",
    "distance": "pc", "radius": "solRad", "luminosity": "solLum",
}  # fmt: skip
MESSAGES = {
    "ok": "no extinction given: A_V = 0",
    "unconverged": "the ceiling of 20000 steps was reached with n_eff 140 of 1000",
    "rejected": "no usable band: every magnitude is missing",
}
META = {
    "priors": {"temperature": "log-uniform, 3000 to 50000 K", "av": "half-normal, 1 mag"},
    "identity": {
        "catalogue": "0" * 64,
        "emitter": "blackbody",
        "engine": "ensemble",
        "seed": 1,
        "settings": Settings().as_dict(),
        "versions": {"starkiln": "0.1.0", "numpy": "2.4.0", "dust_extinction": "1.7"},
    },
    "started": "2026-01-01T00:00:00+00:00",
    "finished": "2026-01-01T00:01:00+00:00",
}
