"""The first point at which a function reaches a value: a concave one by Newton's method, any other from a grid."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

_MOST_DOUBLINGS, _MOST_STEPS = 40, 200
_STEP_REACHED, _GRID_STEPS = 4e-16, 100
_FURTHEST = 1e9


def first_reached(function: Callable[[Array], tuple[Array, Array]], level: Array) -> Array:
    """Return where a concave function first takes the value `level`, of the shape of `level`.

    Minus infinity where it lies above the level all the way to the left, infinity where it never gets so high. A
    tangent of a concave function lies above it, so from the left no step goes beyond the point sought.

    Parameters
    ----------
    function : callable z -> (value, slope)
    level : ndarray
    """
    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        z, is_below = _below(function, level)
        # A function that does not rise anywhere lies above the level on the left, or below it everywhere.
        result = np.where(is_below, np.nan, np.where(function(z)[0] < level, np.inf, -np.inf))
        open_ones = is_below.copy()
        for _ in range(_MOST_STEPS):
            value, slope = function(z)
            step = (level - value) / slope
            never = open_ones & (~(slope > 0) | (z + step > _FURTHEST) | ~np.isfinite(step))
            result[never] = np.inf
            open_ones &= ~never
            z = np.where(open_ones, z + step, z)
            reached = open_ones & (np.abs(step) <= _STEP_REACHED * (1.0 + np.abs(z)))
            result[reached] = z[reached]
            open_ones &= ~reached
            if not open_ones.any():
                break
    # What still creeps stands so near the top of the function that no digit is left to gain.
    return np.where(open_ones, z, result)


def _below(function: Callable[[Array], tuple[Array, Array]], level: Array) -> tuple[Array, NDArray[np.bool_]]:
    """Return points on the rising side at which the function is below the level, and where there are none."""
    z, step = np.zeros_like(level), 1.0
    for _ in range(_MOST_DOUBLINGS):
        value, slope = function(z)
        # Where it falls and is still below, the rise lies further left, if anywhere.
        wanting = ~((value <= level) & (slope > 0))
        if not wanting.any():
            return z, np.ones(level.shape, dtype=bool)
        z = np.where(wanting, z - step, z)
        step *= 2.0
    value, slope = function(z)
    return z, (value <= level) & (slope > 0)


def crossed_first(function: Callable[[Array], tuple[Array, Array]], level: Array, grid: Array) -> Array:
    """Return where a function first rises to `level` between points of a grid, of the shape of `level`.

    Minus infinity where it is there at the grid's first point, infinity where it never is at any.

    Parameters
    ----------
    function : callable z -> (value, slope)
    level : ndarray
    grid : ndarray, shape (points, *level.shape)
        Rising; no rise and fall between two of its points is seen.
    """
    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        above = np.stack([function(z)[0] >= level for z in grid])
        at = np.maximum(np.argmax(above, axis=0), 1)[None]
        low, high = np.take_along_axis(grid, at - 1, 0)[0], np.take_along_axis(grid, at, 0)[0]
        z = 0.5 * (low + high)
        for _ in range(_GRID_STEPS):
            value, slope = function(z)
            low, high = np.where(value < level, z, low), np.where(value < level, high, z)
            moved = z + (level - value) / slope
            moved = np.where((moved > low) & (moved < high), moved, 0.5 * (low + high))
            near = np.abs(moved - z) <= _STEP_REACHED * (1.0 + np.abs(z))
            z = moved
            if near.all():
                break
    return np.where(above[0], -np.inf, np.where(above.any(axis=0), z, np.inf))
