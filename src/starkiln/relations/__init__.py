"""Published relations between what is measured and what is wanted: quick answers with an error."""

from starkiln.relations._colour_temperature import (
    ColourRelation,
    ColourTemperature,
    colour_relations,
    temperatures_from_colours,
)

__all__ = [
    "ColourRelation",
    "ColourTemperature",
    "colour_relations",
    "temperatures_from_colours",
]
