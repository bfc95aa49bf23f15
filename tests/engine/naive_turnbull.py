"""A second, slow way to the estimate without a family: Turnbull's self-consistency on a grid, written independently.

It knows nothing of innermost intervals, hazards or Newton: mass may sit on every age that is named and on every gap
between two of them, and each round shares every unit, and the unseen ones before late entry, out over these places.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import LifeData

Array = NDArray[np.float64]
SETTLED = 1e-15  # what a round still moves is less than a float can tell


def incidence(data: LifeData) -> tuple[Array, NDArray[np.bool_], NDArray[np.bool_]]:
    """Return the grid, and for each record which places its life and which its watch may be in.

    Place 2k is the age grid[k] itself, place 2k + 1 the open gap after it; the last gap has no end.
    """
    ends = data.upper[np.isfinite(data.upper)]
    grid = np.unique(np.concatenate([[0.0], data.lower, ends, data.entered]))
    at, after = grid[None, :], np.append(grid[1:], np.inf)[None, :]
    lower, upper = np.maximum(data.lower, data.entered)[:, None], data.upper[:, None]
    exact = (data.lower == data.upper)[:, None]
    life = np.empty((data.lower.size, 2 * grid.size), dtype=bool)
    life[:, 0::2] = np.where(exact, at == lower, (lower < at) & (at <= upper))
    life[:, 1::2] = ~exact & (at >= lower) & (after <= upper)
    watch = np.empty_like(life)
    watch[:, 0::2] = at > data.entered[:, None]
    watch[:, 1::2] = at >= data.entered[:, None]
    return grid, life, watch


def self_consistent(data: LifeData, *, rounds: int) -> tuple[Array, Array, float]:
    """Return the grid, survival just after each of its ages, and the log-likelihood after so many rounds at most."""
    grid, life, watch = incidence(data)
    mass = np.full(life.shape[1], 1.0 / (life.shape[1] - 1))
    mass[0] = 0.0  # no life is 0
    for _ in range(rounds):
        seen, watched, before = life @ mass, watch @ mass, mass
        mass = mass * (life.T @ (data.quantity / seen) + (~watch).T @ (data.quantity / watched))
        mass /= mass.sum()
        if np.abs(mass - before).max() < SETTLED:
            break
    value = float(data.quantity @ np.log((life @ mass) / (watch @ mass)))
    return grid, 1.0 - np.cumsum(mass)[0::2], value


def promise(data: LifeData, begin: Array, end: Array, mass: Array, tail: float) -> float:
    """Return the largest slope a unit of the log-likelihood towards any place: 0 at the maximum (no late entry).

    The given masses are laid at the ends of their intervals, the tail into the last gap.
    """
    grid, life, _ = incidence(data)
    laid = np.zeros(life.shape[1])
    for first, last, share in zip(begin, end, mass, strict=True):
        place = 2 * int(np.searchsorted(grid, last))
        laid[place if first == last else place - 1] += share
    laid[-1] += tail
    slopes = life.T @ (data.quantity / (life @ laid)) - data.quantity.sum()
    return float(slopes.max() / data.quantity.sum())
