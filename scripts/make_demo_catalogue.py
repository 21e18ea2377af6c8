"""Make the invented stars of catalogs-demo/ and the truth beside them.

    python scripts/make_demo_catalogue.py [FOLDER]

Needs starkiln installed. The band fluxes are integrated here, from astropy's
blackbody and dust_extinction's law over the published response curves, apart from
the package's own integrals and tables. Every star is no perfect blackbody: each
band is off by a few per cent (`MISFIT`). The same seed gives the same files.
"""

import sys
from functools import lru_cache
from pathlib import Path

import numpy as np
from astropy import constants, units
from astropy.modeling.physical_models import BlackBody
from astropy.table import MaskedColumn, Table
from dust_extinction.parameter_averages import G23

from starkiln.passbands import load_band
from starkiln.store import atomic_write, write_table

SEED = 20417
#: Standard deviation of ln flux, beyond the quoted errors.
MISFIT = 0.03
MAG_PER_LN = 2.5 / np.log(10.0)

#: Band -> (faintest magnitude that is measured, error of a bright star in mag).
SURVEYS = {
    "Gaia BP": (20.5, 0.004),
    "Gaia G": (20.7, 0.003),
    "Gaia RP": (20.0, 0.004),
    "2MASS J": (16.2, 0.022),
    "2MASS H": (15.6, 0.024),
    "2MASS Ks": (15.2, 0.021),
    "WISE W1": (16.8, 0.023),
    "WISE W2": (15.8, 0.020),
    "WISE W3": (11.6, 0.018),
}
OPTICAL = {"Johnson U": (17.0, 0.03), "Johnson B": (18.0, 0.02), "Johnson V": (18.0, 0.015)}
MESSY = {
    "Johnson V": (17.5, 0.02),
    "Pan-STARRS g": (21.0, 0.01),
    "2MASS J": (16.2, 0.022),
}

#: Temperature (K), radius (solar), A_V (mag) of the stars of the Kestrel association.
ASSOCIATION = [
    (30000, 7.2, 1.9), (24000, 5.5, 1.3), (19000, 4.2, 0.9), (15000, 3.3, 0.7),
    (12000, 2.7, 0.4), (9800, 2.1, 0.6), (8600, 1.9, 1.1), (7700, 1.7, 0.3),
    (7000, 1.5, 0.0), (6500, 1.4, 0.5), (6100, 1.2, 0.2), (5800, 1.05, 0.8),
    (5600, 0.95, 0.1), (5200, 0.82, 0.4), (4700, 0.74, 0.3), (4200, 0.68, 0.7),
    (3700, 0.55, 0.2), (3300, 0.42, 0.1), (3000, 0.32, 0.0), (5100, 6.0, 1.5),
    (4900, 8.5, 0.6), (4600, 10.0, 2.0), (4200, 18.0, 0.9), (3800, 35.0, 0.4),
]  # fmt: skip
#: Temperature (K), log10 of luminosity (solar), mass (solar), A_V (mag).
HOT_STARS = [
    (42000, 5.75, 55.0, 1.6), (36000, 5.55, 40.0, 2.1), (31000, 5.60, 38.0, 1.2),
    (26000, 5.40, 30.0, 1.8), (20000, 5.30, 25.0, 2.4), (15000, 5.25, 22.0, 1.4),
]  # fmt: skip
FIELD = [
    (4100, 0.7, 0.31), (4500, 0.75, 0.62), (4800, 0.78, 0.12), (5100, 0.8, 0.93),
    (5300, 0.85, 0.31), (5500, 0.9, 0.06), (5700, 1.0, 0.47), (5900, 1.1, 0.22),
    (6200, 1.2, 0.84), (6400, 1.3, 0.16), (6700, 1.4, 0.37), (7100, 1.5, 0.53),
]  # fmt: skip

#: Column of a table -> unit and description.
COLUMNS = {
    "temperature": ("K", "temperature"),
    "radius": ("solRad", "radius"),
    "luminosity": ("solLum", "luminosity"),
    "distance": ("pc", "distance"),
    "parallax": ("mas", "parallax"),
    "angular_diameter": ("mas", "angular diameter"),
    "av": ("mag", "extinction at 0.55 um"),
    "misfit": (None, "standard deviation of ln flux about the blackbody"),
    "mass": ("solMass", "mass"),
    "teff": ("K", "temperature from an invented spectrum"),
}


