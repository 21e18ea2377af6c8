"""A user's own band, read from a file and checked."""

from __future__ import annotations

import warnings
from collections.abc import Mapping
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np

from starkiln.errors import BandError
from starkiln.passbands._band import Band, zero_flux_w_m3
from starkiln.passbands._kernels import curve_nodes

__all__ = ["read_band"]

#: Pivot wavelengths that the dust laws and band flux tables reach, metres.
_PIVOT_RANGE_M = (0.0912e-6, 32e-6)

#: Error of a zero point for which the file states none, mag: a choice.
_DEFAULT_ERROR_MAG = 0.02


def read_band(path: str | Path) -> Band:
    """Read a band of the user's own.

    Parameters
    ----------
    path : str or pathlib.Path
        An ECSV, CSV or VOTable file with the columns `wavelength` and `response`
        and these keywords (ECSV metadata, lines `# key: value` at the top of a CSV
        file, or PARAMs of a VOTable):

        - `response_kind`: `photon` or `energy`, what the response weights;
        - `magnitude_system`: `Vega` or `AB`;
        - `zero_point`, `zero_point_unit`: flux of Vega magnitude 0, in Jy or
          W m-2 um-1, or in mag as AB minus Vega; without it Vega's spectrum
          through the band is magnitude 0. An AB band needs none;
        - `wavelength_unit`, where the column has no unit;
        - `system` (the file's name), `zero_point_error` (mag, 0.02 unless given),
          `offset_error` (mag, 0), `saturation`, `saturation_error` (mag), `source`.

    Returns
    -------
    Band
        Its name is the path, so that the name leads back to the file.

    Raises
    ------
    BandError
        The file cannot be read or a check fails: wavelengths positive, finite and
        strictly monotonic, responses finite and not negative, not all zero, units
        known, pivot wavelength within 0.0912 to 32 um.
    """
    file = _BandFile(Path(path))
    kind: Any = file.choice("response_kind", ("photon", "energy"))
    native = file.choice("magnitude_system", ("Vega", "AB"))
    system = file.text("system", file.path.stem)
    bare = Band(str(path), system, kind, *curve_nodes(*file.samples()))
    if not _PIVOT_RANGE_M[0] <= bare.pivot_m <= _PIVOT_RANGE_M[1]:
        raise file.error(
            f"the pivot wavelength is {bare.pivot_m * 1e6:.4g} um, outside 0.0912 to 32 um: is "
            "the unit of the wavelengths right?"
        )
    zero = file.number("zero_point")
    source = file.text("source", f"file {file.path.name}")
    return replace(
        bare,
        native_system=native,
        published_vega_zero_w_m3=None
        if zero is None
        else zero_flux_w_m3(zero, file.text("zero_point_unit", ""), bare.pivot_m),
        zero_point_error_mag=file.number("zero_point_error") or _DEFAULT_ERROR_MAG,
        offset_error_mag=file.number("offset_error") or 0.0,
        saturation_mag=file.number("saturation"),
        saturation_error_mag=file.number("saturation_error"),
        curve_source=source,
        zero_point_source=source,
        offset_source=source,
        saturation_source=source,
    )


