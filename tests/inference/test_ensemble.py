"""The ensemble against a brute-force grid, and its repeatability.

Outside check: the posterior is written out again here with scipy's multivariate
normal distribution and full covariance matrices, on a plain grid, and summed.
"""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import multivariate_normal, norm

from starkiln import Star, fit
from starkiln.forward import band_fluxes
from starkiln.inference import ENGINES, Settings, build_problem
from starkiln.passbands import load_band
from starkiln.runner import dust_of, emitter_of

MAG = 0.4 * np.log(10.0)
SETTINGS = Settings(effective_draws=6000)
SOLID = np.log(np.pi / 4.0) + 2.0 * np.log(np.pi / 180.0 / 3.6e6)
WARM = {
    "Gaia BP": (10.62, 0.01),
    "Gaia G": (10.23, 0.01),
    "Gaia RP": (9.70, 0.01),
    "2MASS J": (9.10, 0.02),
    "2MASS Ks": (8.66, 0.02),
    "WISE W3": (8.6, 0.05),
}
HOT = {
    "SDSS u": (14.3, 0.03),
    "SDSS g": (14.6, 0.02),
    "SDSS r": (15.0, 0.02),
    "SDSS i": (15.3, 0.02),
}
#: A cool faint star: two detections and a limit; the test adds a flux below zero.
FAINT = {
    "2MASS J": (16.2, 0.1),
    "2MASS Ks": (15.4, 0.1),
    "WISE W1": (">", 14.6),
}


def zero_points(names):
    """The bands' own zero-point errors and the covariance of the common offsets, ln flux."""
    bands = [load_band(name) for name in names]
    own = np.array([band.zero_point_error_mag * MAG for band in bands])
    shared = [
        [(a.system == b.system) * (a.offset_error_mag * MAG) ** 2 for b in bands] for a in bands
    ]
    return own, np.array(shared)


def covariance(problem):
    """The covariance of the ln fluxes without misfit, written out in full."""
    relative = np.array([m.fractional_error for m in problem.star.measurements])
    own, shared = zero_points(problem.bands.names)
    return np.diag(relative**2 + own**2) + shared


def grid_log(problem, t, av, lnf):
    """ln of the posterior on a grid of ln T, A_V and ln f; ln theta summed exactly.

    For a flat prior the integral over ln theta of a Gaussian likelihood is that of
    generalised least squares (Aitken 1936, Proc. R. Soc. Edinb. 55, 42).
    """
    y = problem.bands.ln_data
    noise = covariance(problem)
    points = np.array(np.meshgrid(t, av, indexing="ij")).reshape(2, -1)
    shape = problem.table.ln_flux(points[0][:, None], points[1]) + SOLID
    ones = np.ones(y.size)
    cube, centre, width = [], [], []
    for f in np.exp(lnf):
        inverse = np.linalg.inv(noise + f * f * np.eye(y.size))
        weight = ones @ inverse @ ones
        s = (y - shape) @ inverse @ ones / weight
        residual = y - shape - s[:, None]
        chi2 = np.einsum("ni,ij,nj->n", residual, inverse, residual)
        logdet = np.linalg.slogdet(inverse)[1]
        cube.append(-0.5 * (chi2 - logdet + np.log(weight)))
        centre.append(0.5 * s)
        width.append(np.full(s.size, 0.5 / np.sqrt(weight)))
    order = (len(lnf), len(t), len(av))
    return (np.reshape(v, order).transpose(1, 2, 0) for v in (cube, centre, width))


def midpoints(low, high, n):
    """The midpoints of n equal cells, so that no edge counts double."""
    return low + (high - low) * (np.arange(n) + 0.5) / n


def moments(x, p):
    """Mean, standard deviation, 16th and 84th percentiles of a density on a grid."""
    p = p / p.sum()
    mean = x @ p
    cdf = np.cumsum(p) - 0.5 * p
    return np.array([mean, np.sqrt(p @ (x - mean) ** 2), *np.interp([0.16, 0.84], cdf, x)])


def agree(draws, expected, n_eff):
    """Whether moments of draws agree with the grid's, within 4 standard errors.

    Standard errors for `n_eff` independent draws (Kendall & Stuart 1977, The Advanced
    Theory of Statistics, sects. 10.9 and 10.10): of the deviation with the draws' own
    kurtosis, of the percentiles with their density about the percentile; and one per
    cent of sd for the grid's own step.
    """
    got = np.array([draws.mean(), draws.std(), *np.percentile(draws, [16, 84])])
    sd = expected[1]
    kurtosis = np.mean((draws - draws.mean()) ** 4) / draws.var() ** 2
    slopes = [np.diff(np.percentile(draws, [q - 2.0, q + 2.0])).item() / 0.04 for q in (16, 84)]
    scale = [sd, 0.5 * sd * np.sqrt(kurtosis - 1.0), *(np.sqrt(0.16 * 0.84) * v for v in slopes)]
    error = np.array(scale) / np.sqrt(n_eff)
    off = (got - expected) / np.hypot(error, 0.01 * sd)
    assert np.all(np.abs(off) < 4.0), (got, expected, off)


