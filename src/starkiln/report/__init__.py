"""What the observer looks at and what goes into the paper: figures, tables, one page.

Functions ending in `_figure` draw several panels and return the figure; those
ending in `_plot` take `ax=` and return the axes. None of them needs a display.
"""

from starkiln.report._atmospheres import (
    atmosphere_spectrum_plot,
    atmosphere_structure_figure,
    colour_temperature_plot,
    limb_darkening_plot,
    opacity_plot,
)
from starkiln.report._chain import autocorrelation_plot, chain_figure
from starkiln.report._checks import predictive_plot, prior_figure
from starkiln.report._comparisons import temperature_figure
from starkiln.report._corner import corner_figure
from starkiln.report._files import CATALOGUE_KINDS, RUN_KINDS, STAR_KINDS, Drawn, write_figures
from starkiln.report._latex import deluxetable, latex_table
from starkiln.report._light import light_pressure_plot, spectra_plot
from starkiln.report._open import open_for_report
from starkiln.report._page import page, write_page
from starkiln.report._proposal import proposal_deluxetable, proposal_plot, proposal_table
from starkiln.report._proposal_text import methods_paragraph, proposal_bibtex, write_proposal
from starkiln.report._provenance import provenance, provenance_text
from starkiln.report._references import Reference, bibtex, references
from starkiln.report._samp import send_table
from starkiln.report._sample import hr_plot, misfit_plot
from starkiln.report._sed import sed_figure
from starkiln.report._style import image_bytes, save_figure, style
from starkiln.report._tables import machine_readable, results_table, write_tables
from starkiln.report._view import FitView, Measurement, run_view, view_of

__all__ = [
    "CATALOGUE_KINDS",
    "RUN_KINDS",
    "STAR_KINDS",
    "Drawn",
    "FitView",
    "Measurement",
    "Reference",
    "atmosphere_spectrum_plot",
    "atmosphere_structure_figure",
    "autocorrelation_plot",
    "bibtex",
    "chain_figure",
    "colour_temperature_plot",
    "corner_figure",
    "deluxetable",
    "hr_plot",
    "image_bytes",
    "latex_table",
    "light_pressure_plot",
    "limb_darkening_plot",
    "machine_readable",
    "methods_paragraph",
    "misfit_plot",
    "opacity_plot",
    "open_for_report",
    "page",
    "predictive_plot",
    "prior_figure",
    "proposal_bibtex",
    "proposal_deluxetable",
    "proposal_plot",
    "proposal_table",
    "provenance",
    "provenance_text",
    "references",
    "results_table",
    "run_view",
    "save_figure",
    "sed_figure",
    "send_table",
    "spectra_plot",
    "style",
    "temperature_figure",
    "view_of",
    "write_figures",
    "write_page",
    "write_proposal",
    "write_tables",
]
