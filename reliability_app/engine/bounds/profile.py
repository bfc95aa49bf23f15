"""Likelihood-ratio bounds by profiling the reading itself: slow, but needs no concave log-likelihood.

Units that entered late can bend the log-likelihood so far that the region of the other file is no longer convex. Here
the log-likelihood is maximised anew at each value of the reading, over the whole range of the other coordinate.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import StandardDistribution
from reliability_app.engine.life_measures import HazardMeasure, LifeMeasure, Measure, ScoreMeasure, SlopeMeasure

Array = NDArray[np.float64]
Points = Callable[[float, Array], tuple[Array, Array]]

_REACH = 16.0
_GRID = 48
_ZOOMS = 6
_MOST_DOUBLINGS = 12


def profile_end(estimate: Estimate, measure: Measure, root: float, sign: float) -> Array:
    """Return the lower (sign -1) or upper (sign 1) ends, shape (measure.size,); infinite where none is reached."""
    start = measure.terms(np.array([estimate.a]), np.array([estimate.b]))
    gradient = np.stack([start.d_a, start.d_b], axis=-1)
    errors = np.sqrt(np.einsum("ij,jk,ik->i", gradient, estimate.covariance_ab, gradient))
    ends = zip(_lines(measure, estimate), start.value.tolist(), errors.tolist(), strict=True)
    return np.array([_end(estimate, line, value, sign * error, root) for line, value, error in ends])


def _lines(measure: Measure, estimate: Estimate) -> list[Points]:
    """Return for each function the points (a, b) on which it has a given value, over a free coordinate around 0."""
    match measure:
        case LifeMeasure():
            return [_life_line(estimate, z) for z in measure.z.tolist()]
        case ScoreMeasure():
            return [_score_line(estimate, y) for y in measure.y.tolist()]
        case HazardMeasure():
            return [_hazard_line(estimate, measure.standard, y) for y in measure.y.tolist()]
        case SlopeMeasure():
            return [_slope_line(estimate)]
    raise TypeError(f"{type(measure).__name__} has no line along which it is constant.")


def _life_line(estimate: Estimate, z: float) -> Points:
    def line(value: float, u: Array) -> tuple[Array, Array]:
        b = estimate.b * np.exp(u)
        return z - value * b, b

    return line


def _score_line(estimate: Estimate, y: float) -> Points:
    def line(value: float, u: Array) -> tuple[Array, Array]:
        b = estimate.b * np.exp(u)
        return value - y * b, b

    return line


def _slope_line(estimate: Estimate) -> Points:
    error = float(np.sqrt(estimate.covariance_ab[0, 0]))

    def line(value: float, u: Array) -> tuple[Array, Array]:
        return estimate.a + error * np.sinh(u), np.full_like(u, np.exp(value))

    return line


def _hazard_line(estimate: Estimate, standard: StandardDistribution, y: float) -> Points:
    """Follow a hazard along the score z at its age: ln b = ln hazard - ln h(z), a = z - b y."""
    start = estimate.a + estimate.b * y

    def line(value: float, u: Array) -> tuple[Array, Array]:
        z = start + u
        with np.errstate(over="ignore"):
            b = np.exp(value - standard.log_hazard(z).value)
        return z - b * y, b

    return line


def _end(estimate: Estimate, line: Points, value: float, step: float, root: float) -> float:
    """Walk away from the estimate in doubling steps until the signed root passes `root`, then find where it does."""
    inside = value
    for _ in range(_MOST_DOUBLINGS):
        outside = inside + step
        if _signed_root(estimate, line, outside) > root:
            return float(
                brentq(lambda at: _signed_root(estimate, line, at) - root, inside, outside, xtol=1e-13, rtol=1e-13)
            )
        inside, step = outside, 2.0 * step
    return float(np.copysign(np.inf, step))


def _signed_root(estimate: Estimate, line: Points, value: float) -> float:
    """Return sqrt(2 (l_max - profile)) at a value of the reading, by ever finer grids over the free coordinate."""
    low, high, best = -_REACH, _REACH, -np.inf
    for _ in range(_ZOOMS):
        grid = np.linspace(low, high, _GRID)
        values = estimate.evaluate(*line(value, grid)).value
        values = np.where(np.isfinite(values), values, -np.inf)
        at = int(np.argmax(values))
        best = max(best, float(values[at]))
        step = grid[1] - grid[0]
        # At an end of the first grid the next one looks beyond it.
        low, high = grid[at] - step, grid[at] + step
        if at in (0, _GRID - 1):
            low, high = grid[at] - _GRID * step, grid[at] + _GRID * step
    return float(np.sqrt(2.0 * max(float(estimate.terms.value[0]) - best, 0.0)))