def solve(star, settings, seed=3):
    problem = build_problem(star, emitter_of("blackbody"), dust_of(settings), settings)
    samples = ENGINES["ensemble"](problem, np.random.default_rng(seed))
    assert samples.converged
    assert samples.n_eff > 5000
    return problem, samples


@pytest.mark.parametrize(
    ("photometry", "av", "t_range"),
    [(WARM, (0.3, 0.05), (8.45, 8.95)), (HOT, (0.6, 0.3), (8.9, 10.81))],
    ids=["warm", "hot and dusty"],
)
def test_log_form_agrees_with_a_brute_force_grid(photometry, av, t_range):
    problem, samples = solve(Star("grid", photometry, av=av), SETTINGS)
    t = midpoints(*t_range, 240)
    a = midpoints(0.0, av[0] + 6.0 * av[1], 120)
    lnf = midpoints(*np.log(SETTINGS.misfit_range), 40)
    cube, centre, _ = grid_log(problem, t, a, lnf)
    cube = cube + norm.logpdf(a, *av)[None, :, None]
    p = np.exp(cube - cube.max())
    for name, axes, x in (
        ("ln_temperature", (1, 2), t),
        ("av", (0, 2), a),
        ("ln_misfit", (0, 1), lnf),
    ):
        agree(problem.column(samples.x, name), moments(x, p.sum(axis=axes)), samples.n_eff)
    mean = np.sum(p * centre) / p.sum()
    sd = problem.column(samples.x, "ln_diameter").std()
    off = problem.column(samples.x, "ln_diameter").mean() - mean
    assert abs(off) < 4.0 * sd / np.sqrt(samples.n_eff)


def test_flux_form_with_a_limit_agrees_with_a_brute_force_grid():
    from astropy import units as u

    photometry = {**FAINT, "SDSS r": (-0.4e-4 * u.Jy, 1.2e-4 * u.Jy)}
    problem, samples = solve(Star("grid", photometry), SETTINGS)
    assert problem.form == "flux"
    t = midpoints(*np.log(SETTINGS.temperature_range), 200)
    s = midpoints(-8.5, -4.0, 200)
    lnf = midpoints(*np.log(SETTINGS.misfit_range), 16)
    star = {m.band: m for m in problem.star.measurements}
    names = [b for b in problem.bands.names if not star[b].limit]
    data = np.array([star[b].flux_w_m3 for b in names])
    error = np.array([star[b].error_w_m3 for b in names])
    own, shared = zero_points(names)
    error = np.hypot(error, own * data)
    hidden_band, limit = load_band("WISE W1"), star["WISE W1"]
    noise = np.hypot(limit.error_w_m3, hidden_band.zero_point_error_mag * MAG * limit.flux_w_m3)
    table = band_fluxes(problem.emitter, (*names, "WISE W1"), problem.dust)
    shape = np.exp(table.ln_flux(t[:, None], np.zeros_like(t)) + SOLID)
    p = np.empty((t.size, s.size, lnf.size))
    for i, row in enumerate(shape):
        for k, f in enumerate(np.exp(lnf)):
            model = np.exp(2.0 * s)[:, None] * row / error.min()
            seen, hidden = model[:, :-1], model[:, -1]
            spread = (error / error.min()) ** 2 + (f * seen) ** 2
            matrix = shared * seen[:, :, None] * seen[:, None, :] + spread[:, :, None] * np.eye(3)
            residual = data / error.min() - seen
            relative = np.hypot(f, hidden_band.offset_error_mag * MAG)
            sigma = np.hypot(noise / error.min(), relative * hidden)
            chi2 = np.einsum("ni,nij,nj->n", residual, np.linalg.inv(matrix), residual)
            p[i, :, k] = -0.5 * (chi2 + np.linalg.slogdet(matrix)[1])
            p[i, :, k] += norm.logcdf((limit.flux_w_m3 / error.min() - hidden) / sigma)
    p = np.exp(p - p.max())
    for name, axes, x in (("ln_temperature", (1, 2), t), ("ln_diameter", (0, 2), s)):
        agree(problem.column(samples.x, name), moments(x, p.sum(axis=axes)), samples.n_eff)


def test_kernels_are_scipys_multivariate_normal():
    problem, samples = solve(Star("grid", WARM, av=(0.3, 0.05)), SETTINGS)
    x = samples.x[:5]
    noise = covariance(problem)
    expected = [
        multivariate_normal.logpdf(problem.bands.ln_data, m, noise + f * f * np.eye(6))
        for m, f in zip(problem.ln_model(x), problem.misfit(x), strict=True)
    ]
    np.testing.assert_allclose(problem.ln_likelihood(x), expected, rtol=1e-10)


def test_same_seed_same_bytes_and_other_seed_other_bytes():
    star = Star("Adra 7", WARM, av=(0.3, 0.05), parallax=(2.31, 0.03))
    first, again, other = (fit(star, rng=seed) for seed in (4, 4, 5))
    for name, values in first.quantities.items():
        assert values.tobytes() == again.quantities[name].tobytes()
    assert first.quantities["temperature"].tobytes() != other.quantities["temperature"].tobytes()
