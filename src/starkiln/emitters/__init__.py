"""What a star's surface sends out: radiance as a function of a few parameters."""

from starkiln.emitters._atmosphere import AtmosphereEmitter
from starkiln.emitters._blackbody import BlackbodyEmitter
from starkiln.emitters._protocol import Emitter
from starkiln.emitters._registry import EMITTERS

__all__ = ["EMITTERS", "AtmosphereEmitter", "BlackbodyEmitter", "Emitter"]
