"""Exact bounds of complete normal samples: non-central t for lives and reliabilities, chi-square for sigma.

With n lives, or their logarithms, of mean m and standard deviation s (divisor n - 1), (m - y_p) sqrt(n)/s has the
non-central t distribution with n - 1 degrees of freedom and non-centrality -z_p sqrt(n) (Owen 1968; Hahn & Meeker 1991,
ch. 4; cited from memory). At z_p = 0 this is Student's t for mu.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq
from scipy.special import chdtri, nctdtr, nctdtrit

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.life_measures import LifeMeasure, Measure, ScoreMeasure, SlopeMeasure

Array = NDArray[np.float64]

NO_EXACT_BOUND_OF_READING = (
    "An exact bound is known for lives, reliabilities and parameters only, not for this reading: choose the calibrated "
    "or the likelihood bound."
)
_TOO_FAR = "This lies too far outside the lives for the non-central t to be computed."
_LEVEL_REACHED = 1e-9


@dataclass(frozen=True)
class _Moments:
    """Size, mean and standard deviation (divisor n - 1) of the standardised places of the lives."""

    n: float
    mean: float
    deviation: float


def non_central_t_end(estimate: Estimate, measure: Measure, tail: float, sign: float) -> Array:
    """Return the lower (sign -1) or upper (sign 1) ends, shape (measure.size,), with probability `tail` beyond.

    Parameters
    ----------
    estimate : Estimate
        Of a normal or lognormal family from complete data.

    Raises
    ------
    BoundUnavailable
        If the reading is neither a life, a reliability nor a parameter, or lies so far outside two or three lives that
        the library's distribution gives up.
    """
    moments, below = _moments(estimate), tail if sign < 0 else 1.0 - tail
    match measure:
        case LifeMeasure():
            return np.array([_life_end(moments, z, 1.0 - below) for z in measure.z])
        case ScoreMeasure():
            return np.array([_score_end(moments, y, below) for y in measure.y])
        case SlopeMeasure():
            return np.array([_slope_end(moments, below)])
    raise BoundUnavailable(NO_EXACT_BOUND_OF_READING)


def _moments(estimate: Estimate) -> _Moments:
    y, weight = estimate.sample.failed.y[0], estimate.sample.failed.weight[0]
    n = float(weight.sum())
    mean = float(weight @ y) / n
    return _Moments(n, mean, float(np.sqrt(weight @ (y - mean) ** 2 / (n - 1.0))))


def _life_end(moments: _Moments, z: float, level: float) -> float:
    root_n = np.sqrt(moments.n)
    factor = float(nctdtrit(moments.n - 1.0, -z * root_n, level)) / root_n
    if not np.isfinite(factor):
        raise BoundUnavailable(_TOO_FAR)
    return float(moments.mean - factor * moments.deviation)


def _score_end(moments: _Moments, y: float, level: float) -> float:
    """Return z such that the life bound at z, of the opposite side, is y."""
    root_n = np.sqrt(moments.n)
    observed = (moments.mean - y) / moments.deviation * root_n

    def excess(z: float) -> float:
        share = float(nctdtr(moments.n - 1.0, -z * root_n, observed))
        if np.isnan(share):
            # Far from the data the library gives up; there the share is 0 or 1 to all digits.
            share = float(observed > -z * root_n)
        return share - level

    centre = -observed / root_n
    width = 1.0
    while excess(centre - width) > 0 or excess(centre + width) < 0:
        width *= 2.0
        if width > 1e3:
            raise BoundUnavailable(_TOO_FAR)
    found = float(brentq(excess, centre - width, centre + width, xtol=1e-12, rtol=1e-12))
    if abs(excess(found)) > _LEVEL_REACHED:
        # A jump between 0 and 1, where the library had given up on both sides.
        raise BoundUnavailable(_TOO_FAR)
    return found


def _slope_end(moments: _Moments, level: float) -> float:
    freedom = moments.n - 1.0
    return 0.5 * float(np.log(chdtri(freedom, 1.0 - level) / freedom)) - float(np.log(moments.deviation))
