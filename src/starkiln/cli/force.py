"""`starkiln force`: pressure and force of light on sails, grains, stars and surfaces."""

from __future__ import annotations

import argparse
from collections.abc import Callable, Sequence
from typing import Any

from starkiln.cli._answers import UNITS_NOTE, Option, add_options, answer, read_options
from starkiln.cli._run_answers import add_run_options, answer_run, draws_of, refuse_taken
from starkiln.cli._tables import add_format
from starkiln.errors import InputError

_LUMINOSITY = Option("luminosity", "solLum", "luminosity of the star", 1.0, error=True)
_MASS = Option("mass", "solMass", "mass of the star", 1.0, error=True)
_DISTANCE = Option("distance", "au", "distance from the star's centre", 1.0, error=True)


def _optics(specular: float) -> tuple[Option, ...]:
    return (
        Option("specular", "", "fraction reflected as by a mirror", specular),
        Option("diffuse", "", "fraction scattered back by Lambert's law", 0.0),
        Option("transmitted", "", "fraction let through", 0.0),
        Option("re-emission", "", "recoil of absorbed heat, 2/3 for a front that emits alone", 0.0),
    )


_EDDINGTON = (
    Option("mass", "solMass", "mass of the star", error=True),
    Option("luminosity", "solLum", "its luminosity", error=True),
    Option("temperature", "K", "or its effective temperature", error=True),
    Option("logg", "", "with log g, cgs", error=True),
    Option("hydrogen", "", "mass fraction of hydrogen, for the opacity of electrons", 0.7),
    Option("opacity", "cm2 / g", "opacity, in place of the electrons'"),
)
_GRAIN = (
    Option("size", "um", "radius of the grain", error=True),
    Option("density", "g / cm3", "density of the grain", error=True),
    Option("efficiency", "", "efficiency Q for radiation pressure", 1.0, error=True),
    _LUMINOSITY,
    _MASS,
    _DISTANCE,
    Option("eccentricity", "", "of the orbit of the body that frees the grain", 0.0),
)
_SAIL = (
    Option("loading", "g / m2", "total mass over area", error=True),
    _DISTANCE,
    Option("cone-angle", "deg", "between the sail's normal and the star, positive forward", 0.0),
    *_optics(1.0),
    _LUMINOSITY,
    _MASS,
    Option("target", "au", "fly from a circular orbit at --distance to this one"),
    Option("time-limit", "yr", "longest flight", 100.0),
)
_LIGHT = (
    Option("irradiance", "W / m2", "light on a plane normal to it", error=True),
    Option("luminosity", "solLum", "or luminosity of a star", error=True),
    Option("temperature", "K", "or temperature, alone for isotropic radiation", error=True),
    Option("radius", "solRad", "radius of the star, for its disc too", error=True),
    Option("distance", "au", "distance from the star's centre", error=True),
)
_PLATE = (
    *_optics(0.0),
    Option("angle", "deg", "between the light and the surface's normal", 0.0),
    Option("velocity", "km / s", "of the surface away from the source", 0.0),
    Option("area", "m2", "area of the surface: adds the force"),
    Option("body-radius", "m", "radius of a sphere in place of a flat surface"),
    Option("body-mass", "kg", "mass of the body: adds its acceleration"),
    Option("mass", "solMass", "mass of the star: adds the force over its gravity"),
)
_KINDS: dict[str, tuple[str, Sequence[Option]]] = {
    "sail": ("a flat sail: loading, acceleration, flight at a constant angle", _SAIL),
    "grain": ("a dust grain: beta, blow-out size, Poynting-Robertson drag", _GRAIN),
    "eddington": ("a star's Eddington luminosity and factor", _EDDINGTON),
    "surface": ("a surface in a beam, near a star, or in isotropic radiation", _LIGHT + _PLATE),
}

_RUN_NOTE = """

With --run, light comes from the posterior draws of each fitted star: luminosity for
sail, grain and eddington (temperature where --logg is given), temperature and radius
for surface. Give --mass, since photometry has none."""