def truth_of(name, temperature, radius, av, distance):
    """Return everything that is true of one star."""
    diameter = 2.0 * radius * constants.R_sun / (distance * units.pc)
    row = {
        "name": name,
        "temperature": temperature,
        "radius": radius,
        "luminosity": radius**2 * (temperature / 5772.0) ** 4,
        "distance": distance,
        "parallax": 1000.0 / distance,
        "angular_diameter": (diameter.decompose().value * units.rad).to_value(units.mas),
        "av": av,
        "misfit": MISFIT,
    }
    return {key: v if isinstance(v, str) else float(f"{v:.6g}") for key, v in row.items()}


@lru_cache
def extinction_curve(band):
    """Return A(wavelength) / A(0.55 um) at the nodes of a band."""
    law = G23(Rv=3.1)
    return law(load_band(band).wavelength_m * units.m) / law(0.55 * units.um)


def band_flux(band, star):
    """Return the band mean of F_lambda of a blackbody behind dust, in W m-3."""
    curve = load_band(band)
    wavelength = curve.wavelength_m * units.m
    scale = 1.0 * units.W / (units.m**3 * units.sr)
    radiance = BlackBody(star["temperature"] * units.K, scale=scale)(wavelength).value
    dimming = 10.0 ** (-0.4 * star["av"] * extinction_curve(band))
    radius = 0.5 * (star["angular_diameter"] * units.mas).to_value(units.rad)
    return float(np.pi * radius**2 * (radiance * dimming) @ curve.weight)


def observe(rng, band, star, survey):
    """Return magnitude, error and limit flag of a star as a survey would print them."""
    faintest, best = survey
    truth = -2.5 * np.log10(band_flux(band, star) / load_band(band).zero_flux_w_m3())
    noise = rng.normal(size=2)
    if truth > faintest:
        return faintest - 0.2, np.nan, ">"
    error = np.hypot(best, 0.2 * 10.0 ** (0.4 * (truth - faintest)))
    seen = truth + error * noise[0] + MAG_PER_LN * MISFIT * noise[1]
    return round(seen, 3), round(error, 3), ""


def column(values, unit, description):
    """Return a column in which NaN is masked."""
    values = np.asarray(values)
    gaps = np.isnan(values) if values.dtype.kind == "f" else np.zeros(len(values), bool)
    return MaskedColumn(values, mask=gaps, unit=unit, description=description)


def add_photometry(table, rng, stars, surveys):
    """Add magnitude, error and limit flag of every band."""
    for band, survey in surveys.items():
        rows = [observe(rng, band, star, survey) for star in stars]
        values, errors, flags = (list(part) for part in zip(*rows, strict=True))
        table[band] = column(values, "mag", f"{band} magnitude")
        table[f"e_{band}"] = column(errors, "mag", f"error of {band}")
        if any(flags):
            table[f"l_{band}"] = column(flags, None, "limit flag: > fainter than")


def add_measured(table, rng, stars, name, errors, digits=3):
    """Add a quantity with Gaussian noise, and its error."""
    errors = np.asarray(errors, dtype=float)
    source = "temperature" if name == "teff" else name
    unit, text = COLUMNS[name]
    values = [star[source] + rng.normal() * e for star, e in zip(stars, errors, strict=True)]
    table[name] = column(np.round(values, digits), unit, text)
    table[f"e_{name}"] = column(np.round(errors, digits), unit, f"error of {name}")


def truth_table(stars, description):
    """Return the truth as a table."""
    table = Table(meta={"description": description})
    for name in stars[0]:
        unit, text = COLUMNS.get(name, (None, "name of the star"))
        table[name] = column([star[name] for star in stars], unit, text)
    return table


def association(rng):
    """Return the Kestrel association, 24 stars some 300 pc away, and its truth."""
    stars = [
        truth_of(f"Kestrel {i}", *star, round(rng.normal(300.0, 6.0), 1))
        for i, star in enumerate(ASSOCIATION, 1)
    ]
    table = Table(meta={"description": "Kestrel, an invented association of 24 stars"})
    table["name"] = column([star["name"] for star in stars], None, "name of the star")
    add_photometry(table, rng, stars, SURVEYS)
    faint = np.asarray(table["Gaia G"])
    add_measured(table, rng, stars, "parallax", np.hypot(0.025, 0.25 * 10 ** (0.3 * (faint - 19))))
    add_measured(table, rng, stars, "av", [np.hypot(0.04, 0.08 * s["av"]) for s in stars], 2)
    add_measured(table, rng, stars, "teff", [0.03 * s["temperature"] for s in stars], -1)
    for name in ("teff", "e_teff"):
        table[name].mask = [s["temperature"] < 14000 for s in stars]
    make_gaps(table)
    return table, truth_table(stars, "What is true of the stars of the Kestrel association")


