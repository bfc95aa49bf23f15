"""Further readings of the Birnbaum-Saunders family: life = scale exp(2 arcsinh(shape z/2)) with z standard normal."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.concave_integrals import nodes_between
from reliability_app.engine.crossings import crossed_first
from reliability_app.engine.families.normal import Normal
from reliability_app.engine.likelihood import Terms
from reliability_app.engine.shaped.age_lines import AgeLine, reading_of
from reliability_app.engine.shaped.birnbaum_saunders_sheaf import BirnbaumSaundersSheaf

Array = NDArray[np.float64]

_NORMAL = Normal()
# Beyond this z nothing is left of the normal density, and so far beyond it in z squared nothing of its tail.
_FURTHEST, _DEPTH = 12.0, 110.0
# Differences in ln b of sixth order, over a step at which truncation and rounding are both near 1e-11.
_STEP = 0.03
_OFFSETS = np.arange(-3.0, 4.0)
_FIRST = np.array([-1 / 60, 3 / 20, -3 / 4, 0.0, 3 / 4, -3 / 20, 1 / 60])
_SECOND = np.array([1 / 90, -3 / 20, 3 / 2, -49 / 18, 3 / 2, -3 / 20, 1 / 90])
_GRID = np.concatenate([np.linspace(-38.0, -6.0, 33), np.linspace(-5.75, 12.0, 72)])
_MOST_STEPS, _REACHED = 100, 4e-16


@dataclass(frozen=True, eq=False)
class BirnbaumSaundersLine(AgeLine):
    """Of one sheaf; a is 0, so that derivatives in it are of no use and left at 0."""

    sheaf: BirnbaumSaundersSheaf

    def mean(self, a: Array, b: Array, kappa: Array) -> Terms:  # noqa: ARG002 - a is 0
        """Return ln of the mean, scale (1 + shape^2/2)."""
        half = 0.5 * self._square(b, kappa)
        share = half / (1.0 + half)
        value = self._log_scale(kappa) + np.log1p(half)
        return _of_b(value, -2.0 * share / b, (2.0 * share + 4.0 * share / (1.0 + half)) / b**2)

    def mode(self, a: Array, b: Array, kappa: Array) -> Terms:  # noqa: ARG002 - a is 0
        """Return ln of the mode, scale w with w^3 + (1 + p) w^2 + (3 p - 1) w - 1 = 0, p the square of the shape."""
        p = self._square(b, kappa)
        w = _positive_root(p)
        slope = 3.0 * w**2 + 2.0 * (1.0 + p) * w + 3.0 * p - 1.0
        w_p = -(w**2 + 3.0 * w) / slope
        w_pp = -(2.0 * (2.0 * w + 3.0) * w_p + (6.0 * w + 2.0 * (1.0 + p)) * w_p**2) / slope
        first, second = w_p / w, w_pp / w - (w_p / w) ** 2
        p_b, p_bb = -2.0 * p / b, 6.0 * p / b**2
        return _of_b(self._log_scale(kappa) + np.log(w), first * p_b, second * p_b**2 + first * p_bb)

    def residual(self, age: Array, a: Array, b: Array, kappa: Array) -> Terms:  # noqa: ARG002 - a is 0
        """Return ln of the mean residual life."""
        stretch = _OFFSETS.reshape((-1,) + (1,) * b.ndim) * _STEP
        values = self._log_residual(age, b * np.exp(stretch), kappa)
        first = np.tensordot(_FIRST, values, 1) / _STEP
        second = np.tensordot(_SECOND, values - values[3], 1) / _STEP**2
        return _of_b(values[3], first / b, (second - first) / b**2)

    def hazard_age(self, rate: Array, a: Array, b: Array, kappa: Array) -> Terms:  # noqa: ARG002 - a is 0
        """Return ln of the first age at which the hazard, which rises to a peak and falls, reaches the rate."""
        half = 0.5 * self.sheaf.size(kappa)
        offset = self._log_scale(kappa) + np.log(2.0 * half) + np.log(rate)

        def rising(y: Array) -> tuple[Array, Array, Array]:
            """Return ln of hazard/rate at y with two derivatives in y."""
            hazard, q = _NORMAL.log_hazard(b * y), half * half
            root = 1.0 + q * y * y
            value = np.log(b) + hazard.value - offset - 2.0 * np.arcsinh(half * y) + 0.5 * np.log(root)
            first = b * hazard.first - 2.0 * half / np.sqrt(root) + q * y / root
            second = b * b * hazard.second + 2.0 * half * q * y / root**1.5 + q * (1.0 - q * y * y) / root**2
            return value, first, second

        grid = _GRID.reshape((-1,) + (1,) * b.ndim) / b
        y = crossed_first(lambda at: rising(at)[:2], np.zeros_like(b), grid)
        inside = np.isfinite(y)
        at = np.where(inside, y, 0.0)
        hazard = _NORMAL.log_hazard(b * at)
        _, f_y, f_yy = rising(at)
        f_b, f_yb = 1.0 / b + hazard.first * at, hazard.first + b * at * hazard.second
        with np.errstate(divide="ignore", invalid="ignore"):
            y_b = np.where(inside, -f_b / f_y, 0.0)
            f_bb = hazard.second * at * at - 1.0 / (b * b)
            y_bb = np.where(inside, -(f_bb + 2.0 * f_yb * y_b + f_yy * y_b * y_b) / f_y, 0.0)
        return reading_of(self.sheaf, _of_b(y, y_b, y_bb), kappa)

    def _log_scale(self, kappa: Array) -> Array:
        return self.sheaf.shift + self.sheaf.spread * kappa

    def _square(self, b: Array, kappa: Array) -> Array:
        """Return the square of the shape."""
        return (self.sheaf.size(kappa) / b) ** 2

    def _log_residual(self, age: Array, b: Array, kappa: Array) -> Array:
        """Return ln of the mean of what a life beyond an age is longer than it; at age 0, of the mean."""
        age, b, kappa = np.broadcast_arrays(age, b, kappa)
        started = age > 0
        safe = np.where(started, age, 1.0)
        z = b * self.sheaf.to_y(safe, kappa)
        low, shape = np.maximum(z, -_FURTHEST), self.sheaf.size(kappa) / b
        high = np.sqrt(np.maximum(z, 0.0) ** 2 + _DEPTH)
        ends = np.stack([low, np.clip(0.0, low, high), high], axis=-1)
        nodes, weight = nodes_between(ends.reshape(-1, 3))
        nodes, weight = nodes.reshape(*z.shape, -1), weight.reshape(*z.shape, -1)
        half = 0.5 * shape[..., None]
        start = np.arcsinh(half * z[..., None])
        tail = _NORMAL.log_survival(z).value[..., None]
        grown = np.expm1(2.0 * (np.arcsinh(half * nodes) - start))
        with np.errstate(over="ignore", under="ignore"):
            risen = np.sum(weight * grown * np.exp(_NORMAL.log_density(nodes).value - tail), axis=-1)
        mean = self._log_scale(kappa) + np.log1p(0.5 * shape**2)
        return np.where(started, np.log(safe) + np.log(risen), mean)


def _of_b(value: Array, first: Array, second: Array) -> Terms:
    zero = np.zeros_like(value)
    return Terms(value, zero, first, zero, zero, second)


def _positive_root(p: Array) -> Array:
    """Return the one positive root of the cubic of the mode, from above, where it bends upwards."""
    w = np.ones_like(p)
    for _ in range(_MOST_STEPS):
        value = w**3 + (1.0 + p) * w**2 + (3.0 * p - 1.0) * w - 1.0
        step = value / (3.0 * w**2 + 2.0 * (1.0 + p) * w + 3.0 * p - 1.0)
        w = w - step
        if (np.abs(step) <= _REACHED * w).all():
            break
    return w