class _BandFile:
    """A file with a response curve: its two columns and its keywords."""

    def __init__(self, path: Path) -> None:
        self.path = path
        if not path.is_file():
            raise self.error("no such file")
        readers = {".ecsv": _read_ecsv, ".csv": _read_csv}
        try:
            with warnings.catch_warnings():
                warnings.simplefilter("ignore")
                self.table, keywords = readers.get(path.suffix.lower(), _read_votable)(path)
        except Exception as error:  # astropy's readers raise errors of many kinds
            first = (str(error).strip().splitlines() or ["no reason given"])[0]
            raise self.error(f"cannot be read: {first}") from error
        self.keywords = {str(key).lower(): value for key, value in keywords.items()}

    def error(self, text: str) -> BandError:
        return BandError(f"band file {self.path}: {text}")

    def text(self, key: str, default: str) -> str:
        return str(self.keywords.get(key, default)).strip()

    def choice(self, key: str, allowed: tuple[str, ...]) -> str:
        given = self.text(key, "")
        for value in allowed:
            if given.lower() == value.lower():
                return value
        what = f"'{given}' is not" if given else "is missing: give"
        raise self.error(f"the keyword {key} {what} {' or '.join(allowed)}")

    def number(self, key: str) -> float | None:
        if key not in self.keywords:
            return None
        try:
            value = float(self.keywords[key])
        except (TypeError, ValueError):
            value = np.nan
        if not np.isfinite(value):
            raise self.error(f"the keyword {key} = {self.keywords[key]} is not a number")
        return value

    def samples(self) -> tuple[np.ndarray, np.ndarray]:
        """Wavelengths in metres, increasing, and responses."""
        wavelength = self._column("wavelength") * self._unit_m()
        response = self._column("response")
        if wavelength.size < 3:
            raise self.error(f"{wavelength.size} samples; a curve needs at least 3")
        self._refuse(wavelength <= 0.0, "wavelength", "is not positive")
        steps = np.diff(wavelength) * np.sign(wavelength[-1] - wavelength[0] or 1.0)
        self._refuse(np.append(False, steps == 0.0), "wavelength", "stands twice")
        self._refuse(np.append(False, steps < 0.0), "wavelength", "is out of order")
        self._refuse(response < 0.0, "response", "is negative")
        if not np.any(response > 0.0):
            raise self.error("the response is zero at every wavelength")
        order = np.argsort(wavelength)
        return wavelength[order], response[order]

    def _column(self, name: str) -> np.ndarray:
        found = [c for c in self.table.colnames if c.strip().lower() == name]
        if not found:
            given = ", ".join(self.table.colnames)
            raise self.error(f"has no column '{name}' (its columns: {given})")
        try:
            column: Any = np.ma.asarray(self.table[found[0]], dtype=float)
            values: np.ndarray = np.ma.filled(column, np.nan)
        except (TypeError, ValueError) as error:
            raise self.error(f"the column '{name}' holds something that is no number") from error
        self._refuse(~np.isfinite(values), name, "is not a finite number")
        return values

    def _unit_m(self) -> float:
        from astropy import units as u

        column = next(c for c in self.table.colnames if c.strip().lower() == "wavelength")
        unit = self.table[column].unit or self.keywords.get("wavelength_unit")
        if not unit:
            raise self.error(
                "the wavelengths have no unit: give the column one, or the keyword wavelength_unit"
            )
        try:
            return float(u.Unit("Angstrom" if str(unit) == "A" else unit).to(u.m))
        except (ValueError, TypeError, u.UnitConversionError) as error:
            raise self.error(
                f"'{unit}' is no unit of wavelength: use um, nm or Angstrom"
            ) from error

    def _refuse(self, bad: np.ndarray, name: str, what: str) -> None:
        if np.any(bad):
            row = int(np.flatnonzero(bad)[0]) + 1
            column = next(c for c in self.table.colnames if c.strip().lower() == name)
            value = self.table[column][row - 1]
            raise self.error(f"row {row}, column {name}: {value} {what}")


def _read_ecsv(path: Path) -> tuple[Any, Mapping[str, Any]]:
    from astropy.table import Table

    table = Table.read(path, format="ascii.ecsv")
    return table, table.meta


def _read_csv(path: Path) -> tuple[Any, Mapping[str, Any]]:
    from astropy.table import Table

    keywords = {}
    for line in path.read_text(encoding="utf-8").splitlines():
        if line.startswith("#") and ":" in line:
            key, value = line.lstrip("# ").split(":", 1)
            keywords[key.strip()] = value.strip()
    return Table.read(path, format="ascii.csv", comment="#"), keywords


def _read_votable(path: Path) -> tuple[Any, Mapping[str, Any]]:
    from astropy.io import votable

    first = votable.parse(path).get_first_table()
    return first.to_table(), {param.name: param.value for param in first.params}
