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
        text = "Only one unit has failed: shape and bounds rest on a single failure; wait for more before relying on them."
        return (Caution("one-failure", Severity.SERIOUS, text),)
    if failures < VERY_FEW_FAILURES:
        text = f"Only {failures} units have failed: the family cannot be told from so few, and the bounds are wide; more failures would help."
        return (Caution("very-few-failures", Severity.SERIOUS, text),)
    if failures < FEW_FAILURES:
        text = f"Only {failures} units have failed: the family can hardly be told from so few; compare the families."
        return (Caution("few-failures", Severity.CAUTION, text),)
    return ()


def cautions_of_life(life: float, data: LifeData, age_text: AgeText = plain_age) -> tuple[Caution, ...]:
    """Return the cautions for a life read off a fit: extrapolation to either side."""
    first = data.first_failure
    if first is not None and life < first:
        text = f"lies below the first failure ({age_text(first)}): it is extrapolated and depends on the family."
        return (Caution("below-first-failure", Severity.CAUTION, f"This life {text}"),)
    return _beyond(life, data, "This life", age_text)


def cautions_of_age(age: float, data: LifeData, age_text: AgeText = plain_age) -> tuple[Caution, ...]:
    """Return the cautions for a reliability or a hazard read at an age."""
    first = data.first_failure
    if first is not None and age < first:
        text = f"This age lies below the first failure ({age_text(first)}): what is read there depends on the family."
        return (Caution("below-first-failure", Severity.CAUTION, text),)
    return _beyond(age, data, "This age", age_text)


def cautions_of_bound(kind: str, data: LifeData) -> tuple[Caution, ...]:
    """Return the caution for a kind of bound in a small sample."""
    failures = data.failed_count + data.found_failed_count
    if kind == "wald" and failures < WALD_NEEDS_FAILURES:
        text = (
            f"A Wald bound from {failures} failures promises more than it keeps (one-sided 95 % lower bounds of B10 held "
            "in 78 to 92 % of simulated small samples): choose the likelihood bound."
        )
        return (Caution("wald-small-sample", Severity.CAUTION, text),)
    if kind == "likelihood" and failures < LIKELIHOOD_NEEDS_FAILURES:
        text = (
            f"A likelihood-ratio bound from {failures} failures promises slightly more than it keeps (one-sided 95 % "
            "lower bounds of B10 held in 87 to 95 % of simulated samples of this size)."
        )
        return (Caution("likelihood-small-sample", Severity.NOTE, text),)
    return ()


def _beyond(age: float, data: LifeData, what: str, age_text: AgeText) -> tuple[Caution, ...]:
    last = data.last_observation
    if age <= last:
        return ()
    text = f"{what} lies beyond the last observation ({age_text(last)}): it is extrapolated and depends on the family."
    return (Caution("beyond-last-observation", Severity.CAUTION, text),)
