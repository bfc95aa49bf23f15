"""Points at which a measure is extreme among all with one log-likelihood, by Newton's method on Lagrange's conditions.

There the gradients of the measure and of the log-likelihood are parallel.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.shaped.jets import likelihood_jet
from reliability_app.engine.shaped.measures import ShapedMeasure
from reliability_app.engine.shaped.shaped_estimate import measure_jet
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_MOST_STEPS = 15
_DROP_REACHED = 1e-9
_PARALLEL_REACHED = 1e-8
_SHORTEST = 0.1


def lagrange_points(
    sheaf: Sheaf,
    measure: ShapedMeasure,
    start: Array,
    target: float,
    *,
    kappa_is_fixed: bool = False,
    longest: float = np.inf,
) -> tuple[Array, Mask]:
    """Solve the Lagrange conditions from `start`, shape (size, 3); returns the points and which of them settled.

    No step is longer than `longest` in kappa.
    """
    free = [place for place in sheaf.free if not (kappa_is_fixed and place == 2)]
    inner = [sheaf.free.index(place) for place in free]
    point = start.copy()
    settled = np.zeros(len(point), dtype=bool)
    for _ in range(_MOST_STEPS):
        with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
            likelihood = likelihood_jet(sheaf, point).of(tuple(free))
            _, slope, bend = measure_jet(measure, point, sheaf)
            slope, bend = slope[:, inner], bend[:, inner][:, :, inner]
            gap = likelihood.value - target
            steepness = np.sum(likelihood.gradient**2, axis=1)
            # By least squares, from point to point: this keeps Newton's method on course from a rough start.
            multiplier = -np.sum(slope * likelihood.gradient, axis=1) / steepness
            across = slope + multiplier[:, None] * likelihood.gradient
            size = np.linalg.norm(slope, axis=1)
            settled = (np.abs(gap) <= _DROP_REACHED * (1.0 + abs(target))) & (
                np.linalg.norm(across, axis=1) <= _PARALLEL_REACHED * size
            )
            if settled.all():
                break
            bend = bend + multiplier[:, None, None] * likelihood.hessian
            step = _lagrange_step(likelihood.gradient, bend, across, gap)
        step = np.where(np.isfinite(step) & ~settled[:, None], step, 0.0)
        point[:, free] += _held_back(point, step, free, longest)[:, None] * step
        point = sheaf.put_right(point)
    return point, settled


def _lagrange_step(gradient: Array, bend: Array, across: Array, gap: Array) -> Array:
    """Return the Newton step for across = 0 and gap = 0."""
    size, free = gradient.shape
    matrix = np.zeros((size, free + 1, free + 1))
    matrix[:, :free, :free] = bend
    matrix[:, :free, free] = gradient
    matrix[:, free, :free] = gradient
    right = -np.concatenate([across, gap[:, None]], axis=1)
    # Scaled rows and columns: the coordinates differ by orders of magnitude.
    scale = 1.0 / np.sqrt(np.maximum(np.abs(np.diagonal(bend, axis1=1, axis2=2)), 1e-300))
    scale = np.concatenate([scale, np.ones((size, 1))], axis=1)
    matrix = matrix * scale[:, :, None] * scale[:, None, :]
    good = np.isfinite(matrix).all(axis=(1, 2)) & np.isfinite(right).all(axis=1)
    good[good] = np.linalg.cond(matrix[good]) < 1e15
    step = np.full((size, free), np.nan)
    if good.any():
        solved = np.linalg.solve(matrix[good], (right * scale)[good][..., None])[..., 0] * scale[good]
        step[good] = solved[:, :free]
    return step


def _held_back(point: Array, step: Array, free: list[int], longest: float) -> Array:
    """Return the share of each step that leaves b above a tenth of what it was and kappa near where it was."""
    share = np.ones(len(point))
    with np.errstate(divide="ignore", invalid="ignore"):
        if 1 in free:
            of_b = step[:, free.index(1)]
            share = np.where(of_b < 0, np.minimum(share, (1.0 - _SHORTEST) * point[:, 1] / -of_b), share)
        if 2 in free:
            share = np.minimum(share, longest / np.abs(step[:, free.index(2)]))
    return share
