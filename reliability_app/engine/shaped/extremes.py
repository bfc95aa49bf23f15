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
from reliability_app.engine.shaped.lagrange import lagrange_points
from reliability_app.engine.shaped.measures import ShapedMeasure
from reliability_app.engine.shaped.outline import EXACT, Edge, Outline, edge_of
from reliability_app.engine.shaped.searching import closer
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_WORSE_BY, _BETTER_BY = 1e-6, 1e-2
# Steps and trespasses in kappa, in parts of the region's own width in it.
_LONGEST, _BEYOND, _ON_EDGE = 0.2, 0.05, 1e-12
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


def extremes(
    estimate: ShapedEstimate, measure: ShapedMeasure, outline: Outline, sign: float, *, searched: bool = True
) -> Array:
    """Return the lower (sign -1) or upper (sign 1) ends, shape (measure.size,); infinite where the region is open.

    An end that lies where the likelihood begins to rise without limit is NaN. Without `searched` the slow way is left
    out: where it would be needed an end is exact in (a, b) and only as near in kappa as the outline's own slices.

    Raises
    ------
    BoundUnavailable
        Where all ends lie there.
    """
    if measure.of_kappa_alone:
        return _at_edge(estimate, measure, outline, sign)
    best = best_on(measure, outline, sign)
    value = np.where(best.closed, best.value, sign * np.inf)
    at_low, at_high = (_is_at(edge, outline.kappa[best.slice], outline) for edge in (outline.low, outline.high))
    for at, edge in ((at_low, outline.low), (at_high, outline.high)):
        if at.all() and not _is_limit(edge):
            raise BoundUnavailable(_no_bound(edge))
        if not _is_limit(edge):
            value[at] = np.nan
        elif measure.diverges_at_ends:
            value[at] = sign * np.inf
    for chosen, fixed in ((~(at_low | at_high), False), (at_low | at_high, True)):
        places = np.flatnonzero(chosen & np.isfinite(value))
        if places.size:
            part = best.at(places)
            chosen_ones = measure.at(places)
            value[places] = _completed(
                estimate.sheaf, chosen_ones, outline, part, sign=sign, fixed=fixed, searched=searched
            )
    return value


def _is_at(edge: Edge, kappa: Array, outline: Outline) -> Mask:
    """Return where the best points lie on an open edge itself."""
    near = np.abs(kappa - edge.kappa) <= _ON_EDGE * (outline.high.kappa - outline.low.kappa)
    return near & (edge.end is not None)


def _is_limit(edge: Edge) -> bool:
    """True where a bound may lie on an open edge."""
    return edge.end is not None and edge.end.is_limit and not edge.is_ridge


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
    point, settled = lagrange_points(sheaf, measure, sheaf.put_right(start), target)
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
    if not _is_limit(edge):
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
    sheaf: Sheaf, measure: ShapedMeasure, outline: Outline, best: Best, *, sign: float, kappa_is_fixed: bool
) -> tuple[Array, Mask]:
    """Return what Newton's method makes of the best points, and where it is as good as they are."""
    start = np.stack(
        [outline.a[best.slice, best.ray], outline.b[best.slice, best.ray], outline.kappa[best.slice]], axis=-1
    )
    span = outline.high.kappa - outline.low.kappa
    point, settled = lagrange_points(
        sheaf, measure, start, outline.target, kappa_is_fixed=kappa_is_fixed, longest=_LONGEST * span
    )
    value = measure.terms(point[:, 0], point[:, 1], point[:, 2]).value
    reach = 1e-6 + _BEYOND * span
    inside = (point[:, 2] >= outline.low.kappa - reach) & (point[:, 2] <= outline.high.kappa + reach)
    # It may run to another stationary point; the outline's own extreme is then better.
    good = settled & inside & (sign * (value - best.value) >= -_WORSE_BY * (1.0 + np.abs(best.value)))
    return value, good


def _completed(
    sheaf: Sheaf, measure: ShapedMeasure, outline: Outline, best: Best, *, sign: float, fixed: bool, searched: bool
) -> Array:
    """Return the ends from the best points of the outline: by Newton's method, else by search or within the slices."""
    value, good = _refined(sheaf, measure, outline, best, sign=sign, kappa_is_fixed=fixed)
    lost = np.flatnonzero(~good)
    if searched:
        for place in lost.tolist():
            at = int(best.slice[place]), int(best.ray[place])
            value[place] = _by_search(sheaf, measure.at(np.array([place])), outline, at, sign, fixed)
    elif lost.size:
        part = best.at(lost)
        within, good = _refined(sheaf, measure.at(lost), outline, part, sign=sign, kappa_is_fixed=True)
        value[lost] = np.where(good, within, part.value)
    return value


def _by_search(
    sheaf: Sheaf, measure: ShapedMeasure, outline: Outline, at: tuple[int, int], sign: float, kappa_is_fixed: bool
) -> float:
    """Draw the outline about its best point more finely, until Newton's method settles on it or to the last digits."""
    found = -np.inf
    for told, (point, value) in enumerate(closer(sheaf, measure, outline, at, sign)):
        found = sign * value
        if told >= _TRIED_AGAIN:
            continue
        exact, settled = lagrange_points(sheaf, measure, point[None], outline.target, kappa_is_fixed=kappa_is_fixed)
        refined = sign * float(measure.terms(exact[:, 0], exact[:, 1], exact[:, 2]).value[0])
        if settled[0] and -_WORSE_BY <= (refined - found) / (1.0 + abs(found)) <= _BETTER_BY:
            return sign * refined
    return sign * found
