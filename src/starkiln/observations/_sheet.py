"""Column sheets: a TOML file that says what foreign headings mean."""

from __future__ import annotations

import tomllib
from dataclasses import dataclass, field, fields, replace
from hashlib import sha256
from pathlib import Path
from typing import Any

from starkiln.errors import CatalogueError, InputError
from starkiln.observations._from_python import nearest
from starkiln.observations._headings import Meaning, meaning_of
from starkiln.observations._measure import SATURATED
from starkiln.observations._quantities import BY_NAME
from starkiln.observations._units_of_columns import parse_unit
from starkiln.passbands import band_names, match_band

__all__ = ["Binding", "Sheet", "read_sheet"]

_BARE = ("leave out", "limit")
_SYSTEMS = {"vega": "Vega", "ab": "AB", "st": "ST"}


@dataclass(frozen=True)
class Binding:
    """What the sheet says of one heading: the keys of its table under `[columns]`.

    Attributes
    ----------
    means : Meaning or None
        None where the heading speaks for itself.
    unit, system : str
        Empty for the column's own.
    error : str, float or None
        Heading of the error, or one error for all rows.
    signal_to_noise : str
        Heading of value over error.
    limit : str
        Heading of the limit flag.
    floor, limit_sigma : float or None
        None for the sheet's.
    saturated : str
        Empty for the sheet's.
    without_error : str
        Empty for the sheet's.
    missing : tuple
        Values that mean missing here, beside the sheet's.
    """

    means: Meaning | None = None
    unit: str = ""
    system: str = ""
    error: str | float | None = None
    signal_to_noise: str = ""
    limit: str = ""
    floor: float | None = None
    limit_sigma: float | None = None
    saturated: str = ""
    without_error: str = ""
    missing: tuple[Any, ...] = ()

    def refuse(self, *, beyond: tuple[str, ...], what: str) -> None:
        """Refuse keys that say nothing of such a column.

        Raises
        ------
        InputError
            A key stands that is not one of `beyond`.
        """
        for item in fields(self):
            if getattr(self, item.name) != item.default and item.name not in beyond:
                raise InputError(
                    f"the column sheet's key '{item.name}' says nothing of {what}; take it away"
                )


@dataclass(frozen=True)
class Sheet:
    """A column sheet; `Sheet()` says nothing.

    Attributes
    ----------
    path : str
        Where it stands, for messages.
    columns : dict
        Heading -> `Binding`.
    leave_out : tuple of str
        Headings or bands that are not to be used.
    missing : tuple
        Numbers or texts that mean missing in every column.
    floor : float
        The smallest error of every band, and the error of a band that has no
        column of errors: mag, or a fraction of a flux.
    limit_sigma : float
        At how many sigma limits are.
    distance_from : str
        `parallax` or `distance`: which counts in a row that has both.
    saturated : str
        One of `widen`, `drop`, `keep`.
    without_error : str
        A magnitude or flux whose cell of the error is empty: `leave out` (by
        default), or `limit`, an upper limit of flux.
    """

    path: str = ""
    columns: dict[str, Binding] = field(default_factory=dict)
    leave_out: tuple[str, ...] = ()
    missing: tuple[Any, ...] = ()
    floor: float = 0.0
    limit_sigma: float = 3.0
    distance_from: str = ""
    saturated: str = "widen"
    without_error: str = "leave out"

    def checksum(self) -> str:
        """SHA-256 of what it says, wherever it stands."""
        return sha256(repr(replace(self, path="")).encode()).hexdigest()


_TOP = [f.name for f in fields(Sheet) if f.name != "path"]
_KEYS = [f.name for f in fields(Binding)]


def read_sheet(path: str | Path | None) -> Sheet:
    """Read a column sheet; None gives one that says nothing.

    Raises
    ------
    CatalogueError
        The file cannot be read, or a key or value in it is unknown; the nearest
        known one is offered.
    """
    if path is None:
        return Sheet()
    path = Path(path)
    try:
        content = tomllib.loads(path.read_bytes().decode("utf-8-sig"))
    except FileNotFoundError as error:
        raise CatalogueError(f"{path}: there is no such column sheet") from error
    except (OSError, UnicodeDecodeError) as error:
        raise CatalogueError(f"{path}: the column sheet cannot be read: {error}") from error
    except tomllib.TOMLDecodeError as error:
        raise CatalogueError(
            f"{path}: the column sheet is not TOML: {error}; headings with spaces or dots "
            'stand in quotes: "Gaia G" = ...'
        ) from error
    try:
        return _sheet(content, str(path))
    except InputError as error:
        raise CatalogueError(f"{path}: {error}") from error


