"""The likelihood that is Gaussian in flux, with the angular diameter integrated numerically.

Given temperature, A_V and misfit the posterior of s = 2 ln theta has one peak, at
times with a long tail to small stars (a star too faint to be seen may be of any
smaller size). It is tabulated about that peak, finely within a few widths, then in
growing steps to the bounds of theta, and drawn from the table; the exact
likelihood at each draw corrects the table.
"""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from starkiln.inference import _kernels
from starkiln.inference._problem import LN_SOLID_ANGLE, Problem
from starkiln.inference.engines import _truncated

#: Fisher steps to the peak in s, none longer than `_LONGEST`; the last is below `_NEAR` widths.
_STEPS, _LONGEST, _NEAR = 12, 1.5, 0.1
#: Narrower than this in s the posterior is drawn from a Gaussian in place of the table.
_GAUSSIAN = 0.12
#: The table: even steps to so many widths, then growing ones to the bounds.
_INNER = np.linspace(-6.0, 6.0, 21)
_OUTER = np.geomspace(0.02, 1.0, 6)
#: The largest width in s, about that of a star seen at one sigma.
_WIDEST = 0.7


class _Information(NamedTuple):
    """Fisher information on ln model fluxes: each band's own, less what offsets share."""

    own: np.ndarray
    power: np.ndarray
    spread: np.ndarray


