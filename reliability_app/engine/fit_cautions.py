"""The cautions that a fit and the readings taken from it call for."""

from __future__ import annotations

from collections.abc import Callable

from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.life_data import LifeData

AgeText = Callable[[float], str]

VERY_FEW_FAILURES = 5
FEW_FAILURES = 10
# Below this many failures the engine's own simulations saw Wald bounds hold clearly less often than promised.
WALD_NEEDS_FAILURES = 50
LIKELIHOOD_NEEDS_FAILURES = 20


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
    if first is not None and age < first:
        where = f"lies below the first failure ({age_text(first)})"
        code = "below-first-failure"
    elif age > last:
        where = f"lies beyond the last observation ({age_text(last)})"
        code = "beyond-last-observation"
    else:
        return ()
    text = f"{subject} {where}: it is extrapolated and depends on the family chosen; compare the families."
    return (Caution(code, Severity.CAUTION, text),)


def cautions_of_bound(kind: str, data: LifeData) -> tuple[Caution, ...]:
    """Return the caution for a kind of bound in a small sample."""
    failures = data.failed_count + data.found_failed_count
    if kind == "wald" and failures < WALD_NEEDS_FAILURES:
        text = (
            f"A Wald bound from {failures} failures promises more than it keeps: in simulated small samples one-sided "
            "95 % lower bounds of B10 held in as few as 78 %; choose the likelihood bound."
        )
        return (Caution("wald-small-sample", Severity.CAUTION, text),)
    if kind == "likelihood" and failures < LIKELIHOOD_NEEDS_FAILURES:
        text = (
            f"A likelihood-ratio bound from {failures} failures may promise more than it keeps: in simulated samples "
            "of such sizes one-sided 95 % lower bounds of B10 held in as few as 87 %."
        )
        return (Caution("likelihood-small-sample", Severity.NOTE, text),)
    return ()
