"""The joint likelihood region {(a, b): 2 (l_max - l) <= root^2}: its outline, found along rays from the maximum.

For a concave log-likelihood the region is convex, so every ray leaves it once. All pointwise likelihood-ratio bounds
of a two-parameter family are extremes of a measure over this one outline.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.estimate import Estimate

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_EVALUATIONS_FOR_RAYS = 40_000
_FEWEST_RAYS, _MOST_RAYS = 24, 120
_OUTLINE_POINTS = 480
_MOST_STEPS = 60
_DISTANCE_REACHED = 1e-9
_NEAREST_TO_ZERO = 1e-9


@dataclass(frozen=True, eq=False)
class Region:
    """Outline of a likelihood region, points in order of direction.

    Attributes
    ----------
    a, b : ndarray, shape (n,)
    closed : ndarray of bool, shape (n,)
        False where the region runs to the edge b = 0 of the parameter space without leaving it.
    drop : float
        How far below the maximum log-likelihood the outline lies: root^2/2.
    """

    a: Array
    b: Array
    closed: Mask
    drop: float


def likelihood_region(estimate: Estimate, root: float) -> Region:
    """Return the outline at signed root `root` (the normal quantile of the confidence)."""
    drop = 0.5 * root * root
    if estimate.b_is_fixed:
        scale = np.sqrt(estimate.covariance_ab[0, 0])
        step = np.array([[-scale, 0.0], [scale, 0.0]])
        radius, closed = ray_lengths(estimate, step, root)
        return Region(estimate.a + radius * step[:, 0], np.full(2, estimate.b), closed, drop)
    steps = _rays(estimate, _ray_count(estimate))
    radius, closed = ray_lengths(estimate, steps, root)
    if not closed.all():
        return Region(estimate.a + radius * steps[:, 0], estimate.b + radius * steps[:, 1], closed, drop)
    radius = _filled_in(radius)
    steps = _rays(estimate, radius.size)
    every = np.ones(radius.size, dtype=bool)
    return Region(estimate.a + radius * steps[:, 0], estimate.b + radius * steps[:, 1], every, drop)


def _rays(estimate: Estimate, count: int) -> Array:
    """Return steps (a, b) in evenly spaced directions, each one standard error long; shape (count, 2)."""
    angles = np.arange(count) * (2.0 * np.pi / count)
    whitening = np.linalg.cholesky(estimate.covariance_ab)
    return np.asarray(np.stack([np.cos(angles), np.sin(angles)], axis=-1) @ whitening.T)


def _ray_count(estimate: Estimate) -> int:
    sample = estimate.sample
    records = sample.failed.size + sample.running.size + sample.between.size + 1
    return int(np.clip(_EVALUATIONS_FOR_RAYS // records, _FEWEST_RAYS, _MOST_RAYS)) // 8 * 8


def ray_lengths(estimate: Estimate, steps: Array, root: float) -> tuple[Array, Mask]:
    """Return how far the region reaches along each of `steps`, shape (n, 2), and whether it ends there.

    Newton's method inside a bracket on the signed root sqrt(2 (l_max - l)), which is nearly linear along a ray.
    """
    top = float(estimate.terms.value[0])
    with np.errstate(divide="ignore"):
        edge = np.where(steps[:, 1] < 0, (1.0 - _NEAREST_TO_ZERO) * estimate.b / -steps[:, 1], np.inf)
    radius = np.minimum(np.full(steps.shape[0], root), edge)
    inside, outside = np.zeros_like(radius), edge.copy()
    closed = np.ones(radius.size, dtype=bool)
    active = np.arange(radius.size)
    for _ in range(_MOST_STEPS):
        at = radius[active]
        terms = estimate.evaluate(estimate.a + at * steps[active, 0], estimate.b + at * steps[active, 1])
        with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
            reached = np.sqrt(2.0 * np.maximum(top - terms.value, 0.0))
            slope = -(terms.d_a * steps[active, 0] + terms.d_b * steps[active, 1]) / reached
            moved = at + (root - reached) / slope
        short = reached < root
        closed[active[short & (at >= edge[active])]] = False
        inside[active[short]] = at[short]
        outside[active[~short]] = at[~short]
        low, high = inside[active], outside[active]
        halfway = np.where(np.isfinite(high), 0.5 * (low + high), 2.0 * at + 1e-300)
        usable = np.isfinite(moved) & (moved > low) & (moved <= high)
        radius[active] = np.where(usable, moved, halfway)
        settled = np.abs(radius[active] - at) <= _DISTANCE_REACHED * at
        active = active[~settled & closed[active]]
        if not active.size:
            break
    # A ray that never gets far enough down runs to an edge at infinity (possible where units entered late).
    closed[active] = False
    return radius, closed


def _filled_in(radius: Array) -> Array:
    """Interpolate the radii between the rays by a periodic trigonometric polynomial."""
    count = radius.size
    points = _OUTLINE_POINTS // count * count
    spectrum = np.fft.rfft(np.log(radius))
    spectrum[-1] *= 0.5 if points > count else 1.0
    return np.exp(np.asarray(np.fft.irfft(spectrum, points), dtype=np.float64) * (points / count))
