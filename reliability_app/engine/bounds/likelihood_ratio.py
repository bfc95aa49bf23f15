"""Likelihood-ratio bounds: the extremes of a measure over the likelihood region.

The extreme is where the gradients of measure and log-likelihood are parallel on the outline; the equations are solved
by Newton's method from the best point of the outline (Lagrange; equivalent to profiling the reading itself, see
Venzon & Moolgavkar 1988, Appl. Statist. 37, 87-94, cited from memory).
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import minimize_scalar

from reliability_app.engine.bounds.region import Region, ray_lengths
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.life_measures import Measure
from reliability_app.engine.likelihood import Terms

Array = NDArray[np.float64]

_MOST_STEPS = 30
_DROP_REACHED = 1e-10
_PARALLEL_REACHED = 1e-9


class EndPoints(NamedTuple):
    """Ends of a bound on one side: values of the measure, and the points (a, b) at which they are taken.

    At such a point the log-likelihood is the greatest among all points with that value of the measure. The value is
    infinite, and the point without meaning, where the region is open to that side.
    """

    value: Array
    a: Array
    b: Array


def likelihood_end(estimate: Estimate, measure: Measure, region: Region, sign: float) -> EndPoints:
    """Return the lower (sign -1) or upper (sign 1) ends of a measure over the region."""
    on_outline = measure.terms(region.a[None, :], region.b[None, :]).value
    best = np.argmax(sign * on_outline, axis=1)
    rows = np.arange(best.size)
    coarse = np.where(region.closed[best], on_outline[rows, best], sign * np.inf)
    if estimate.b_is_fixed:
        return EndPoints(coarse, region.a[best], region.b[best])
    return _refined(estimate, measure, region, best, sign=sign, coarse=coarse)


def outline_end(measure: Measure, region: Region, sign: float) -> Array:
    """Return the ends over the points of the outline alone: exact to some 1e-5 of the width, for pictures."""
    values = measure.terms(region.a[None, :], region.b[None, :]).value
    best = np.argmax(sign * values, axis=1)
    return np.where(region.closed[best], values[np.arange(best.size), best], sign * np.inf)


def _refined(
    estimate: Estimate, measure: Measure, region: Region, best: NDArray[np.intp], *, sign: float, coarse: Array
) -> EndPoints:
    a, b, settled = _by_newton(estimate, measure, region, best)
    value = measure.terms(a, b).value
    # Newton's method may run to another stationary point; the outline's own extreme is then better by much.
    lost = ~(settled & np.isfinite(value) & (sign * (value - coarse) >= -1e-3 * (np.abs(coarse) + 1.0)))
    for row in np.flatnonzero(lost & np.isfinite(coarse)).tolist():
        value[row], a[row], b[row] = _by_search(estimate, measure, region, int(best[row]), row, sign)
    here = measure.terms(np.array([estimate.a]), np.array([estimate.b])).value
    good = np.isfinite(coarse) & (sign * (value - here) >= 0)
    return EndPoints(np.where(good, value, sign * np.inf), a, b)


def _by_newton(
    estimate: Estimate, measure: Measure, region: Region, best: NDArray[np.intp]
) -> tuple[Array, Array, NDArray[np.bool_]]:
    """Solve the Lagrange conditions from the best outline points; returns the points and which of them settled."""
    a, b = region.a[best].copy(), region.b[best].copy()
    target = float(estimate.terms.value[0]) - region.drop
    settled = np.zeros(a.size, dtype=bool)
    for _ in range(_MOST_STEPS):
        likelihood, asked = estimate.evaluate(a, b), measure.terms(a, b)
        gap = likelihood.value - target
        cross, size = _cross(likelihood, asked)
        settled = (np.abs(gap) <= _DROP_REACHED * (1.0 + abs(target))) & (np.abs(cross) <= _PARALLEL_REACHED * size)
        if settled.all():
            break
        step_a, step_b = _step(likelihood, asked, gap, cross)
        a, b = a + step_a, np.maximum(b + step_b, 0.1 * b)
    return a, b, settled


def _cross(likelihood: Terms, asked: Terms) -> tuple[Array, Array]:
    cross = likelihood.d_b * asked.d_a - likelihood.d_a * asked.d_b
    size = np.hypot(likelihood.d_a, likelihood.d_b) * np.hypot(asked.d_a, asked.d_b)
    return cross, size


def lagrange_step(likelihood: Terms, asked: Terms, gap: Array) -> tuple[Array, Array]:
    """Return the Newton step in (a, b) to where the log-likelihood has no gap and the gradients are parallel."""
    return _step(likelihood, asked, gap, _cross(likelihood, asked)[0])


def _step(likelihood: Terms, asked: Terms, gap: Array, cross: Array) -> tuple[Array, Array]:
    """Newton step for gap = 0 and cross = 0."""
    cross_a = (
        likelihood.d_ab * asked.d_a
        + likelihood.d_b * asked.d_aa
        - likelihood.d_aa * asked.d_b
        - likelihood.d_a * asked.d_ab
    )
    cross_b = (
        likelihood.d_bb * asked.d_a
        + likelihood.d_b * asked.d_ab
        - likelihood.d_ab * asked.d_b
        - likelihood.d_a * asked.d_bb
    )
    determinant = likelihood.d_a * cross_b - likelihood.d_b * cross_a
    return (
        -(gap * cross_b - cross * likelihood.d_b) / determinant,
        -(cross * likelihood.d_a - gap * cross_a) / determinant,
    )


def _by_search(
    estimate: Estimate, measure: Measure, region: Region, best: int, row: int, sign: float
) -> tuple[float, float, float]:
    """Search the direction of the extreme between the neighbours of the best outline point; value and point."""
    offsets = np.stack([region.a - estimate.a, region.b - estimate.b], axis=-1)
    left, right = offsets[(best - 2) % len(offsets)], offsets[(best + 2) % len(offsets)]
    root = np.sqrt(2.0 * region.drop)

    def point(share: float) -> Array:
        step = ((1.0 - share) * left + share * right)[None, :]
        radius, _ = ray_lengths(estimate, step, root)
        return np.asarray(np.array([estimate.a, estimate.b])[:, None] + radius * step.T)

    def loss(share: float) -> float:
        at = point(share)
        return -sign * float(measure.terms(at[0], at[1]).value[row])

    found = minimize_scalar(loss, bounds=(0.0, 1.0), method="bounded", options={"xatol": 1e-10})
    at = point(float(found.x))
    return -sign * float(found.fun), float(at[0, 0]), float(at[1, 0])
