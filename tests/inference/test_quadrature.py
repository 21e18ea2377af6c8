"""The quadrature engine against brute-force grids, its parts against scipy.

Outside checks: scipy's truncated normal, multivariate normal and adaptive
integration; the grids are those of `test_ensemble`, sums over a plain grid with
matrices written out in full.
"""

from __future__ import annotations

import numpy as np
import pytest
from astropy import units as u
from scipy.integrate import quad
from scipy.stats import norm, truncnorm

from starkiln import Star, fit
from starkiln.errors import SettingsError
from starkiln.inference import ENGINES, Settings, build_problem
from starkiln.inference.engines import _quadrature, _truncated
from starkiln.inference.engines._lattice import MULTIPLIERS, shifted_lattices
from starkiln.runner import dust_of, emitter_of

from .test_ensemble import FAINT, HOT, WARM, grid_log, midpoints

DARK = {**FAINT, "SDSS r": (-0.4e-4 * u.Jy, 1.2e-4 * u.Jy)}


def problem_of(photometry, known=None, **settings):
    settings = Settings(**settings)
    star = Star("quadrature", photometry, **(known or {}))
    return build_problem(star, emitter_of("blackbody"), dust_of(settings), settings)


def solve(problem, seed=3):
    samples = ENGINES["quadrature"](problem, np.random.default_rng(seed))
    assert samples.converged, samples.message
    return samples


@pytest.mark.parametrize(
    ("photometry", "known", "settings", "t_range", "a_range"),
    [
        (WARM, {"av": (0.3, 0.05)}, {}, (8.45, 8.95), (0.0, 0.6)),
        (HOT, {"av": (0.6, 0.3)}, {}, (8.9, np.log(50000.0)), (0.0, 2.4)),
        (WARM, {}, {"dust": "free"}, (8.3, np.log(50000.0)), (0.0, 4.5)),
        (WARM, {}, {"dust": "free", "temperature_range": (5000.0, 6000.0)}, None, (0.0, 2.5)),
        (WARM, {}, {"dust": "uniform", "dust_width": 0.8}, (8.3, 9.3), (0.0, 0.8)),
    ],
    ids=["warm", "hot and dusty", "edge at A_V = 0", "edge of temperature", "uniform dust"],
)
def test_log_form_agrees_with_a_brute_force_grid(photometry, known, settings, t_range, a_range):
    problem = problem_of(photometry, known, **settings)
    samples = solve(problem)
    t_prior, a_prior = (
        problem.parameters[problem.names.index(n)].prior for n in ("ln_temperature", "av")
    )
    t = midpoints(*(t_range or (t_prior.lower, t_prior.upper)), 300)
    a = midpoints(*a_range, 150)
    lnf = midpoints(*np.log(problem.settings.misfit_range), 40)
    cube, _, _ = grid_log(problem, t, a, lnf)
    cube = cube + a_prior.ln_density(a)[None, :, None]
    p = np.exp(cube - cube.max())
    for name, axes, x in (
        ("ln_temperature", (1, 2), t),
        ("av", (0, 2), a),
        ("ln_misfit", (0, 1), lnf),
    ):
        assert off(problem.column(samples.x, name), x, p.sum(axis=axes)) < 0.03, name
    # The grid leaves out the constants: 2 pi for all bands but one, the prior's heights.
    cell = (t[1] - t[0]) * (a[1] - a[0]) * (lnf[1] - lnf[0])
    ln_evidence = cube.max() + np.log(p.sum() * cell) + t_prior.ln_density(t[:1])[0]
    ln_evidence -= 0.5 * (problem.bands.ln_data.size - 1) * np.log(2.0 * np.pi) + np.log(2.0)
    spans = [np.ptp(problem.bounds[problem.names.index(n)]) for n in ("ln_misfit", "ln_diameter")]
    assert samples.ln_evidence == pytest.approx(ln_evidence - np.log(spans).sum(), abs=0.02)


def off(draws, x, p):
    """Largest difference of the 16th, 50th and 84th percentiles, in sigma."""
    step = x[1] - x[0]
    edges = np.append(x - 0.5 * step, x[-1] + 0.5 * step)
    cdf = np.concatenate([[0.0], np.cumsum(p) / p.sum()])
    expected = np.interp([0.16, 0.5, 0.84], cdf, edges)
    got = np.percentile(draws, [16, 50, 84])
    return np.abs(got - expected).max() / (0.5 * (expected[2] - expected[0]))