def make_gaps(table):
    """Take away what a real catalogue would lack."""
    for row, names in {
        8: ("av",),
        12: ("Gaia BP", "Gaia RP"),
        14: ("2MASS J", "2MASS H", "2MASS Ks"),
        15: ("Gaia G", "Gaia BP", "Gaia RP", "WISE W1", "WISE W2", "WISE W3", "2MASS H"),
        16: ("parallax",),
        20: ("WISE W1", "WISE W2"),
    }.items():
        for name in names:
            table[name].mask[row] = table[f"e_{name}"].mask[row] = True
            if f"l_{name}" in table.colnames:
                table[f"l_{name}"][row] = ""


def hot_stars(rng):
    """Return six invented hot supergiants with spectroscopic values, and their truth."""
    stars = []
    for i, (temperature, log_l, mass, av) in enumerate(HOT_STARS, 1):
        radius = 10.0 ** (0.5 * log_l) * (5772.0 / temperature) ** 2
        distance = round(rng.normal(2200.0, 150.0), 0)
        stars.append(truth_of(f"Cinder {i}", temperature, radius, av, distance) | {"mass": mass})
    table = Table(meta={"description": "Cinder 1 to 6, invented hot supergiants"})
    table["name"] = column([star["name"] for star in stars], None, "name of the star")
    infrared = {band: SURVEYS[band] for band in ("Gaia G", "2MASS J", "2MASS H", "2MASS Ks")}
    add_photometry(table, rng, stars, OPTICAL | infrared)
    add_measured(table, rng, stars, "parallax", [0.02] * len(stars))
    add_measured(table, rng, stars, "av", [0.1] * len(stars), 2)
    add_measured(table, rng, stars, "teff", [0.03 * s["temperature"] for s in stars], -1)
    add_measured(table, rng, stars, "mass", [0.12 * s["mass"] for s in stars], 1)
    return table, truth_table(stars, "What is true of the stars Cinder 1 to 6")


MESSY_HEADINGS = (
    *("Target", "RA", "Dec", "Vmag", "eVmag", "g_ps", "g_snr", "J_AB", "sigJ", "K (mJy)", "dK"),
    *("W3flux", "W3err", "Plx_mas", "unc_plx", "E(B-V)", "eEBV", "SpType", "remarks"),
)
#: Row (from 0) -> cells that make it messy or spoil it.
MESSY_CELLS = {
    1: {"Vmag": "99.99", "eVmag": "99.99"},
    2: {"W3flux": "<0.9", "W3err": ""},
    3: {"Plx_mas": "-999", "unc_plx": "-999"},
    4: {"eVmag": "-0.02", "remarks": '"error has the wrong sign, really"'},
    5: {"W3flux": "-0.11", "W3err": "0.24"},
    6: {"E(B-V)": "--", "eEBV": "--"},
    7: {"J_AB": "inf"},
    8: {"Vmag": "sat.", "eVmag": ""},
    9: {"unc_plx": "-999", "remarks": "parallax from an old plate"},
    10: {"Target": "Field 10", "remarks": "same name as the star above"},
    11: {h: "-999" for h in ("Vmag", "g_ps", "J_AB", "K (mJy)", "W3flux")},
}
MESSY_HEAD = "# Field stars near the Kestrel association; invented, and badly kept on purpose\n"
SHEET = """\
# Column sheet of messy.csv: what its headings mean. Use it with
#   starkiln inspect catalogs-demo/messy.csv --columns catalogs-demo/messy.toml

missing = [-999, 99.99, "--"]   # values that mean missing, in every column
floor = 0.01                    # no error smaller than 0.01 mag, or 1 per cent of a flux

[columns]
Target = "name"
Vmag = { means = "Johnson V", error = "eVmag" }
g_ps = { means = "Pan-STARRS g", signal_to_noise = "g_snr" }
J_AB = { means = "2MASS J", error = "sigJ", system = "AB" }
"K (mJy)" = { means = "2MASS Ks", error = "dK" }
W3flux = { means = "WISE W3", error = "W3err", unit = "mJy" }
Plx_mas = { means = "parallax", error = "unc_plx" }
"E(B-V)" = { means = "ebv", error = "eEBV" }
"""


