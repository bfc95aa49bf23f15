"""Exact bounds where only the scale is unknown: chi-square for the exponential family, and for a Weibull shape given.

With H(t) = exp(a + b y) and b known, the sum of H over the ages of all units (less that over their entry ages) at the
true a is half a chi-square on 2 r degrees of freedom, where every unit ran to failure or the test stopped at the r-th
failure (Epstein & Sobel 1953, J. Am. Statist. Ass. 48, 486-502; NIST/SEMATECH e-Handbook 8.4.5.1). A test without any
failure shows only that the sum is not large: were it larger than -ln(1 - confidence), that it saw no failure would have
been less likely than 1 - confidence. For a test stopped at a fixed time with failures the customary 2 r + 2 degrees of
freedom give a bound on the safe side, which is not exact and is not offered here.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import gammainccinv, gammaincinv, logsumexp

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.life_measures import Measure
from reliability_app.engine.sample import Part, Sample

Array = NDArray[np.float64]


def chi_square_end(estimate: Estimate, measure: Measure, tail: float, sign: float) -> Array:
    """Return the lower (sign -1) or upper (sign 1) ends, shape (measure.size,), with probability `tail` beyond.

    Any reading is a rising or falling function of the one parameter, so that its ends are those of a.

    Raises
    ------
    BoundUnavailable
        For a parameter that is given and not estimated.
    """
    b = np.array([estimate.b])
    rising = measure.terms(np.array([estimate.a]), b).d_a
    if not rising.any():
        raise BoundUnavailable("This parameter is given and not estimated, so it has no bound.")
    failures, exposure = float(estimate.sample.failed.total[0]), log_exposure(estimate.sample, estimate.b)
    low, high = (
        measure.terms(np.array([np.log(quantile(failures, tail)) - exposure]), b).value
        for quantile in (gammaincinv, gammainccinv)
    )
    return np.where(sign * rising > 0, high, low)


def zero_failure_end(sample: Sample, b: float, tail: float) -> float:
    """Return the upper end of a, with probability `tail` beyond, from units none of which has failed."""
    return float(np.log(-np.log(tail))) - log_exposure(sample, b)


def log_exposure(sample: Sample, b: float) -> float:
    """Return ln of the sum of exp(b y) over the ages of all units less that over their entry ages."""

    def total(*parts: Part) -> float:
        y, weight = (np.concatenate([getattr(part, name)[0] for part in parts]) for name in ("y", "weight"))
        return float(logsumexp(b * y, b=weight)) if y.size else -np.inf

    reached, before = total(sample.failed, sample.running), total(sample.entered)
    return reached + float(np.log1p(-np.exp(before - reached)))
