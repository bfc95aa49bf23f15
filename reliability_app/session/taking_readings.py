"""Takes one reading off a fit: the estimate, its bound on the side the basis names, the cautions of this number."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import cast

import numpy as np

from reliability_app.engine import Fit
from reliability_app.engine.bounds.kinds import OPPOSITE_SIDE
from reliability_app.engine.cautions import Caution, Severity, worst_first
from reliability_app.engine.errors import RigpaperError
from reliability_app.engine.fit_cautions import cautions_of_age, cautions_of_bound
from reliability_app.engine.fit_result import Ends
from reliability_app.session.document import Ask, Basis, HazardAsk, LifeAsk, ReliabilityAsk, Side
from reliability_app.session.picture import Reading
from reliability_app.session.wording import ask_title, observed_age_text


def take_reading(fitted: Fit, ask: Ask, basis: Basis, life_unit: str, *, stand_in: str | None = None) -> Reading:
    """Take one reading; where the bound does not exist a caution says why, and both ends are None.

    With `stand_in` that kind of bound is given in the place of the basis's own, and the reading is marked provisional.
    """
    if not fitted.converged:
        return Reading(ask, None, None, None, basis)
    estimate, bounds = _question(fitted, ask)
    used = stand_in or fitted.bound_used(basis.bound, of_hazard=isinstance(ask, HazardAsk))
    cautions = list(_cautions_of_place(ask, estimate, fitted, life_unit))
    try:
        ends = bounds(confidence=basis.confidence, side=bound_side(ask, basis.side), kind=used)
        cautions.extend(cautions_of_bound(used, fitted.data))
    except RigpaperError as trouble:
        cautions.append(Caution("bound-unavailable", Severity.SERIOUS, str(trouble)))
        ends, used = (None, None), ""
    lower, upper = (None if end is None or not np.isfinite(end) else float(end) for end in ends)
    provisional = stand_in is not None and stand_in != basis.bound
    return Reading(ask, estimate, lower, upper, basis, worst_first(tuple(cautions)), used, provisional)


def _question(fitted: Fit, ask: Ask) -> tuple[float, Callable[..., Ends]]:
    """Return the estimate, and the function that gives its bounds."""
    match ask:
        case LifeAsk():
            fraction = ask.percent / 100.0
            return float(fitted.life(fraction)), partial(fitted.life_bounds, fraction)
        case ReliabilityAsk():
            return float(fitted.reliability(ask.age)), partial(fitted.reliability_bounds, ask.age)
        case HazardAsk():
            return float(fitted.hazard(ask.age)), partial(fitted.hazard_bounds, ask.age)


def _cautions_of_place(ask: Ask, estimate: float, fitted: Fit, life_unit: str) -> tuple[Caution, ...]:
    """Return the caution for reading outside what was observed."""
    if isinstance(ask, LifeAsk):
        age, subject = estimate, ask_title(ask, life_unit)
    else:
        age, subject = ask.age, f"The age {observed_age_text(ask.age, life_unit)}"
    return cautions_of_age(age, fitted.data, subject=subject, age_text=partial(observed_age_text, life_unit=life_unit))


def bound_side(ask: Ask, side: Side) -> Side:
    """Return the side on which a reading of this kind is bounded.

    The side of a basis is that of lives and reliabilities; a hazard is bounded on the opposite side, so that a lower
    bound of the life goes with an upper bound of the hazard.
    """
    return cast(Side, OPPOSITE_SIDE[side]) if isinstance(ask, HazardAsk) else side
