"""Curves of a fit over age, with pointwise bands of any kind of bound."""

from __future__ import annotations

from contextlib import suppress

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import OPPOSITE_SIDE, tail_of
from reliability_app.engine.curves import Curve
from reliability_app.engine.density_measure import DensityMeasure
from reliability_app.engine.empirical import HazardSteps, SurvivalSteps, mark_age
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.life_measures import Measure
from reliability_app.engine.methods import MAXIMUM_LIKELIHOOD
from reliability_app.engine.question import sided_ends
from reliability_app.engine.shaped.shaped_fit import ShapedFit
from reliability_app.engine.turnbull import TurnbullSteps

Array = NDArray[np.float64]

_HALF = 0.5


def probability_curves(fit: Fit, ages: Array, *, confidence: float, side: str, kind: str) -> tuple[Curve, Curve]:
    """Return the failure probability and the reliability over age; `side` is that of the failure probability."""
    if isinstance(fit, ShapedFit):
        both = fit.probability_curves(ages, confidence=confidence, side=side, kind=kind)
        return _drawable(both[0]), _drawable(both[1])
    standard, z = fit.family.standard, fit.score(ages)
    band = _band_of(fit, fit.score_measure(ages), kind=kind, side=side, confidence=confidence)
    failure = sided_ends(lambda sign: standard.cdf(band[sign]), side, lowest=-1.0) if band else (None, None)
    survival = (
        sided_ends(lambda sign: standard.survival(band[sign]), OPPOSITE_SIDE[side], lowest=1.0)
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
    ends = sided_ends(lambda sign: to_hazard(band[sign]), side, lowest=-1.0)
    return Curve(ages, values, *(_finite(end) for end in ends))


def density_curve(fit: Fit, ages: Array, *, confidence: float, kind: str) -> Curve:
    """Return the probability density over age with a two-sided band of kind "likelihood" or "wald".

    No side of a density is the safe one. There is no band where units entered late, for a family with one or
    with three parameters or a further shape, nor for a fit that is not the maximum of the likelihood.
    """
    values = np.asarray(fit.density(ages))
    if isinstance(fit, ShapedFit) or fit.method != MAXIMUM_LIKELIHOOD or fit.estimate is None:
        return _drawable(Curve(ages, values))
    if kind == "likelihood" and not fit.estimate.is_concave:
        return _drawable(Curve(ages, values))
    if fit.estimate.b_is_fixed:
        # With b given the density may be greatest inside the range of a.
        return _drawable(Curve(ages, values))
    y, log_slope = fit.estimate.sample.to_y(ages), fit.estimate.sample.log_slope_at(fit.estimate.sample.to_y(ages))
    band = _band_of(fit, DensityMeasure(y, fit.family.standard), kind=kind, side="two", confidence=confidence)
    with np.errstate(over="ignore"):
        ends = [np.exp(band[sign] + log_slope) if band else None for sign in (-1.0, 1.0)]
    return _drawable(Curve(ages, values, ends[0], ends[1]))


def cumulative_hazard_curve(failure: Curve, survival: Curve) -> Curve:
    """Return the cumulative hazard, -ln of the reliability, of the two curves of `probability_curves`."""

    def of(failed: Array | None, running: Array | None) -> Array | None:
        if failed is None or running is None:
            return None
        with np.errstate(divide="ignore", invalid="ignore"):
            # Each from the one that is smaller, so that neither end loses its digits.
            hazard = np.where(running > _HALF, -np.log1p(-failed), -np.log(running))
        return np.where(np.isfinite(hazard), hazard, np.nan)

    y = of(failure.y, survival.y)
    return Curve(
        failure.x,
        np.empty(0) if y is None else y,
        of(failure.lower, survival.upper),
        of(failure.upper, survival.lower),
    )


def hazard_step_curve(steps: HazardSteps, start: float, end: float) -> Curve:
    """Return Nelson-Aalen's cumulative hazard as corner points from age `start` to `end`."""
    age = np.concatenate(
        [[start], np.repeat(steps.age, 2), [max(end, float(steps.age[-1]) if steps.age.size else end)]]
    )
    edges = (_corners(values, 0.0) for values in (steps.cumulative_hazard, steps.lower, steps.upper))
    return Curve(age, *edges)


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
    with suppress(BoundUnavailable):
        for used in fit.bounder.choices(kind, measure):
            with suppress(BoundUnavailable):
                return {sign: fit.bounder.band_end(measure, used, tail, sign) for sign in signs}
    return {}


def _drawable(curve: Curve) -> Curve:
    return Curve(curve.x, curve.y, _finite(curve.lower), _finite(curve.upper))


def _finite(values: float | Array | None) -> Array | None:
    return None if values is None else np.where(np.isfinite(values), values, np.nan)
