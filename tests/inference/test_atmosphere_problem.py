"""Priors of a model atmosphere's parameters, what the row gives of them, and their limits."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy.stats import truncnorm

from starkiln import AtmosphereEmitter, Dust, Star, fit
from starkiln.errors import InputError, SettingsError
from starkiln.forward import BandFluxTable, band_flux_direct
from starkiln.inference import Settings, build_problem, describe_priors
from starkiln.runner import dust_of, emitter_of

FIVE = {
    "Gaia BP": (11.33, 0.01),
    "Gaia RP": (10.52, 0.01),
    "2MASS J": (9.98, 0.02),
    "2MASS H": (9.70, 0.02),
    "2MASS Ks": (9.63, 0.02),
}
COLD = {
    "Gaia BP": (13.3, 0.01),
    "Gaia RP": (10.9, 0.01),
    "2MASS J": (9.4, 0.02),
    "2MASS H": (8.8, 0.02),
    "2MASS Ks": (8.55, 0.02),
}


def problem_of(star, emitter="atmosphere", **settings):
    chosen = Settings(**settings)
    return build_problem(star, emitter_of(emitter), dust_of(chosen), chosen)


def prior(problem, name):
    return problem.parameters[problem.names.index(name)].prior


def test_what_the_row_gives_exactly_is_held():
    problem = problem_of(Star("a", FIVE, logg=4.4, feh=-0.3))
    assert problem.emitter == AtmosphereEmitter(4.4, -0.3)
    assert problem.names == ("ln_temperature", "ln_diameter", "ln_misfit")
    assert isinstance(problem.table, BandFluxTable)
    # The observer's own emitter comes before the row.
    own = problem_of(Star("a", FIVE, logg=4.4), AtmosphereEmitter(logg=4.0))
    assert own.emitter.given == {"logg": 4.0}


def test_what_the_row_gives_with_an_error_is_a_gaussian():
    problem = problem_of(Star("a", FIVE, logg=(4.4, 0.1), feh=(-2.4, 0.2)))
    assert problem.names[:3] == ("ln_temperature", "logg", "feh")
    assert (prior(problem, "logg").mean, prior(problem, "logg").width) == (4.4, 0.1)
    feh = prior(problem, "feh")
    assert (feh.mean, feh.width, feh.lower, feh.upper) == (-2.4, 0.2, -2.5, 0.5)
    assert not any("no logg" in note or "no feh" in note for note in problem.notes)


def test_what_the_row_does_not_give_has_the_priors_of_the_settings():
    problem = problem_of(Star("a", FIVE))
    low = AtmosphereEmitter().bounds["logg"][0]
    assert (prior(problem, "logg").lower, prior(problem, "logg").upper) == (low, 5.0)
    assert (prior(problem, "feh").mean, prior(problem, "feh").width) == (-0.1, 0.3)
    assert [note for note in problem.notes if note.startswith("no logg given: prior uniform")]
    assert [note for note in problem.notes if note.startswith("no feh given: prior Gaussian")]
    chosen = problem_of(Star("a", FIVE), logg_range=(3.5, 4.5), feh_mean=-1.5, feh_width=0.2)
    assert (prior(chosen, "logg").lower, prior(chosen, "logg").upper) == (3.5, 4.5)
    assert (prior(chosen, "feh").mean, prior(chosen, "feh").width) == (-1.5, 0.2)


def test_the_temperature_ends_where_the_models_do_and_says_so():
    problem = problem_of(Star("a", FIVE, logg=4.4, feh=0.0))
    np.testing.assert_allclose(np.exp(problem.bounds[0]), [4200.0, 40000.0])
    assert "temperature prior cut where the models end, 4200 to 40000 K" in problem.notes
    giant = problem_of(Star("a", FIVE, logg=1.5, feh=0.0))
    assert math.exp(giant.bounds[0, 1]) == pytest.approx(
        AtmosphereEmitter(1.5, 0.0).bounds["temperature"][1]
    )
    narrow = problem_of(Star("a", FIVE, logg=4.4), temperature_range=(5000.0, 7000.0))
    np.testing.assert_allclose(np.exp(narrow.bounds[0]), [5000.0, 7000.0])
    assert not any("cut where the models end" in note for note in narrow.notes)
    blackbody = problem_of(Star("a", FIVE), "blackbody")
    np.testing.assert_allclose(np.exp(blackbody.bounds[0]), [3000.0, 50000.0])


@pytest.mark.parametrize(
    ("known", "settings", "message"),
    [
        ({"feh": (-4.0, 0.1)}, {}, r"feh = -4 \+- 0.1 is outside the model atmospheres, -2.50"),
        ({"feh": -3.0}, {}, "feh = -3 is outside the model atmospheres"),
        ({"logg": (8.0, 0.1)}, {}, "use --emitter blackbody"),
        ({}, {"temperature_range": (3000.0, 4000.0)}, "holds no temperature.*molecules rule"),
        (
            {"teff": (3500.0, 50.0)},
            {"use_published_temperature": True},
            "teff = 3500 K lies outside.*molecules rule",
        ),
    ],
)
def test_beyond_the_models_is_refused(known, settings, message):
    with pytest.raises(InputError, match=message):
        problem_of(Star("a", FIVE, **known), **settings)


def test_a_star_that_is_too_cool_is_refused():
    with pytest.raises(InputError, match=r"temperature piles up at 4200 K.*molecules rule"):
        fit(Star("cold", COLD, logg=4.7, feh=0.0), emitter="atmosphere")


def test_prior_draws_and_density_keep_within_the_models():
    problem = problem_of(Star("a", FIVE))
    x = problem.draw_prior(np.random.default_rng(4), 4000)
    lowest = AtmosphereEmitter().lowest_logg(np.exp(x[:, 0]))
    assert np.all(x[:, 1] >= lowest)
    # Plain rejection from the same box, independent of the draws.
    rng = np.random.default_rng(5)
    low, high = problem.bounds[:2].T
    box = rng.uniform(low, high, (20000, 2))
    kept = box[box[:, 1] >= AtmosphereEmitter().lowest_logg(np.exp(box[:, 0]))]
    np.testing.assert_allclose(x[:, :2].mean(axis=0), kept.mean(axis=0), atol=0.06)
    x[:, 1] = lowest - 0.01
    assert np.all(np.isneginf(problem.ln_posterior(x)))
    x[:, 1] = lowest + 0.01
    assert np.all(np.isfinite(problem.ln_posterior(x)))


def test_where_the_data_say_nothing_the_posterior_is_the_prior():
    star = Star("one band", {"2MASS Ks": (9.0, 0.02)}, logg=4.0, feh=(0.2, 0.3))
    result = fit(star, emitter="atmosphere", settings=Settings(effective_draws=3000))
    expected = truncnorm(-2.7 / 0.3, 1.0, 0.2, 0.3)
    for got, level in zip(result.summary["feh"], (0.5, 0.16, 0.84), strict=True):
        assert got == pytest.approx(expected.ppf(level), abs=0.03)
    assert result.summary["logg"] == (4.0, 4.0, 4.0)


def test_a_known_atmosphere_is_found_again():
    truth, theta = AtmosphereEmitter(4.1, -0.6), 0.2
    solid_angle = 0.25 * math.pi * (theta * math.pi / 648e6) ** 2
    photometry = {}
    for band in ("Johnson U", "Johnson B", "Johnson V", "Gaia RP", "2MASS J", "2MASS Ks"):
        x, av = np.log([[6300.0]]), np.array([0.3])
        flux = solid_angle * math.exp(band_flux_direct(truth, band, Dust(), x, av)[0]) * 1e-6
        photometry[band] = (flux, 0.01 * flux)
    from astropy import units as u

    unit = u.W / u.m**2 / u.um
    star = Star(
        "known",
        {band: (f * unit, e * unit) for band, (f, e) in photometry.items()},
        av=(0.3, 0.02),
        logg=(4.0, 0.3),
    )
    settings = Settings(atmosphere_offsets=False, atmosphere_misfit_range=(0.001, 0.02))
    result = fit(star, emitter="atmosphere", settings=settings)
    expected = {"temperature": 6300.0, "angular_diameter": theta, "logg": 4.1, "feh": -0.6}
    for name, value in expected.items():
        middle, low, high = result.summary[name]
        assert abs(middle - value) < 1.5 * (high - low), name
    middle, low, high = result.summary["temperature"]
    assert high - low < 300.0
    assert result.status == "ok"
    assert result.fit_probability > 0.05


def test_misfit_and_offsets_are_settings_and_told():
    star = Star("a", {**FIVE, "WISE W3": (9.6, 0.03)}, logg=4.4, feh=0.0)
    problem = problem_of(star)
    np.testing.assert_allclose(np.exp(problem.bounds[-1]), [0.03, 0.1])
    bare = problem_of(star, atmosphere_offsets=False, atmosphere_misfit_range=(0.01, 0.2))
    np.testing.assert_allclose(np.exp(bare.bounds[-1]), [0.01, 0.2])
    np.testing.assert_allclose(np.exp(problem_of(star, "blackbody").bounds[-1]), [0.005, 0.3])
    shift = (problem.bands.ln_data - bare.bands.ln_data) / (0.4 * math.log(10.0))
    offsets = AtmosphereEmitter().band_offsets
    # An observed magnitude is the model's plus the offset: without it the star is brighter.
    wanted = [offsets[b][0] if b != "WISE W3" else 0.0 for b in problem.bands.names]
    np.testing.assert_allclose(shift, wanted, atol=1e-12)
    assert np.all(problem.bands.variance >= bare.bands.variance)
    bright = problem_of(Star("a", {**FIVE, "WISE W3": (2.0, 0.03)}), likelihood="flux")
    faint = problem_of(Star("a", {**FIVE, "WISE W3": (2.0, 0.03)}), "blackbody")
    shift = (bright.bands.ln_data - faint.bands.ln_data)[-1] / (0.4 * math.log(10.0))
    assert shift == pytest.approx(offsets["WISE W3"][0])
    words = describe_priors(Settings(), "atmosphere")
    assert words["misfit"].startswith("log-uniform, 0.03 to 0.1")
    assert "35 stars of 4,300 to 7,000 K" in words["band_offsets"]
    assert {"logg", "feh"} <= set(words)
    assert not {"logg", "feh", "band_offsets"} & set(describe_priors(Settings()))
    with pytest.raises(SettingsError, match=r"priors.feh_width = 0 is out of bounds"):
        Settings(feh_width=0.0)


def test_both_engines_agree_where_gravity_and_metallicity_are_given():
    star = Star("a", FIVE, logg=4.4, feh=-0.2, av=(0.2, 0.1))
    settings = Settings(effective_draws=4000)
    chain = fit(star, emitter="atmosphere", settings=settings)
    sums = fit(star, emitter="atmosphere", engine="quadrature", settings=settings)
    for name in ("temperature", "angular_diameter", "av", "bolometric_flux"):
        middle, low, high = sums.summary[name]
        np.testing.assert_allclose(
            np.divide(chain.summary[name], middle),
            np.divide(sums.summary[name], middle),
            atol=0.06 * (high - low) / middle,
        )  # 5 standard errors of a percentile of 4,000 draws
    with pytest.raises(SettingsError, match="cannot vary logg"):
        fit(Star("a", FIVE, feh=0.0), emitter="atmosphere", engine="quadrature")
