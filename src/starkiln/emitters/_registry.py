"""The emitters by name."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from types import MappingProxyType

from starkiln.emitters._atmosphere import AtmosphereEmitter
from starkiln.emitters._blackbody import BlackbodyEmitter
from starkiln.emitters._protocol import Emitter

__all__ = ["EMITTERS"]

#: Name on the command line -> the emitter's class; a new one needs one line here.
EMITTERS: Mapping[str, Callable[[], Emitter]] = MappingProxyType(
    {"blackbody": BlackbodyEmitter, "atmosphere": AtmosphereEmitter}
)
