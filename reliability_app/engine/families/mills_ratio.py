"""Mills' ratio of the normal distribution and what it leaves: Phi(-s)/phi(s), and 1 - s times it, right at any s."""

from __future__ import annotations

import numpy as np
from scipy.special import erfcx

from reliability_app.engine.families.base import Array

_ROOT_HALF = np.sqrt(0.5)
_ROOT_HALF_PI = np.sqrt(0.5 * np.pi)
# From here on the subtraction 1 - s M(s) loses digits, and so many terms of the continued fraction give them all.
_FRACTION_FROM = 5.0
_FRACTION_TERMS = 30


def mills_ratio(s: Array) -> Array:
    """Return Phi(-s)/phi(s)."""
    return np.asarray(_ROOT_HALF_PI * erfcx(s * _ROOT_HALF))


def mills_remainder(s: Array) -> Array:
    """Return 1 - s M(s), which is minus the slope of Mills' ratio M.

    Above 5 from the continued fraction M(s) = 1/(s + 1/(s + 2/(s + 3/(s + ...)))) (Abramowitz & Stegun 26.2.14): with
    K = 1/(s + 2/(s + ...)) it is K/(s + K).
    """
    large = np.maximum(s, _FRACTION_FROM)
    tail = np.zeros_like(large)
    for term in range(_FRACTION_TERMS, 1, -1):
        tail = term / (large + tail)
    first = 1.0 / (large + tail)
    with np.errstate(over="ignore", invalid="ignore"):
        return np.where(s < _FRACTION_FROM, 1.0 - s * mills_ratio(s), first / (large + first))
