"""The values of settings: checked against kind and bounds, and written as TOML."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import MISSING
from typing import Any

from starkiln.errors import SettingsError

__all__ = ["checked", "toml"]


def checked(item: Any, value: Any) -> Any:
    """Return the value of a field of `Settings`, refused where it cannot be."""
    meta, default = item.metadata, item.default
    key = meta["key"]
    if default is MISSING:
        if not isinstance(value, Mapping):
            raise SettingsError(f"{key} = {value!r} must be a table of numbers")
        return {str(k): _number(v, f"{key}.{k}", meta) for k, v in value.items()}
    if isinstance(default, tuple):
        return _range(value, key, meta)
    if isinstance(default, bool):
        if not isinstance(value, bool):
            raise SettingsError(f"{key} = {value!r} must be true or false")
        return value
    if isinstance(default, str):
        choices = meta.get("choices", ())
        if not isinstance(value, str) or (choices and value not in choices):
            wanted = " or ".join(choices) or "a name"
            raise SettingsError(f"{key} = {value!r} must be {wanted}")
        return value
    number = _number(value, key, meta)
    if isinstance(default, int):
        if number != int(number):
            raise SettingsError(f"{key} = {value!r} must be a whole number")
        return int(number)
    return number


def _number(value: Any, key: str, meta: Mapping[str, Any]) -> float:
    if isinstance(value, bool) or not isinstance(value, (int, float)) or not math.isfinite(value):
        raise SettingsError(f"{key} = {value!r} must be a number")
    if not meta["lower"] <= value <= meta["upper"]:
        raise SettingsError(
            f"{key} = {value:g} is out of bounds: {meta['lower']:g} to {meta['upper']:g} "
            f"({meta['text'].split(';')[0]})"
        )
    return float(value)


def _range(value: Any, key: str, meta: Mapping[str, Any]) -> tuple[float, float]:
    if not isinstance(value, (list, tuple)) or len(value) != 2:
        raise SettingsError(f"{key} = {value!r} must be two numbers, [lower, upper]")
    low, high = (_number(edge, key, meta) for edge in value)
    if low >= high:
        raise SettingsError(f"{key} = [{low:g}, {high:g}] must rise: [lower, upper]")
    return (low, high)


def toml(value: Any) -> str:
    """Return a value as a settings file has it."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, tuple):
        return "[" + ", ".join(f"{item:g}" for item in value) + "]"
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, dict):
        return "{}"
    return f"{value:g}" if isinstance(value, float) else str(value)
