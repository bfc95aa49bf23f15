"""Turnbull's estimate without a family, for known ages, intervals, running units and late entry in any mixture."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.life_data import LifeData
from reliability_app.engine.turnbull_cells import Cells, Records, innermost_intervals, known_lower, records_on
from reliability_app.engine.turnbull_curvature import Curvature
from reliability_app.engine.turnbull_errors import tied_to_start, variances
from reliability_app.engine.turnbull_maximum import Increments, maximise

Array = NDArray[np.float64]
Integers = NDArray[np.intp]
Mask = NDArray[np.bool_]

# An empty cell whose slope is this near to zero, as a share of the units passing it, might hold something as well.
_NEARLY_LEVEL = 1e-8


@dataclass(frozen=True, eq=False)
class TurnbullSteps:
    """A survival estimate that falls inside the intervals (begin, age]; arrays of shape (intervals,).

    Where in its interval the estimate falls, the data do not say: it is known at the ends only.

    Attributes
    ----------
    begin, age : ndarray
        The innermost intervals that hold mass, in rising order; begin == age where the age is known.
    mass : ndarray
        Share of the units that failed in each.
    survival : ndarray
        Share running beyond `age`, and until the next `begin`.
    standard_error : ndarray
        From the observed information of the masses above zero; Greenwood's where all ages are known. NaN where the
        survival is 0, where it is not determined, and where there is no honest figure (see `turnbull`).
    lower, upper : ndarray
        Two-sided pointwise bounds formed on ln(-ln S); NaN where the error is.
    failures : ndarray
        Units expected to have failed in each interval, given where each record says that its units failed.
    tail_begin : float or None
        Where survival is left at the end: the age beyond which the rest of the units fail.
    log_likelihood : float
    excess : float
        Largest departure from the Kuhn-Tucker conditions, as a share of the units passing an interval: how far the
        next step of the classical iteration would still raise a hazard. Rounding apart, 0.
    steps : int
        Newton steps taken.
    converged : bool
    is_unique : bool
        False where other masses can be just as likely.
    """

    begin: Array
    age: Array
    mass: Array
    survival: Array
    standard_error: Array
    lower: Array
    upper: Array
    failures: Array
    tail_begin: float | None
    log_likelihood: float
    excess: float
    steps: int
    converged: bool
    is_unique: bool


def turnbull(data: LifeData, *, confidence: float = 0.95) -> TurnbullSteps:
    """Return the estimate of greatest likelihood without a family (Turnbull 1976, J. R. Statist. Soc. B 38, 290-295).

    A unit found failed failed in (lower, upper]; one that entered late is watched from just after its entry. Without
    intervals this is the product-limit estimate, late entry included. The masses are right to about 1e-10.

    Parameters
    ----------
    confidence : float
        Of the two-sided bounds.

    Returns
    -------
    TurnbullSteps
    """
    cells = innermost_intervals(data)
    records = records_on(cells, data)
    found = maximise(records)
    hazard = np.cumsum(found.increment)
    survival = np.exp(-hazard)
    mass = -np.expm1(-found.increment) * np.concatenate([[1.0], survival[:-1]])
    held = (mass > 0) & np.isfinite(cells.end)
    is_determined = _is_determined(found, records) | (survival == 0)
    variance = np.where(is_determined, _variance(found), np.nan)
    kept = cells.chosen(held)
    survival = survival[held]
    error, lower, upper = _bounds(hazard[held], survival, variance[held], confidence)
    last = float(survival[-1]) if survival.size else 1.0
    return TurnbullSteps(
        begin=kept.begin,
        age=kept.end,
        mass=mass[held],
        survival=survival,
        standard_error=error,
        lower=lower,
        upper=upper,
        failures=_expected_failures(data, kept, mass[held]),
        tail_begin=float(cells.begin[-1]) if last > 0 else None,
        log_likelihood=found.log_likelihood,
        excess=found.excess,
        steps=found.steps,
        converged=found.converged,
        is_unique=bool(is_determined[held].all()),
    )


def _variance(found: Increments) -> Array:
    """Return the variance of the cumulative hazard after each cell."""
    is_held = (found.increment > 0) & np.isfinite(found.increment)
    held = np.flatnonzero(is_held)
    if not held.size:
        return np.full(is_held.size, np.nan)
    known = variances(Curvature.of(found.records.among(held), found.increment[held]))
    return np.concatenate([[0.0], known])[np.cumsum(is_held)]


def _is_determined(found: Increments, records: Records) -> Mask:
    """Return after which cells the cumulative hazard is the same wherever the likelihood is greatest.

    The likelihood fixes the hazard summed over each record; what hangs together with the start of life by such sums
    is fixed. Cells on the brink of holding something are counted in. Where nobody passed several cells of one record,
    as can happen with late entry, the unit may have failed in any of them.
    """
    increment = np.where(np.isinf(found.increment), 0.0, found.increment)
    covered = records.spread(np.ones_like(records.weight)) > 0.5
    level = records.passing - found.records.raised(increment)
    is_free = (increment > 0) | (covered & (records.passing > 0.5) & (level < _NEARLY_LEVEL * records.passing))
    free = np.flatnonzero(is_free)
    part = found.records.among(free)
    is_tied = tied_to_start(part.here > 0, part.first, part.last + 1)[np.cumsum(is_free)]
    is_open = covered & (records.passing < 0.5) & np.isfinite(found.increment)
    return np.asarray(is_tied & ~np.logical_or.accumulate(is_open))


def _expected_failures(data: LifeData, cells: Cells, mass: Array) -> Array:
    """Return how many units each cell is expected to hold, running units left out."""
    has_failed = ~data.is_running
    first, last = cells.within(known_lower(data)[has_failed], data.upper[has_failed])
    total = np.concatenate([[0.0], np.cumsum(mass)])
    # Where survival is 0 before a unit was first seen, the unit has no place.
    share = np.maximum(total[np.maximum(last + 1, first)] - total[first], 0.0)
    share = np.where(last == first, mass[np.minimum(first, cells.count - 1)], share)
    has_place = share > 0
    each = data.quantity[has_failed][has_place] / share[has_place]
    turns = np.bincount(first[has_place], each, cells.count + 1) - np.bincount(last[has_place] + 1, each, cells.count + 1)
    return np.asarray(mass * np.cumsum(turns)[: cells.count])


def _bounds(hazard: Array, survival: Array, variance: Array, confidence: float) -> tuple[Array, Array, Array]:
    is_known = (survival > 0) & np.isfinite(variance)
    spread = np.sqrt(np.where(is_known, variance, np.nan))
    factor = np.exp(ndtri(0.5 + 0.5 * confidence) * spread / np.where(is_known, hazard, np.nan))
    return survival * spread, np.exp(-hazard * factor), np.exp(-hazard / factor)
