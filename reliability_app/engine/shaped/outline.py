"""The outline of the joint likelihood region {2 (l_max - l) <= root^2} in (a, b, kappa), as slices at some kappa.

Each slice is itself a likelihood region in (a, b) about its own maximum, and convex where the log-likelihood is concave
there; so its outline is found along rays. What is extreme over all of them starts the exact search for a bound.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.shaped.profile import Profile, profile
from reliability_app.engine.shaped.rays import Rays, ray_ends
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate
from reliability_app.engine.shaped.sheaf import End, Sheaf

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_SLICES_OF_PAIR, _SLICES_OF_THREE = 33, 17
_MOST_RAYS, _FEWEST_RAYS = 24, 8
_EVALUATIONS = 400_000
_RAY_ACCURACY = 1e-5
# An edge is found to this part of a step of the profile's grid; to the last digits where it is itself a bound.
_ROUGH, EXACT = 1e-3, 1e-12
_EDGE_REACHED = 1e-14
_FAR = 10.0
_ROUGH_PROFILE = (
    "The likelihood could not be followed to where it has fallen far enough, so no likelihood-ratio bound is given: "
    "choose the Wald bound, or a family with fewer parameters."
)


@dataclass(frozen=True, eq=False)
class Edge:
    """Where the region ends in kappa on one side.

    Attributes
    ----------
    kappa, a, b : float
        The last point of the profile inside.
    end : End or None
        What the family turns into where the profile does not fall far enough on this side; None where it does.
    is_ridge : bool
        True where the profile rises again before it has fallen far enough, without a limit.
    """

    kappa: float
    a: float
    b: float
    end: End | None
    is_ridge: bool = False


@dataclass(frozen=True, eq=False)
class Outline:
    """Points on the outline of a region.

    Attributes
    ----------
    kappa : ndarray, shape (slices,)
    angle : ndarray, shape (rays,)
        The direction of each ray on the slice's own ellipse.
    a, b : ndarray, shape (slices, rays)
    closed : ndarray of bool, shape (slices, rays)
        False where a slice runs to the edge b = 0 without ending.
    low, high : Edge
    target : float
        The log-likelihood on the outline.
    """

    kappa: Array
    angle: Array
    a: Array
    b: Array
    closed: Mask
    low: Edge
    high: Edge
    target: float


def outline_of(estimate: ShapedEstimate, root: float) -> Outline:
    """Return the outline at a signed root."""
    sheaf, target = estimate.sheaf, estimate.log_likelihood - 0.5 * root * root
    low, high = (edge_of(estimate, target, side) for side in (-1, 1))
    count = _SLICES_OF_THREE if len(sheaf.free) == 3 else _SLICES_OF_PAIR
    kappa = _slices_between(low, high, count)
    peak = estimate.point
    a = np.interp(kappa, [low.kappa, peak[2], high.kappa], [low.a, peak[0], high.a])
    b = np.exp(np.interp(kappa, [low.kappa, peak[2], high.kappa], np.log([low.b, peak[1], high.b])))
    tops = profile(sheaf, kappa, (a, b)).above(target)
    angle = angles_for(sheaf)
    a, b, closed = ray_ends(sheaf, rays_from(sheaf, tops, angle, target), accuracy=_RAY_ACCURACY)
    shape = (tops.kappa.size, angle.size)
    return Outline(tops.kappa, angle, a.reshape(shape), b.reshape(shape), closed.reshape(shape), low, high, target)


def _slices_between(low: Edge, high: Edge, count: int) -> Array:
    """Return places closer together towards the edges, where slices shrink like a root; an open edge is one itself."""
    angles = np.pi * (np.arange(count) + 0.5) / count
    places = 0.5 - 0.5 * np.cos(angles)
    if low.end is not None:
        places[0] = 0.0
    if high.end is not None:
        places[-1] = 1.0
    return np.asarray(low.kappa + (high.kappa - low.kappa) * places)


def angles_for(sheaf: Sheaf) -> Array:
    """Return the directions of the rays of a slice: round the ellipse, or down and up where one of a, b is pinned."""
    if len(sheaf.free) < 3:
        return np.array([np.pi, 0.0])
    affordable = _EVALUATIONS // (_SLICES_OF_THREE * max(sheaf.records, 1))
    count = int(np.clip(affordable, _FEWEST_RAYS, _MOST_RAYS))
    return np.asarray(np.arange(count) * (2.0 * np.pi / count), dtype=np.float64)


def rays_from(sheaf: Sheaf, tops: Profile, angle: Array, target: float) -> Rays:
    """Return rays from the top of each slice in some directions, one standard error of the slice long."""
    aa, ab, bb = (column[:, None] for column in tops.curvature)
    cos, sin = np.cos(angle), np.sin(angle)
    if sheaf.a_is_pinned:
        step_b = cos / np.sqrt(bb)
        step_a = np.zeros_like(step_b)
    elif sheaf.b_is_pinned:
        step_a = cos / np.sqrt(aa)
        step_b = np.zeros_like(step_a)
    else:
        # Cholesky factor of the inverse of ((aa, ab), (ab, bb)).
        determinant = np.maximum(aa * bb - ab * ab, 1e-300)
        first = np.sqrt(bb / determinant)
        step_a, step_b = first * cos, -ab / (determinant * first) * cos + sin / np.sqrt(bb)
    root = np.sqrt(2.0 * (tops.value - target))
    starts = (tops.a, tops.b, tops.kappa)
    a, b, kappa = (np.repeat(column, angle.size) for column in starts)
    top, roots = (np.repeat(column, angle.size) for column in (tops.value, root))
    return Rays(a, b, kappa, step_a.ravel(), step_b.ravel(), top, roots)


def edge_of(estimate: ShapedEstimate, target: float, side: int, *, accuracy: float = _ROUGH) -> Edge:
    """Return where the region ends below (side -1) or above (side 1) the estimate in kappa; a point inside it."""
    seen, peak = estimate.seen, estimate.point
    beyond = np.flatnonzero(side * (seen.kappa - peak[2]) > 0)[::side]
    inside = peak
    lowest = estimate.log_likelihood
    for place in beyond.tolist():
        value = float(seen.value[place])
        if value < target:
            return _edge_between(estimate, target, inside, seen.points[place], accuracy)
        if value > estimate.log_likelihood and not estimate.sheaf.ends[side > 0].is_limit:
            # The likelihood has begun to rise without limit: the region ends where it was lowest.
            return Edge(inside[2], inside[0], inside[1], estimate.sheaf.ends[side > 0], is_ridge=True)
        if value <= lowest:
            inside, lowest = seen.points[place], value
    last = seen.points[beyond[-1]] if beyond.size else peak
    return Edge(last[2], last[0], last[1], estimate.sheaf.ends[side > 0])


def _edge_between(estimate: ShapedEstimate, target: float, inside: Array, outside: Array, accuracy: float) -> Edge:
    """Find where the profile takes the value `target`, by the signed root, which is nearly linear in kappa."""
    sheaf, top = estimate.sheaf, estimate.log_likelihood
    wanted = float(np.sqrt(2.0 * (top - target)))
    nearest = [inside]

    def excess(kappa: float) -> float:
        start = nearest[-1]
        here = profile(sheaf, np.array([kappa]), (start[:1], start[1:2]))
        root = _signed_root(top, float(here.value[0]))
        if root <= wanted:
            nearest.append(here.points[0])
        return min(root, _FAR * wanted) - wanted

    if excess(inside[2]) > 0.0 or excess(outside[2]) < 0.0:
        raise BoundUnavailable(_ROUGH_PROFILE)
    brentq(excess, inside[2], outside[2], xtol=accuracy * abs(outside[2] - inside[2]), rtol=_EDGE_REACHED)
    last = max(nearest, key=lambda point: abs(point[2] - estimate.point[2]))
    return Edge(last[2], last[0], last[1], None)


def _signed_root(top: float, value: float) -> float:
    return float(np.sqrt(2.0 * max(top - value, 0.0))) if np.isfinite(value) else np.inf