def test_flux_form_with_limits_agrees_with_a_brute_force_grid():
    # The likelihood is the package's own here; test_ensemble writes it out in full.
    problem = problem_of(DARK, dust="free")
    samples = solve(problem)
    assert problem.form == "flux"
    t = midpoints(*np.log(problem.settings.temperature_range), 60)
    s, a = midpoints(-8.5, -3.5, 100), midpoints(0.0, 4.5, 30)
    lnf = midpoints(*np.log(problem.settings.misfit_range), 8)
    points = np.array(np.meshgrid(t, s, a, lnf, indexing="ij")).reshape(4, -1).T
    assert problem.names == ("ln_temperature", "ln_diameter", "av", "ln_misfit")
    ln_p = np.concatenate([problem.ln_posterior(part) for part in np.array_split(points, 40)])
    p = np.exp(ln_p - ln_p.max()).reshape(t.size, s.size, a.size, lnf.size)
    for i, x in enumerate((t, s, a)):
        axes = tuple(k for k in range(4) if k != i)
        assert off(samples.x[:, i], x, p.sum(axis=axes)) < 0.05, problem.names[i]


@pytest.mark.parametrize("photometry", [WARM, DARK], ids=["log", "flux"])
def test_theta_is_integrated_as_adaptive_integration_does(photometry):
    problem = problem_of(photometry, dust="free")
    target = _quadrature.target_of(problem)
    x = np.array([[9.0, 0.0, 0.7, np.log(0.08)], [8.6, 0.0, 0.0, np.log(0.02)]])
    value = target.surface.at(x[:, 0], x[:, 2])
    misfit = np.exp(x[:, 3])
    diameter, _ = target.form.settle(value, misfit, np.array([0.5, 0.5]))
    ln_like, _, _ = target.form.fit_av(
        value[:, None, :], np.ones((2, 1, value.shape[1])), misfit[:1]
    )
    for row, centre, found in zip(x[:1], diameter[:1], ln_like[:1, 0], strict=True):
        top = problem.ln_likelihood(np.array([[row[0], centre, row[2], row[3]]]))[0]

        def relative(s, row=row, top=top):
            return np.exp(problem.ln_likelihood(np.array([[row[0], s, row[2], row[3]]]))[0] - top)

        total, _ = quad(relative, centre - 3.0, centre + 3.0, points=[centre], limit=200)
        low, high = problem.bounds[1]
        assert found == pytest.approx(top + np.log(total / (high - low)), abs=0.02)


def test_surface_is_the_table():
    problem = problem_of(HOT, dust="free")
    surface = _quadrature.target_of(problem).surface.restricted((9.1, 9.9), (0.2, 1.7))
    rng = np.random.default_rng(1)
    t, av = rng.uniform(9.1, 9.9, 50), rng.uniform(0.2, 1.7, 50)
    form = _quadrature.target_of(problem).form
    expected = (problem.table.ln_flux(t[:, None], av) + form.offset) @ form.rotation
    np.testing.assert_allclose(surface.at(t, av), expected, atol=2e-5)


@pytest.mark.parametrize("photometry", [WARM, DARK], ids=["Gaussian", "table"])
def test_draws_of_theta_in_flux_have_the_density_that_is_stated(photometry):
    # The derivative of a point by its level is one over its density.
    problem = problem_of(photometry, dust="free", likelihood="flux")
    target = _quadrature.target_of(problem)
    level = np.linspace(0.005, 0.995, 991)
    point = target.surface.at(np.full(991, 8.65), np.full(991, 0.3))
    misfit = np.full(991, 0.05)
    diameter, ln_weight = target.form.settle(point, misfit, level)
    x = np.column_stack([np.full(991, 8.65), diameter, np.full(991, 0.3), np.log(misfit)])
    ln_prior = -np.log(np.ptp(problem.bounds[1]))
    ln_density = problem.ln_likelihood(x) + ln_prior - ln_weight
    measured = -np.log(np.gradient(diameter, level))
    assert np.abs(ln_density - measured)[5:-5].max() < 0.1
    assert abs(np.mean(ln_density - measured)) < 0.01


@pytest.mark.parametrize(("low", "high"), [(-1.0, 2.0), (-9.0, 0.5), (0.5, 3.0), (4.0, 30.0)])
def test_cut_gaussians_are_scipys(low, high):
    level = np.linspace(0.01, 0.99, 9)
    z, ln_density = _truncated.draw(level, np.full(9, low), np.full(9, high))
    # scipy, right of the mean, mirrored for the digits of its far tail.
    np.testing.assert_allclose(z, truncnorm.ppf(level, low, high), rtol=1e-9, atol=1e-10)
    np.testing.assert_allclose(ln_density, truncnorm.logpdf(z, low, high), rtol=1e-8)
    mass = np.log(norm.sf(low) - norm.sf(high))
    assert _truncated.ln_mass(np.array(low), np.array(high)) == pytest.approx(mass, rel=1e-8)


