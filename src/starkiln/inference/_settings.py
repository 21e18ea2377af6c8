"""Everything that can be set about a fit, with its unit, bounds and reason.

`Settings` is the one list: the settings file (TOML), the help text, the check of
each value and what `run.json` records are all read off its fields.
"""

from __future__ import annotations

import textwrap
import tomllib
from collections.abc import Mapping
from dataclasses import MISSING, asdict, dataclass, field, fields
from difflib import get_close_matches
from pathlib import Path
from typing import Any

from starkiln.errors import SettingsError
from starkiln.inference._setting_values import checked, toml


def _setting(default: Any, key: str, text: str, **bounds: Any) -> Any:
    return field(default=default, metadata={"key": key, "text": text, **bounds})


@dataclass(frozen=True)
class Settings:
    """The settings of a fit; every field has a default and a key in the settings file.

    Raises
    ------
    SettingsError
        A value of the wrong kind or out of its bounds.
    """

    temperature_range: tuple[float, float] = _setting(
        (3000.0, 50000.0),
        "priors.temperature",
        "K; log-uniform between these bounds",
        lower=2500.0,
        upper=60000.0,
    )
    diameter_range: tuple[float, float] = _setting(
        (1e-6, 100.0),
        "priors.angular_diameter",
        "mas; uniform in its logarithm between these bounds",
        lower=1e-9,
        upper=1e4,
    )
    misfit_range: tuple[float, float] = _setting(
        (0.005, 0.3),
        "priors.misfit",
        "fraction of the flux, by which a star departs from the emitter; log-uniform",
        lower=1e-4,
        upper=1.0,
    )
    atmosphere_misfit_range: tuple[float, float] = _setting(
        (0.03, 0.1),
        "priors.misfit_atmosphere",
        "the same for --emitter atmosphere; its models left 3 per cent rms in the colours of "
        "stars of known temperature and diameter",
        lower=1e-4,
        upper=1.0,
    )
    logg_range: tuple[float, float] = _setting(
        (0.5, 5.0),
        "priors.logg",
        "log10 of cm s-2; uniform between these bounds where the row gives no logg; atmosphere",
        lower=0.5,
        upper=5.0,
    )
    feh_mean: float = _setting(
        -0.1,
        "priors.feh",
        "dex; mean of the Gaussian prior where the row gives no feh; atmosphere",
        lower=-2.5,
        upper=0.5,
    )
    feh_width: float = _setting(
        0.3,
        "priors.feh_width",
        "dex; its width (a choice, wider than the -0.14 +- 0.19 of nearby dwarfs in Nordstroem "
        "et al. 2004, A&A 418, 989, from memory)",
        lower=0.01,
        upper=3.0,
    )
    use_published_temperature: bool = _setting(
        False,
        "priors.published_temperature",
        "take the row's teff +- e_teff as Gaussian prior of the temperature",
    )
    dust: str = _setting(
        "column",
        "dust.prior",
        "column: the row's av +- e_av, 0 where none is given; free: half-normal; zero; "
        "gaussian: mean +- width for every row, as from a map; uniform: 0 to width",
        choices=("column", "free", "zero", "gaussian", "uniform"),
    )
    dust_law: str = _setting("G23", "dust.law", "extinction law, by its published name")
    dust_rv: float = _setting(3.1, "dust.rv", "R_V where the row gives none", lower=2.0, upper=6.0)
    dust_width: float = _setting(
        1.0,
        "dust.width",
        "mag; of the half-normal, the Gaussian or the uniform prior",
        lower=1e-3,
        upper=10.0,
    )
    dust_mean: float = _setting(
        0.0, "dust.mean", "mag; mean of the Gaussian prior", lower=0.0, upper=10.0
    )
    dust_rv_error: float = _setting(
        0.0,
        "dust.rv_error",
        "0: R_V is fixed; else free, Gaussian about the row's rv or dust.rv with this width, "
        "cut at the law's range",
        lower=0.0,
        upper=5.0,
    )
    likelihood: str = _setting(
        "log",
        "likelihood.form",
        "log: Gaussian in ln flux; flux: Gaussian in flux, which a row with a limit "
        "or a flux <= 0 takes by itself",
        choices=("log", "flux"),
    )
    misfit: bool = _setting(
        True, "likelihood.misfit", "false: quoted errors alone, as if the star were the emitter"
    )
    system_offsets: bool = _setting(
        True,
        "offsets.on",
        "zero-point errors: each band's own, and one common offset per photometric system",
    )
    system_offset_errors: dict[str, float] = field(
        default_factory=dict,
        metadata={
            "key": "offsets.errors",
            "text": 'mag; such as { "2MASS" = 0.02 }, in place of the built-in common offset',
            "lower": 0.0,
            "upper": 1.0,
        },
    )
    atmosphere_offsets: bool = _setting(
        True,
        "offsets.atmosphere",
        "atmosphere: correct Gaia and 2MASS bands (and WISE W3 of saturated stars) by observed "
        "minus model magnitudes, whose errors are added; of stars of 4,300 to 7,000 K",
    )
    distance_prior: str = _setting(
        "exponential",
        "distance.prior",
        "exponential: density of stars falls as exp(-d/length), p(d) ~ d^2 exp(-d/length) "
        "(Bailer-Jones 2015, PASP 127, 994); uniform: constant density of stars out to "
        "10 lengths",
        choices=("exponential", "uniform"),
    )
    distance_length: float = _setting(
        1350.0,
        "distance.length",
        "pc; length scale of the distance prior (1350: Astraatmadja & Bailer-Jones 2016, "
        "ApJ 833, 119)",
        lower=1.0,
        upper=1e6,
    )
    parallax_zero_point: float = _setting(
        0.0,
        "distance.parallax_zero_point",
        "mas; subtracted from every parallax",
        lower=-1.0,
        upper=1.0,
    )
    parallax_error_factor: float = _setting(
        1.0,
        "distance.parallax_error_factor",
        "multiplies every parallax error",
        lower=0.1,
        upper=10.0,
    )
    draws: int = _setting(
        256, "sampling.draws", "posterior draws kept per star", lower=0, upper=100_000
    )
    effective_draws: int = _setting(
        1000,
        "sampling.effective_draws",
        "stop when every parameter has at least so many effective draws ...",
        lower=50,
        upper=1_000_000,
    )
    autocorrelation_lengths: int = _setting(
        20,
        "sampling.autocorrelation_lengths",
        "... and the kept chain is so many autocorrelation times long",
        lower=10,
        upper=1000,
    )
    walkers: int = _setting(
        64, "sampling.walkers", "walkers of the ensemble; an even number", lower=16, upper=4096
    )
    max_steps: int = _setting(
        20_000,
        "sampling.max_steps",
        "ceiling of steps; a star that reaches it is called unconverged",
        lower=100,
        upper=10_000_000,
    )

    def __post_init__(self) -> None:
        for item in fields(self):
            object.__setattr__(self, item.name, checked(item, getattr(self, item.name)))
        if self.walkers % 2:
            raise SettingsError(f"sampling.walkers = {self.walkers} is odd; give an even number")

    def misfit_range_of(self, emitter: str) -> tuple[float, float]:
        """Return the range of the misfit's prior for the emitter of that name."""
        return self.atmosphere_misfit_range if emitter == "atmosphere" else self.misfit_range

    def as_dict(self) -> dict[str, Any]:
        """Return the settings by their field names, ready for JSON."""
        return {
            key: list(value) if isinstance(value, tuple) else value
            for key, value in asdict(self).items()
        }


