"""Likelihood-ratio bounds of further readings where units entered late: Lagrange's conditions, followed root by root.

Nothing is convex there, so the end is followed from the estimate in small steps of the root, and then held against the
profile over the whole curve of the value found; only where that knows a higher point is everything profiled anew.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds.likelihood_ratio import EndPoints, lagrange_step
from reliability_app.engine.bounds.profile import profile_end, profiled_at
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.further_measures import FurtherMeasure, HazardAgeMeasure

Array = NDArray[np.float64]

_ROOT_STEP = 0.25
_MOST_STEPS, _STEP_REACHED = 25, 1e-12
# How much higher, in log-likelihood, the profile may be before the point followed counts as beside the highest.
_BESIDE = 1e-6
_SAME = 1e-6


def further_end(estimate: Estimate, measure: FurtherMeasure, root: float, sign: float) -> EndPoints:
    """Return the lower (sign -1) or upper (sign 1) ends, each of shape (measure.size,).

    Raises
    ------
    BoundUnavailable
        For an age at which a hazard that rises and falls reaches a rate, where its first crossing is not the only one;
        for a reading that is 0 or infinite at the estimate.
    """
    if not np.isfinite(measure.terms(np.array([estimate.a]), np.array([estimate.b])).value).all():
        raise BoundUnavailable(
            "By this fit the reading is 0 or infinite, and with units that entered late no bound of that is known."
        )
    singles = [measure.at(np.array([place])) for place in range(measure.size)]
    ends = [_first_crossing_end(estimate, one, root, sign) for one in singles]
    return EndPoints(*(np.concatenate(columns) for columns in zip(*ends, strict=True)))


def _first_crossing_end(estimate: Estimate, measure: FurtherMeasure, root: float, sign: float) -> EndPoints:
    if not isinstance(measure, HazardAgeMeasure):
        return _followed(estimate, measure, root, sign)
    end = profile_end(estimate, measure, root, sign)
    if not np.isfinite(end.value[0]):
        return end
    # The profile is over all points at which the hazard at this age is the rate, second crossings included.
    here = float(measure.terms(end.a, end.b).value[0])
    humped = measure.slope > 0 and not np.isfinite(measure.terms(end.a - 1e3, end.b).value[0])
    if abs(here - end.value[0]) > _SAME * (1.0 + abs(here)) or (sign > 0 and humped):
        raise BoundUnavailable(
            "Here the hazard may rise to this rate and fall again, and with units that entered late the first age at "
            "which it does has no bound on this side: read the bounds of the hazard itself."
        )
    return end


def _followed(estimate: Estimate, measure: FurtherMeasure, root: float, sign: float) -> EndPoints:
    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        point = _followed_point(estimate, measure, root, sign)
    if point is not None:
        value = measure.terms(*point).value
        target = float(estimate.terms.value[0]) - 0.5 * root * root
        if np.isfinite(value[0]) and profiled_at(estimate, measure, float(value[0]))[0] <= target + _BESIDE:
            return EndPoints(value, *point)
    return profile_end(estimate, measure, root, sign)


def _followed_point(
    estimate: Estimate, measure: FurtherMeasure, root: float, sign: float
) -> tuple[Array, Array] | None:
    """Return the point (a, b) of the end, or None where Newton's method does not settle on the way."""
    a, b = np.array([estimate.a]), np.array([estimate.b])
    start = measure.terms(a, b)
    slope = np.array([float(start.d_a[0]), float(start.d_b[0])])
    along = estimate.covariance_ab @ slope
    along = sign * along / np.sqrt(slope @ along)
    top = float(estimate.terms.value[0])
    count = int(np.ceil(root / _ROOT_STEP))
    before = 0.0
    for place in range(1, count + 1):
        here = root * place / count
        if place == 1:
            a, b = a + here * along[0], b + here * along[1]
        else:
            a, b = a + (a - estimate.a) * (here - before) / before, b + (b - estimate.b) * (here - before) / before
        for _ in range(_MOST_STEPS):
            likelihood, asked = estimate.evaluate(a, b), measure.terms(a, b)
            step_a, step_b = lagrange_step(likelihood, asked, likelihood.value - (top - 0.5 * here * here))
            a, b = a + step_a, np.maximum(b + step_b, 0.1 * b)
            if not (np.isfinite(a[0]) and np.isfinite(b[0])):
                return None
            if abs(step_a[0]) + abs(step_b[0]) <= _STEP_REACHED * (1.0 + abs(a[0]) + b[0]):
                break
        else:
            return None
        before = here
    return a, b
