"""For the proposal or paper on hot stars: methods paragraph, references and files."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np

from starkiln._version import __version__
from starkiln.derived import pressure_assumptions
from starkiln.report._proposal import (
    check_table,
    proposal_deluxetable,
    proposal_plot,
    proposal_table,
)
from starkiln.report._references import Reference
from starkiln.report._style import save_figure
from starkiln.report._view import plain_text
from starkiln.store import atomic_write, read_data_table


def methods_paragraph(table: Any, *, fitted: bool = False) -> str:
    r"""Return the paragraph that says what was assumed, in LaTeX with `\citep`.

    Parameters
    ----------
    table : astropy.table.Table
        As for `proposal_table`.
    fitted : bool
        Whether luminosity and temperature are posterior draws of a photometric fit.
    """
    check_table(table)
    chosen = pressure_assumptions()
    light = (
        "the joint posterior draws of luminosity and temperature of the photometric fit"
        if fitted
        else "the measured luminosity (or radius) and temperature, with their covariance"
    )
    ok = int(np.sum(np.asarray(table["status"], dtype=str) == "ok"))
    text = rf"""
Mass, age and pressure ratios of {ok} of {len(table)} targets were derived with
starkiln {__version__} from {light}, and from gravity, dynamical mass and metallicity where
Table~\ref{{tab:pressure}} rests on them. The models are stars of
{chosen["mass_low"]:.1f} to {chosen["mass_high"]:.0f}\,${{\rm M}}_\odot$ in hydrostatic and thermal
balance \citep{{Henyey1964,Kippenhahn2012}}, evolved along the main sequence at constant mass with
convective overshooting of 0.2 pressure scale heights; gas is fully ionised, electrons are
an ideal Fermi gas, Coulomb forces are left out, and some constants of the opacity are calibrated on
the zero-age models of \citet{{Tout1996}}. Composition follows $X = 0.76 - 3Z$
\citep{{Pols1998}} with $Z = {chosen["solar_metals"]:g}$ at solar metallicity \citep{{Asplund2009}},
and [Fe/H] = ${chosen["feh"]:.1f} \pm {chosen["e_feh"]:.1f}$ where none was measured. The prior is a
mass function of slope ${chosen["imf_slope"]:g}$ \citep{{Salpeter1955}} and star formation even in
time; real stars are taken to scatter about the models by {chosen["scatter_luminosity"]:g}\,dex in
luminosity and {chosen["scatter_temperature"]:g}\,dex in temperature. We quote medians and 68 per
cent intervals. Three numbers are kept apart:
$\langle P_{{\rm rad}}\rangle/\langle P_{{\rm gas}}\rangle$ is the ratio of the two pressures
integrated over the volume of the star, which the standard model of \citet{{Eddington1926}}
reproduces within 3 per cent at zero age;
$(P_{{\rm rad}}/P_{{\rm gas}})_{{\rm c}}$ is the ratio at the centre; and $\Gamma_{{\rm e}}$ is the
Eddington factor of electron scattering at the surface. Nominal solar units are those of
\citet{{PrsaNominal2016}}.{_limits(table)}
"""
    return text.strip() + "\n"


def _limits(table: Any) -> str:
    """Return the sentences on where the answers stop, as the table needs them."""
    flags = {flag for row in table for flag in plain_text(row["flags"]).split()}
    off = int(np.sum(np.asarray(table["status"], dtype=str) == "off_grid"))
    sentences = []
    if "no_mass_loss" in flags:
        sentences.append(
            "Above 40 solar masses the models lack mass loss, and iron opacity lowers the true "
            r"limit of light below $\Gamma_{\rm e} = 1$."
        )
    if "mass_from_luminosity" in flags:
        sentences.append(
            "Each star is taken to be single; an unresolved companion would make luminosity and "
            "mass too high."
        )
    if "near_the_end" in flags:
        sentences.append("Stars close to the end of the main sequence may have left it.")
    if off:
        sentences.append(
            f"For {off} of the targets no main-sequence model agrees with luminosity and "
            "temperature; their ratios are not given."
        )
    return "".join(f"\n{sentence}" for sentence in sentences)


def proposal_bibtex() -> str:
    """Return the BibTeX entries that `methods_paragraph` cites."""
    keys = ("key", "authors", "title", "journal", "volume", "page", "doi")
    entries = [
        Reference(**{key: plain_text(row[key]) for key in keys}, year=int(row["year"])).bibtex
        for row in read_data_table("report", "proposal_references.ecsv")
    ]
    return "\n\n".join(entries) + "\n"


def write_proposal(table: Any, folder: str | Path, *, fitted: bool = False) -> list[Path]:
    """Write table, figure, paragraph, references, and two documents that hold them.

    Parameters
    ----------
    table : astropy.table.Table
        As for `proposal_table`.
    folder : str or pathlib.Path
        An existing folder.
    fitted : bool
        As for `methods_paragraph`.

    Returns
    -------
    list of pathlib.Path
        `pressure_deluxe.tex`, `pressure_plain.tex`, `methods.tex`, `pressure.bib`,
        `proposal.tex` (plain article), `proposal_aastex.tex` and `pressure.pdf`.
    """
    target = Path(folder)
    texts = {
        "pressure_deluxe.tex": proposal_deluxetable(table),
        "pressure_plain.tex": proposal_table(table),
        "methods.tex": methods_paragraph(table, fitted=fitted),
        "pressure.bib": proposal_bibtex(),
        "proposal.tex": _DOCUMENT.format(
            head=_ARTICLE, table="pressure_plain", style="plainnat", title=r"\maketitle"
        ),
        "proposal_aastex.tex": _DOCUMENT.format(
            head=r"\documentclass{aastex631}",
            table="pressure_deluxe",
            style="aasjournal",
            title="",
        ),
    }
    written = [_write(target / name, text) for name, text in texts.items()]
    return [*written, save_figure(proposal_plot(table), target / "pressure.pdf")]


def _write(path: Path, text: str) -> Path:
    return atomic_write(path, lambda stream: stream.write(text), mode="w")


_ARTICLE = (
    r"\documentclass[10pt,twocolumn]{article}" + "\n"
    r"\usepackage[margin=2cm]{geometry}" + "\n"
    r"\usepackage{graphicx,natbib}"
)
_DOCUMENT = r"""{head}
\begin{{document}}
\title{{Radiation pressure in hot stars}}
\author{{}}
{title}
\section{{Method}}
\input{{methods}}
\begin{{figure}}
\includegraphics[width=8.5cm]{{pressure.pdf}}
\caption{{Radiation over gas pressure, each integrated over the volume of the star, against
mass. Points: the targets with 68 per cent intervals; line and band: structure models of
$Z = 0.02$ at zero age and along the main sequence; dashed: the standard model of
\citet{{Eddington1926}}.}}
\end{{figure}}
\input{{{table}}}
\bibliographystyle{{{style}}}
\bibliography{{pressure}}
\end{{document}}
"""
