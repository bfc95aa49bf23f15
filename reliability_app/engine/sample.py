"""Samples on the standardised line of a family: what the likelihood sums over, with a leading batch axis."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_data import LifeData, Mask
from reliability_app.engine.life_scale import LOG_LIFE, LifeScale

Array = NDArray[np.float64]
Index = NDArray[np.intp] | Mask

# Above this many records it is looked up by a small draw whether summing coincidences can pay.
_ALWAYS_SUM_BELOW = 20_000
_DRAW = 2_000
_BLOCK, _SHORTEST_BLOCK, _STRETCH = 8_192, 64, 32_768
# An interval that runs on for so many times all that is known otherwise says no more than a unit still running.
_FAR_OUT = 1e3
_LEAST_SQUARED = 1e-100


@dataclass(frozen=True, eq=False)
class Part:
    """Records of one kind: y and weights, shape (rows, n) with rows = 1 or the batch size; weight 0 is padding."""

    y: Array
    weight: Array

    @property
    def size(self) -> int:
        """Records a row."""
        return int(self.y.shape[1])

    @cached_property
    def total(self) -> Array:
        """Units, shape (rows,)."""
        return np.asarray(self.weight.sum(axis=1))

    @cached_property
    def _weighted(self) -> tuple[Array, Array]:
        weight_y = self.weight * self.y
        return weight_y, weight_y * self.y

    def blocks(self, points: int) -> Iterator[tuple[Array, Array, Array, Array]]:
        """Give y, weight, weight times y and weight times y squared in stretches along n.

        `points` rows of one stretch stay in the processor's cache, and a sum over it is too short to be shared out
        among threads, which would wait for each other whenever another program is busy.
        """
        size = max(_SHORTEST_BLOCK, _BLOCK // points)
        if size >= self.size:
            yield self.y, self.weight, *self._weighted
            return
        # Products are made anew each time, which takes less time than to fetch them from memory; where every record is
        # one unit there are none to make.
        ones = np.ones((1, size)) if self.weight.strides == (0, 0) else None
        for start in range(0, self.size, size):
            y = self.y[:, start : start + size]
            weight = self.weight[:, start : start + size] if ones is None else ones[:, : y.shape[1]]
            weight_y = weight * y if ones is None else y
            yield y, weight, weight_y, weight_y * y

    def rows(self, index: Index) -> Part:
        """Return the chosen rows; a part that serves the whole batch stays whole."""
        return self if self.y.shape[0] == 1 else Part(self.y[index], self.weight[index])


@dataclass(frozen=True, eq=False)
class IntervalPart:
    """Found-failed records: middle and half width of each interval in y, and weights, shape (rows, n).

    The narrowest intervals need middle and half width, the widest the two ends: `low` and `high`, where they are known
    by themselves.
    """

    middle: Array
    half: Array
    weight: Array
    low: Array | None = None
    high: Array | None = None

    @property
    def ends(self) -> tuple[Array, Array]:
        """The lower and the upper ends in y."""
        low = self.middle - self.half if self.low is None else self.low
        return low, self.middle + self.half if self.high is None else self.high

    @property
    def nearest(self) -> Array:
        """The point of each interval nearest to y = 0."""
        return np.asarray(np.clip(0.0, *self.ends))

    @property
    def size(self) -> int:
        """Records a row."""
        return int(self.middle.shape[1])

    def rows(self, index: Index) -> IntervalPart:
        """Return the chosen rows; a part that serves the whole batch stays whole."""
        if self.middle.shape[0] == 1:
            return self
        ends = (None if end is None else end[index] for end in (self.low, self.high))
        return IntervalPart(self.middle[index], self.half[index], self.weight[index], *ends)


_NOTHING = np.empty((1, 0))
NO_PART = Part(_NOTHING, _NOTHING)
NO_INTERVALS = IntervalPart(_NOTHING, _NOTHING, _NOTHING)


@dataclass(frozen=True, eq=False)
class Sample:
    """A batch of censored samples in y = (x - shift)/spread, with x the place of a life on the line `life_scale`.

    `left` holds units found failed of which nothing was known before; `entered` the entry ages of units that came late.
    `log_slope`, shape (rows,), is the sum over the failures of ln(dx/d life): what the log-likelihood on the line lacks
    of that of the lives themselves.
    """

    failed: Part
    running: Part
    between: IntervalPart
    left: Part
    entered: Part
    shift: float
    spread: float
    log_slope: Array
    life_scale: LifeScale = LOG_LIFE

    def rows(self, index: Index) -> Sample:
        """Return the chosen samples of the batch."""
        log_slope = self.log_slope if self.log_slope.shape[0] == 1 else self.log_slope[index]
        return Sample(
            self.failed.rows(index),
            self.running.rows(index),
            self.between.rows(index),
            self.left.rows(index),
            self.entered.rows(index),
            self.shift,
            self.spread,
            log_slope,
            self.life_scale,
        )

    def to_y(self, age: Array) -> Array:
        """Return the standardised place of an age."""
        return (self.life_scale.to_line(age) - self.shift) / self.spread

    def to_age(self, y: Array) -> Array:
        """Return the age at a standardised place."""
        return self.life_scale.from_line(self.shift + self.spread * y)

    def log_slope_at(self, y: Array) -> Array:
        """Return ln(dy/d age) at a standardised place: what turns a density or hazard over y into one over age."""
        return np.asarray(self.life_scale.log_slope(self.shift + self.spread * y) - np.log(self.spread))

    def thinned(self, most: int) -> Sample:
        """Return every k-th record of the large parts: a quick first look at a very large sample."""
        return Sample(
            _thin(self.failed, most),
            _thin(self.running, most),
            self.between,
            self.left,
            self.entered,
            self.shift,
            self.spread,
            self.log_slope,
            self.life_scale,
        )


def sample_of(data: LifeData, life_scale: LifeScale = LOG_LIFE) -> Sample:
    """Return the one sample of `data` on a line, coincident records summed once, centred on the failures."""
    found = data.is_found_failed
    any_found = bool(found.any())
    places, weight = _picked(data, data.lower, data.is_failed, life_scale)
    shift, spread = _centre(places, data, life_scale)
    log_slope = sum(float(weight[part] @ life_scale.log_slope(places[part])) for part in _stretches(places.size))

    def part(age: Array, chosen: Mask) -> Part:
        picked = _picked(data, age, chosen, life_scale)
        return standardised(*picked) if picked[0].size else NO_PART

    def standardised(places: Array, weight: Array) -> Part:
        places -= shift
        places /= spread
        return _summed(places, weight)

    return Sample(
        failed=standardised(places, weight),
        running=part(data.lower, data.is_running),
        between=_between(data, found & (data.lower > life_scale.origin), (shift, spread), life_scale)
        if any_found
        else NO_INTERVALS,
        left=part(data.upper, found & ~(data.lower > life_scale.origin)) if any_found else NO_PART,
        entered=part(data.entered, data.entered > 0),
        shift=shift,
        spread=spread,
        log_slope=np.array([log_slope]),
        life_scale=life_scale,
    )


def _stretches(size: int) -> Iterator[slice]:
    """Give stretches so short that what is computed of one needs no fresh memory, which takes longer than computing."""
    return (slice(start, start + _STRETCH) for start in range(0, size, _STRETCH))


def _picked(data: LifeData, age: Array, chosen: Mask, life_scale: LifeScale) -> tuple[Array, Array]:
    """Return the places on the line of chosen records, and their quantities."""
    places, done = np.empty(np.count_nonzero(chosen)), 0
    for part in _stretches(age.size):
        some = life_scale.to_line(age[part].compress(chosen[part]))
        places[done : done + some.size] = some
        done += some.size
    if places.size > _ALWAYS_SUM_BELOW and data.quantity.max() == 1.0:
        return places, np.broadcast_to(np.ones(1), places.shape)
    return places, data.quantity.compress(chosen)


def _between(data: LifeData, chosen: Mask, centre: tuple[float, float], life_scale: LifeScale) -> IntervalPart:
    lower, upper = data.lower[chosen], data.upper[chosen]
    shift, spread = centre
    half = life_scale.half_width(lower, upper)
    low, high = (life_scale.to_line(lower) - shift) / spread, (life_scale.to_line(upper) - shift) / spread
    return IntervalPart(
        middle=low[None] + half / spread,
        half=(half / spread)[None],
        weight=data.quantity[chosen][None],
        low=low[None],
        high=high[None],
    )


def _centre(failures: Array, data: LifeData, life_scale: LifeScale) -> tuple[float, float]:
    """Return a location and a spread on the line that make the standardised parameters moderate."""
    places = failures if failures.size else life_scale.to_line(telling_ends(data))
    shift, spread = _mean_and_deviation(places)
    if spread > life_scale.rounding(shift) and spread > 0:
        return shift, spread
    # Failures equal to the last digit have no spread of their own.
    spread = _mean_and_deviation(life_scale.to_line(telling_ends(data)))[1]
    return shift, spread if spread > life_scale.rounding(shift) and spread > 0 else 1.0


def telling_ends(data: LifeData) -> Array:
    """Return the age that tells most of each record: that of a failure, that reached, that of being found failed.

    The far ends of intervals that run on almost without end are drawn in: they must not set the scale for the others.
    """
    ends = np.where(data.is_running, data.lower, data.upper)
    if not data.is_found_failed.any():
        return ends
    known = np.where(np.isfinite(data.lower), data.lower, ends)
    first, last = float(ends.min()), float(known.max())
    low, high = min(first, float(known.min())), max(first, last)
    reach = _FAR_OUT * max(high - low, abs(high))
    return np.minimum(ends, high + reach) if reach > 0 else ends


def _mean_and_deviation(places: Array) -> tuple[float, float]:
    unit = max(float(places.max()), -float(places.min()))
    if unit > 0.0 and not _LEAST_SQUARED < unit < 1.0 / _LEAST_SQUARED:
        # Their squares or their sum would be beyond all numbers.
        return unit * float((places / unit).mean()), unit * float((places / unit).std())
    mean = float(places.mean())
    squares = sum(float(np.square(places[part] - mean).sum()) for part in _stretches(places.size))
    return mean, float(np.sqrt(squares / places.size))


def _summed(y: Array, weight: Array) -> Part:
    if y.size > _ALWAYS_SUM_BELOW:
        drawn = y[:: max(1, y.size // _DRAW)]
        if np.unique(drawn).size > 0.9 * drawn.size:
            return Part(y[None], weight[None])
    values, where = np.unique(y, return_inverse=True)
    return Part(values[None], np.bincount(where, weights=weight, minlength=values.size).astype(np.float64)[None])


def _thin(part: Part, most: int) -> Part:
    step = max(1, part.size // most)
    return part if step == 1 else Part(part.y[:, ::step], part.weight[:, ::step] * step)
