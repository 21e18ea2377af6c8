"""The priors of a run in words, for the screen and for `run.json`."""

from __future__ import annotations

from starkiln.inference._band_offsets import ORIGIN
from starkiln.inference._distance import describe_prior
from starkiln.inference._settings import Settings


def describe_priors(settings: Settings, emitter: str = "blackbody") -> dict[str, str]:
    """Return each parameter's prior and the likelihood in words, by name.

    Parameters
    ----------
    settings : Settings
    emitter : str
        Name of the emitter, whose parameters are told.
    """
    low, high = settings.temperature_range
    temperature = f"log-uniform, {low:g} to {high:g} K"
    if settings.use_published_temperature:
        temperature += "; Gaussian about teff +- e_teff in rows that give them"
    small, large = settings.diameter_range
    lines = {
        "temperature": temperature,
        "angular_diameter": f"uniform in its logarithm, {small:g} to {large:g} mas",
        "av": _dust(settings),
        "misfit": "left out: quoted errors alone",
        "distance": describe_prior(settings),
        "parallax": (
            f"zero point {settings.parallax_zero_point:g} mas subtracted, errors times "
            f"{settings.parallax_error_factor:g}"
        ),
        "zero_points": _zero_points(settings),
        "likelihood": (
            "Gaussian in ln flux; in flux for rows with a limit or a flux <= 0"
            if settings.likelihood == "log"
            else "Gaussian in flux"
        ),
    }
    if emitter == "atmosphere":
        lines["temperature"] += "; cut where the models end"
        low, high = settings.logg_range
        lines["logg"] = f"the row's logg +- e_logg (Gaussian), else uniform, {low:g} to {high:g}"
        lines["feh"] = (
            f"the row's feh +- e_feh (Gaussian), else {settings.feh_mean:g} +- "
            f"{settings.feh_width:g} (Gaussian); both cut where the models end"
        )
        lines["band_offsets"] = ORIGIN if settings.atmosphere_offsets else "none"
    if settings.misfit:
        small, large = settings.misfit_range_of(emitter)
        lines["misfit"] = f"log-uniform, {small:g} to {large:g} of the flux, every band"
    return lines


def _dust(settings: Settings) -> str:
    law = f"law {settings.dust_law}, R_V {settings.dust_rv:g}"
    if settings.dust == "zero":
        return "A_V = 0"
    if settings.dust_rv_error:
        law += f" +- {settings.dust_rv_error:g} (Gaussian, where A_V is free)"
    if settings.dust == "free":
        return f"half-normal, width {settings.dust_width:g} mag, at most 10 mag; {law}"
    if settings.dust == "gaussian":
        mean = settings.dust_mean
        return f"Gaussian, {mean:g} +- {settings.dust_width:g} mag, cut at 0 and 10 mag; {law}"
    if settings.dust == "uniform":
        return f"uniform, 0 to {settings.dust_width:g} mag; {law}"
    return f"the row's av +- e_av (Gaussian, cut at 0 and 10 mag), 0 where it gives none; {law}"


def _zero_points(settings: Settings) -> str:
    if not settings.system_offsets:
        return "taken as exact"
    text = "each band's own error, and one Gaussian offset per photometric system"
    changed = ", ".join(f"{k} {v:g} mag" for k, v in settings.system_offset_errors.items())
    return f"{text} ({changed})" if changed else text
