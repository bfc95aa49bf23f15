"""Takes one reading off a fit: the estimate, its bound on the side the basis names, the cautions of this number."""

from __future__ import annotations

from functools import partial
from typing import cast

import numpy as np

from reliability_app.engine import Fit
from reliability_app.engine.bounds.kinds import OPPOSITE_SIDE
from reliability_app.engine.cautions import Caution, Severity, worst_first
from reliability_app.engine.errors import RigpaperError
from reliability_app.engine.fit_cautions import cautions_of_age, cautions_of_bound
from reliability_app.engine.question import Question
from reliability_app.session.document import (
    AgeAtHazardAsk,
    Ask,
    Basis,
    ConditionalReliabilityAsk,
    HazardAsk,
    LifeAsk,
    MeanLifeAsk,
    ModeAsk,
    ReliabilityAsk,
    ResidualLifeAsk,
    Side,
)
from reliability_app.session.picture import Reading
from reliability_app.session.promise import cautions_of_promise, promise_for
from reliability_app.session.wording import ask_title, observed_age_text, tail_caution

# Readings that are ages themselves, so that it is their own place which may lie outside what was observed.
_AGES = LifeAsk | ModeAsk | AgeAtHazardAsk
# So much of the units still running at the last observation leaves a mean to the family chosen.
_NOTICED_TAIL = 0.05


def take_reading(fitted: Fit, ask: Ask, basis: Basis, life_unit: str, *, stand_in: str | None = None) -> Reading:
    """Take one reading; where the bound does not exist a caution says why, and both ends are None.

    With `stand_in` that kind of bound is given in the place of the basis's own, and the reading is marked provisional.
    Units of which none failed give a bound and no estimate, where the engine has one for them.
    """
    title = ask_title(ask, life_unit)
    if not (fitted.converged or fitted.has_zero_failure_bound):
        return Reading(ask, None, None, None, basis)
    cautions: list[Caution] = []
    try:
        question = question_of(fitted, ask)
        value = _estimate(fitted, ask, question)
    except RigpaperError as trouble:
        return Reading(ask, None, None, None, basis, (_serious("no-reading", trouble, title),))
    if value is not None:
        cautions.extend(_cautions_of_place(ask, value, fitted, life_unit))
    lower = upper = None
    used, promise = "", None
    try:
        side, kind = bound_side(ask, basis.side), stand_in or basis.bound
        bound = question.bounds(confidence=basis.confidence, side=side, kind=kind)
        lower, upper = (None if end is None or not np.isfinite(end[0]) else float(end[0]) for end in bound.both)
        used = bound.kind
        cautions.extend(cautions_of_bound(bound, fitted.data, title))
        promise = promise_for(fitted, ask, basis, used)
        cautions.extend(cautions_of_promise(promise, used))
    except RigpaperError as trouble:
        cautions.append(_serious("bound-unavailable", trouble, title))
    return Reading(
        ask,
        value,
        lower,
        upper,
        basis,
        worst_first(tuple(cautions)),
        bound_used=used,
        is_provisional=stand_in is not None and stand_in != basis.bound,
        share_failed=_share_failed(ask, value, fitted),
        measured=promise.text if promise else "",
    )


def _estimate(fitted: Fit, ask: Ask, question: Question) -> float | None:
    if not fitted.converged:
        return None
    return fitted.mean_life() if isinstance(ask, MeanLifeAsk) else float(question.reading()[0])


def question_of(fitted: Fit, ask: Ask) -> Question:
    """Return what is asked as a question to a fit.

    Raises
    ------
    RigpaperError
        Where it cannot be put to this fit.
    """
    match ask:
        case LifeAsk():
            return fitted.life_question(ask.percent / 100.0)
        case ReliabilityAsk():
            return fitted.reliability_question(ask.age)
        case HazardAsk():
            return fitted.hazard_question(ask.age)
        case ConditionalReliabilityAsk():
            return fitted.conditional_question(ask.age, given=ask.given)
        case ResidualLifeAsk():
            return fitted.residual_question(ask.age)
        case MeanLifeAsk():
            return fitted.mean_question()
        case ModeAsk():
            return fitted.mode_question()
        case AgeAtHazardAsk():
            return fitted.hazard_age_question(ask.hazard)


def _serious(code: str, trouble: RigpaperError, title: str) -> Caution:
    return Caution(code, Severity.SERIOUS, f"{title}: {trouble}", title)


def _cautions_of_place(ask: Ask, estimate: float, fitted: Fit, life_unit: str) -> tuple[Caution, ...]:
    """Return the cautions for reading outside what was observed."""
    title = ask_title(ask, life_unit)
    if isinstance(ask, MeanLifeAsk):
        return _cautions_of_tail(ask, title, fitted, life_unit)
    age, subject = (estimate, title) if isinstance(ask, _AGES) else (ask.age, _age_subject(ask.age, life_unit))
    found: tuple[Caution, ...] = ()
    if isinstance(ask, LifeAsk) or 0.0 < age < np.inf:
        age_words = partial(observed_age_text, life_unit=life_unit)
        found = cautions_of_age(age, fitted.data, subject=subject, age_text=age_words)
    if isinstance(ask, ResidualLifeAsk):
        found += _cautions_of_tail(ask, title, fitted, life_unit)
    return found


def _age_subject(age: float, life_unit: str) -> str:
    return f"The age {observed_age_text(age, life_unit)}"


def _cautions_of_tail(
    ask: MeanLifeAsk | ResidualLifeAsk, title: str, fitted: Fit, life_unit: str
) -> tuple[Caution, ...]:
    """Return the caution for a mean to which lives beyond the last observation contribute noticeably."""
    last = fitted.data.last_observation
    running = float(fitted.reliability(last))
    if isinstance(ask, ResidualLifeAsk):
        running = running / float(fitted.reliability(ask.age)) if ask.age < last else 1.0
    if running < _NOTICED_TAIL:
        return ()
    return (tail_caution(title, running, observed_age_text(last, life_unit)),)


def _share_failed(ask: Ask, estimate: float | None, fitted: Fit) -> float | None:
    if not isinstance(ask, MeanLifeAsk) or estimate is None or not 0.0 < estimate < np.inf:
        return None
    return float(fitted.failure_probability(estimate))


def bound_side(ask: Ask, side: Side) -> Side:
    """Return the side on which a reading of this kind is bounded.

    The side of a basis is that of lives and reliabilities; a hazard is bounded on the opposite side, so that a lower
    bound of the life goes with an upper bound of the hazard.
    """
    return cast(Side, OPPOSITE_SIDE[side]) if isinstance(ask, HazardAsk) else side
