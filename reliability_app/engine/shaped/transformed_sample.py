"""Samples whose lives are carried to another line for each value of kappa: one row of a batch each."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_data import LifeData
from reliability_app.engine.sample import NO_INTERVALS, NO_PART, IntervalPart, Part, Sample

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Records:
    """Ages and quantities of one kind of record, coincident ones summed; shape (n,)."""

    age: Array
    quantity: Array

    @classmethod
    def of(cls, age: Array, quantity: Array) -> Records:
        """Sum coincident records."""
        ages, where = np.unique(age, return_inverse=True)
        return cls(ages, np.bincount(where, weights=quantity, minlength=ages.size).astype(np.float64))

    def thinned(self, most: int) -> Records:
        """Return every k-th record, the first one always, standing for k."""
        step = max(1, self.age.size // most)
        return self if step == 1 else Records(self.age[::step], self.quantity[::step] * step)

    def carried(self, to_y: Callable[[Array], Array]) -> Part:
        """Return them as a part of a sample; a record at minus infinity weighs nothing."""
        if not self.age.size:
            return NO_PART
        y = to_y(self.age)
        beyond = np.isfinite(y)
        if beyond.all():
            return Part(y, np.broadcast_to(self.quantity, y.shape))
        return Part(np.where(beyond, y, 0.0), np.where(beyond, self.quantity, 0.0))


@dataclass(frozen=True, eq=False)
class RawSample:
    """Life data sorted by kind of record.

    Attributes
    ----------
    failed, running, left, entered : Records
        Units failed at an age; running at it; found failed by it with nothing known before; entered at it.
    lower, upper, between_quantity : ndarray
        Units found failed between two ages.
    """

    failed: Records
    running: Records
    left: Records
    entered: Records
    lower: Array
    upper: Array
    between_quantity: Array

    @classmethod
    def of(cls, data: LifeData, origin: float) -> RawSample:
        """Sort the records; lives lie beyond `origin` for certain."""
        found, quantity = data.is_found_failed, data.quantity
        between = found & (data.lower > origin)
        left, late = found & ~between, data.entered > 0

        def records(age: Array, chosen: NDArray[np.bool_]) -> Records:
            return Records.of(age[chosen], quantity[chosen])

        return cls(
            failed=records(data.lower, data.is_failed),
            running=records(data.lower, data.is_running),
            left=records(data.upper, left),
            entered=records(data.entered, late),
            lower=data.lower[between],
            upper=data.upper[between],
            between_quantity=quantity[between],
        )

    @property
    def failures(self) -> float:
        """The units that failed."""
        return float(self.failed.quantity.sum() + self.left.quantity.sum() + self.between_quantity.sum())

    @property
    def records(self) -> int:
        """The records in all."""
        kinds = (self.failed, self.running, self.left, self.entered)
        return sum(kind.age.size for kind in kinds) + self.lower.size

    def thinned(self, most: int) -> RawSample:
        """Return a smaller sample that stands for this one."""
        return RawSample(
            self.failed.thinned(most),
            self.running.thinned(most),
            self.left,
            self.entered,
            self.lower,
            self.upper,
            self.between_quantity,
        )

    def carried(self, to_y: Callable[[Array], Array], half_width: Callable[[Array, Array], Array]) -> Sample:
        """Carry every record to its line, for each of some kappa.

        Parameters
        ----------
        to_y : callable
            to_y(age) returns places on the line, shape (points, n), minus infinity where no life can be so short.
        half_width : callable
            half_width(lower, upper) returns half the lengths of intervals on the line, shape (points, n).
        """
        left = self.left.carried(to_y)
        between = NO_INTERVALS
        if self.lower.size:
            between, started = self._between(to_y, half_width)
            left = _together(left, started)
        return Sample(
            failed=self.failed.carried(to_y),
            running=self.running.carried(to_y),
            between=between,
            left=left,
            entered=self.entered.carried(to_y),
            shift=0.0,
            spread=1.0,
            log_slope=np.zeros(1),
        )

    def _between(
        self, to_y: Callable[[Array], Array], half_width: Callable[[Array, Array], Array]
    ) -> tuple[IntervalPart, Part]:
        """Return the intervals; those that begin where no life can be so short as units found failed by their end."""
        low, high = to_y(self.lower), to_y(self.upper)
        whole = np.isfinite(low)
        with np.errstate(invalid="ignore"):
            half = np.where(whole, half_width(self.lower, self.upper), 1.0)
        low_end, high_end = np.where(whole, low, -1.0), np.where(whole, high, 1.0)
        intervals = IntervalPart(
            middle=np.where(whole, low_end + half, 0.0),
            half=half,
            weight=np.where(whole, self.between_quantity, 0.0),
            low=low_end,
            high=high_end,
        )
        return intervals, Part(np.where(whole, 0.0, high), np.where(whole, 0.0, self.between_quantity))


def _together(first: Part, second: Part) -> Part:
    if not second.weight.any():
        return first
    if not first.size:
        return second
    return Part(np.hstack([first.y, second.y]), np.hstack([first.weight, second.weight]))
