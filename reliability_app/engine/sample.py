"""Samples on the standardised logarithmic scale: what the likelihood sums over, with a leading batch axis."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_data import LifeData, Mask

Array = NDArray[np.float64]
Index = NDArray[np.intp] | Mask

# Above this many records it is looked up by a small draw whether summing coincidences can pay.
_ALWAYS_SUM_BELOW = 20_000
_DRAW = 2_000
_BLOCK, _SHORTEST_BLOCK = 8_192, 64


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
        weight_y, weight_yy = self._weighted
        size = max(_SHORTEST_BLOCK, _BLOCK // points)
        if size >= self.size:
            yield self.y, self.weight, weight_y, weight_yy
            return
        for start in range(0, self.size, size):
            stretch = slice(start, start + size)
            yield self.y[:, stretch], self.weight[:, stretch], weight_y[:, stretch], weight_yy[:, stretch]

    def rows(self, index: Index) -> Part:
        """Return the chosen rows; a part that serves the whole batch stays whole."""
        return self if self.y.shape[0] == 1 else Part(self.y[index], self.weight[index])


@dataclass(frozen=True, eq=False)
class IntervalPart:
    """Found-failed records: middle and half width of each interval in y, and weights, shape (rows, n)."""

    middle: Array
    half: Array
    weight: Array

    @property
    def size(self) -> int:
        """Records a row."""
        return int(self.middle.shape[1])

    def rows(self, index: Index) -> IntervalPart:
        """Return the chosen rows; a part that serves the whole batch stays whole."""
        if self.middle.shape[0] == 1:
            return self
        return IntervalPart(self.middle[index], self.half[index], self.weight[index])


_NOTHING = np.empty((1, 0))
NO_PART = Part(_NOTHING, _NOTHING)
NO_INTERVALS = IntervalPart(_NOTHING, _NOTHING, _NOTHING)


@dataclass(frozen=True, eq=False)
class Sample:
    """A batch of censored samples in y = (ln life - shift)/spread.

    `left` holds units found failed at their first look; `entered` the entry ages of units that came late.
    """

    failed: Part
    running: Part
    between: IntervalPart
    left: Part
    entered: Part
    shift: float
    spread: float
    sum_log_life: Array

    def rows(self, index: Index) -> Sample:
        """Return the chosen samples of the batch."""
        total = self.sum_log_life if self.sum_log_life.shape[0] == 1 else self.sum_log_life[index]
        return Sample(
            self.failed.rows(index),
            self.running.rows(index),
            self.between.rows(index),
            self.left.rows(index),
            self.entered.rows(index),
            self.shift,
            self.spread,
            total,
        )

    def to_y(self, age: Array) -> Array:
        """Return the standardised logarithm of an age."""
        return (np.log(age) - self.shift) / self.spread

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
            self.sum_log_life,
        )


def sample_of(data: LifeData) -> Sample:
    """Return the one sample of `data`, coincident records summed once, centred on the failures."""
    failed, running, found = data.is_failed, data.is_running, data.is_found_failed
    weight, log_failed = data.quantity, np.log(data.lower[failed])
    shift, spread = _centre(log_failed, data)

    def part(age: Array, chosen: Mask) -> Part:
        return _summed((np.log(age[chosen]) - shift) / spread, weight[chosen]) if chosen.any() else NO_PART

    return Sample(
        failed=_summed((log_failed - shift) / spread, weight[failed]),
        running=part(data.lower, running),
        between=_between(data, found & (data.lower > 0), shift, spread) if found.any() else NO_INTERVALS,
        left=part(data.upper, found & (data.lower == 0)) if found.any() else NO_PART,
        entered=part(data.entered, data.entered > 0),
        shift=shift,
        spread=spread,
        sum_log_life=np.array([float(weight[failed] @ log_failed)]),
    )


def _between(data: LifeData, chosen: Mask, shift: float, spread: float) -> IntervalPart:
    lower, upper = data.lower[chosen], data.upper[chosen]
    # From the ratio of the ages, so that the narrowest interval keeps its width to the last digit.
    half = 0.5 * np.log1p((upper - lower) / lower)
    middle = (np.log(lower) + half - shift) / spread
    return IntervalPart(middle[None], (half / spread)[None], data.quantity[chosen][None])


def _centre(log_failed: Array, data: LifeData) -> tuple[float, float]:
    """Return a location and a spread of ln life that make the standardised parameters moderate."""
    if log_failed.size == 0:
        ends = np.where(data.is_running, data.lower, data.upper)
        log_failed = np.log(ends[np.isfinite(ends)])
    shift, spread = float(log_failed.mean()), float(log_failed.std())
    largest = float(np.abs(log_failed - shift).max(initial=0.0))
    # Lives equal to the last digit have no spread of their own; 1 keeps the scale as it is.
    return shift, spread if spread > 1e-12 * max(1.0, abs(shift)) and largest > 0 else 1.0


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
