"""Draws up a set's picture: plotting positions, running units, curves with bands, steps of the survival estimate."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine import Curve, Fit, LifeData
from reliability_app.engine.empirical import PlottingPositions, midpoints, survival_steps
from reliability_app.engine.fit_curves import hazard_curve, probability_curves, step_curve
from reliability_app.engine.turnbull_cells import Cells
from reliability_app.session.document import Basis, HazardAsk
from reliability_app.session.taking_readings import bound_side
from reliability_app.session.unit_table import ReadUnits

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

_CURVE_POINTS = 140
# Where age 0 is in view the curves are to reach it, as far as the eye can tell.
_NEAREST_TO_ZERO, _POINTS_TOWARDS_ZERO = 1e-3, 20
# Curves run this far beyond the units, so that moving the view a little does not uncover their ends.
_BEYOND = 30.0
_LEAST_SHARE, _MOST_SHARE = 1e-4, 1.0 - 1e-6


@dataclass(frozen=True, eq=False)
class Points:
    """Marks of the failures (one a step of the survival estimate) and of the running units (one an age).

    The failures of a mark happened between `begin` and `end`, which are equal where the age is known; its rows are
    all that may have failed there, and it is shared where one of them may have failed at another mark too. `undrawn`
    counts the failed units for which there is no place on the paper.
    """

    age: Floats
    fraction: Floats
    begin: Floats
    end: Floats
    quantity: Integers
    is_shared: NDArray[np.bool_]
    rows: tuple[tuple[int, ...], ...]
    running_age: Floats
    running_quantity: Integers
    undrawn: int = 0
    running_rows: tuple[tuple[int, ...], ...] = ()


@dataclass(frozen=True, eq=False)
class Curves:
    """The three curves of a fit over age."""

    failure: Curve
    hazard: Curve
    survival: Curve


_NONE, _NO_COUNT = np.empty(0), np.empty(0, np.int64)
NO_POINTS = Points(_NONE, _NONE, _NONE, _NONE, _NO_COUNT, np.empty(0, np.bool_), (), _NONE, _NO_COUNT)


def draw_marks(data: LifeData, units: ReadUnits) -> tuple[Points, Curve]:
    """Return the marks of the units, and the steps of the survival estimate up to the last observation.

    Raises
    ------
    NoEstimate
        If Turnbull's estimate did not settle.
    """
    steps = survival_steps(data)
    positions = midpoints(steps)
    record, mark = _contributions(data, positions)
    bounds = np.searchsorted(mark, np.arange(positions.age.size + 1))
    table_rows = np.asarray(units.rows)[record].tolist()
    running = data.is_running
    running_age, running_quantity = _summed(data.lower[running], data.quantity[running])
    times_drawn = np.bincount(record, minlength=data.lower.size)
    of_age = np.searchsorted(running_age, data.lower[running])
    points = Points(
        age=positions.age,
        fraction=positions.fraction,
        begin=positions.begin,
        end=positions.end,
        # With overlapping intervals a mark is expected to be so many units, to the nearest whole number.
        quantity=np.maximum(np.rint(positions.failures), 1.0).astype(np.int64),
        is_shared=np.bincount(mark, times_drawn[record] > 1, positions.age.size) > 0,
        rows=tuple(tuple(table_rows[first:last]) for first, last in pairwise(bounds.tolist())),
        running_age=running_age,
        running_quantity=running_quantity,
        undrawn=int(data.quantity[~running & (times_drawn == 0)].sum()),
        running_rows=_rows_by_place(np.asarray(units.rows)[running], of_age, running_age.size),
    )
    return points, step_curve(steps, data.last_observation)


def _rows_by_place(rows: Integers, place: Integers, count: int) -> tuple[tuple[int, ...], ...]:
    """Return the rows that belong to each of some places."""
    order = np.argsort(place, kind="stable")
    bounds = np.searchsorted(place[order], np.arange(count + 1)).tolist()
    ordered = rows[order].tolist()
    return tuple(tuple(ordered[first:last]) for first, last in pairwise(bounds))


def _contributions(data: LifeData, positions: PlottingPositions) -> tuple[Integers, Integers]:
    """Return each pair of a failed record and a mark at which it may have failed, mark by mark."""
    failed = np.flatnonzero(~data.is_running)
    first, last = Cells(positions.begin, positions.end).within(data.lower[failed], data.upper[failed])
    many = np.maximum(last - first + 1, 0)
    record = np.repeat(failed, many)
    mark = np.arange(record.size) - np.repeat(np.cumsum(many) - many, many) + np.repeat(first, many)
    order = np.lexsort((record, mark))
    return record[order], mark[order]


def draw_curves(fitted: Fit, basis: Basis, *, kind: str, hazard_kind: str | None = None) -> Curves:
    """Return the curves of a fit that converged, with bands of a kind on the sides that go with the basis.

    A lower bound of the lives is an upper bound of the failure probability. The band of the hazard may be of another
    kind.
    """
    ages = _ages(fitted)
    confidence = basis.confidence
    against = bound_side(HazardAsk(0.0), basis.side)
    failure, survival = probability_curves(fitted, ages, confidence=confidence, side=against, kind=kind)
    hazard = hazard_curve(fitted, ages, confidence=confidence, side=against, kind=hazard_kind or kind)
    return Curves(failure=failure, hazard=hazard, survival=survival)


def _ages(fitted: Fit) -> Floats:
    data = fitted.data
    first = data.first_failure or data.last_observation
    ends = np.asarray(fitted.life(np.array([_LEAST_SHARE, _MOST_SHARE])))
    low = max(min(float(ends[0]), first), first / _BEYOND**2)
    high = min(max(float(ends[1]), data.last_observation), data.last_observation * _BEYOND)
    low, high = low / 1.5, high * 1.5
    towards_zero = np.geomspace(low * _NEAREST_TO_ZERO, low, _POINTS_TOWARDS_ZERO, endpoint=False)
    return np.concatenate([towards_zero, np.geomspace(low, high, _CURVE_POINTS)])


def _summed(age: Floats, quantity: Floats) -> tuple[Floats, Integers]:
    ages, where = np.unique(age, return_inverse=True)
    return ages, np.bincount(where, weights=quantity, minlength=ages.size).astype(np.int64)
