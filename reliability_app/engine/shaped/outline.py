"""The outline of the joint likelihood region {2 (l_max - l) <= root^2} in (a, b, kappa), as slices at some kappa.

Each slice is itself a likelihood region in (a, b) about its own maximum, and convex where the log-likelihood is concave
there; so its outline is found along rays. What is extreme over all of them starts the exact search for a bound.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

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
_EDGE_STEPS = 40
_EDGE_REACHED = 1e-12


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
    a, b : ndarray, shape (slices, rays)
    closed : ndarray of bool, shape (slices, rays)
        False where a slice runs to the edge b = 0 without ending.
    low, high : Edge
    target : float
        The log-likelihood on the outline.
    """

    kappa: Array
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
    tops = profile(sheaf, kappa, (a, b))
    tops = _only(tops, tops.value > target)
    rays = _rays(sheaf, tops, target)
    a, b, closed = ray_ends(sheaf, rays, accuracy=_RAY_ACCURACY)
    shape = (tops.kappa.size, -1)
    return Outline(tops.kappa, a.reshape(shape), b.reshape(shape), closed.reshape(shape), low, high, target)


def _slices_between(low: Edge, high: Edge, count: int) -> Array:
    """Return places closer together towards the edges, where slices shrink like a root; an open edge is one itself."""
    angles = np.pi * (np.arange(count) + 0.5) / count
    places = 0.5 - 0.5 * np.cos(angles)
    if low.end is not None:
        places[0] = 0.0
    if high.end is not None:
        places[-1] = 1.0
    return np.asarray(low.kappa + (high.kappa - low.kappa) * places)


def _only(tops: Profile, chosen: Mask) -> Profile:
    curvature = tuple(column[chosen] for column in tops.curvature)
    return Profile(tops.kappa[chosen], tops.a[chosen], tops.b[chosen], tops.value[chosen], curvature)


def _rays(sheaf: Sheaf, tops: Profile, target: float) -> Rays:
    """Return rays from the top of each slice, one standard error long, evenly spaced in direction."""
    steps = _pair_steps(tops, _ray_count(sheaf)) if len(sheaf.free) == 3 else _single_steps(sheaf, tops)
    root = np.sqrt(2.0 * (tops.value - target))
    every = [np.repeat(column, steps.shape[1]) for column in (tops.a, tops.b, tops.kappa, tops.value, root)]
    a, b, kappa, top, roots = every
    return Rays(a, b, kappa, steps[..., 0].ravel(), steps[..., 1].ravel(), top, roots)


def _pair_steps(tops: Profile, count: int) -> Array:
    """Return steps of shape (slices, count, 2) that go round the slices' own ellipses."""
    angles = np.arange(count) * (2.0 * np.pi / count)
    aa, ab, bb = tops.curvature
    # Cholesky factor of the inverse of ((aa, ab), (ab, bb)).
    determinant = np.maximum(aa * bb - ab * ab, 1e-300)
    first = np.sqrt(bb / determinant)
    second = -ab / (determinant * first)
    third = 1.0 / np.sqrt(bb)
    cos, sin = np.cos(angles), np.sin(angles)
    return np.stack([first[:, None] * cos, second[:, None] * cos + third[:, None] * sin], axis=-1)


def _single_steps(sheaf: Sheaf, tops: Profile) -> Array:
    """Return the two steps down and up what is free of a and b."""
    error = 1.0 / np.sqrt(tops.curvature[2 if sheaf.a_is_pinned else 0])
    both = np.stack([-error, error], axis=-1)
    zero = np.zeros_like(both)
    return np.stack([zero, both] if sheaf.a_is_pinned else [both, zero], axis=-1)


def _ray_count(sheaf: Sheaf) -> int:
    affordable = _EVALUATIONS // (_SLICES_OF_THREE * max(sheaf.records, 1))
    return int(np.clip(affordable, _FEWEST_RAYS, _MOST_RAYS))


def edge_of(estimate: ShapedEstimate, target: float, side: int) -> Edge:
    """Return where the region ends below (side -1) or above (side 1) the estimate in kappa."""
    seen, peak = estimate.seen, estimate.point
    beyond = np.flatnonzero(side * (seen.kappa - peak[2]) > 0)[::side]
    inside = peak
    lowest = estimate.log_likelihood
    for place in beyond.tolist():
        value = float(seen.value[place])
        if value < target:
            return _edge_between(estimate, target, inside, seen.points[place])
        if value > estimate.log_likelihood and not estimate.sheaf.ends[side > 0].is_limit:
            # The likelihood has begun to rise without limit: the region ends where it was lowest.
            return Edge(inside[2], inside[0], inside[1], estimate.sheaf.ends[side > 0], is_ridge=True)
        if value <= lowest:
            inside, lowest = seen.points[place], value
    last = seen.points[beyond[-1]] if beyond.size else peak
    return Edge(last[2], last[0], last[1], estimate.sheaf.ends[side > 0])


def _edge_between(estimate: ShapedEstimate, target: float, inside: Array, outside: Array) -> Edge:
    """Find where the profile takes the value `target` by a bracketed secant on the signed root."""
    sheaf, top = estimate.sheaf, estimate.log_likelihood
    wanted = np.sqrt(2.0 * (top - target))
    low, high = inside[2], outside[2]
    at_low, at_high = _signed_root(top, float(profile(sheaf, inside[2:], (inside[:1], inside[1:2])).value[0])), np.inf
    start, kappa = inside, 0.5 * (low + high)
    for _ in range(_EDGE_STEPS):
        here = profile(sheaf, np.array([kappa]), (start[:1], start[1:2]))
        root = _signed_root(top, float(here.value[0]))
        if root <= wanted:
            low, at_low, start = kappa, root, here.points[0]
        else:
            high, at_high = kappa, root
        if abs(root - wanted) <= _EDGE_REACHED * wanted or abs(high - low) <= _EDGE_REACHED * (1.0 + abs(low)):
            break
        share = (wanted - at_low) / (at_high - at_low) if np.isfinite(at_high) else 0.5
        kappa = low + (high - low) * float(np.clip(share, 0.02, 0.98))
    return Edge(low, start[0], start[1], None)


def _signed_root(top: float, value: float) -> float:
    return float(np.sqrt(2.0 * max(top - value, 0.0))) if np.isfinite(value) else np.inf
