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
from reliability_app.session.document import Ask, Basis, HazardAsk, LifeAsk, ReliabilityAsk, Side
from reliability_app.session.picture import Reading
from reliability_app.session.wording import age_text, ask_title


def take_reading(fitted: Fit, ask: Ask, basis: Basis, life_unit: str) -> Reading:
    """Take one reading; where the bound does not exist a caution says why, and both ends are None."""
    if not fitted.converged:
        return Reading(ask, None, None, None, basis)
    match ask:
        case LifeAsk():
            fraction = ask.percent / 100.0
            estimate, bounds = fitted.life(fraction), partial(fitted.life_bounds, fraction)
        case ReliabilityAsk():
            estimate, bounds = fitted.reliability(ask.age), partial(fitted.reliability_bounds, ask.age)
        case HazardAsk():
            estimate, bounds = fitted.hazard(ask.age), partial(fitted.hazard_bounds, ask.age)
    cautions = [
        *cautions_of_bound(basis.bound, fitted.data),
        *_cautions_of_place(ask, float(estimate), fitted, life_unit),
    ]
    try:
        ends = bounds(confidence=basis.confidence, side=bound_side(ask, basis.side), kind=basis.bound)
    except RigpaperError as trouble:
        cautions.append(Caution("bound-unavailable", Severity.SERIOUS, str(trouble)))
        ends = (None, None)
    lower, upper = (None if end is None or not np.isfinite(end) else float(end) for end in ends)
    return Reading(ask, float(estimate), lower, upper, basis, worst_first(tuple(cautions)))


def _cautions_of_place(ask: Ask, estimate: float, fitted: Fit, life_unit: str) -> tuple[Caution, ...]:
    """Return the caution for reading outside what was observed."""
    if isinstance(ask, LifeAsk):
        age, subject = estimate, ask_title(ask, life_unit)
    else:
        age, subject = ask.age, f"The age {age_text(ask.age, life_unit)}"
    return cautions_of_age(age, fitted.data, subject=subject, age_text=partial(age_text, life_unit=life_unit))


def bound_side(ask: Ask, side: Side) -> Side:
    """Return the side on which a reading of this kind is bounded.

    The side of a basis is that of lives and reliabilities; a hazard is bounded on the opposite side, so that a lower
    bound of the life goes with an upper bound of the hazard.
    """
    return cast(Side, OPPOSITE_SIDE[side]) if isinstance(ask, HazardAsk) else side
