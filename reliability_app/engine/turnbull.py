"""Turnbull's estimate without a family, for known ages, intervals, running units and late entry in any mixture."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.errors import NoEstimate
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.turnbull_cells import Records, innermost_intervals, records_on
from reliability_app.engine.turnbull_curvature import Curvature
from reliability_app.engine.turnbull_errors import tied_to_start, variances
from reliability_app.engine.turnbull_maximum import Increments, maximise

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

# An empty cell whose slope is this near to zero, as a share of the units passing it, might hold something as well.
_NEARLY_LEVEL = 1e-8
_LEAST_SHARE = 1e-250


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
    failures : ndarray
        Units expected to have failed in each interval, given what each record says of its units.
    tail_begin : float or None
        The age beyond which the rest of the units fail; None where no rest is left.
    log_likelihood : float
        Of the masses; with known ages it is no density and compares with no fit of a family.
    excess : float
        Largest departure from the Kuhn-Tucker conditions, as a share of the units passing an interval: how far one
        more step of the classical iteration would still raise a hazard. Rounding apart, 0.
    steps : int
        Newton steps taken.
    is_unique : bool
        False where other masses are as likely: with late entry, at ages at which nobody was watched, or where only
        one unit tells of several intervals.
    confidence : float
        Of the bounds.
    standard_error, lower, upper : ndarray
        Worked out when first asked for, which can take longer than the estimate.
    """

    begin: Array
    age: Array
    mass: Array
    survival: Array
    failures: Array
    tail_begin: float | None
    log_likelihood: float
    excess: float
    steps: int
    is_unique: bool
    confidence: float
    _uncertainty: _Uncertainty = field(repr=False)

    @cached_property
    def standard_error(self) -> Array:
        """From the observed information of the masses above zero; Greenwood's where all ages are known.

        NaN where there is none: where the survival is 0 or not determined, or where there are too many intervals (see
        `turnbull`).
        """
        return np.asarray(self.survival * self._uncertainty.spread)

    @cached_property
    def lower(self) -> Array:
        """Lower end of the two-sided pointwise bounds formed on ln(-ln S); NaN where the error is."""
        return np.asarray(np.exp(-self._uncertainty.hazard * self._factor))

    @cached_property
    def upper(self) -> Array:
        """Upper end of the same bounds."""
        return np.asarray(np.exp(-self._uncertainty.hazard / self._factor))

    @cached_property
    def _factor(self) -> Array:
        spread = self._uncertainty.spread
        # An infinite hazard has no spread, and any divisor leaves it so.
        size = np.where(np.isfinite(spread), self._uncertainty.hazard, 1.0)
        return np.asarray(np.exp(ndtri(0.5 + 0.5 * self.confidence) * spread / size))


@dataclass(frozen=True, eq=False)
class _Uncertainty:
    """The cumulative hazard after each interval, where it is determined, and what its variance is worked out from."""

    hazard: Array
    is_determined: Mask
    held: Mask
    found: Increments

    @cached_property
    def spread(self) -> Array:
        """Standard error of the cumulative hazard; NaN where there is none."""
        is_held = (self.found.increment > 0) & np.isfinite(self.found.increment)
        at = np.flatnonzero(is_held)
        if not at.size:
            return np.full(self.hazard.size, np.nan)
        variance = variances(Curvature.of(self.found.records.among(at), self.found.increment[at]))
        after = np.concatenate([[0.0], variance])[np.cumsum(is_held)][self.held]
        return np.sqrt(np.where(self.is_determined & np.isfinite(self.hazard), after, np.nan))


def turnbull(data: LifeData, *, confidence: float = 0.95) -> TurnbullSteps:
    """Return the estimate of greatest likelihood without a family (Turnbull 1976, J. R. Statist. Soc. B 38, 290-295).

    A unit found failed failed in (lower, upper]; one that entered late is watched from just after its entry. Without
    intervals this is the product-limit estimate, late entry included. The masses are right to about 1e-10.

    The errors rest on the information of the masses that are above zero, as if those at zero were known to be zero.
    Own simulation, 95 % bounds, 50 to 1000 units: inspected again and again at common ages they held 95 to 96 %, one
    look a unit at common ages 90 to 96 %; where every unit was looked at at ages of its own, for which theory gives no
    such errors at all, 85 to 93 %. Some 2,000 overlapping intervals that hold mass are too many: the errors are NaN.

    Parameters
    ----------
    confidence : float
        Of the two-sided bounds.

    Raises
    ------
    NoEstimate
        If the masses did not settle.
    """
    cells = innermost_intervals(data)
    records = records_on(cells, data)
    found = _settled(records)
    hazard = np.cumsum(found.increment)
    survival = np.exp(-hazard)
    mass = -np.expm1(-found.increment) * np.concatenate([[1.0], survival[:-1]])
    is_finite = np.isfinite(cells.end)
    held, is_determined = (mass > 0) & is_finite, _is_determined(found, records) | (survival == 0)
    nobody_watched = (records.passing < 0.5) & (survival > 0) & is_finite
    return TurnbullSteps(
        begin=cells.begin[held],
        age=cells.end[held],
        mass=mass[held],
        survival=survival[held],
        failures=_expected_failures(records, mass)[held],
        tail_begin=float(cells.begin[-1]) if survival[-1] > 0 else None,
        log_likelihood=found.log_likelihood,
        excess=found.excess,
        steps=found.steps,
        is_unique=bool(is_determined.all() and not nobody_watched.any()),
        confidence=confidence,
        _uncertainty=_Uncertainty(hazard[held], is_determined[held], held, found),
    )


def _settled(records: Records) -> Increments:
    found = maximise(records)
    if not found.converged:
        raise NoEstimate(
            f"The estimate without a family did not settle in {found.steps} steps: check the quantities, which may be"
            " too far apart, or combine inspection ages that are almost the same."
        )
    return found


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
    part = found.records.among(np.flatnonzero(is_free))
    is_tied = tied_to_start(part.here > 0, part.first, part.last + 1)[np.cumsum(is_free)]
    is_open = covered & (records.passing < 0.5) & np.isfinite(found.increment)
    return np.asarray(is_tied & ~np.logical_or.accumulate(is_open))


def _expected_failures(records: Records, mass: Array) -> Array:
    """Return how many units each cell is expected to hold, running units left out."""
    share = records.sums(mass)
    # Where survival is 0 before a unit was first seen, the unit has no place.
    each = np.divide(records.weight, share, out=np.zeros_like(share), where=share > _LEAST_SHARE)
    return np.asarray(np.where(mass > 0, records.here, 0.0) + mass * records.spread(each))
