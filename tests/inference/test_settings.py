"""The settings file: every key read, every mistake named."""

from __future__ import annotations

import tomllib

import pytest

from starkiln.errors import SettingsError
from starkiln.inference import Settings, describe_priors, describe_settings, read_settings

FULL = """
[priors]
temperature = [4000, 20000]
misfit = [0.01, 0.2]
published_temperature = true
[dust]
prior = "free"
law = "F99"
rv = 3.3
width = 0.3
[likelihood]
form = "flux"
misfit = false
[offsets]
on = true
errors = { "2MASS" = 0.03 }
[distance]
prior = "uniform"
length = 500
parallax_zero_point = -0.03
parallax_error_factor = 1.2
[sampling]
draws = 100
effective_draws = 400
walkers = 32
max_steps = 5000
"""


def write(tmp_path, text):
    path = tmp_path / "settings.toml"
    path.write_text(text)
    return path


def test_every_key_is_read_and_the_command_line_beats_the_file(tmp_path):
    settings = read_settings(write(tmp_path, FULL), dust="zero", draws=None)
    assert settings.temperature_range == (4000.0, 20000.0)
    assert settings.use_published_temperature
    assert (settings.dust, settings.dust_law, settings.dust_rv) == ("zero", "F99", 3.3)
    assert settings.system_offset_errors == {"2MASS": 0.03}
    assert (settings.walkers, settings.draws) == (32, 100)
    words = " ".join(describe_priors(settings).values())
    assert "4000 to 20000 K" in words
    assert "2MASS 0.03 mag" in words


def test_the_help_lists_every_key_and_what_it_lists_can_be_read_back(tmp_path):
    text = describe_settings()
    assert tomllib.loads(text)
    assert read_settings(write(tmp_path, text)) == Settings()


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("[prior]\ntemperature = [1, 2]", r"unknown key 'prior.temperature'.*priors.temperature"),
        ("[priors]\ntemperature = [5000, 4000]", "must rise"),
        ("[priors]\ntemperature = [100, 4000]", "priors.temperature = 100 is out of bounds: 2500"),
        ("[priors]\ntemperature = 5000", "must be two numbers"),
        ("[dust]\nprior = 'maybe'", "dust.prior = 'maybe' must be column or free or zero"),
        ("[likelihood]\nmisfit = 1", "must be true or false"),
        ("[sampling]\nwalkers = 33", "odd"),
        ("[sampling]\nwalkers = 20.5", "whole number"),
        ("[sampling]\ndraws = true", "must be a number"),
        ("[offsets]\nerrors = 3", "must be a table"),
        ("draws = 3", "outside a table"),
        ("[dust", "not a TOML file"),
    ],
)
def test_mistakes_are_named(tmp_path, text, words):
    path = write(tmp_path, text)
    with pytest.raises(SettingsError, match=words) as caught:
        read_settings(path)
    assert str(path) in str(caught.value)


def test_absent_file_is_named(tmp_path):
    with pytest.raises(SettingsError, match="No such file"):
        read_settings(tmp_path / "none.toml")
