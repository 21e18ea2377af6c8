"""For the proposal or paper on hot stars: table and figure."""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.errors import InputError
from starkiln.interiors import load_grid, pressure_ratio
from starkiln.report._latex import latex_text, latex_value
from starkiln.report._latex_layout import Layout, deluxetable_text, tabular_text
from starkiln.report._style import ACCENT, BAND, INK, MODEL, drawing
from starkiln.report._ticks import round_ticks
from starkiln.report._view import numbers, plain_text

#: Column -> heading and unit of the printed table.
_SHOWN = {
    "temperature": (r"$T_{\rm eff}$", "(K)"),
    "luminosity": ("$L$", r"(${\rm L}_\odot$)"),
    "mass": ("$M$", r"(${\rm M}_\odot$)"),
    "age_fraction": (r"$t/t_{\rm MS}$", ""),
    "radiation_to_gas": (r"$\langle P_{\rm rad}\rangle/\langle P_{\rm gas}\rangle$", ""),
    "radiation_to_gas_core": (r"$(P_{\rm rad}/P_{\rm gas})_{\rm c}$", ""),
    "gamma_e": (r"$\Gamma_{\rm e}$", ""),
}
_DEFINITIONS = (
    r"$\langle P_{\rm rad}\rangle/\langle P_{\rm gas}\rangle$: radiation over gas pressure, each "
    r"integrated over the volume of the star; $(P_{\rm rad}/P_{\rm gas})_{\rm c}$: at its centre; "
    r"$\Gamma_{\rm e}$: Eddington factor of electron scattering at the surface; "
    r"$t/t_{\rm MS}$: age over the length of the main sequence. "
    "Medians with 68 per cent intervals (16th to 84th percentiles)."
)
#: Flag -> letter and meaning in the table's notes.
_NOTES = {
    "no_mass_loss": ("a", "above 40 solar masses the models lack mass loss"),
    "electron_limit": ("b", "iron opacity lowers the true limit of light below one"),
    "mass_from_luminosity": (
        "c",
        "an unresolved companion would make luminosity and mass too high",
    ),
    "near_the_end": ("d", "the star may have left the main sequence, where the models end"),
    "at_edge": ("e", "the mass runs into the bounds of the models"),
    "few_points": ("f", "the data contradict one another; rough"),
    "off_grid": ("g", "no main-sequence model agrees with the star"),
}


def proposal_deluxetable(table: Any) -> str:
    """Return the pressure ratios as an AASTeX `deluxetable*`.

    Parameters
    ----------
    table : astropy.table.Table
        What `starkiln.derived.pressure_table` or `pressure_table_of_draws` returned.
    """
    return deluxetable_text(_layout(table, r"\nodata"))


def proposal_table(table: Any) -> str:
    """Return the same as a table of plain LaTeX over both columns; it needs no package."""
    return tabular_text(_layout(table, "--"))


def _layout(table: Any, absent: str) -> Layout:
    lines, notes = _content(table, absent)
    return Layout(
        caption="Radiation and gas pressure of the targets",
        label="tab:pressure",
        heads=["Star", *(head for head, _ in _SHOWN.values()), "Notes"],
        units=["", *(unit for _, unit in _SHOWN.values()), ""],
        lines=lines,
        notes=notes,
    )


def _content(table: Any, absent: str) -> tuple[list[list[str]], str]:
    check_table(table)
    lines, used = [], set()
    for row in table:
        if str(row["status"]) == "rejected":
            continue
        flags = plain_text(row["flags"]).split()
        flags += ["off_grid"] if str(row["status"]) == "off_grid" else []
        used.update(flags)
        letters = ",".join(_NOTES[flag][0] for flag in _NOTES if flag in flags)
        values = [latex_value(row, name) or absent for name in _SHOWN]
        lines.append([latex_text(plain_text(row["name"])), *values, letters])
    if not lines:
        raise InputError("no target can be shown: every row of the table is rejected")
    notes = [_DEFINITIONS]
    notes += [f"({letter}) {text}." for flag, (letter, text) in _NOTES.items() if flag in used]
    left = len(table) - len(lines)
    if left:
        notes.append(f"{left} rejected {'star is' if left == 1 else 'stars are'} left out.")
    return lines, " ".join(notes)


def proposal_plot(table: Any, *, ax: Any = None, width: str | float = "one") -> Any:
    """Draw P_rad/P_gas of the volume integrals against mass, with the models.

    Parameters
    ----------
    table : astropy.table.Table
        What `starkiln.derived.pressure_table` or `pressure_table_of_draws` returned.
    ax : matplotlib.axes.Axes, optional
        Drawn on instead of a new one.
    width : {"one", "two"} or float
        Width of a new figure.

    Returns
    -------
    matplotlib.axes.Axes
        Targets with 68 per cent intervals; Eddington's standard model; structure models
        of Z = 0.02 from zero age to the end of the main sequence.
    """
    check_table(table)
    mass, ratio = numbers(table["mass"]), numbers(table["radiation_to_gas"])
    good = np.isfinite(mass) & np.isfinite(ratio)
    if not good.any():
        raise InputError("no target has both a mass and a pressure ratio: nothing to draw")
    low, high = np.exp(load_grid().log_mass)
    ends = max(mass[good].min() / 1.6, low), min(mass[good].max() * 1.6, high)
    grid = np.geomspace(*ends, 60)
    young, old = (pressure_ratio(grid, age_fraction=age).radiation_to_gas for age in (0.0, 1.0))
    standard = pressure_ratio(grid, model="standard")
    with drawing(ax, width=width) as axes:
        axes.set(xscale="log", yscale="log")
        axes.fill_between(grid, young, old, color=BAND, lw=0, label="structure, main sequence")
        axes.plot(grid, young, color=MODEL, label="structure, zero age")
        axes.plot(
            grid, standard.radiation_to_gas, color=ACCENT, ls="--",
            label=rf"standard model, $\mu$ = {standard.mu[0]:.3f}",
        )  # fmt: skip
        bars = [_bars(table, key, good) for key in ("mass", "radiation_to_gas")]
        axes.errorbar(
            mass[good], ratio[good], xerr=bars[0], yerr=bars[1], fmt="o", color=INK, ms=3,
            elinewidth=0.7, label="targets, 68 per cent",
        )  # fmt: skip
        axes.set_xlim(*ends)
        round_ticks(axes.xaxis, ends)
        axes.set_xlabel(r"$M$ ($\mathrm{M_\odot}$)")
        axes.set_ylabel(r"$\langle P_\mathrm{rad}\rangle/\langle P_\mathrm{gas}\rangle$ (volume)")
        axes.legend(loc="lower right")
    return axes


def _bars(table: Any, key: str, good: np.ndarray) -> np.ndarray:
    value, low, high = (numbers(table[f"{key}{end}"])[good] for end in ("", "_lo", "_hi"))
    return np.stack([value - low, high - value])


def check_table(table: Any) -> None:
    """Refuse a table that lacks the columns of targets with intervals."""
    wanted = [*_SHOWN, "status", "flags", "name"]
    missing = [name for name in wanted if name not in table.colnames]
    if missing:
        raise InputError(
            f"the table has no column {missing[0]!r}: give one of starkiln pressure TABLE or --run"
        )