def configure(parser: argparse.ArgumentParser) -> None:
    """Add one sub-command for each kind."""
    kinds = parser.add_subparsers(dest="kind", metavar="KIND", title="kinds", required=True)
    for name, (summary, options) in _KINDS.items():
        kind = kinds.add_parser(
            name,
            help=summary,
            description=summary,
            allow_abbrev=False,
            formatter_class=argparse.RawDescriptionHelpFormatter,
            epilog=UNITS_NOTE.format(example="--distance 0.3au") + _RUN_NOTE,
        )
        add_options(kind, options)
        add_run_options(kind)
        add_format(kind)
        if name == "sail":
            kind.add_argument(
                "--escape", action="store_true", help="fly until the sail escapes the star"
            )


def run(args: argparse.Namespace) -> int:
    """Print the table of the kind that was asked for."""
    if args.folder is not None:
        refuse_taken(args, "irradiance", "luminosity", "temperature", "radius")
    inputs, errors = read_options(args, _KINDS[args.kind][1])
    sums: dict[str, Callable[..., Any]] = {
        "sail": _sail,
        "grain": _grain,
        "eddington": _eddington,
        "surface": _surface,
    }
    if args.kind == "sail" and args.escape:
        if "target" in inputs:
            raise InputError("give --target or --escape, not both")
        inputs["target"] = "escape"
    if args.folder is None:
        return answer(sums[args.kind], inputs, errors, args.format)
    taken = _from_run(args, inputs)
    return answer_run(args, sums[args.kind], inputs, errors, taken)


def _from_run(args: argparse.Namespace, inputs: dict[str, Any]) -> Callable[[Any], Any]:
    """Return what a kind takes from a star's draws; the rest must be given."""
    if args.kind == "sail" and "target" in inputs:
        raise InputError("a flight is followed for one star alone: leave out --run, or --target")
    inputs.pop("luminosity", None)
    if args.kind == "surface":
        _require(inputs, "distance")
        return lambda draws: _columns(draws, "temperature", "radius")
    if args.kind == "eddington" and args.value_mass is None:
        _require(inputs, "logg")
        return lambda draws: _columns(draws, "temperature")
    if args.value_mass is None:
        raise InputError("--mass is missing: photometry does not give the mass of the star")
    return lambda draws: _columns(draws, "luminosity")


def _columns(draws: Any, *names: str) -> dict[str, Any] | str:
    return draws_of(draws, *names) or f"its fit has no {' and '.join(names)}; give its distance"


def _eddington(**inputs: Any) -> Any:
    from starkiln.forces import eddington_sums

    return eddington_sums(**inputs)


def _grain(**inputs: Any) -> Any:
    from starkiln.forces import grain_sums

    _require(inputs, "size", "density")
    return grain_sums(**inputs)


def _sail(**inputs: Any) -> Any:
    from starkiln.forces import sail_sums

    _require(inputs, "loading")
    return sail_sums(surface=_take_surface(inputs), until=inputs.pop("target", None), **inputs)


def _surface(**inputs: Any) -> Any:
    from starkiln.forces import light_sums, surface_sums, wall_sums

    light = {o.key: inputs.pop(o.key) for o in _LIGHT if o.key in inputs}
    surface = _take_surface(inputs)
    rows, flux = light_sums(**light)
    if flux is None:
        return rows + wall_sums(light["temperature"], surface)
    if "body_radius" in inputs:
        return rows + _sphere(flux, surface, distance=light.get("distance"), **inputs)
    return rows + surface_sums(flux, surface=surface, distance=light.get("distance"), **inputs)


def _sphere(flux: Any, surface: Any, **inputs: Any) -> Any:
    from starkiln.forces import body_sums

    unlike = surface.specular, surface.transmitted, surface.re_emission
    if any(unlike) or inputs.pop("angle") or inputs.pop("velocity") or "area" in inputs:
        raise InputError("a sphere takes --diffuse, its albedo, alone of a surface's options")
    return body_sums(flux, radius=inputs.pop("body_radius"), albedo=surface.diffuse, **inputs)


def _take_surface(inputs: dict[str, Any]) -> Any:
    from starkiln.forces import Surface

    return Surface(**{o.key: inputs.pop(o.key) for o in _optics(0.0)})


def _require(inputs: dict[str, Any], *names: str) -> None:
    lacking = [name for name in names if name not in inputs]
    if lacking:
        raise InputError(f"--{lacking[0]} is missing")
