"""`starkiln photons`: blackbody radiation and the photon gas at a temperature."""

from __future__ import annotations

import argparse
from typing import Any

from starkiln.cli._answers import UNITS_NOTE, Option, add_options, answer, read_options
from starkiln.cli._run_answers import add_run_options, answer_run, draws_of, refuse_taken
from starkiln.cli._tables import add_format
from starkiln.errors import InputError

_OPTIONS = (
    Option("temperature", "K", "temperature", error=True),
    Option("at", "um", "wavelength at which Planck's law is given", letter="L"),
    Option("from", "um", "shorter limit of a band", letter="L"),
    Option("to", "um", "longer limit of a band", letter="L"),
    Option("volume", "m3", "volume of the photon gas; without it, densities only"),
    Option("emissivity", "", "grey emissivity of the emitting surface", 1.0),
    Option("radius", "solRad", "radius of a star: adds what arrives at --distance", error=True),
    Option("distance", "pc", "distance from the centre of that star", error=True),
)

_NOTES = """\
Prints one row for each answer with the name of its formula and a reference, the
inputs first repeated. With --run, for each fitted star from its posterior draws of
temperature and, where it has them, radius and distance: medians, with the 16th and
84th percentiles.

"""


def configure(parser: argparse.ArgumentParser) -> None:
    """Add the command's options."""
    parser.epilog = _NOTES + UNITS_NOTE.format(example="--temperature 5772K --from 400nm")
    add_options(parser, _OPTIONS)
    add_run_options(parser)
    add_format(parser)


def run(args: argparse.Namespace) -> int:
    """Print the table."""
    from starkiln.photons import photon_sums

    if args.folder is not None:
        refuse_taken(args, "temperature", "radius", "distance")
    inputs, errors = read_options(args, _OPTIONS)
    for option, name in (("from", "lower"), ("to", "upper")):
        if option in inputs:
            inputs[name] = inputs.pop(option)
    if args.folder is not None:
        return answer_run(args, photon_sums, inputs, errors, _taken)
    if "temperature" not in inputs:
        raise InputError("--temperature is missing: give the temperature of the radiation, in K")
    return answer(photon_sums, inputs, errors, args.format)


def _taken(draws: Any) -> dict[str, Any] | str:
    star = draws_of(draws, "temperature", "radius", "distance")
    return star or draws_of(draws, "temperature") or "its fit has no temperature"
