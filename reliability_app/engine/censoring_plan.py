"""The plan under which a set of units was watched, recovered from its data as far as they show it."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.inspections import Looks, looks_of
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_scale import LOG_LIFE, LifeScale
from reliability_app.engine.removals import removal_steps

Array = NDArray[np.float64]

# Lengths of watch that differ by less than this share are one length, rounded.
_SAME_LENGTH = 1e-9


class PlanKind(Enum):
    """How a test ends for its units."""

    COMPLETE = "every unit runs to failure"
    FIXED_TIME = "the test stops at a fixed age"
    FIXED_NUMBER = "the test stops at a fixed number of failures"
    STAGGERED = "units leave at ages of their own"


@dataclass(frozen=True, eq=False)
class CensoringPlan:
    """The plan under which a set of units was watched, in places on the line of a family.

    Attributes
    ----------
    kind : PlanKind
    units : int
    failures : int
        For a fixed number of failures: that number.
    end : float
        For a fixed time: its place.
    known_end, drawn_beyond : ndarray, shape (units,)
        The place at which a unit would leave, infinite where it runs to failure, NaN where that is not known because it
        failed first; then the place of its failure, beyond which the age at leaving is drawn.
    removal_age, removal_stay : ndarray
        Steps of the product-limit estimate of leaving, from which it is drawn: place, share of the units there that
        stay on.
    entered : ndarray, shape (units,)
        Places at which units came under observation; minus infinity for those watched from the start.
    looks : Looks
        At which places the units are inspected that are not watched all the time.
    """

    kind: PlanKind
    units: int
    failures: int
    end: float
    known_end: Array
    drawn_beyond: Array
    removal_age: Array
    removal_stay: Array
    entered: Array
    looks: Looks

    @property
    def has_late_entry(self) -> bool:
        """True where some unit came under observation late."""
        return bool(np.isfinite(self.entered).any())

    @property
    def goes_unit_by_unit(self) -> bool:
        """True where units are watched each in its own way, so that their lives must not change places."""
        return self.has_late_entry or bool(self.looks.is_inspected.any())

    @property
    def can_tie(self) -> bool:
        """True where two samples can be one and the same."""
        return bool(self.looks.is_inspected.any())


def plan_of(data: LifeData, life_scale: LifeScale = LOG_LIFE) -> CensoringPlan:
    """Return the plan that the data show, on the line of a family.

    All running units at one age, not below any failure, show a fixed time; if that age is the last failure's, and all
    units were watched from the start, a fixed number of failures. Anything else is taken as staggered removals: the age
    at which a failed unit would have left is drawn from the product-limit estimate of leaving, beyond its failure; but
    where all running units were watched for one length of time from their entry, every unit is watched so long.
    How units are inspected is told in `looks_of`. Each simulated unit is one that survived its own entry.
    """
    data = _one_record_a_unit(data)
    kind = _kind(data)
    running, looks = data.is_running, looks_of(data, life_scale)
    last_seen = life_scale.to_line(np.where(running, data.lower, data.upper))
    is_late = data.entered > 0
    entered = np.full(last_seen.size, -np.inf)
    entered[is_late] = life_scale.to_line(data.entered[is_late])
    known_end = _known_ends(data, kind, looks, life_scale)
    age, stay = removal_steps(data) if np.isnan(known_end).any() else (np.empty(0), np.empty(0))
    return CensoringPlan(
        kind=kind,
        units=last_seen.size,
        failures=int(np.sum(~running)),
        end=float(last_seen[running][0]) if running.any() else np.inf,
        known_end=known_end,
        drawn_beyond=np.where(np.isnan(known_end), last_seen, np.nan),
        removal_age=life_scale.to_line(age),
        removal_stay=stay,
        entered=entered,
        looks=looks,
    )


def _one_record_a_unit(data: LifeData) -> LifeData:
    quantity = data.quantity.astype(np.intp)
    lower, upper, entered = (np.repeat(column, quantity) for column in (data.lower, data.upper, data.entered))
    return LifeData.from_intervals(lower, upper, entered=entered)


def _kind(data: LifeData) -> PlanKind:
    running = data.lower[data.is_running]
    if not running.size:
        return PlanKind.COMPLETE
    last = float(data.upper[~data.is_running].max(initial=-np.inf))
    if (running != running[0]).any() or not np.isfinite(last) or running[0] < last:
        return PlanKind.STAGGERED
    counted = running[0] == last and not data.entered.any() and not data.is_found_failed.any()
    return PlanKind.FIXED_NUMBER if counted else PlanKind.FIXED_TIME


def _known_ends(data: LifeData, kind: PlanKind, looks: Looks, life_scale: LifeScale) -> Array:
    """Return the place at which each unit leaves or would have left; NaN where it must be drawn."""
    running, last_seen = data.is_running, life_scale.to_line(np.where(data.is_running, data.lower, data.upper))
    if looks.only_one:
        return last_seen
    if kind is PlanKind.COMPLETE:
        return np.full_like(last_seen, np.inf)
    if kind is PlanKind.FIXED_TIME:
        return np.full_like(last_seen, last_seen[running][0])
    watch = (data.lower - data.entered)[running]
    if kind is PlanKind.STAGGERED and data.entered.any() and watch.size > 1:
        ends = data.entered + watch.mean()
        if np.ptp(watch) <= _SAME_LENGTH * watch.mean() and (data.upper[~running] <= ends[~running]).all():
            return np.where(running, last_seen, life_scale.to_line(ends))
    return np.where(running, last_seen, np.nan)
