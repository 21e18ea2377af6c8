"""One star: its measurements and what else is known of it."""

from __future__ import annotations

import hashlib
import html
import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from typing import Any

from starkiln.errors import InputError
from starkiln.observations._from_python import known_values, read_photometry
from starkiln.observations._measure import Measurement
from starkiln.observations._quantities import QUANTITIES, RV_MEAN, av_from_ebv
from starkiln.passbands import band_names

__all__ = ["BadRow", "Star"]


@dataclass(frozen=True)
class BadRow:
    """A row of a catalogue that cannot be used.

    Attributes
    ----------
    name : str
        The star's name, as far as it could be read.
    row : int
        Its place in the catalogue, from 1.
    message : str
        One line: file, row, column, value, and what to do.
    """

    name: str
    row: int
    message: str


@dataclass(frozen=True, init=False)
class Star:
    """A star with its photometry, as understood.

    Parameters
    ----------
    name : str
        Anything; the star's random numbers come from it and from the values.
    photometry : mapping
        Band name -> `(value, error)`, or `(">", value)` and `("<", value)` for a
        limit, with the sign that stands on the printed number (a star fainter
        than a magnitude has `>`). Quantities in magnitudes (`u.mag` in the band's
        own system, `u.ABmag`) or flux densities per wavelength or frequency; bare
        numbers are magnitudes in the band's own system.
    limit_sigma : float
        At how many sigma limits are.
    saturated : {"widen", "drop", "keep"}
        What to do with a band brighter than its detector's limit: widen its error
        by what the band's table gives (and drop it where the table gives nothing),
        drop it, or keep it as it is.
    **known
        `parallax` (mas), `distance` (pc), `av` (mag, at 0.55 um), `ebv` (mag),
        `rv`, `logg` (dex of cm s-2), `feh` (dex), `teff` (K), `mass`, `radius`,
        `luminosity` (solar): each `(value, error)` or a value alone, Quantities or
        bare numbers in the unit given here. Parallax and distance need an error,
        and only one of the two may be given. E(B-V) turns into `av` with `rv`, or
        with 3.1.

    Raises
    ------
    InputError
        A band or quantity is unknown, a value or an error cannot be, or no band
        is left.

    Examples
    --------
    >>> from astropy import units as u
    >>> Star("Adra 7", {"Gaia G": (10.23, 0.01), "WISE W3": (0.21 * u.Jy, 0.01 * u.Jy)},
    ...      parallax=(2.31, 0.03) * u.mas, av=(0.3, 0.05))
    """

    name: str
    measurements: tuple[Measurement, ...]
    parallax_mas: float | None = None
    e_parallax_mas: float | None = None
    distance_pc: float | None = None
    e_distance_pc: float | None = None
    av: float | None = None
    e_av: float | None = None
    ebv: float | None = None
    e_ebv: float | None = None
    rv: float | None = None
    logg: float | None = None
    e_logg: float | None = None
    feh: float | None = None
    e_feh: float | None = None
    teff_k: float | None = None
    e_teff_k: float | None = None
    mass_msun: float | None = None
    e_mass_msun: float | None = None
    radius_rsun: float | None = None
    e_radius_rsun: float | None = None
    luminosity_lsun: float | None = None
    e_luminosity_lsun: float | None = None
    left_out: tuple[tuple[str, str], ...] = ()
    remarks: tuple[str, ...] = ()
    named: bool = True
    row: int | None = field(default=None, compare=False)

    def __init__(
        self,
        name: str,
        photometry: Mapping[str, Any],
        *,
        limit_sigma: float = 3.0,
        saturated: str = "widen",
        **known: Any,
    ) -> None:
        label = f"star {name!r}"
        measurements, left_out = read_photometry(
            photometry, label, limit_sigma=limit_sigma, saturated=saturated
        )
        values = known_values(known, label)
        remark = av_from_ebv(values, RV_MEAN)
        remarks = (remark,) if remark else ()
        self._fill(str(name), measurements, left_out=left_out, remarks=remarks, **values)
        if all(m.limit for m in self.measurements):
            why = "; ".join(self.notes) or "no measured flux was given"
            raise InputError(f"{label}: no band is left: {why}")

    @classmethod
    def from_values(cls, name: str, measurements: Iterable[Measurement], **values: Any) -> Star:
        """Make a star of values that are understood already.

        Parameters
        ----------
        name : str
        measurements : iterable of Measurement
        **values
            Any other attribute of a star, by its name.

        Returns
        -------
        Star
        """
        star = cls.__new__(cls)
        star._fill(name, measurements, **values)
        return star

    def _fill(self, name: str, measurements: Iterable[Measurement], **values: Any) -> None:
        order = {band: place for place, band in enumerate(band_names())}
        inside = sorted(measurements, key=lambda m: (order.get(m.band, len(order)), m.band))
        unknown = set(values) - set(self.__dataclass_fields__)
        if unknown:
            raise TypeError(f"a star has no {', '.join(sorted(unknown))}")
        object.__setattr__(self, "name", name)
        object.__setattr__(self, "measurements", tuple(inside))
        for key, value in values.items():
            object.__setattr__(self, key, value)

    @property
    def bands(self) -> tuple[str, ...]:
        """Names of the bands, limits included, in the order of the band table."""
        return tuple(m.band for m in self.measurements)

    @property
    def saturated_bands(self) -> tuple[str, ...]:
        """Names of the bands in which the star is too bright, left out or not."""
        kept = [m.band for m in self.measurements if m.saturated]
        return (*kept, *(band for band, why in self.left_out if why.startswith("saturated")))

    @property
    def notes(self) -> tuple[str, ...]:
        """What was done to the star's data, one text for each act."""
        done = [f"{m.band}: {m.note}" for m in self.measurements if m.note]
        return (*done, *(f"{band}: {why}" for band, why in self.left_out), *self.remarks)

    @property
    def limits(self) -> tuple[str, ...]:
        """Names of the bands that hold a limit only."""
        return tuple(m.band for m in self.measurements if m.limit)

    def fingerprint(self) -> bytes:
        """Return 32 bytes that depend on the name and the understood values alone.

        Neither the place in the catalogue, nor the other stars, nor the order of
        the columns or the format of the file enters.
        """
        parts = ["star", self.name if self.named else ""]
        for m in sorted(self.measurements, key=lambda m: m.band):
            numbers = (m.flux_w_m3, m.error_w_m3, m.fractional_error, m.limit_sigma)
            parts += [m.band, m.limit, *(_hex(number) for number in numbers)]
        for known in QUANTITIES:
            for attribute in (known.field, f"e_{known.field}"):
                value = getattr(self, attribute, None)
                if value is not None:
                    parts += [attribute, _hex(value)]
        return hashlib.sha256("\x1f".join(parts).encode()).digest()

    def _repr_html_(self) -> str:
        rows = "".join(
            f"<tr><td>{html.escape(m.band)}</td><td>{_flux_text(m)}</td>"
            f"<td>{100 * m.fractional_error:.2g} %</td>"
            f"<td>{html.escape(m.note or (f'{m.limit} limit' if m.limit else ''))}</td></tr>"
            for m in self.measurements
        )
        head = "<tr><th>band</th><th>flux, W m<sup>-3</sup></th><th>error</th><th></th></tr>"
        facts = "; ".join(self._facts())
        return (
            f"<b>{html.escape(self.name)}</b><p>{html.escape(facts)}</p><table>{head}{rows}</table>"
        )

    def _facts(self) -> list[str]:
        facts = []
        for known in QUANTITIES:
            value = getattr(self, known.field)
            if value is None:
                continue
            error = getattr(self, f"e_{known.field}", None)
            width = "" if error is None else f" \u00b1 {error:.4g}"
            facts.append(f"{known.name} {value:.6g}{width} {known.unit}".strip())
        return facts


def _hex(value: float) -> str:
    return (float(value) + 0.0).hex()  # -0.0 becomes 0.0


def _flux_text(m: Measurement) -> str:
    sign = {"upper": "&lt; ", "lower": "&gt; "}.get(m.limit, "")
    return f"{sign}{m.flux_w_m3:.4g}" if math.isfinite(m.flux_w_m3) else ""
