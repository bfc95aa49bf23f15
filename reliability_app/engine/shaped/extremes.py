"""Likelihood-ratio bounds with a further parameter: the extremes of a measure over the joint likelihood region.

The best point of the outline starts Newton's method on the Lagrange conditions (the gradients of measure and
log-likelihood are parallel, the log-likelihood has fallen by what is allowed), which is equivalent to profiling the
reading over everything else. Where it does not settle on a point as good, the outline is searched ever more finely.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.shaped.jets import likelihood_jet
from reliability_app.engine.shaped.measures import ShapedMeasure
from reliability_app.engine.shaped.outline import EXACT, Edge, Outline, edge_of
from reliability_app.engine.shaped.searching import closer
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate, measure_jet
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_MOST_STEPS = 15
_DROP_REACHED = 1e-9
_PARALLEL_REACHED = 1e-8
_WORSE_BY, _BETTER_BY = 1e-6, 1e-2
_SHORTEST = 0.1
_TRIED_AGAIN = 2


class Best(NamedTuple):
    """The best points of an outline for some measures: values, places (slice, ray), whether the region ends there."""

    value: Array
    slice: NDArray[np.intp]
    ray: NDArray[np.intp]
    closed: Mask

    def at(self, places: NDArray[np.intp]) -> Best:
        """Return the best points for the chosen measures."""
        return Best(self.value[places], self.slice[places], self.ray[places], self.closed[places])


def extremes(estimate: ShapedEstimate, measure: ShapedMeasure, outline: Outline, sign: float) -> Array:
    """Return the lower (sign -1) or upper (sign 1) ends, shape (measure.size,); infinite where the region is open.

    An end that lies where the likelihood begins to rise without limit is NaN.

    Raises
    ------
    BoundUnavailable
        Where all ends lie there.
    """
    if measure.of_kappa_alone:
        return _at_edge(estimate, measure, outline, sign)
    best = best_on(measure, outline, sign)
    value = np.where(best.closed, best.value, sign * np.inf)
    at_low, at_high = best.slice == 0, best.slice == outline.kappa.size - 1
    for at, edge in ((at_low, outline.low), (at_high, outline.high)):
        if edge.end is not None and at.any():
            if edge.is_ridge or not edge.end.is_limit:
                if at.all():
                    raise BoundUnavailable(_no_bound(edge))
                value[at] = np.nan
            elif measure.diverges_at_ends:
                value[at] = sign * np.inf
    on_open = (at_low & (outline.low.end is not None)) | (at_high & (outline.high.end is not None))
    for chosen, fixed in ((~on_open, False), (on_open, True)):
        places = np.flatnonzero(chosen & np.isfinite(value))
        if places.size:
            part = best.at(places)
            value[places] = _refined(estimate, measure.at(places), outline, part, sign=sign, kappa_is_fixed=fixed)
    return value


def extremes_near(estimate: ShapedEstimate, measure: ShapedMeasure, root: float, sign: float) -> Array:
    """Return the same ends for a large sample, whose region is nearly an ellipsoid, from the ends of that.

    Raises
    ------
    BoundUnavailable
        Where Newton's method does not settle from there.
    """
    sheaf, free = estimate.sheaf, list(estimate.sheaf.free)
    slopes = estimate.gradient(measure)
    along = slopes @ estimate.free_covariance
    size = np.sqrt(np.sum(along * slopes, axis=1, keepdims=True))
    start = np.tile(estimate.point, (measure.size, 1))
    start[:, free] += sign * root * along / size
    target = estimate.log_likelihood - 0.5 * root * root
    point, settled = _by_newton(sheaf, measure, sheaf.put_right(start), target, kappa_is_fixed=False)
    if not settled.all():
        raise BoundUnavailable(
            "The likelihood-ratio bound was not reached in this large sample: choose the Wald bound, "
            "which differs little."
        )
    return measure.terms(point[:, 0], point[:, 1], point[:, 2]).value


def _at_edge(estimate: ShapedEstimate, measure: ShapedMeasure, outline: Outline, sign: float) -> Array:
    """Return the end of a measure that follows from kappa: it lies where the region ends in kappa."""
    kappa = np.array([outline.low.kappa, outline.high.kappa])
    one = np.ones(2)
    values = measure.terms(0.0 * one, one, kappa).value
    side = -1 if sign * (values[0] - values[1]) > 0 else 1
    edge = outline.low if side < 0 else outline.high
    if edge.end is None:
        exact = edge_of(estimate, outline.target, side, accuracy=EXACT)
        return measure.terms(np.zeros(1), np.ones(1), np.array([exact.kappa])).value
    if edge.is_ridge or not edge.end.is_limit:
        raise BoundUnavailable(_no_bound(edge))
    return np.array([sign * np.inf])


def _no_bound(edge: Edge) -> str:
    text = "" if edge.end is None else edge.end.text
    return (
        f"The likelihood does not fall far enough on the way to where {text}: no likelihood-ratio bound can be given; "
        "choose the Wald bound, a lower confidence, or the family without a threshold."
    )


def best_on(measure: ShapedMeasure, outline: Outline, sign: float) -> Best:
    """Return the best point of the outline for each function of a measure."""
    values = measure.terms(outline.a[..., None], outline.b[..., None], outline.kappa[:, None, None]).value
    values = np.broadcast_to(values, (*outline.a.shape, measure.size))
    with np.errstate(invalid="ignore"):
        scored = np.where(np.isnan(values), -np.inf, sign * values).reshape(-1, measure.size)
    at = np.argmax(scored, axis=0)
    slices, rays = np.unravel_index(at, outline.a.shape)
    return Best(sign * scored[at, np.arange(measure.size)], slices, rays, outline.closed[slices, rays])


def _refined(
    estimate: ShapedEstimate, measure: ShapedMeasure, outline: Outline, best: Best, *, sign: float, kappa_is_fixed: bool
) -> Array:
    sheaf = estimate.sheaf
    start = np.stack(
        [outline.a[best.slice, best.ray], outline.b[best.slice, best.ray], outline.kappa[best.slice]], axis=-1
    )
    point, settled = _by_newton(sheaf, measure, start, outline.target, kappa_is_fixed=kappa_is_fixed)
    value = measure.terms(point[:, 0], point[:, 1], point[:, 2]).value
    reach = 1e-6 + 0.05 * (outline.high.kappa - outline.low.kappa)
    inside = (point[:, 2] >= outline.low.kappa - reach) & (point[:, 2] <= outline.high.kappa + reach)
    # Newton's method may run to another stationary point; the outline's own extreme is then better.
    good = settled & inside & (sign * (value - best.value) >= -_WORSE_BY * (1.0 + np.abs(best.value)))
    for place in np.flatnonzero(~good).tolist():
        at = int(best.slice[place]), int(best.ray[place])
        value[place] = _by_search(sheaf, measure.at(np.array([place])), outline, at, sign, kappa_is_fixed)
    return np.asarray(value)


def _by_search(
    sheaf: Sheaf, measure: ShapedMeasure, outline: Outline, at: tuple[int, int], sign: float, kappa_is_fixed: bool
) -> float:
    """Draw the outline about its best point more finely, until Newton's method settles on it or to the last digits."""
    found = -np.inf
    for told, (point, value) in enumerate(closer(sheaf, measure, outline, at, sign)):
        found = sign * value
        if told >= _TRIED_AGAIN:
            continue
        exact, settled = _by_newton(sheaf, measure, point[None], outline.target, kappa_is_fixed=kappa_is_fixed)
        refined = sign * float(measure.terms(exact[:, 0], exact[:, 1], exact[:, 2]).value[0])
        if settled[0] and -_WORSE_BY <= (refined - found) / (1.0 + abs(found)) <= _BETTER_BY:
            return sign * refined
    return sign * found


def _by_newton(
    sheaf: Sheaf, measure: ShapedMeasure, start: Array, target: float, *, kappa_is_fixed: bool
) -> tuple[Array, Mask]:
    """Solve the Lagrange conditions from `start`, shape (size, 3); returns the points and which of them settled."""
    free = [place for place in sheaf.free if not (kappa_is_fixed and place == 2)]
    inner = [sheaf.free.index(place) for place in free]
    point = start.copy()
    settled = np.zeros(len(point), dtype=bool)
    multiplier: Array | None = None
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
        point[:, free] += _held_back(point, step, free)[:, None] * step
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


def _held_back(point: Array, step: Array, free: list[int]) -> Array:
    """Return the share of each step that leaves b above a tenth of what it was."""
    if 1 not in free:
        return np.ones(len(point))
    of_b = step[:, free.index(1)]
    with np.errstate(divide="ignore", invalid="ignore"):
        room = np.where(of_b < 0, (1.0 - _SHORTEST) * point[:, 1] / -of_b, np.inf)
    return np.minimum(1.0, room)
