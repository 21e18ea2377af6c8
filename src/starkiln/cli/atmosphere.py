"""`starkiln atmosphere`: one model atmosphere computed from first principles."""

from __future__ import annotations

import argparse
import sys

from starkiln.cli._options import quantity
from starkiln.cli._tables import add_format, print_table

_EPILOG = """\
model    Plane-parallel, static, in LTE and radiative equilibrium; metal lines as a calibrated
         statistical haze; no convection, no molecules but H2. 4,200 to 40,000 K.
table    `structure`: `radiation_pressure` against `gas_pressure`, and `radiative_acceleration`
         against gravity, say what light does to the star's skin; `flux_error` says how well
         the model conserves energy. `spectrum`: flux through the surface.

examples:
  starkiln atmosphere --temperature 5772 --logg 4.44 --feh 0
  starkiln atmosphere --temperature 20000 --logg 3.5 --table spectrum --format ecsv
"""


def configure(parser: argparse.ArgumentParser) -> None:
    """Declare the options."""
    parser.epilog = _EPILOG
    parser.add_argument(
        "--temperature",
        required=True,
        metavar="T",
        help="effective temperature, in K unless it has a unit",
    )
    parser.add_argument(
        "--logg", type=float, required=True, metavar="G", help="log10 of gravity in cm s-2"
    )
    parser.add_argument(
        "--feh", type=float, default=0.0, metavar="F", help="[Fe/H] in dex (default 0)"
    )
    parser.add_argument(
        "--table", choices=["structure", "spectrum"], default="structure", help="default structure"
    )
    add_format(parser)


def run(args: argparse.Namespace) -> int:
    """Compute the model and print its table; progress goes to standard error."""
    from starkiln.atmospheres import model_atmosphere

    temperature = quantity(args.temperature, "K", "temperature")
    model = model_atmosphere(temperature, args.logg, feh=args.feh)
    table = model.structure() if args.table == "structure" else model.spectrum()
    print_table(table, args.format)
    above = model.gamma[model.tau_rosseland < 1.0].max()
    sys.stderr.write(
        f"starkiln atmosphere: {model.iterations} iterations; above optical depth 1 light pushes "
        f"at most {above:.3g} times as hard as gravity pulls\n"
    )
    return 0
