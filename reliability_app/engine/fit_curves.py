"""Curves of a fit over age, with pointwise bands of any kind of bound."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import OPPOSITE_SIDE, tail_of
from reliability_app.engine.curves import Curve
from reliability_app.engine.empirical import SurvivalSteps, mark_age
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.fit_result import Fit, reading_ends
from reliability_app.engine.life_measures import Measure
from reliability_app.engine.shaped.shaped_fit import ShapedFit
from reliability_app.engine.turnbull import TurnbullSteps

Array = NDArray[np.float64]


def probability_curves(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> tuple[Curve, Curve]:
    """Return the failure probability and the reliability over age; `side` is that of the failure probability."""
    if isinstance(fit, ShapedFit):
        both = fit.probability_curves(ages, confidence=confidence, side=side, kind=kind)
        return _drawable(both[0]), _drawable(both[1])
    standard, z = fit.family.standard, fit.score(ages)
    band = _band_of(fit, fit.score_measure(ages), kind=kind, side=side, confidence=confidence)
    failure = reading_ends(lambda sign: standard.cdf(band[sign]), ages, side, lowest=-1.0) if band else (None, None)
    survival = (
        reading_ends(lambda sign: standard.survival(band[sign]), ages, OPPOSITE_SIDE[side], lowest=1.0)
        if band
        else (None, None)
    )
    return (
        Curve(ages, standard.cdf(z), *(_finite(values) for values in failure)),
        Curve(ages, standard.survival(z), *(_finite(values) for values in survival)),
    )


def hazard_curve(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> Curve:
    """Return the hazard rate over age; `side` is that of the hazard."""
    if isinstance(fit, ShapedFit):
        return _drawable(fit.hazard_curve(ages, confidence=confidence, side=side, kind=kind))
    values, to_hazard = np.asarray(fit.hazard(ages)), fit.hazard_of(ages)
    band = _band_of(fit, fit.hazard_measure(ages), kind=kind, side=side, confidence=confidence)
    if not band:
        return Curve(ages, values)
    ends = reading_ends(lambda sign: to_hazard(band[sign]), ages, side, lowest=-1.0)
    return Curve(ages, values, *(_finite(end) for end in ends))


def step_curve(steps: SurvivalSteps | TurnbullSteps, end: float) -> Curve:
    """Return a survival estimate as corner points from age 0 to `end`, each step drawn down at its age.

    A step somewhere between two ages is drawn down where its plotting position stands, which is then half way down;
    bounds, which mean nothing inside such a step, come with Kaplan-Meier's steps only.
    """
    down = mark_age(steps.begin, steps.age)
    first, last = (down[0], steps.age[-1]) if down.size else (0.0, 0.0)
    age = np.concatenate([[min(first, 0.0)], np.repeat(down, 2), [max(end, last)]])
    survival = _corners(steps.survival, 1.0)
    if isinstance(steps, TurnbullSteps):
        return Curve(age, survival)
    return Curve(age, survival, _corners(steps.lower, 1.0), _corners(steps.upper, 1.0))


def _corners(values: Array, start: float) -> Array:
    return np.repeat(np.concatenate([[start], values]), 2)


def _band_of(fit: Fit, measure: Measure, *, kind: str, side: str, confidence: float) -> dict[float, Array]:
    """Return the ends of a band that the side calls for by their sign; none where this kind does not exist for it."""
    check_bound(kind, side, confidence)
    signs = {"lower": (-1.0,), "upper": (1.0,), "two": (-1.0, 1.0)}[side]
    tail = tail_of(side, confidence)
    try:
        return {sign: fit.bounder.band_end(measure, kind, tail, sign) for sign in signs}
    except BoundUnavailable:
        return {}


def _drawable(curve: Curve) -> Curve:
    return Curve(curve.x, curve.y, _finite(curve.lower), _finite(curve.upper))


def _finite(values: float | Array | None) -> Array | None:
    return None if values is None else np.where(np.isfinite(values), values, np.nan)
