"""Where an estimate without a family can hold mass: the innermost intervals, and what each record says of them."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_data import LifeData

Array = NDArray[np.float64]
Integers = NDArray[np.intp]
Mask = NDArray[np.bool_]

# Kinds of ends in the order in which they stand at one age: a known age begins just before it, what is closed there
# (or came under observation there) ends at it, and what is open there begins just after it.
_BEGINS_AT, _ENDS_AT, _BEGINS_AFTER = 0, 1, 2


@dataclass(frozen=True, eq=False)
class Cells:
    """Disjoint stretches of age in rising order; arrays of shape (cells,).

    Attributes
    ----------
    begin, end : ndarray
        A cell is (begin, end], or the age itself where begin == end; the last end may be infinite.
    """

    begin: Array
    end: Array

    @property
    def count(self) -> int:
        """How many there are."""
        return int(self.end.size)

    def within(self, lower: Array, upper: Array) -> tuple[Integers, Integers]:
        """Return the first and the last cell inside each (lower, upper], or at the age itself where they are equal.

        The ends must be among those that the cells were made from. Where no cell is inside, last < first.
        """
        at_age = np.searchsorted(self.end, lower, side="left")
        after = np.searchsorted(self.end, lower, side="right")
        return np.where(lower == upper, at_age, after), np.searchsorted(self.end, upper, side="right") - 1

    def at_risk_from(self, entered: Array) -> Integers:
        """Return the first cell that lies after each age of entry; entry at 0 says that all are watched."""
        return np.where(entered > 0, np.searchsorted(self.end, entered, side="right"), 0)


def innermost_intervals(data: LifeData) -> Cells:
    """Return the only places where the likelihood wants mass.

    A place is a stretch that begins where a record begins and ends where a record ends or a unit comes under
    observation, with neither kind of end inside: elsewhere mass can be moved without loss. Exact lives are [t, t],
    found failed (l, u], running (l, inf); a unit that entered late at v is watched on (v, inf) (Turnbull 1976,
    J. R. Statist. Soc. B 38, 290-295, as corrected for late entry by Frydman 1994, ibid. 56, 71-74; from memory).
    """
    late = np.unique(data.entered[data.entered > 0])
    age = np.concatenate([data.lower, data.upper, late])
    begins = np.where(data.is_failed, _BEGINS_AT, _BEGINS_AFTER)
    kind = np.concatenate([begins, np.full(data.upper.size + late.size, _ENDS_AT)])
    order = np.lexsort((kind, age))
    age, is_begin = age[order], (kind != _ENDS_AT)[order]
    # Equal ends stand together, so that the last begin before an end is the one that matters.
    here = np.flatnonzero(is_begin[:-1] & ~is_begin[1:])
    return Cells(age[here], age[here + 1])


@dataclass(frozen=True, eq=False)
class Records:
    """What the units say of the cells, equal statements summed.

    Attributes
    ----------
    here : ndarray, shape (cells,)
        Units that failed in this very cell.
    first, last, weight : ndarray, shape (records,)
        Units that failed in one of the cells first..last, of which there are at least two.
    passing : ndarray, shape (cells,)
        Units that were watched over the whole cell and ran beyond it.
    """

    here: Array
    first: Integers
    last: Integers
    weight: Array
    passing: Array

    def sums(self, values: Array) -> Array:
        """Return the sum of the cells' values over each record."""
        return _between(_running_sum(values), self.first, self.last + 1)

    def spread(self, values: Array) -> Array:
        """Return for each cell the sum of the records' values over the records that contain it."""
        by_first, by_last, begun, over = self._orders
        begun_sum, over_sum = _running_sum(values[by_first]), _running_sum(values[by_last])
        return np.asarray((begun_sum[0][begun] - over_sum[0][over]) + (begun_sum[1][begun] - over_sum[1][over]))

    @cached_property
    def _orders(self) -> tuple[Integers, Integers, Integers, Integers]:
        """The records by their first and by their last cell; for each cell how many have begun there or are over."""
        by_first, by_last = np.argsort(self.first, kind="stable"), np.argsort(self.last, kind="stable")
        cells = np.arange(self.here.size)
        begun = np.searchsorted(self.first[by_first], cells, side="right")
        return by_first, by_last, begun, np.searchsorted(self.last[by_last], cells, side="left")

    def raised(self, increment: Array) -> Array:
        """Return the slope of each cell but for the units passing it, from the records over several cells."""
        with np.errstate(over="ignore", divide="ignore"):
            return self.spread(self.weight / np.expm1(self.sums(increment)))

    def among(self, cells: Integers) -> Records:
        """Return the same records seen from some of the cells only, of which each record must contain one."""
        first = np.searchsorted(cells, self.first, side="left")
        last = np.searchsorted(cells, self.last, side="right") - 1
        is_long = last > first
        here = self.here[cells]
        here += np.bincount(first[~is_long], self.weight[~is_long], cells.size)
        return Records(here, first[is_long], last[is_long], self.weight[is_long], self.passing[cells])

    def keeping(self, mask: Mask, here: Array) -> Records:
        """Return only some of the long records, and other counts in single cells."""
        return Records(here, self.first[mask], self.last[mask], self.weight[mask], self.passing)

    @cached_property
    def total(self) -> float:
        """Units that failed."""
        return float(self.here.sum() + self.weight.sum())


def records_on(cells: Cells, data: LifeData) -> Records:
    """Return what the units of `data` say of its innermost intervals."""
    size, weight = cells.count, data.quantity
    first, last = cells.within(data.lower, data.upper)
    start = cells.at_risk_from(data.entered)
    turns = np.bincount(start, weight, size + 1) - np.bincount(first, weight, size + 1)
    has_failed = ~data.is_running
    pair, where = np.unique(first[has_failed] * (size + 1) + last[has_failed], return_inverse=True)
    summed = np.bincount(where, weight[has_failed], pair.size).astype(np.float64)
    first, last = pair // (size + 1), pair % (size + 1)
    is_long = last > first
    return Records(
        here=np.bincount(first[~is_long], summed[~is_long], size).astype(np.float64),
        first=first[is_long],
        last=last[is_long],
        weight=summed[is_long],
        passing=np.cumsum(turns)[:size].astype(np.float64),
    )


def _running_sum(values: Array) -> tuple[Array, Array]:
    """Return the sums of the first 0, 1, 2, ... values in two parts: as computed, and what rounding took from them.

    A difference of two of them keeps its digits however small it is: a unit among a thousand million has its say.
    """
    total = np.concatenate([[0.0], np.cumsum(values)])
    added = np.diff(total)
    lost = (total[:-1] - (total[1:] - added)) + (values - added)
    return total, np.concatenate([[0.0], np.cumsum(lost)])


def _between(running: tuple[Array, Array], begin: Integers, end: Integers) -> Array:
    return np.asarray((running[0][end] - running[0][begin]) + (running[1][end] - running[1][begin]))