def read_settings(path: str | Path, **overrides: Any) -> Settings:
    """Read a settings file.

    Parameters
    ----------
    path : str or pathlib.Path
        A TOML file with the keys that `describe_settings` lists.
    **overrides
        Fields of `Settings` that beat the file; None is no override.

    Returns
    -------
    Settings

    Raises
    ------
    SettingsError
        The file is absent or not TOML, or a key or value is not understood.
    """
    target = Path(path)
    try:
        content = tomllib.loads(target.read_text(encoding="utf-8"))
    except OSError as error:
        raise SettingsError(f"cannot read settings {target}: {error.strerror}") from error
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise SettingsError(f"settings {target} is not a TOML file: {error}") from error
    try:
        values = _from_tables(content)
        values.update({key: item for key, item in overrides.items() if item is not None})
        return Settings(**values)
    except SettingsError as error:
        raise SettingsError(f"settings {target}: {error}") from None


def describe_settings() -> str:
    """Return a settings file with every default, each key's meaning as its comment."""
    lines = []
    section = ""
    for item in fields(Settings):
        head, key = item.metadata["key"].split(".")
        if head != section:
            lines.append(f"[{head}]")
            section = head
        default = {} if item.default is MISSING else item.default
        lines.append(f"{key} = {toml(default)}")
        lines += [f"    # {line}" for line in textwrap.wrap(item.metadata["text"], 80)]
    return "\n".join(lines)


def _from_tables(content: Mapping[str, Any]) -> dict[str, Any]:
    known = {item.metadata["key"]: item.name for item in fields(Settings)}
    values: dict[str, Any] = {}
    for section, table in content.items():
        if not isinstance(table, Mapping):
            raise SettingsError(f"'{section}' stands outside a table{_nearest(section, known)}")
        for key, value in table.items():
            full = f"{section}.{key}"
            if full not in known:
                raise SettingsError(f"unknown key '{full}'{_nearest(full, known)}")
            values[known[full]] = value
    return values


def _nearest(text: str, known: Mapping[str, str]) -> str:
    close = get_close_matches(text, known, n=2, cutoff=0.4)
    return f"; did you mean {' or '.join(close)}?" if close else "; the help of fit lists the keys"
