"""The data that the page carries: rounded, packed, and safe inside HTML."""

from __future__ import annotations

import base64
import json
import math
from collections.abc import Mapping
from typing import Any

import numpy as np

from starkiln.constants import T_SUN
from starkiln.report._flags import FLAG_MEANINGS
from starkiln.report._quantities import HTML_UNITS, PRINTED
from starkiln.report._rounding import round_asymmetric
from starkiln.report._text import plain_line
from starkiln.report._tracks import main_sequence_tracks, zero_age_line
from starkiln.report._view import FitView, numbers, plain_text, run_view
from starkiln.runner import Run

#: Posterior draws of a star that the page shows, wavelengths of its spectrum.
_DRAWS, _WAVELENGTHS = 96, 48
#: Decades of W m-2 um-1 that a packed spectrum spans; beyond, it is cut.
_SPECTRUM_RANGE = (-30.0, 0.0)
#: Quantities that the table of stars shows; a single star shows all.
_IN_TABLE = ("temperature", "angular_diameter", "av", "distance", "radius", "luminosity")
#: Symbols of the quantities in plain text.
_SYMBOLS = {
    "temperature": "T", "temperature_2": "T\u2082", "area_ratio": "A\u2082/A\u2081",
    "angular_diameter": "\u03b8", "av": "A_V", "rv": "R_V", "logg": "log g", "feh": "[Fe/H]",
    "misfit": "f", "distance": "d", "bolometric_flux": "F_bol", "radius": "R", "luminosity": "L",
}  # fmt: skip


def payload(run: Run, first: int) -> str:
    """Return the page's data as JSON that no HTML parser can take for markup.

    Parameters
    ----------
    run : starkiln.runner.Run
        What `starkiln.runner.open_run` returned.
    first : int
        Star that is shown at first, counted from 0.
    """
    results = run.results
    statuses = [plain_text(cell) for cell in results["status"]]
    flags = [plain_text(cell).split() for cell in results["flags"]]
    flag_names = sorted({flag for found in flags for flag in found})
    kinds = list(dict.fromkeys(statuses))
    keys = [key for key in PRINTED if key in results.colnames]
    columns = {key: _column(results, key) for key in keys}
    keys = [key for key in keys if any(text for text in columns[key][1])]
    data: dict[str, Any] = {
        "first": first,
        "names": [plain_line(plain_text(cell), 120) for cell in results["name"]],
        "statuses": kinds,
        "status": [kinds.index(status) for status in statuses],
        "messages": [plain_line(plain_text(cell), 2000) for cell in results["message"]],
        "flagNames": flag_names,
        "flagMeanings": [FLAG_MEANINGS.get(flag, "") for flag in flag_names],
        "flags": [[flag_names.index(flag) for flag in found] for found in flags],
        "quantities": [_quantity(key) for key in keys],
        "values": {key: columns[key][0] for key in keys},
        "texts": {key: columns[key][1] for key in keys},
        "sunTemperature": T_SUN.value,
        "zeroAge": _points(zero_age_line(150)),
        "tracks": [[mass, _points(line)] for mass, line in main_sequence_tracks().items()],
        "diagram": "luminosity" if "luminosity" in keys else "bolometric_flux",
    }
    data |= _stars(run)
    text = json.dumps(data, ensure_ascii=False, allow_nan=False, separators=(",", ":"))
    return text.replace("&", "\\u0026").replace("<", "\\u003c").replace(">", "\\u003e")


def _quantity(key: str) -> dict[str, Any]:
    return {
        "key": key,
        "symbol": _SYMBOLS[key],
        "unit": HTML_UNITS.get(key, ""),
        "text": PRINTED[key].text,
        "shown": key in _IN_TABLE,
    }


def _column(results: Any, key: str) -> tuple[list[float | None], list[list[Any] | None]]:
    """Return medians, and medians with errors as rounded texts; None where absent."""
    medians, lows, highs = (numbers(results[f"{key}{end}"]) for end in ("", "_lo", "_hi"))
    texts: list[list[Any] | None] = []
    for median, low, high in zip(medians, lows, highs, strict=True):
        rounded = round_asymmetric(float(median), float(low), float(high))
        if rounded is None:
            texts.append(None)
        elif low == high:
            texts.append([f"{median:.4g}", "0", "0", 0])
        else:
            texts.append([rounded.value, rounded.plus, rounded.minus, rounded.exponent])
    return [_short(value, 6) for value in medians], texts


