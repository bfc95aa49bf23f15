"""Whether a maximum likelihood estimate exists, decided from the data before any fitting and said in words."""

from __future__ import annotations

from enum import Enum

import numpy as np

from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.families.base import Family
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_scale import LifeScale


class Outcome(Enum):
    """How a fit ended."""

    ESTIMATED = "estimated"
    NO_FAILURE = "no-failure"
    ONE_FAILURE_NOT_OUTLIVED = "one-failure-not-outlived"
    FAILURES_AT_ONE_AGE = "failures-at-one-age"
    FAILED_BEFORE_FIRST_LOOK = "failed-before-first-look"
    NO_INTERIOR_MAXIMUM = "no-interior-maximum"
    NOT_CONVERGED = "not-converged"

    @property
    def caution(self) -> Caution:
        """The outcome in words with advice; only for an outcome without an estimate."""
        return Caution(self.value, Severity.SERIOUS, _TEXTS[self])


_TEXTS = {
    Outcome.NO_FAILURE: (
        "No unit has failed, so no life distribution can be estimated: run on until units fail, or give a Weibull "
        "shape (or take the exponential family) to see what the time survived so far shows."
    ),
    Outcome.ONE_FAILURE_NOT_OUTLIVED: (
        "There is one failure and no unit ran longer, so the spread of the lives cannot be estimated: "
        "more failures are needed, or the exponential family if a constant hazard can be justified."
    ),
    Outcome.FAILURES_AT_ONE_AGE: (
        "All failures fit one single age and no unit ran longer, so the spread of the lives cannot be estimated: "
        "record ages more finely, or wait for failures at other ages."
    ),
    Outcome.FAILED_BEFORE_FIRST_LOOK: (
        "Every unit was found failed at its first look, so no life distribution can be estimated: "
        "look earlier, or record ages at failure."
    ),
    Outcome.NO_INTERIOR_MAXIMUM: (
        "The likelihood has no maximum within the family, it keeps rising towards one of its ends, so no estimate "
        "exists: choose a family with fewer parameters."
    ),
    Outcome.NOT_CONVERGED: (
        "The fit did not converge, so no number is given. The units may not determine a location and a spread together "
        "(early failures found late, or units watched only late in life), or a life may be mistyped: check the table, "
        "or try another family."
    ),
}


def outcome_before_fitting(data: LifeData, family: Family) -> Outcome:
    """Return ESTIMATED where an estimate can be looked for, else the reason why none exists.

    With sigma free the likelihood has no maximum when all units agree with one single age: every unit known to have
    survived some age survived it at most up to the age by which the first is known to have failed.
    """
    failures = ~data.is_running
    if not failures.any():
        return Outcome.NO_FAILURE
    if not data.lower.max() > family.life_scale.origin:
        return Outcome.FAILED_BEFORE_FIRST_LOOK
    if family.fixed_sigma is not None:
        return Outcome.ESTIMATED
    if _is_at_most(data.lower.max(), data.upper.min(), family.life_scale):
        single = float(np.sum(data.quantity[failures])) == 1.0
        return Outcome.ONE_FAILURE_NOT_OUTLIVED if single else Outcome.FAILURES_AT_ONE_AGE
    return Outcome.ESTIMATED


def _is_at_most(age: float, other: float, life_scale: LifeScale) -> bool:
    """Return whether an age is at most another, but for rounding: it would be taken for the spread of the lives."""
    if age <= other:
        return True
    place, limit = (float(life_scale.to_line(np.array(at))) for at in (age, other))
    return place - limit <= life_scale.rounding(limit)
