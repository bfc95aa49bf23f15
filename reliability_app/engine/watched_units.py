"""Units drawn one by one: given that they outlived their entry, watched all the time or looked at now and then."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.censoring_plan import CensoringPlan, PlanKind
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.life_data import Mask
from reliability_app.engine.sample import NO_INTERVALS, NO_PART, IntervalPart, Part, Sample

Array = NDArray[np.float64]
Index = NDArray[np.intp]

_LEAST_SURVIVAL = 1e-290


class Drawable(Protocol):
    """All that is needed of a distribution to draw from it."""

    def quantile(self, fraction: Array) -> Array:
        """Return the quantiles at fractions of any shape."""

    def survival(self, z: Array) -> Array:
        """Return the share beyond z, of any shape."""

    def survival_quantile(self, share: Array) -> Array:
        """Return the places beyond which shares of any shape lie."""


@dataclass(frozen=True, eq=False)
class Spans:
    """The spans, from a place to the look beyond it, in which a unit can be found to have failed.

    Attributes
    ----------
    low, high : ndarray, shape (spans,)
        Places of their ends; low is minus infinity where nothing is known.
    first_look : ndarray of int, shape (units,)
        The number of the first look at each unit; the span that ends with look k is number k,
    first_span : ndarray of int, shape (units,)
        but that of the first look at a unit which came between two looks begins with its entry.
    """

    low: Array
    high: Array
    first_look: Index
    first_span: Index


@dataclass(frozen=True, eq=False)
class Seen:
    """What is seen of a batch of units; arrays of shape (batch, units), for the units it concerns.

    Attributes
    ----------
    z, end : ndarray
        Scores of the lives, and those at which units leave that are watched all the time.
    failed : ndarray of bool
        Units watched all the time that failed before they left.
    found : ndarray of bool
        Inspected units found failed.
    span : ndarray of int
        In which span.
    last : ndarray of int
        The look at which an inspected unit leaves.
    spans : Spans
    """

    z: Array
    end: Array
    failed: Mask
    found: Mask
    span: Index
    last: Index
    spans: Spans

    @property
    def failures(self) -> Array:
        """Failed units of each sample, shape (batch,)."""
        return np.asarray((self.failed | self.found).sum(axis=1, dtype=np.float64))


def watch(plan: CensoringPlan, life: Array, end: Array, standard: Drawable, *, a: float, b: float) -> Seen:
    """Return what is seen of units whose lives have the uniform draws `life`, and which leave at the places `end`."""
    z, inspected, place = _lives(plan, life, standard, a=a, b=b), plan.looks.is_inspected, plan.looks.place
    spans = _spans(plan)
    end_score = a + b * end
    failed = (z <= end_score) & ~inspected
    none = np.zeros(z.shape, dtype=np.intp)
    if not inspected.any():
        return Seen(z, end_score, failed, np.zeros_like(failed), none, none, spans)
    last = np.searchsorted(0.5 * (place[1:] + place[:-1]), end, side="left")
    last = np.maximum(last, np.minimum(spans.first_look, place.size - 1))
    look = last if plan.looks.only_one else np.maximum(np.searchsorted(a + b * place, z, side="left"), spans.first_look)
    found = inspected & (z <= a + b * place[last]) if plan.looks.only_one else inspected & (look <= last)
    span = np.where(look == spans.first_look, spans.first_span, look)
    return Seen(z, end_score, failed, found, np.where(found, span, 0), last, spans)


def sample_seen(plan: CensoringPlan, seen: Seen, *, a: float, b: float) -> Sample:
    """Return what is seen as a batch of samples in scores; inspected units summed by look where that is shorter."""
    watched, inspected = np.flatnonzero(~plan.looks.is_inspected), np.flatnonzero(plan.looks.is_inspected)
    failed, running = NO_PART, [NO_PART]
    if watched.size:
        dead = seen.failed[:, watched]
        failed = Part(np.where(dead, seen.z[:, watched], 0.0), dead.astype(np.float64))
        running = [_left_running(plan, seen.end[:, watched], ~dead)]
    between, left = NO_INTERVALS, NO_PART
    if inspected.size:
        found, last = seen.found[:, inspected], seen.last[:, inspected]
        running.append(_summed(a + b * plan.looks.place, last, ~found))
        between, left = _found(seen.spans, seen.span[:, inspected], found, a=a, b=b)
    entered, units = np.unique(plan.entered[plan.entered > -np.inf], return_counts=True)
    late = Part(a + b * entered[None], units[None].astype(np.float64)) if entered.size else NO_PART
    return Sample(failed, _joined(running), between, left, late, shift=0.0, spread=1.0, log_slope=np.zeros(len(seen.z)))


def places_of(plan: CensoringPlan, seen: Seen, *, a: float, b: float) -> tuple[Array, Array]:
    """Return the places between which each life is known to lie, of shape (batch, units) each."""
    x, end = (seen.z - a) / b, (seen.end - a) / b
    lower, upper = np.where(seen.failed, x, end), np.where(seen.failed, x, np.inf)
    inspected = plan.looks.is_inspected
    if not inspected.any():
        return lower, upper
    lower = np.where(inspected, np.where(seen.found, seen.spans.low[seen.span], plan.looks.place[seen.last]), lower)
    return lower, np.where(inspected & seen.found, seen.spans.high[seen.span], upper)


def _lives(plan: CensoringPlan, life: Array, standard: Drawable, *, a: float, b: float) -> Array:
    """Return scores of lives; those of units that came late are drawn on the survival scale beyond their entry."""
    late = plan.entered > -np.inf
    if not late.any():
        return standard.quantile(life)
    z = np.empty_like(life)
    z[:, ~late] = standard.quantile(life[:, ~late])
    survival = standard.survival(a + b * plan.entered[late])
    if survival.min() < _LEAST_SURVIVAL:
        raise BoundUnavailable(
            "At a value that had to be tried no life would reach the age at which some unit came under observation, so "
            "nothing can be simulated there: choose the likelihood bound."
        )
    z[:, late] = np.maximum(standard.survival_quantile(survival * (1.0 - life[:, late])), a + b * plan.entered[late])
    return z


def _spans(plan: CensoringPlan) -> Spans:
    place = plan.looks.place
    low = np.concatenate([[plan.looks.floor], place[:-1]]) if place.size else place
    if plan.looks.only_one:
        every = np.arange(place.size)
        nothing = np.zeros(plan.units, dtype=np.intp)
        return Spans(np.full(place.size, plan.looks.floor), place[every], nothing, nothing)
    first = np.searchsorted(place, plan.entered, side="right")
    begins = np.unique(plan.entered[plan.looks.is_inspected & (plan.entered > -np.inf)])
    look = np.searchsorted(place, begins, side="right")
    own = begins > low[look] if begins.size else np.zeros(0, dtype=bool)
    begins, look = begins[own], look[own]
    first_span = first.copy()
    for number, begin in enumerate(begins.tolist()):
        first_span[plan.entered == begin] = place.size + number
    return Spans(np.concatenate([low, begins]), np.concatenate([place, place[look]]), first, first_span)


def _left_running(plan: CensoringPlan, end: Array, running: Mask) -> Part:
    if plan.kind is PlanKind.COMPLETE:
        return NO_PART
    if plan.kind is PlanKind.FIXED_TIME:
        return Part(end[:, :1], running.sum(axis=1, dtype=np.float64)[:, None])
    return Part(np.where(running, end, 0.0), running.astype(np.float64))


def _found(spans: Spans, span: Index, found: Mask, *, a: float, b: float) -> tuple[IntervalPart, Part]:
    """Return units found failed: in spans with two ends, summed by span or one by one, and with an upper end only."""
    low, high = a + b * spans.low, a + b * spans.high
    counts, used = _counts(span, found, low.size)
    is_open = np.isneginf(low)
    left_used, closed = used[is_open[used]], used[~is_open[used]]
    left = _part(high[left_used], counts[:, left_used])
    if not closed.size:
        return NO_INTERVALS, left
    if closed.size <= span.shape[1]:
        shape = (len(span), closed.size)
        low, high = (np.broadcast_to(end[closed], shape) for end in (low, high))
        weight = counts[:, closed]
    else:
        inside = found & ~is_open[span]
        low, high = np.where(inside, low[span], -1.0), np.where(inside, high[span], 1.0)
        weight = inside.astype(np.float64)
    return IntervalPart(0.5 * (low + high), 0.5 * (high - low), weight, low, high), left


def _counts(number: Index, counted: Mask, size: int) -> tuple[Array, Index]:
    """Return how many of each row have each number below `size`, and the numbers that occur."""
    rows = len(number)
    flat = (number + size * np.arange(rows)[:, None])[counted]
    counts = np.bincount(flat, minlength=rows * size).reshape(rows, size).astype(np.float64)
    return counts, np.flatnonzero(counts.any(axis=0))


def _summed(score: Array, number: Index, counted: Mask) -> Part:
    counts, used = _counts(number, counted, score.size)
    return _part(score[used], counts[:, used])


def _part(score: Array, weight: Array) -> Part:
    return Part(np.broadcast_to(score, weight.shape), weight) if score.size else NO_PART


def _joined(parts: list[Part]) -> Part:
    parts = [part for part in parts if part.size]
    if len(parts) < 2:
        return parts[0] if parts else NO_PART
    return Part(np.concatenate([part.y for part in parts], axis=1), np.concatenate([p.weight for p in parts], axis=1))
