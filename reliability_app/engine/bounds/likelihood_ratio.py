"""Likelihood-ratio bounds: the extremes of a measure over the likelihood region.

The extreme is where the gradients of measure and log-likelihood are parallel on the outline; the equations are solved
by Newton's method from the best point of the outline (Lagrange; equivalent to profiling the reading itself, see
Venzon & Moolgavkar 1988, Appl. Statist. 37, 87-94, cited from memory).
"""

from __future__ import annotations

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


def likelihood_interval(estimate: Estimate, measure: Measure, region: Region) -> tuple[Array, Array]:
    """Return both ends, each of shape (measure.size,); -inf or inf where the region is open to that side."""
    rough = outline_interval(measure, region)
    if estimate.b_is_fixed:
        return rough
    on_outline = measure.terms(region.a[None, :], region.b[None, :]).value
    ends = []
    for sign, coarse in ((-1.0, rough[0]), (1.0, rough[1])):
        best = np.argmax(sign * on_outline, axis=1)
        ends.append(_refined(estimate, measure, region, best, sign=sign, coarse=coarse))
    return ends[0], ends[1]


def outline_interval(measure: Measure, region: Region) -> tuple[Array, Array]:
    """Return the extremes over the points of the outline alone: exact to some 1e-5 of the width, for pictures."""
    values = measure.terms(region.a[None, :], region.b[None, :]).value
    low, high = np.argmin(values, axis=1), np.argmax(values, axis=1)
    rows = np.arange(values.shape[0])
    return (
        np.where(region.closed[low], values[rows, low], -np.inf),
        np.where(region.closed[high], values[rows, high], np.inf),
    )


def _refined(
    estimate: Estimate,
    measure: Measure,
    region: Region,
    best: NDArray[np.intp],
    *,
    sign: float,
    coarse: Array,
) -> Array:
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
    value = measure.terms(a, b).value
    # Newton's method may run to another stationary point; the outline's own extreme is then better by much.
    spread = np.abs(coarse) + 1.0
    lost = ~(settled & np.isfinite(value) & (sign * (value - coarse) >= -1e-3 * spread))
    for row in np.flatnonzero(lost & np.isfinite(coarse)).tolist():
        value[row] = _by_search(estimate, measure, region, int(best[row]), row, sign)
    here = measure.terms(np.array([estimate.a]), np.array([estimate.b])).value
    return np.where(np.isfinite(coarse) & (sign * (value - here) >= 0), value, sign * np.inf)


def _cross(likelihood: Terms, asked: Terms) -> tuple[Array, Array]:
    cross = likelihood.d_b * asked.d_a - likelihood.d_a * asked.d_b
    size = np.hypot(likelihood.d_a, likelihood.d_b) * np.hypot(asked.d_a, asked.d_b)
    return cross, size


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


def _by_search(estimate: Estimate, measure: Measure, region: Region, best: int, row: int, sign: float) -> float:
    """Search the direction of the extreme between the neighbours of the best outline point."""
    offsets = np.stack([region.a - estimate.a, region.b - estimate.b], axis=-1)
    left, right = offsets[(best - 2) % len(offsets)], offsets[(best + 2) % len(offsets)]
    root = np.sqrt(2.0 * region.drop)

    def loss(share: float) -> float:
        step = ((1.0 - share) * left + share * right)[None, :]
        radius, _ = ray_lengths(estimate, step, root)
        at = np.array([estimate.a, estimate.b])[:, None] + radius * step.T
        return -sign * float(measure.terms(at[0], at[1]).value[row])

    found = minimize_scalar(loss, bounds=(0.0, 1.0), method="bounded", options={"xatol": 1e-10})
    return -sign * float(found.fun)