def messy_row(rng, star):
    """Return the cells of one star under the foreign headings."""
    seen = {band: observe(rng, band, star, survey)[:2] for band, survey in MESSY.items()}
    cells = dict.fromkeys(MESSY_HEADINGS, "")
    cells |= {
        "Target": star["name"],
        "RA": f"{rng.uniform(80.0, 84.0):.5f}",
        "Dec": f"{rng.uniform(-22.0, -18.0):.5f}",
        "Plx_mas": f"{star['parallax'] + 0.05 * rng.normal():.3f}",
        "unc_plx": "0.050",
        "E(B-V)": f"{star['av'] / 3.1 + 0.02 * rng.normal():.3f}",
        "eEBV": "0.020",
        "SpType": "?",
        "Vmag": f"{seen['Johnson V'][0]:.3f}",
        "eVmag": f"{seen['Johnson V'][1]:.3f}",
        "g_ps": f"{seen['Pan-STARRS g'][0]:.3f}",
        "g_snr": f"{MAG_PER_LN / seen['Pan-STARRS g'][1]:.0f}",
        "J_AB": f"{in_ab('2MASS J', seen['2MASS J'][0]):.3f}",
        "sigJ": f"{seen['2MASS J'][1]:.3f}",
    }
    for band, value, error, noise in (
        ("2MASS Ks", "K (mJy)", "dK", 0.06),
        ("WISE W3", "W3flux", "W3err", 0.12),
    ):
        per_mjy = load_band(band).pivot_m ** 2 / constants.c.value / 1e-29
        flux = band_flux(band, star) * per_mjy * (1.0 + MISFIT * rng.normal())
        width = np.hypot(noise, 0.02 * flux)
        cells |= {value: f"{flux + width * rng.normal():.4g}", error: f"{width:.2g}"}
    return cells


def in_ab(band, magnitude):
    """Return a magnitude of the band's own system in AB."""
    curve = load_band(band)
    return magnitude - 2.5 * np.log10(curve.zero_flux_w_m3() / curve.zero_flux_w_m3("AB"))


def messy(rng):
    """Return the messy catalogue as text, and its truth."""
    stars = [
        truth_of(f"Field {i}", *star, round(rng.uniform(600.0, 900.0), 1))
        for i, star in enumerate(FIELD, 1)
    ]
    lines = [MESSY_HEAD, ",".join(MESSY_HEADINGS) + "\n"]
    for place, star in enumerate(stars):
        cells = messy_row(rng, star) | MESSY_CELLS.get(place, {})
        lines.append(",".join(cells.values()) + "\n")
    return "".join(lines), truth_table(stars, "What is true of the stars of messy.csv")


def single_star(rng):
    """Return a catalogue of one star, and its truth."""
    star = truth_of("Lone Kestrel", 5400, 1.3, 0.25, 120.0)
    table = Table(meta={"description": "One invented star"})
    table["name"] = column([star["name"]], None, "name of the star")
    add_photometry(table, rng, [star], SURVEYS)
    add_measured(table, rng, [star], "parallax", [0.03])
    add_measured(table, rng, [star], "av", [0.05], 2)
    return table, truth_table([star], "What is true of the star Lone Kestrel")


def main(arguments):
    """Write every file."""
    folder = Path(arguments[0] if arguments else Path(__file__).parent.parent / "catalogs-demo")
    folder.mkdir(exist_ok=True)
    seeds = np.random.SeedSequence(SEED).spawn(4)
    makers = {"association": association, "hot_stars": hot_stars, "single_star": single_star}
    for (name, maker), seed in zip(makers.items(), seeds, strict=False):
        table, truth = maker(np.random.default_rng(seed))
        write_table(table, folder / f"{name}.ecsv", "ecsv")
        write_table(truth, folder / f"{name}_truth.ecsv", "ecsv")
    text, truth = messy(np.random.default_rng(seeds[3]))
    atomic_write(folder / "messy.csv", lambda stream: stream.write(text), mode="w")
    atomic_write(folder / "messy.toml", lambda stream: stream.write(SHEET), mode="w")
    write_table(truth, folder / "messy_truth.ecsv", "ecsv")
    print(f"written to {folder}")


if __name__ == "__main__":
    main(sys.argv[1:])
