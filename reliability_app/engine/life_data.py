"""LifeData: lives as intervals with quantities and entry ages; the one place where they are validated."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reliability_app.engine.errors import DataError

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

_FAULTS_SHOWN = 5


@dataclass(frozen=True, eq=False)
class LifeData:
    """What is known of the lives of some units, in one unit of age.

    Build it with `right_censored` or `from_intervals`; both validate. The invariant afterwards: all arrays have shape
    (n,), n >= 1, are not writable, and for each record
    failed: lower == upper; running: lower finite, upper = inf; found failed: lower < upper < inf;
    0 <= entered < upper, where 0 says that the unit was watched from the beginning, else entered <= lower: for a unit
    found failed that entered after the given lower end, its entry is the lower end;
    quantity is a whole number >= 1.

    A unit found failed of which nothing was known before has lower = 0 (it failed after age 0) or lower = -inf (nothing
    is known). For a family of ln life the two are one, F(upper); for a family of life itself the first is
    F(upper) - F(0), the second F(upper).

    Ages of 0 and below are let in: a family of life itself can be fitted to differences or logarithms too. A family of
    ln life refuses them when it is fitted (`check_beyond`).
    """

    lower: Array
    upper: Array
    quantity: Array
    entered: Array

    @classmethod
    def right_censored(
        cls,
        life: ArrayLike,
        failed: ArrayLike,
        *,
        quantity: ArrayLike | None = None,
        entered: ArrayLike | None = None,
    ) -> LifeData:
        """Build from ages and a flag: failed at that age (true), or still running at it (false).

        Parameters
        ----------
        life : array_like, shape (n,)
            Age at failure, or age reached so far.
        failed : array_like of bool, shape (n,)
        quantity : array_like of whole numbers, shape (n,), optional
            Identical units per record; 1 if not given.
        entered : array_like, shape (n,), optional
            Age at which the unit came under observation; 0 if not given.

        Raises
        ------
        DataError
            With one sentence for each fault.
        """
        lower = _vector(life, "life")
        flags = np.asarray(failed)
        if flags.shape != lower.shape:
            raise DataError([f"There are {lower.size} lives but {flags.size} failed flags: give one flag a life."])
        if flags.dtype != np.bool_ and not np.isin(flags, (0, 1)).all():
            raise DataError(["The failed flags must be true or false (1 or 0)."])
        return cls._validated(lower, np.where(flags.astype(bool), lower, np.inf), quantity, entered)

    @classmethod
    def from_intervals(
        cls,
        lower: ArrayLike,
        upper: ArrayLike,
        *,
        quantity: ArrayLike | None = None,
        entered: ArrayLike | None = None,
    ) -> LifeData:
        """Build from intervals in which each life lies.

        Parameters
        ----------
        lower, upper : array_like, shape (n,)
            failed: lower == upper; running: upper = inf; found failed between two ages: lower < upper;
            found failed at the first look: lower = 0, or -inf where not even that is known.
        quantity, entered : array_like, shape (n,), optional
            As in `right_censored`.

        Raises
        ------
        DataError
            With one sentence for each fault.
        """
        return cls._validated(_vector(lower, "lower"), _vector(upper, "upper"), quantity, entered)

    @classmethod
    def _validated(cls, lower: Array, upper: Array, quantity: ArrayLike | None, entered: ArrayLike | None) -> LifeData:
        if lower.size == 0:
            raise DataError(["There are no lives: give at least one unit."])
        counts = np.ones_like(lower) if quantity is None else _vector(quantity, "quantity")
        starts = np.zeros_like(lower) if entered is None else _vector(entered, "entered")
        sizes = {"upper": upper.size, "quantity": counts.size, "entered": starts.size}
        uneven = [f"lower has {lower.size} values but {name} has {size}." for name, size in sizes.items()]
        if any(size != lower.size for size in sizes.values()):
            raise DataError([s for s, size in zip(uneven, sizes.values(), strict=True) if size != lower.size])
        faults = _faults(lower, upper, counts, starts)
        if faults:
            raise DataError(faults)
        # A unit that came under observation within its interval had not failed by then.
        lower = np.where(starts > 0, np.maximum(lower, starts), lower)
        for array in (lower, upper, counts, starts):
            array.flags.writeable = False
        return cls(lower, upper, counts, starts)

    def check_beyond(self, origin: float, title: str) -> None:
        """Raise DataError where a record cannot belong to lives that all lie beyond `origin`, as those of a family do.

        Lower ends of minus infinity, and those at `origin` of units found failed, are in order.
        """
        if self.lower.min() > origin:
            return
        is_unseen = np.isneginf(self.lower) | ((self.lower == origin) & self.is_found_failed)
        wrong = np.where(is_unseen, self.upper, self.lower) <= origin
        if wrong.any() and np.isfinite(origin):
            raise DataError([_fault(wrong, f"the life is not above {origin:g}, as the {title} family has it")])

    @cached_property
    def is_failed(self) -> Mask:
        """Which records are failures at a known age."""
        return np.equal(self.lower, self.upper)

    @cached_property
    def is_running(self) -> Mask:
        """Which records are right-censored."""
        return np.isinf(self.upper)

    @cached_property
    def is_found_failed(self) -> Mask:
        """Which records are only known to have failed between two ages."""
        return ~(self.is_failed | self.is_running)

    @property
    def failed_count(self) -> int:
        """Units that failed at a known age."""
        return int(self.quantity[self.is_failed].sum())

    @property
    def running_count(self) -> int:
        """Units still running."""
        return int(self.quantity[self.is_running].sum())

    @property
    def found_failed_count(self) -> int:
        """Units known to have failed between two ages."""
        return int(self.quantity[self.is_found_failed].sum())

    @property
    def unit_count(self) -> int:
        """All units."""
        return int(self.quantity.sum())

    @property
    def is_complete(self) -> bool:
        """True when every unit failed at a known age and was watched from age 0."""
        return bool(self.is_failed.all() and not self.entered.any())

    @property
    def first_failure(self) -> float | None:
        """The earliest age by which a unit is known to have failed, or None without a failure."""
        ends = self.upper[~self.is_running]
        return float(ends.min()) if ends.size else None

    @property
    def last_observation(self) -> float:
        """The greatest age at which any unit was observed."""
        return float(np.where(self.is_running, self.lower, self.upper).max())


def _vector(values: ArrayLike, name: str) -> Array:
    try:
        array = np.array(values, dtype=np.float64)
    except (TypeError, ValueError) as problem:
        raise DataError([f"{name} holds something that is not a number ({problem}): give numbers only."]) from problem
    if array.ndim != 1:
        raise DataError([f"{name} must be a list of numbers (one dimension), not {array.ndim} dimensions."])
    return array


def _faults(lower: Array, upper: Array, quantity: Array, entered: Array) -> list[str]:
    running, exact = np.isposinf(upper), lower == upper
    finite = np.isfinite(lower)
    unseen = np.isneginf(lower) & np.isfinite(upper)
    checks = (
        (~(finite | unseen) | np.isnan(upper), "the life is not a finite number"),
        (finite & (upper < lower), "the upper age is below the lower age"),
        (~((quantity >= 1) & (quantity == np.floor(quantity)) & np.isfinite(quantity)),
         "the quantity is not a whole number of 1 or more"),
        (~((entered >= 0) & np.isfinite(entered)), "the entry age is negative or not a number"),
        ((entered > 0) & (entered >= np.where(running | exact, lower, upper)),
         "the entry age is not below the life"),
    )  # fmt: skip
    return [_fault(where, reason) for where, reason in checks if where.any()]


def _fault(where: Mask, reason: str) -> str:
    records = np.flatnonzero(where)
    named = ", ".join(str(record + 1) for record in records[:_FAULTS_SHOWN])
    more = f" and {records.size - _FAULTS_SHOWN} more" if records.size > _FAULTS_SHOWN else ""
    return f"Record {named}{more}: {reason}; correct or leave out these records."
