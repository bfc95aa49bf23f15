"""Likelihood-ratio bounds by profiling the reading itself: slow, but needs no concave log-likelihood.

Units that entered late can bend the log-likelihood so far that the region of the other file is no longer convex. Here
the log-likelihood is maximised anew at each value of the reading, over the whole range of the other coordinate.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from reliability_app.engine.bounds.constrained import curve_of
from reliability_app.engine.bounds.likelihood_ratio import EndPoints
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import StandardDistribution
from reliability_app.engine.life_measures import HazardMeasure, LifeMeasure, Measure, ScoreMeasure, SlopeMeasure

Array = NDArray[np.float64]
Points = Callable[[float, Array], tuple[Array, Array]]

_REACH = 16.0
_GRID = 48
_ZOOMS = 6
_MOST_DOUBLINGS = 12


def profile_end(estimate: Estimate, measure: Measure, root: float, sign: float) -> EndPoints:
    """Return the lower (sign -1) or upper (sign 1) ends, each of shape (measure.size,); infinite where none is reached.

    The points are those at which the log-likelihood is greatest among all with that value of the measure.
    """
    start = measure.terms(np.array([estimate.a]), np.array([estimate.b]))
    gradient = np.stack([start.d_a, start.d_b], axis=-1)
    errors = np.sqrt(np.einsum("ij,jk,ik->i", gradient, estimate.covariance_ab, gradient))
    lines = _lines(measure, estimate)
    found = zip(lines, start.value.tolist(), errors.tolist(), strict=True)
    values = [_end(estimate, line, value, sign * error, root) for line, value, error in found]
    ends = [(value, *_highest(estimate, line, value)[1:]) for line, value in zip(lines, values, strict=True)]
    return EndPoints(*(np.array(column) for column in zip(*ends, strict=True)))


def profiled_at(estimate: Estimate, measure: Measure, value: float) -> tuple[float, float, float]:
    """Return the greatest log-likelihood among all points at which a measure of size 1 has a value, and the point."""
    return _highest(estimate, _lines(measure, estimate)[0], value)


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
    return [_curve_line(estimate, measure.at(np.array([place]))) for place in range(measure.size)]


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


def _curve_line(estimate: Estimate, measure: Measure) -> Points:
    """Follow the curve on which a further reading has a value, from the point of it that goes with the estimate."""

    def line(value: float, u: Array) -> tuple[Array, Array]:
        curve = curve_of(measure, value)
        at = curve.points(curve.start(estimate.a, estimate.b) + u)
        return at.a, at.b

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
    """Return sqrt(2 (l_max - profile)) at a value of the reading."""
    top = float(estimate.terms.value[0])
    return float(np.sqrt(2.0 * max(top - _highest(estimate, line, value)[0], 0.0)))


def _highest(estimate: Estimate, line: Points, value: float) -> tuple[float, float, float]:
    """Return the greatest log-likelihood on a line and its point (a, b), by ever finer grids over the free coordinate.

    At an infinite value there is no such point.
    """
    best = (-np.inf, np.nan, np.nan)
    if not np.isfinite(value):
        return best
    low, high = -_REACH, _REACH
    for _ in range(_ZOOMS):
        grid = np.linspace(low, high, _GRID)
        # Far out on a line a point may lie beyond all numbers, and counts for nothing.
        with np.errstate(over="ignore", under="ignore", invalid="ignore", divide="ignore"):
            a, b = line(value, grid)
            values = estimate.evaluate(a, b).value
        values = np.where(np.isfinite(values), values, -np.inf)
        at = int(np.argmax(values))
        if values[at] > best[0]:
            best = float(values[at]), float(a[at]), float(b[at])
        step = grid[1] - grid[0]
        # At an end of the first grid the next one looks beyond it.
        low, high = grid[at] - step, grid[at] + step
        if at in (0, _GRID - 1):
            low, high = grid[at] - _GRID * step, grid[at] + _GRID * step
    return best
