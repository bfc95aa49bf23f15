"""Exact bounds: whether they exist for some data and a family, and by which way they are computed."""

from __future__ import annotations

from contextlib import suppress
from dataclasses import dataclass, field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds.chi_square import chi_square_end
from reliability_app.engine.bounds.conditional import ConditionalBounds
from reliability_app.engine.bounds.non_central_t import NO_EXACT_BOUND_OF_READING, non_central_t_end
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import Family
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import LifeMeasure, Measure, ScoreMeasure, SlopeMeasure

Array = NDArray[np.float64]

# With more failures the quadrature takes longer than half a second, and the likelihood bound is as good.
_MOST_RECORDS = 300


class ExactWay(Enum):
    """How an exact bound is computed."""

    NON_CENTRAL_T = "non-central t"
    CHI_SQUARE = "chi-square"
    CONDITIONAL = "conditional on the ancillaries"


def exact_way(data: LifeData, family: Family) -> ExactWay | None:
    """Return the way to exact bounds, or None where no exact bound is known.

    Complete data, or a test stopped at a fixed number of failures (all running units at the age of the last failure).
    """
    if family.fixed_sigma is not None:
        return ExactWay.CHI_SQUARE if data.is_failed.all() or stops_at_a_failure(data) else None
    if not (data.is_complete or stops_at_a_failure(data)):
        return None
    failures = data.lower[data.is_failed]
    if failures.min() == failures.max():
        return None
    if family.name in ("lognormal", "normal") and data.is_complete:
        return ExactWay.NON_CENTRAL_T
    return ExactWay.CONDITIONAL if failures.size <= _MOST_RECORDS else None


def has_exact_bounds(data: LifeData, family: Family, *, of_hazard: bool = False) -> bool:
    """True where exact bounds of lives, reliabilities and parameters are known; of a hazard by chi-square only."""
    way = exact_way(data, family)
    return way is not None and (not of_hazard or way is ExactWay.CHI_SQUARE)


def stops_at_a_failure(data: LifeData) -> bool:
    """True where the data show a test stopped at a failure: all running units, watched from age 0, are as old as it."""
    running, failed = data.lower[data.is_running], data.lower[data.is_failed]
    if not (running.size and failed.size) or data.entered.any() or data.is_found_failed.any():
        return False
    return bool((running == failed.max()).all())


@dataclass(frozen=True, eq=False)
class ExactBounds:
    """The exact bounds of one maximum likelihood estimate; what is slow is computed once."""

    estimate: Estimate
    data: LifeData
    _conditional: list[ConditionalBounds] = field(default_factory=list)

    def end(self, measure: Measure, tail: float, sign: float) -> Array:
        """Return the lower (sign -1) or upper (sign 1) ends, shape (measure.size,), with probability `tail` beyond.

        Raises
        ------
        BoundUnavailable
            If no exact bound is known for these data and this family, or for this reading.
        """
        match exact_way(self.data, self.estimate.family):
            case ExactWay.NON_CENTRAL_T:
                # The library's non-central t gives up far outside two or three lives, where quadrature does not.
                with suppress(BoundUnavailable):
                    return non_central_t_end(self.estimate, measure, tail, sign)
                return self._conditional_end(measure, tail, sign)
            case ExactWay.CHI_SQUARE:
                return chi_square_end(self.estimate, measure, tail, sign)
            case ExactWay.CONDITIONAL:
                return self._conditional_end(measure, tail, sign)
        raise BoundUnavailable(
            "An exact bound is known only for complete data (every unit failed at a known age) and for a test stopped "
            f"at a fixed number of failures, up to {_MOST_RECORDS} of them at different ages: choose the calibrated or "
            "the likelihood bound."
        )

    def _conditional_end(self, measure: Measure, tail: float, sign: float) -> Array:
        if not self._conditional:
            self._conditional.append(ConditionalBounds(self.estimate))
        bounds = self._conditional[0]
        match measure:
            case LifeMeasure():
                return bounds.life_end(measure, tail, sign)
            case ScoreMeasure():
                return bounds.score_end(measure, tail, sign)
            case SlopeMeasure():
                return bounds.slope_end(tail, sign)
        raise BoundUnavailable(NO_EXACT_BOUND_OF_READING)