class FluxForm:
    """ln of the likelihood, integrated over ln theta, and what a step in A_V needs.

    The attributes and methods are those of `LogForm`; the components are the bands,
    in units of their errors.
    """

    #: A_V's conditional is no Gaussian where few bands are seen.
    defence = 0.4

    def __init__(self, problem: Problem) -> None:
        self._bands = problem.bands
        self.rotation = np.eye(len(problem.bands.names))
        self.offset = LN_SOLID_ANGLE - problem.bands.ln_error
        low, high = problem.bounds[problem.names.index("ln_diameter")]
        self._bounds = (2.0 * low, 2.0 * high)

    def fit_av(
        self, value: np.ndarray, slope: np.ndarray, misfit: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Return ln likelihood, its derivative with respect to A_V and its curvature.

        As `LogForm.fit_av`; the derivatives are those at the peak in theta.
        """
        shape, n = value.shape[:2], value.shape[2]
        f = np.broadcast_to(misfit, shape).ravel()
        value, slope = value.reshape(-1, n), slope.reshape(-1, n)
        centre, width = self._peak(value, f)
        gradient, information = self._derivatives(value + centre[:, None], f)
        one = np.ones_like(slope)
        power = np.maximum(self._inner(information, one, one), 1e-12)
        shared = self._inner(information, slope, one) / power
        # What all bands share is a change of theta, which is integrated out.
        slope = slope - shared[:, None]
        score = np.sum(gradient * slope, axis=1)
        curvature = self._inner(information, slope, slope)
        ln_like = self._integrated(value, f, centre, width)
        return ln_like.reshape(shape), score.reshape(shape), curvature.reshape(shape)

    def settle(
        self, value: np.ndarray, misfit: np.ndarray, u: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray]:
        """Return draws of ln theta and ln of likelihood times prior over their density.

        As `LogForm.settle`.
        """
        centre, width = self._peak(value, misfit)
        z, ln_q = _truncated.draw(u, *((edge - centre) / width for edge in self._bounds))
        drawn, ln_q = centre + width * z, ln_q - np.log(width)
        wide = np.flatnonzero(width > _GAUSSIAN)
        if wide.size:
            table = self._table(value[wide], misfit[wide], centre[wide], width[wide])
            drawn[wide], ln_q[wide] = _inverted(*table[:2], u[wide])
        exact = self._ln_likelihood(value + drawn[:, None], misfit)
        return 0.5 * drawn, exact - ln_q - math.log(self._bounds[1] - self._bounds[0])

    def _integrated(
        self, value: np.ndarray, f: np.ndarray, centre: np.ndarray, width: np.ndarray
    ) -> np.ndarray:
        """Return ln of the likelihood's integral over the prior of theta."""
        low, high = self._bounds
        total = self._ln_likelihood(value + centre[:, None], f)
        total += 0.5 * math.log(2.0 * math.pi) + np.log(width) - math.log(high - low)
        total += _truncated.ln_mass((low - centre) / width, (high - centre) / width)
        wide = np.flatnonzero(width > _GAUSSIAN)
        if wide.size:
            total[wide] = self._table(value[wide], f[wide], centre[wide], width[wide])[2]
        return total

    def _table(
        self, value: np.ndarray, f: np.ndarray, centre: np.ndarray, width: np.ndarray
    ) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
        """Return the table's s, its densities (largest 1) and ln of its integral per s."""
        low, high = self._bounds
        inner = centre[:, None] + width[:, None] * _INNER
        down = inner[:, :1] + _OUTER[::-1] * np.minimum(low - inner[:, :1], 0.0)
        up = inner[:, -1:] + _OUTER * np.maximum(high - inner[:, -1:], 0.0)
        s = np.clip(np.concatenate([down, inner, up], axis=1), low, high)
        m, n = s.shape[1], value.shape[1]
        flat = (value[:, None, :] + s[:, :, None]).reshape(-1, n)
        ln_like = self._ln_likelihood(flat, np.repeat(f, m)).reshape(-1, m)
        top = ln_like.max(axis=1, keepdims=True)
        density = np.exp(ln_like - top)
        total = np.sum(0.5 * (density[:, 1:] + density[:, :-1]) * np.diff(s, axis=1), axis=1)
        return s, density, top[:, 0] + np.log(total) - math.log(high - low)

    def _ln_likelihood(self, ln_scaled: np.ndarray, f: np.ndarray) -> np.ndarray:
        bands, n = self._bands, self._bands.n_detections
        zero = np.zeros(len(bands.names))
        total = _kernels.ln_likelihood_flux(
            ln_scaled[:, :n],
            f,
            bands.scaled_data[:n],
            zero[:n],
            bands.member,
            bands.offset_variance,
        )
        if bands.sign.size:
            total += _kernels.ln_likelihood_limits(
                ln_scaled[:, n:],
                f,
                bands.scaled_data[n:],
                zero[n:],
                bands.sign,
                bands.limit_offset_variance,
            )
        return total

    def _peak(self, value: np.ndarray, f: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Return the peak in s and its width, by Fisher scoring from the log form's."""
        n = self._bands.n_detections
        seen = np.maximum(self._bands.scaled_data[:n], 0.5)
        weight = 1.0 / (1.0 / seen**2 + f[:, None] ** 2)
        s = np.sum(weight * (np.log(seen) - value[:, :n]), axis=1) / weight.sum(axis=1)
        # Fainter than one sigma all bands together, the likelihood is flat.
        faintest = -0.5 * np.log(np.sum(np.exp(2.0 * value), axis=1))
        width, moving = np.empty_like(s), np.arange(s.size)
        for _ in range(_STEPS):
            here = value[moving] + s[moving, None]
            gradient, information = self._derivatives(here, f[moving])
            one = np.ones_like(here)
            total = np.maximum(self._inner(information, one, one), 1.0 / _WIDEST**2)
            step = np.clip(gradient.sum(axis=1) / total, -_LONGEST, _LONGEST)
            ahead = np.clip(np.maximum(s[moving] + step, faintest[moving]), *self._bounds)
            moved = np.abs(ahead - s[moving])
            s[moving], width[moving] = ahead, 1.0 / np.sqrt(total)
            moving = moving[moved > _NEAR * width[moving]]
            if not moving.size:
                break
        return s, width

    def _inner(self, information: _Information, a: np.ndarray, b: np.ndarray) -> np.ndarray:
        """Return a' I b for steps a, b in the bands' ln fluxes, (m, n) -> (m,)."""
        n = self._bands.n_detections
        shared = (information.power * a[:, :n]) @ self._bands.member
        shared = shared * ((information.power * b[:, :n]) @ self._bands.member)
        own = np.sum(information.own * a * b, axis=1)
        return own - np.sum(information.spread * shared, axis=1)

    def _derivatives(self, ln_scaled: np.ndarray, f: np.ndarray) -> tuple[np.ndarray, _Information]:
        """Return the derivatives of ln likelihood by ln model flux, and the information."""
        bands, n = self._bands, self._bands.n_detections
        # Beyond e^60 errors a product of four fluxes leaves the range of doubles.
        model = np.exp(np.minimum(ln_scaled, 60.0))
        seen, relative = model[:, :n], f[:, None] ** 2
        residual = bands.scaled_data[:n] - seen
        weight = 1.0 / (1.0 + relative * seen * seen)
        grow = relative * seen * seen * weight
        pull, power = weight * seen * residual, weight * seen * seen
        gradient = pull * (1.0 + residual * relative * seen * weight) - grow
        growth = 1.0 + (power @ bands.member) * bands.offset_variance
        push = (pull @ bands.member) * bands.offset_variance / growth
        each = push @ bands.member.T
        shared = bands.offset_variance / growth
        spread = shared @ bands.member.T
        gradient += each * (pull * (1.0 - 2.0 * grow) - power)
        gradient -= (each * each + spread) * power * (1.0 - grow)
        own = power + 2.0 * grow * grow
        if bands.sign.size:
            more = self._limit_derivatives(model[:, n:], f)
            gradient = np.concatenate([gradient, more[0]], axis=1)
            own = np.concatenate([own, more[1]], axis=1)
        return gradient, _Information(own, power, shared)

    def _limit_derivatives(self, model: np.ndarray, f: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        from scipy.special import log_ndtr

        bands = self._bands
        relative = f[:, None] ** 2 + bands.limit_offset_variance
        variance = 1.0 + relative * model * model
        sigma = np.sqrt(variance)
        gap = bands.scaled_data[bands.n_detections :] - model
        z = bands.sign * gap / sigma
        slope = -bands.sign * model / sigma * (1.0 + gap * relative * model / variance)
        hazard = np.exp(-0.5 * z * z - 0.5 * math.log(2.0 * math.pi) - log_ndtr(z))
        return hazard * slope, np.maximum(hazard * (hazard + z), 0.0) * slope * slope


def _inverted(s: np.ndarray, density: np.ndarray, u: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Invert, row by row, the distributions of densities that are linear between nodes.

    `s` and `density` have shape (m, nodes), `u` (m,); returns points and ln densities.
    """
    step = np.diff(s, axis=1)
    cell = 0.5 * (density[:, 1:] + density[:, :-1]) * step
    cumulative = np.cumsum(cell, axis=1)
    wanted = u * cumulative[:, -1]
    i = np.minimum((cumulative < wanted[:, None]).sum(axis=1), step.shape[1] - 1)
    row = np.arange(u.size)
    width = step[row, i]
    mass = np.clip(wanted - cumulative[row, i] + cell[row, i], 0.0, cell[row, i])
    first = density[row, i]
    rise = (density[row, i + 1] - first) / np.maximum(width, 1e-300)
    root = np.sqrt(np.maximum(first * first + 2.0 * rise * mass, 1e-300))
    drawn = s[row, i] + np.clip(2.0 * mass / (first + root), 0.0, width)
    return drawn, np.log(root) - np.log(cumulative[:, -1])
