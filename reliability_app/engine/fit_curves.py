"""Curves of a fit over age, with pointwise bands of any kind of bound."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import OPPOSITE_SIDE, Interval, tail_of
from reliability_app.engine.curves import Curve
from reliability_app.engine.empirical import SurvivalSteps
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.life_measures import Measure

Array = NDArray[np.float64]


def probability_curves(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> tuple[Curve, Curve]:
    """Return the failure probability and the reliability over age; `side` is that of the failure probability."""
    standard, z = fit.family.standard, fit.score(ages)
    interval = _interval(fit, fit.score_measure(ages), kind=kind, side=side, confidence=confidence)
    if interval is None:
        return Curve(ages, standard.cdf(z)), Curve(ages, standard.survival(z))
    lower, upper = fit.reading_ends(interval, standard.cdf, ages, side, falling=False)
    mirrored = fit.reading_ends(interval, standard.survival, ages, OPPOSITE_SIDE[side], falling=True)
    return (
        Curve(ages, standard.cdf(z), _band(lower), _band(upper)),
        Curve(ages, standard.survival(z), _band(mirrored[0]), _band(mirrored[1])),
    )


def hazard_curve(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> Curve:
    """Return the hazard rate over age; `side` is that of the hazard."""
    values = np.asarray(fit.hazard(ages))
    interval = _interval(fit, fit.hazard_measure(ages), kind=kind, side=side, confidence=confidence)
    if interval is None:
        return Curve(ages, values)
    lower, upper = fit.reading_ends(interval, fit.hazard_of(ages), ages, side, falling=False)
    return Curve(ages, values, _band(lower), _band(upper))


def step_curve(steps: SurvivalSteps, end: float) -> Curve:
    """Return a survival estimate as corner points from age 0 to `end`, each step drawn down at its age."""
    age = np.concatenate([[0.0], np.repeat(steps.age, 2), [max(end, steps.age[-1] if steps.age.size else 0.0)]])
    return Curve(age, _corners(steps.survival, 1.0), _corners(steps.lower, 1.0), _corners(steps.upper, 1.0))


def _corners(values: Array, start: float) -> Array:
    return np.repeat(np.concatenate([[start], values]), 2)


def _interval(fit: Fit, measure: Measure, *, kind: str, side: str, confidence: float) -> Interval | None:
    """Return the band of a measure, or None where this kind of bound does not exist for it."""
    check_bound(kind, side, confidence)
    try:
        return fit.bounder.band(measure, kind, tail_of(side, confidence))
    except BoundUnavailable:
        return None


def _band(values: float | Array | None) -> Array | None:
    return None if values is None else np.where(np.isfinite(values), values, np.nan)