def test_far_tails_keep_their_density():
    z, ln_density = _truncated.draw(
        np.linspace(0.0, 1.0, 2001), np.full(2001, 60.0), np.full(2001, 61.0)
    )
    assert np.all(np.diff(z) > 0.0)
    # Levels are the integral of the density (Wichura's inverse ends at 38 sigma).
    inner = 0.5 * (np.exp(ln_density[1:]) + np.exp(ln_density[:-1])) * np.diff(z)
    assert inner.sum() == pytest.approx(1.0, rel=2e-2)
    assert np.log(inner[0] / np.diff(z)[0]) == pytest.approx(np.log(60.0), abs=0.02)


@pytest.mark.parametrize("points", MULTIPLIERS)
def test_lattices_integrate_better_than_random_points(points):
    # The mean of prod(1 + sin 2 pi x) over the cube is 1.
    lattices = shifted_lattices(np.random.default_rng(0), points, 8)
    plain = np.random.default_rng(0).uniform(size=lattices.shape)
    errors = [
        np.std(np.prod(1.0 + np.sin(2.0 * np.pi * x), axis=2).mean(axis=1))
        for x in (lattices, plain)
    ]
    assert errors[0] < 0.3 * errors[1]
    assert lattices.min() >= 0.0
    assert lattices.max() < 1.0
    for axis in range(lattices.shape[2]):
        assert np.all(np.diff(np.sort(lattices[0, :, axis])) > 0.5 / points)


def test_percentiles_of_radius_and_luminosity_hardly_depend_on_the_seed():
    star = Star("Adra 7", WARM, av=(0.3, 0.05), parallax=(2.31, 0.2))
    fits = [fit(star, engine="quadrature", rng=seed).summary for seed in range(12)]
    for name in ("temperature", "angular_diameter", "radius", "luminosity", "distance"):
        found = np.array([one[name] for one in fits])
        sigma = 0.5 * (found[:, 2] - found[:, 1]).mean()
        # As many random draws scatter by .019 and .024.
        assert found.std(axis=0, ddof=1).max() < 0.012 * sigma, name


def test_same_seed_same_bytes():
    star = Star("Adra 7", WARM, av=(0.3, 0.05), parallax=(2.31, 0.03))
    first, again, other = (fit(star, engine="quadrature", rng=seed) for seed in (4, 4, 5))
    for name, values in first.quantities.items():
        assert values.tobytes() == again.quantities[name].tobytes()
    assert first.quantities["temperature"].tobytes() != other.quantities["temperature"].tobytes()


def test_a_free_rv_is_refused_and_said():
    problem = problem_of(WARM, dust="free", dust_rv_error=0.3)
    with pytest.raises(SettingsError, match="cannot vary rv; fix it, or choose the ensemble"):
        _quadrature.run_quadrature(problem, np.random.default_rng(0))


def test_an_error_above_the_tolerance_is_said(monkeypatch):
    monkeypatch.setattr(_quadrature, "TOLERANCE", 1e-6)
    monkeypatch.setattr(_quadrature, "MULTIPLIERS", {512: MULTIPLIERS[512]})
    result = fit(Star("Adra 7", WARM), engine="quadrature")
    assert result.status == "unconverged"
    assert "percentiles are uncertain by" in result.message
    assert "ensemble" in result.message


def test_the_lattice_grows_until_the_aim_is_met():
    problem = problem_of(WARM, dust="free")
    coarse = _quadrature.run_quadrature(problem, np.random.default_rng(0), aim=0.05)
    fine = _quadrature.run_quadrature(problem, np.random.default_rng(0), aim=0.003)
    assert len(fine.x) > len(coarse.x)
    assert fine.error < 0.003 < coarse.error


@pytest.mark.long
def test_agrees_with_long_chains():
    from starkiln.inference import Settings as Plain

    from ..statistics._varied import varied

    rng = np.random.default_rng(77)
    score, left_out = [], 0
    for i in range(30):
        kind, problem = varied(rng, i)
        long = Plain(**{**problem.settings.as_dict(), "effective_draws": 6000, "max_steps": 60_000})
        problem = build_problem(problem.star, problem.emitter, problem.dust, long)
        chain = ENGINES["ensemble"](problem, np.random.default_rng(i))
        samples = ENGINES["quadrature"](problem, np.random.default_rng(i))
        if not (samples.converged and chain.converged):
            assert "faint" in kind, (kind, samples.message, chain.message)
            left_out += 1
            continue
        got, expected = (np.percentile(x, [16, 50, 84], axis=0) for x in (samples.x, chain.x))
        sigma = 0.5 * (expected[2] - expected[0])
        # Standard errors of percentiles of a Gaussian: 1.5, 1.25, 1.5 sigma / sqrt(n).
        error = np.array([1.51, 1.253, 1.51])[:, None] * sigma / np.sqrt(chain.n_eff)
        score.append(((got - expected) / np.hypot(error, 0.015 * sigma)).ravel())
        assert np.abs(score[-1]).max() < 5.5, (kind, got, expected)
    spread = np.concatenate(score)
    assert left_out <= 1
    assert abs(spread.mean()) < 0.25
    assert spread.std() < 1.35
