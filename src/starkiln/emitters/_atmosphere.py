"""The tabulated model atmosphere as an emitter."""

from __future__ import annotations

import hashlib
import json
from collections.abc import Container, Mapping
from dataclasses import dataclass
from functools import lru_cache
from types import MappingProxyType
from typing import Any

import numpy as np

from starkiln.emitters._node_grid import NodeGrid, hottest, lowest_logg
from starkiln.errors import InputError, StorageError
from starkiln.photons import planck_wavelength
from starkiln.store import data_path, read_data_table

__all__ = ["AtmosphereEmitter"]

_FILE = "atmosphere.npz"
_REQUIRED = ("description", "reference", "licence", "retrieved", "interpolation_error_mag")
_WHY = "below, molecules rule; above, winds and departures from LTE"
#: Nearer than this to the ends of the table, what the models leave out begins to tell.
_COOL_K = 4600.0
_CO_K = 5200.0
_HOT_K = 25000.0
_THIN = 0.3
#: Points beyond the models by no more than the rounding of single precision pass.
_ROUNDING = 1e-6


@dataclass(frozen=True)
class _Table:
    grid: NodeGrid
    ln_wavelength: np.ndarray
    #: Spline coefficients of ln[radiance/B(T_eff)], (n_node, n_wave).
    coefficients: np.ndarray
    meta: Mapping[str, Any]
    digest: str


@lru_cache(maxsize=1)
def _table() -> _Table:
    path = data_path("emitters", _FILE)
    with np.load(path, allow_pickle=False) as file:
        meta = json.loads(str(file["meta"]))
        missing = [key for key in _REQUIRED if key not in meta]
        if missing:
            raise StorageError(f"the data file {path} lacks {', '.join(missing)}")
        grid = NodeGrid(file["temperature_k"], file["share"], file["feh"])
        ln_ratio = file["low"] + file["step"] * file["ln_ratio"].astype(float)
        ln_wavelength = np.log(file["wavelength_m"])
    coefficients = grid.prefilter(ln_ratio)
    coefficients.flags.writeable = False
    digest = hashlib.sha256(path.read_bytes()).hexdigest()
    return _Table(grid, ln_wavelength, coefficients, MappingProxyType(meta), digest)


@lru_cache(maxsize=1)
def _box() -> Mapping[str, tuple[float, float]]:
    columns = dict(zip(("temperature", "logg", "feh"), _table().grid.nodes.T, strict=True))
    return MappingProxyType({n: (float(c.min()), float(c.max())) for n, c in columns.items()})


