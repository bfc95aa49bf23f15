"""Curves of a fit over age, with pointwise bands of any kind of bound."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import tail_of
from reliability_app.engine.curves import Curve
from reliability_app.engine.empirical import SurvivalSteps
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.life_measures import Measure

Array = NDArray[np.float64]


def failure_curve(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> Curve:
    """Return the failure probability over age; `side` is that of the probability."""
    cdf = fit.family.standard.cdf
    return _curve(fit, ages, cdf(fit.score(ages)), fit.score_measure(ages), cdf, (kind, side, confidence))


def survival_curve(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> Curve:
    """Return the reliability over age; `side` is that of the reliability."""
    survival = fit.family.standard.survival
    measure = fit.score_measure(ages)
    return _curve(fit, ages, survival(fit.score(ages)), measure, survival, (kind, side, confidence), falling=True)


def hazard_curve(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> Curve:
    """Return the hazard rate over age; `side` is that of the hazard."""
    values = np.asarray(fit.hazard(ages))
    return _curve(fit, ages, values, fit.hazard_measure(ages), fit.hazard_of(ages), (kind, side, confidence))


def step_curve(steps: SurvivalSteps, end: float) -> Curve:
    """Return a survival estimate as corner points from age 0 to `end`, each step drawn down at its age."""
    age = np.concatenate([[0.0], np.repeat(steps.age, 2), [max(end, steps.age[-1] if steps.age.size else 0.0)]])
    return Curve(age, _corners(steps.survival, 1.0), _corners(steps.lower, 1.0), _corners(steps.upper, 1.0))


def _corners(values: Array, start: float) -> Array:
    return np.repeat(np.concatenate([[start], values]), 2)


def _curve(
    fit: Fit,
    ages: Array,
    values: Array,
    measure: Measure,
    to_reading: Callable[[Array], Array],
    bound: tuple[str, str, float],
    *,
    falling: bool = False,
) -> Curve:
    kind, side, confidence = bound
    check_bound(kind, side, confidence)
    try:
        interval = fit.bounder.band(measure, kind, tail_of(side, confidence))
    except BoundUnavailable:
        return Curve(ages, values)
    lower, upper = fit.reading_ends(interval, to_reading, ages, side, falling=falling)
    return Curve(ages, values, _band(lower), _band(upper))


def _band(values: float | Array | None) -> Array | None:
    return None if values is None else np.where(np.isfinite(values), values, np.nan)
