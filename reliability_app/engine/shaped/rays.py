"""How far a likelihood region reaches along rays, each from a maximum of its own at a kappa of its own."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_MOST_STEPS = 60
_NEAREST_TO_ZERO = 1e-9


@dataclass(frozen=True, eq=False)
class Rays:
    """Rays in (a, b): where each begins, at which kappa, in which steps it goes, and how far down it is to reach.

    All arrays have shape (rays,). `top` is the log-likelihood where a ray begins, `root` the signed root
    sqrt(2 (top - l)) at which it ends.
    """

    a: Array
    b: Array
    kappa: Array
    step_a: Array
    step_b: Array
    top: Array
    root: Array


def ray_ends(sheaf: Sheaf, rays: Rays, *, accuracy: float) -> tuple[Array, Array, Mask]:
    """Return the ends (a, b) of the rays, and which of them end before the edge b = 0 of the parameter space.

    Newton's method inside a bracket on the signed root, which is nearly linear along a ray.
    """
    slices = sheaf.slices(rays.kappa)
    with np.errstate(divide="ignore"):
        edge = np.where(rays.step_b < 0, rays.b / -rays.step_b, np.inf)
    radius = np.minimum(rays.root, 0.5 * edge)
    inside, outside = np.zeros_like(radius), edge.copy()
    closed = np.ones(radius.size, dtype=bool)
    active = np.flatnonzero(rays.root > 0)
    for _ in range(_MOST_STEPS):
        at, step_a, step_b = radius[active], rays.step_a[active], rays.step_b[active]
        part = slices if active.size == radius.size else slices.rows(active)
        terms = part.evaluate(rays.a[active] + at * step_a, rays.b[active] + at * step_b)
        root = rays.root[active]
        with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
            reached = np.sqrt(2.0 * np.maximum(rays.top[active] - terms.value, 0.0))
            reached = np.where(np.isnan(reached), np.inf, reached)
            slope = -(terms.d_a * step_a + terms.d_b * step_b) / reached
            moved = at + (root - reached) / slope
        short = reached < root
        settled = np.abs(reached - root) <= accuracy * root
        closed[active[short & (at >= (1.0 - _NEAREST_TO_ZERO) * edge[active])]] = False
        inside[active[short]] = at[short]
        outside[active[~short]] = at[~short]
        low, high = inside[active], outside[active]
        halfway = np.where(np.isfinite(high), 0.5 * (low + high), 2.0 * at + 1e-300)
        usable = np.isfinite(moved) & (moved > low) & (moved < high)
        radius[active] = np.where(settled, at, np.where(usable, moved, halfway))
        active = active[~settled & closed[active]]
        if not active.size:
            break
    closed[active] = False
    return rays.a + radius * rays.step_a, rays.b + radius * rays.step_b, closed
