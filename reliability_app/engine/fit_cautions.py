"""The cautions that a fit and the readings taken from it call for."""

from __future__ import annotations

from collections.abc import Callable

from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.families import Family
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.question import Bound

AgeText = Callable[[float], str]

VERY_FEW_FAILURES = 5
FEW_FAILURES = 10
WALD_NEEDS_FAILURES = 50
LIKELIHOOD_NEEDS_FAILURES = 20
_NOTICED_BELOW_ZERO = 1e-3
# Percent of complete tests with so many failures in which the one-sided 95 % lower bound of B10 lay below the true one:
# own simulation of 40,000 tests a row, the same within half a point for lognormal and Weibull lives (of complete lives
# the share depends on nothing but the number).
_LIKELIHOOD_HELD = {2: 71, 3: 81, 4: 85, 5: 87, 6: 88, 7: 89, 8: 90, 10: 90, 12: 91, 15: 92}
_WALD_HELD = {2: 55, 3: 67, 4: 73, 5: 77, 6: 79, 7: 81, 8: 82, 10: 84, 12: 86, 15: 87, 20: 88, 30: 90}


def plain_age(age: float) -> str:
    """Return an age as a bare number."""
    return f"{age:.4g}"


def cautions_of_fit(data: LifeData) -> tuple[Caution, ...]:
    """Return the cautions that hold for everything read off a fit to `data`."""
    failures = data.failed_count + data.found_failed_count
    if failures == 1:
        text = (
            "Only one unit has failed: shape and bounds rest on a single failure; wait for more before relying on them."
        )
        return (Caution("one-failure", Severity.SERIOUS, text),)
    if failures < VERY_FEW_FAILURES:
        text = (
            f"Only {failures} units have failed: the family cannot be told from so few, and the bounds are wide; "
            "more failures would help."
        )
        return (Caution("very-few-failures", Severity.SERIOUS, text),)
    if failures < FEW_FAILURES:
        text = f"Only {failures} units have failed: the family can hardly be told from so few; compare the families."
        return (Caution("few-failures", Severity.CAUTION, text),)
    return ()


def cautions_of_age(
    age: float, data: LifeData, *, subject: str = "This age", age_text: AgeText = plain_age
) -> tuple[Caution, ...]:
    """Return the caution for reading at an age, or reading an age, outside what was observed."""
    first, last = data.first_failure, data.last_observation
    if age <= 0 and first is not None and first > 0:
        text = "not above 0, where no life can lie; choose a family of ln life, such as lognormal or Weibull."
        return (Caution("life-not-positive", Severity.SERIOUS, f"{subject}: {text}", subject),)
    if first is not None and age < first:
        where = f"below the first failure ({age_text(first)})"
        code = "below-first-failure"
    elif age > last:
        where = f"beyond the last observation ({age_text(last)})"
        code = "beyond-last-observation"
    else:
        return ()
    text = f"{where}, so extrapolated and dependent on the family chosen; compare the families."
    return (Caution(code, Severity.CAUTION, f"{subject}: {text}", subject),)


def cautions_of_share_below_zero(share: float) -> tuple[Caution, ...]:
    """Return the caution for a family of life itself that gives a share of positive lives to negative ages."""
    if share < _NOTICED_BELOW_ZERO:
        return ()
    text = (
        f"This family puts {100 * share:.2g} % of the lives below age 0, so readings at low percents come out too "
        "early or negative; choose a family of ln life, such as lognormal or Weibull."
    )
    return (Caution("lives-below-zero", Severity.CAUTION, text),)


def caution_of_assumed_shape(family: Family) -> Caution:
    """Return the caution for a family whose shape was not estimated from the data."""
    if family.given_shape is None:
        text = (
            "The bound rests on a constant hazard, which these data cannot show; give a Weibull shape to see what "
            "another hazard would leave of it."
        )
    else:
        text = (
            f"Everything read here rests on the shape {family.given_shape:g} that was given, not estimated, and holds "
            "only as far as it is right; compare with a smaller and a greater shape."
        )
    return Caution("shape-assumed", Severity.CAUTION, text)


def cautions_of_bound(bound: Bound, data: LifeData, subject: str = "This reading") -> tuple[Caution, ...]:
    """Return the cautions for a bound that promises more than it keeps in a small sample, or stands in for another."""
    return _cautions_of_stand_in(bound, subject) + _cautions_of_small_sample(bound.kind, data)


def _cautions_of_stand_in(bound: Bound, subject: str) -> tuple[Caution, ...]:
    if bound.instead_of is None or bound.kind != "likelihood":
        return ()
    # What to choose instead has been chosen already.
    why = str(bound.instead_of).split(": choose ")[0].rstrip(".")
    text = (
        f"{subject}: the bound is that of the likelihood ratio, not calibrated, and may promise too much in small "
        f"samples; {why[:1].lower()}{why[1:]}."
    )
    return (Caution("not-calibrated", Severity.CAUTION, text, subject),)


def _cautions_of_small_sample(kind: str, data: LifeData) -> tuple[Caution, ...]:
    failures = data.failed_count + data.found_failed_count
    if kind == "wald" and failures < WALD_NEEDS_FAILURES:
        return (Caution("wald-small-sample", Severity.CAUTION, _held("A Wald bound", _WALD_HELD, failures)),)
    if kind == "likelihood" and failures < LIKELIHOOD_NEEDS_FAILURES:
        severity = Severity.CAUTION if failures < VERY_FEW_FAILURES else Severity.NOTE
        text = _held("A likelihood-ratio bound", _LIKELIHOOD_HELD, failures)
        return (Caution("likelihood-small-sample", severity, text),)
    return ()


def _held(what: str, table: dict[int, int], failures: int) -> str:
    """Say how much less than promised a kind of bound keeps, by the row of the table for so many failures or fewer."""
    row = max(count for count in table if count <= max(failures, min(table)))
    return (
        f"{what} from {failures} failures keeps less than it promises: in complete tests with {row} failures the "
        f"one-sided 95 % lower bound of B10 was measured to hold in {table[row]} %. "
        "A calibrated bound comes nearer to its promise."
    )