@dataclass(frozen=True)
class AtmosphereEmitter:
    """Model atmospheres of `starkiln.atmospheres`, tabulated and interpolated.

    Three parameters: effective temperature, log g (cgs) and [Fe/H], of which the
    last two may be given. The angular diameter that goes with it is that of the
    effective temperature: sigma T^4 theta^2/4 is the bolometric flux.

    Parameters
    ----------
    logg, feh : float, optional
        Held at this value, and no longer a parameter.

    Attributes
    ----------
    name, parameters, bounds
        See `Emitter`. With log g free the bounds are a box, within which the
        models end at `lowest_logg(temperature)`; with log g given the bounds of
        temperature end there too.

    Raises
    ------
    InputError
        A given value outside the models.
    """

    logg: float | None = None
    feh: float | None = None

    def __post_init__(self) -> None:
        box = _box()
        for name, value in self.given.items():
            low, high = box[name]
            if not low <= value <= high:
                raise InputError(
                    f"{name} = {value:g} is outside the model atmospheres: give {low:g} to {high:g}"
                )

    @property
    def name(self) -> str:
        """Name on the command line."""
        return "atmosphere"

    @property
    def parameters(self) -> tuple[str, ...]:
        """Names of the free parameters."""
        return tuple(name for name in _box() if name not in self.given)

    @property
    def given(self) -> Mapping[str, float]:
        """Those of log g and [Fe/H] that are held, by name."""
        held = {"logg": self.logg, "feh": self.feh}
        return MappingProxyType({n: value for n, value in held.items() if value is not None})

    @property
    def limits(self) -> str:
        """Where the models end, and why, in words."""
        low, high = _box()["temperature"]
        return f"the model atmospheres reach from {low:g} to {high:g} K: {_WHY}"

    @property
    def bounds(self) -> Mapping[str, tuple[float, float]]:
        """Range of each free parameter: temperature in K, log g, [Fe/H]."""
        box = dict(_box())
        if self.logg is not None:
            low, high = box["temperature"]
            box["temperature"] = (low, min(high, hottest(self.logg)))
        return MappingProxyType({name: box[name] for name in self.parameters})

    @property
    def provenance(self) -> Mapping[str, Any]:
        """How the table was made, and its interpolation error in magnitudes band by band."""
        return _table().meta

    @property
    def table_digest(self) -> str:
        """SHA-256 of the table's file, for what is kept of it elsewhere."""
        return _table().digest

    @property
    def band_offsets(self) -> Mapping[str, tuple[float, float]]:
        """Observed minus model magnitude of some bands, and its error; not in `radiance`.

        Medians over the calibration half of the stars with measured diameters, 4,300
        to 7,000 K and bright: part of them is what such stars do to 2MASS and W3.
        """
        table = read_data_table("emitters", "atmosphere_band_offsets.ecsv")
        return MappingProxyType(
            {str(r["band"]): (float(r["offset"]), float(r["error"])) for r in table}
        )

    @property
    def grid(self) -> NodeGrid:
        """The table's nodes and splines, for band fluxes tabulated on them."""
        return _table().grid

    def lowest_logg(self, temperature_k: np.ndarray) -> np.ndarray:
        """Return the lowest log g of the models at each temperature."""
        return lowest_logg(temperature_k)

    def contains(self, temperature_k: np.ndarray, logg: np.ndarray, feh: np.ndarray) -> np.ndarray:
        """Return where the models reach, booleans of the inputs' common shape."""
        inside = np.asarray(logg) >= lowest_logg(temperature_k)
        for (low, high), value in zip(_box().values(), (temperature_k, logg, feh), strict=True):
            inside = inside & (np.asarray(value) >= low) & (np.asarray(value) <= high)
        return inside

    def complete(self, *parameters: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Return temperature in K, log g and [Fe/H] at points of the free parameters.

        Parameters
        ----------
        *parameters : numpy.ndarray, shape (n,)
            The free ones, in the order of `parameters`.

        Returns
        -------
        temperature, logg, feh : numpy.ndarray, shape (n,)

        Raises
        ------
        InputError
            A point outside the models by more than rounding.
        """
        free = dict(zip(self.parameters, parameters, strict=True))
        temperature = np.asarray(free["temperature"], dtype=float)
        known = {**self.given, **free}
        logg, feh = (
            np.broadcast_to(np.asarray(known[n], dtype=float), temperature.shape)
            for n in ("logg", "feh")
        )
        _check(temperature, logg, feh)
        return temperature, logg, feh

    def radiance(self, wavelength_m: np.ndarray, *parameters: np.ndarray) -> np.ndarray:
        """Return the radiance averaged over the disc, surface flux over pi, in W m-3 sr-1.

        Parameters
        ----------
        wavelength_m : numpy.ndarray, shape (n_wavelength,)
            Metres; beyond 0.018 to 200 um the ratio to a blackbody stays.
        *parameters : numpy.ndarray, shape (n,)
            The free ones of temperature in K, log g and [Fe/H], in this order.

        Returns
        -------
        numpy.ndarray, shape (n, n_wavelength)

        Raises
        ------
        InputError
            A point outside the models.
        """
        temperature, logg, feh = self.complete(*parameters)
        table = _table()
        x = np.log(np.asarray(wavelength_m, dtype=float))
        position = np.clip(np.searchsorted(table.ln_wavelength, x), 1, table.ln_wavelength.size - 1)
        first, last = position.min() - 1, position.max() + 1
        index, weight = table.grid.weights(temperature, logg, feh)
        near = np.zeros((temperature.size, last - first))
        for term in range(index.shape[1]):
            near += weight[:, term, None] * table.coefficients[index[:, term], first:last]
        low, high = table.ln_wavelength[position - 1], table.ln_wavelength[position]
        share = np.clip((x - low) / (high - low), 0.0, 1.0)
        position -= first
        ratio = (1.0 - share) * near[:, position - 1] + share * near[:, position]
        return np.exp(ratio) * planck_wavelength(wavelength_m, temperature[:, None])

    def note(
        self, temperature: float, logg: float, feh: float, bands: Container[str] = ("WISE W2",)
    ) -> str:
        """Return what to be wary of at a point, for a result's message; empty if nothing.

        Parameters
        ----------
        temperature, logg, feh : float
            The point, such as a posterior's medians.
        bands : container of str
            Names of the bands in use.
        """
        notes = []
        if temperature < _COOL_K:
            notes.append(f"below {_COOL_K:g} K bands of molecules, left out here, begin to tell")
        if temperature < _CO_K and "WISE W2" in bands:
            notes.append("WISE W2 holds bands of CO, left out here: by 0.1 to 0.3 mag in K stars")
        if temperature > _HOT_K:
            notes.append(f"above {_HOT_K:g} K winds and departures from LTE begin to tell")
        if logg < float(lowest_logg(np.asarray(temperature))) + _THIN:
            notes.append("log g is near the lowest of the models: extended, windy atmospheres")
        low, high = _box()["feh"]
        if not low + 0.1 < feh < high - 0.1:
            notes.append("[Fe/H] is at the end of the models")
        return "; ".join(notes)


def _check(temperature: np.ndarray, logg: np.ndarray, feh: np.ndarray) -> None:
    values = {"temperature": temperature, "logg": logg, "feh": feh}
    units = {"temperature": " K", "logg": "", "feh": ""}
    for name, (low, high) in _box().items():
        slack = _ROUNDING * (low if name == "temperature" else 1.0)
        bad = ~((values[name] >= low - slack) & (values[name] <= high + slack))
        if np.any(bad):
            why = f" ({_WHY})" if name == "temperature" else ""
            raise InputError(
                f"{name} = {values[name][bad].flat[0]:.6g}{units[name]} is outside the model "
                f"atmospheres{why}: give {low:g} to {high:g}{units[name]}"
            )
    lowest = lowest_logg(temperature)
    thin = logg < lowest - _ROUNDING
    if np.any(thin):
        raise InputError(
            f"logg = {logg[thin].flat[0]:.4g} at {temperature[thin].flat[0]:.6g} K is below "
            f"the model atmospheres, where light nearly lifts the gas: give at least "
            f"{lowest[thin].flat[0]:.2f}"
        )
