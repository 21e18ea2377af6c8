"""starkiln: stars' temperatures, sizes and light pressure from their photometry.

The public names below are loaded when first used, so that importing the package
costs next to nothing; everything else is reached through its room, for example
`starkiln.photons` or `starkiln.interiors`.
"""

from __future__ import annotations

from importlib import import_module
from typing import Any

from starkiln._version import __version__

_PUBLIC = {
    "Star": "starkiln.observations",
    "read_catalogue": "starkiln.observations",
    "fit": "starkiln.runner",
    "FitResult": "starkiln.runner",
    "fit_catalogue": "starkiln.runner",
    "AtmosphereEmitter": "starkiln.emitters",
    "BlackbodyEmitter": "starkiln.emitters",
    "Dust": "starkiln.dust",
    "Band": "starkiln.passbands",
    "load_band": "starkiln.passbands",
    "luminosity": "starkiln.derived",
    "pressure_ratio": "starkiln.interiors",
}

__all__ = [
    "AtmosphereEmitter",
    "Band",
    "BlackbodyEmitter",
    "Dust",
    "FitResult",
    "Star",
    "__version__",
    "fit",
    "fit_catalogue",
    "load_band",
    "luminosity",
    "pressure_ratio",
    "read_catalogue",
]


def __getattr__(name: str) -> Any:
    if name in _PUBLIC:
        return getattr(import_module(_PUBLIC[name]), name)
    try:
        return import_module(f"starkiln.{name}")
    except ModuleNotFoundError as error:
        if error.name != f"starkiln.{name}":
            raise
        raise AttributeError(f"module 'starkiln' has no attribute {name!r}") from None


def __dir__() -> list[str]:
    return sorted(__all__)
