"""What the observer looks at and what goes into the paper."""

from starkiln.report._light import light_pressure_plot, spectra_plot

__all__ = ["light_pressure_plot", "spectra_plot"]
