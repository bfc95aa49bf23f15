"""The standardised logarithm of a gamma life: its density, continuous with the normal distribution.

With q = 1/sqrt(shape) and u = q w, the life x = shape exp(u) has a gamma distribution of scale 1, and

    ln f(w) = -ln(2 pi)/2 - r(1/q^2) - zeta^2/2,    zeta = w sqrt(2 (exp u - 1 - u)/u^2)

with r Stirling's remainder of ln Gamma. At q = 0 it is the standard normal distribution (Prentice 1974, Biometrika 61,
539-544, cited from memory).
"""

from __future__ import annotations

import numpy as np
from scipy.special import gammaln

from reliability_app.engine.families.base import Array, Derivatives

_HALF_LOG_TWO_PI = 0.5 * np.log(2.0 * np.pi)
# ln Gamma(k) less Stirling's formula, in powers of 1/k: B_2j/(2j(2j - 1)) k^(1 - 2j) (Abramowitz & Stegun 6.1.40).
_STIRLING = (1 / 12, -1 / 360, 1 / 1260, -1 / 1680, 1 / 1188, -691 / 360360, 1 / 156)
_STIRLING_BELOW = 0.3
_SMALL_U, _U_TERMS = 0.5, 17
_TINY_U = 1e-5


def stirling_remainder(q: Array) -> Array:
    """Return ln Gamma(k) - (k - 1/2) ln k + k - ln(2 pi)/2 at k = 1/q^2; 0 at q = 0."""
    square = np.minimum(q, _STIRLING_BELOW) ** 2
    series = np.zeros_like(square)
    for coefficient in reversed(_STIRLING):
        series = series * (square * square) + coefficient
    series *= square
    large = q > _STIRLING_BELOW
    if not large.any():
        return series
    k = 1.0 / np.where(large, q, 1.0) ** 2
    return np.where(large, gammaln(k) - (k - 0.5) * np.log(k) + k - _HALF_LOG_TWO_PI, series)


def bend(u: Array) -> Array:
    """Return 2 (exp u - 1 - u)/u^2, which is 1 at u = 0."""
    near = np.abs(u) < _SMALL_U
    inner = np.where(near, u, 0.0)
    series = np.ones_like(inner)
    for power in range(_U_TERMS, 2, -1):
        series = 1.0 + series * inner / power
    if near.all():
        return series
    outer = np.where(near, 1.0, u)
    with np.errstate(over="ignore"):
        return np.where(near, series, 2.0 * (np.expm1(outer) - outer) / (outer * outer))


def rise(u: Array) -> Array:
    """Return (exp u - 1)/u, which is 1 at u = 0."""
    tiny = np.abs(u) < _TINY_U
    safe = np.where(tiny, 1.0, u)
    with np.errstate(over="ignore"):
        return np.where(tiny, 1.0 + 0.5 * u * (1.0 + u / 3.0), np.expm1(safe) / safe)


def log_gamma_density(q: Array, w: Array) -> Derivatives:
    """Return ln f(w) with its derivatives; q >= 0 broadcasts against w."""
    u = q * w
    with np.errstate(over="ignore"):
        value = -_HALF_LOG_TWO_PI - stirling_remainder(q) - 0.5 * bend(u) * w * w
        return Derivatives(value, -w * rise(u), -np.exp(u))
