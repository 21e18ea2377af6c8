"""Extinction laws: the published ones, at the door of the dust_extinction package."""

from starkiln.dust._dust import DEFAULT_LAW, DEFAULT_RV, Dust, law_names

__all__ = ["DEFAULT_LAW", "DEFAULT_RV", "Dust", "law_names"]