def _sheet(content: dict[str, Any], path: str) -> Sheet:
    _known_keys(content, _TOP, "the sheet")
    columns = content.get("columns", {})
    if not isinstance(columns, dict):
        raise InputError("[columns] must be a table: heading = meaning")
    return Sheet(
        path=path,
        columns={heading: _binding(heading, entry) for heading, entry in columns.items()},
        leave_out=tuple(_texts(content.get("leave_out", []), "leave_out")),
        missing=_missing(content.get("missing", []), "missing"),
        floor=_number(content.get("floor", 0.0), "floor", zero=True),
        limit_sigma=_number(content.get("limit_sigma", 3.0), "limit_sigma"),
        distance_from=_choice(content, "distance_from", ("parallax", "distance"), ""),
        saturated=_choice(content, "saturated", SATURATED, "widen"),
        without_error=_choice(content, "without_error", _BARE, "leave out"),
    )


def _binding(heading: str, entry: Any) -> Binding:
    where = f"[columns] '{heading}'"
    if isinstance(entry, str):
        entry = {"means": entry}
    if not isinstance(entry, dict):
        own = "; the sheet's own keys stand above [columns]" if heading in _TOP else ""
        raise InputError(f"{where} = {entry!r}: write the name of what it is, or a table{own}")
    _known_keys(entry, _KEYS, where)
    system = str(entry.get("system", ""))
    if system and system.casefold() not in _SYSTEMS:
        raise InputError(f"{where}: system = '{system}' is none of Vega, AB, ST")
    unit = _text(entry, "unit", where)
    if unit:
        _explained(where, parse_unit, unit)
    floor, sigma = entry.get("floor"), entry.get("limit_sigma")
    error = entry.get("error")
    if error is not None and not isinstance(error, str):
        error = _number(error, f"{where}: error")
    return Binding(
        means=_means(entry["means"], where) if "means" in entry else None,
        unit=unit,
        system=_SYSTEMS.get(system.casefold(), ""),
        error=error,
        signal_to_noise=_text(entry, "signal_to_noise", where),
        limit=_text(entry, "limit", where),
        floor=None if floor is None else _number(floor, f"{where}: floor", zero=True),
        limit_sigma=None if sigma is None else _number(sigma, f"{where}: limit_sigma"),
        saturated=_choice(entry, "saturated", SATURATED, "", where),
        without_error=_choice(entry, "without_error", _BARE, "", where),
        missing=_missing(entry.get("missing", []), f"{where}: missing"),
    )


def _means(text: Any, where: str) -> Meaning:
    if not isinstance(text, str):
        raise InputError(f"{where}: means = {text!r} is no text")
    for head, role in (("e_", "error"), ("l_", "limit"), ("", "value")):
        if text.casefold() == f"{head}ebv":
            return Meaning(role, "ebv")
    found = meaning_of(text)
    if found is not None:
        return found
    words = [*band_names(), *BY_NAME, "name"]
    near = ", ".join(nearest(text, words, 3)) or ", ".join(words)
    raise InputError(f"{where}: '{text}' is no band and no quantity; nearest: {near}")


def _known_keys(entry: dict[str, Any], known: list[str], where: str) -> None:
    for key in entry:
        if key in known:
            continue
        near = nearest(key, known)
        hint = f"did you mean '{near[0]}'?" if near else f"known: {', '.join(known)}"
        if where == "the sheet" and isinstance(entry[key], dict | str) and _is_meaning(entry[key]):
            hint = f"a heading is bound under [columns]: [columns] '{key}' = ..."
        raise InputError(f"{where} has an unknown key '{key}'; {hint}")


def _is_meaning(entry: Any) -> bool:
    if isinstance(entry, dict):
        return "means" in entry
    return meaning_of(entry) is not None or match_band(entry) is not None


def _choice(
    entry: dict[str, Any], key: str, known: tuple[str, ...], default: str, where: str = ""
) -> str:
    value = entry.get(key, default)
    if value not in (*known, default):
        label = f"{where}: {key}" if where else key
        raise InputError(f"{label} = {value!r} is none of {', '.join(known)}")
    return str(value)


def _number(value: Any, label: str, *, zero: bool = False) -> float:
    good = isinstance(value, int | float) and not isinstance(value, bool)
    if not good or not (value > 0.0 or (zero and value == 0.0)) or value == float("inf"):
        raise InputError(f"{label} = {value!r} must be a number above zero")
    return float(value)


def _text(entry: dict[str, Any], key: str, where: str) -> str:
    value = entry.get(key, "")
    if not isinstance(value, str):
        raise InputError(f"{where}: {key} = {value!r} must be a text in quotes")
    return value.strip()


def _texts(value: Any, label: str) -> list[str]:
    if isinstance(value, str):
        value = [value]
    if not isinstance(value, list) or not all(isinstance(item, str) for item in value):
        raise InputError(f'{label} = {value!r} must be a list of texts: ["heading", "Gaia RP"]')
    return value


def _missing(value: Any, label: str) -> tuple[Any, ...]:
    items = value if isinstance(value, list) else [value]
    if not all(isinstance(item, int | float | str) for item in items):
        raise InputError(f"{label} = {value!r} must be a list of numbers or texts")
    return tuple(items)


def _explained(where: str, call: Any, *args: Any) -> Any:
    try:
        return call(*args)
    except InputError as error:
        raise InputError(f"{where}: {error}") from error