def _points(line: tuple[np.ndarray, np.ndarray]) -> list[list[float]]:
    return [[float(f"{t:.5g}"), float(f"{lum:.4g}")] for t, lum in zip(*line, strict=True)]


def _stars(run: Run) -> dict[str, Any]:
    """Return photometry, spectra and draws of every star."""
    bands: dict[str, dict[str, Any]] = {}
    notes: dict[str, int] = {}
    wavelength_um = _grid(run)
    photometry, spectra, draws = [], [], []
    for row in range(1, len(run.results) + 1):
        view = run_view(run, row)
        sample = view.some_draws(_DRAWS) if view.draws else {}
        photometry.append(_photometry(view, sample, bands, notes))
        spectra.append(_spectrum(view, sample, wavelength_um))
        draws.append(_packed_draws(sample))
    return {
        "bands": list(bands.values()),
        "notes": list(notes),
        "photometry": photometry,
        "wavelengths": [float(f"{value:.5g}") for value in wavelength_um],
        "spectrumRange": _SPECTRUM_RANGE,
        "spectra": spectra,
        "draws": draws,
    }


def _grid(run: Run) -> np.ndarray:
    from starkiln.passbands import load_band

    bands = [load_band(str(band)) for band in sorted(set(run.photometry["band"]))]
    if not bands:
        return np.array([])
    low = min(band.pivot_m - band.width_m / 2 for band in bands) * 1e6
    high = max(band.pivot_m + band.width_m / 2 for band in bands) * 1e6
    return np.geomspace(low / 1.1, high * 1.2, _WAVELENGTHS)


def _photometry(view: FitView, sample: Mapping[str, np.ndarray], bands: dict[str, Any],
                notes: dict[str, int]) -> list[list[Any]]:  # fmt: skip
    model = np.full(len(view.photometry), np.nan)
    if sample and view.model is not None:
        model = np.median(view.model(sample), axis=0)
    found = []
    for item, modelled in zip(view.photometry, model, strict=True):
        bands.setdefault(
            item.band,
            {"name": item.band, "wavelength": _short(item.wavelength_um, 5),
             "width": _short(item.width_um, 4)},
        )  # fmt: skip
        note = notes.setdefault(item.note, len(notes) + 1) if item.note else 0
        found.append(
            [list(bands).index(item.band), _short(item.flux, 4), _short(item.e_flux, 3),
             _short(modelled, 4), ("", "upper", "lower").index(item.limit), int(item.used), note]
        )  # fmt: skip
    return found


def _spectrum(view: FitView, sample: Mapping[str, np.ndarray], wavelength_um: np.ndarray) -> str:
    if not sample or view.spectrum is None:
        return ""
    flux = view.spectrum(wavelength_um * 1e-6, sample)
    low, high = _SPECTRUM_RANGE
    logs = np.log10(np.maximum(np.percentile(flux, [16.0, 50.0, 84.0], axis=0), 10.0**low))
    steps = np.rint((logs - low) / (high - low) * 65535.0)
    return _packed(np.clip(steps, 0, 65535).astype("<u2"))


def _packed_draws(sample: Mapping[str, np.ndarray]) -> dict[str, Any] | None:
    """Return draws in 256 steps between their ends, which the eye cannot tell apart."""
    keys = [key for key in PRINTED if key in sample and np.ptp(sample[key]) > 0.0]
    if not keys:
        return None
    ends = [(float(np.min(sample[key])), float(np.max(sample[key]))) for key in keys]
    steps = [
        np.rint((sample[key] - low) / (high - low) * 255.0)
        for key, (low, high) in zip(keys, ends, strict=True)
    ]
    return {
        "keys": keys,
        "range": [[float(f"{end:.5g}") for end in pair] for pair in ends],
        "data": _packed(np.concatenate(steps).astype("u1")),
    }


def _packed(values: np.ndarray) -> str:
    return base64.b64encode(values.tobytes()).decode("ascii")


def _short(value: float, digits: int) -> float | None:
    return float(f"{value:.{digits}g}") if math.isfinite(value) else None
