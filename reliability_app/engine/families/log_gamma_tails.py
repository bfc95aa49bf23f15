"""Both tails of the standardised logarithm of a gamma life, right to near machine precision at any shape.

About the normal distribution (a large shape) an expansion serves (`log_gamma_expansion`). Elsewhere a series gives the
lower tail of small lives and a continued fraction the upper tail of large ones, both as ratios to the density, which do
not underflow; in the middle the incomplete gamma functions are exact. All arrays of one call are one-dimensional and
of one length; q = 1/sqrt(shape) >= 0.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray
from scipy.special import gammainc, gammaincc, gammaln

from reliability_app.engine.families.base import Array, Derivatives
from reliability_app.engine.families.log_gamma_density import log_gamma_density
from reliability_app.engine.families.log_gamma_expansion import expanded_lower, expanded_upper, is_expanded

Mask = NDArray[np.bool_]
Branch = Callable[[Array, Array], Derivatives]

# x over shape + 1 below which the series is used, and above which the continued fraction: both then end soon.
_SERIES_BELOW, _FRACTION_ABOVE = 0.55, 1.8
_MOST_TERMS = 2000
_LAST_DIGIT, _SETTLED = 1e-17, 6e-16
_LOG_HALF = -np.log(2.0)


def upper_tail(q: Array, w: Array) -> Derivatives:
    """Return ln S(w) with its derivatives."""
    return _by_zone(q, w, expanded_upper, _upper_of_small, _upper_of_middling, _upper_by_fraction)


def lower_tail(q: Array, w: Array) -> Derivatives:
    """Return ln F(w) with its derivatives."""
    return _by_zone(q, w, expanded_lower, _lower_of_small, _lower_of_middling, _lower_of_large)


def _by_zone(q: Array, w: Array, expanded: Branch, small: Branch, middling: Branch, large: Branch) -> Derivatives:
    """Send each point to the formula of its zone."""
    near = is_expanded(q, w)
    if near.all():
        return expanded(q, w)
    with np.errstate(divide="ignore"):
        k, log_x = _shape_and_log_life(q, w)
        low, high = log_x < np.log(_SERIES_BELOW * (k + 1.0)), log_x > np.log(_FRACTION_ABOVE * (k + 1.0))
    out = Derivatives(*(np.empty_like(w) for _ in range(3)))
    zones = ((near, expanded), (~near & low, small), (~(near | low | high), middling), (~near & high, large))
    for zone, function in zones:
        if zone.any():
            with np.errstate(over="ignore", under="ignore", divide="ignore", invalid="ignore"):
                values = function(q[zone], w[zone])
            for column, part in zip(out, values, strict=True):
                column[zone] = part
    return out


def _shape_and_log_life(q: Array, w: Array) -> tuple[Array, Array]:
    return 1.0 / (q * q), q * w - 2.0 * np.log(q)


def _upper_with(q: Array, w: Array, value: Array) -> Derivatives:
    """Complete ln S by its derivatives."""
    density = log_gamma_density(q, w)
    rate = np.exp(density.value - value)
    return Derivatives(value, -rate, -rate * (density.first + rate))


def _lower_with(q: Array, w: Array, value: Array) -> Derivatives:
    """Complete ln F by its derivatives."""
    density = log_gamma_density(q, w)
    rate = np.exp(density.value - value)
    return Derivatives(value, rate, rate * (density.first - rate))


def _upper_of_middling(q: Array, w: Array) -> Derivatives:
    k, log_x = _shape_and_log_life(q, w)
    x = np.exp(log_x)
    return _upper_with(q, w, _log_of(gammaincc(k, x), gammainc(k, x)))


def _lower_of_middling(q: Array, w: Array) -> Derivatives:
    k, log_x = _shape_and_log_life(q, w)
    x = np.exp(log_x)
    return _lower_with(q, w, _log_of(gammainc(k, x), gammaincc(k, x)))


def _log_of(share: Array, rest: Array) -> Array:
    """Return ln share, from the smaller of the two."""
    return np.where(share < 0.5, np.log(share), np.log1p(-rest))


def _upper_of_small(q: Array, w: Array) -> Derivatives:
    """Return ln S of small lives: from the series for F, or directly where F is large (a shape far below 1)."""
    k, log_x = _shape_and_log_life(q, w)
    log_rest, x = _series(k, log_x)[0], np.exp(log_x)
    # Below the least double the incomplete gamma function knows nothing of the life any more.
    direct = np.where(x > 0.0, np.log(gammaincc(k, x)), np.log(-np.expm1(log_rest)))
    return _upper_with(q, w, np.where(log_rest < _LOG_HALF, np.log1p(-np.exp(log_rest)), direct))


def _lower_of_small(q: Array, w: Array) -> Derivatives:
    k, log_x = _shape_and_log_life(q, w)
    x = np.exp(log_x)
    value, beyond_one = _series(k, log_x)
    few = (value < _LOG_HALF) | (x == 0.0)
    if not few.all():
        value = np.where(few, value, np.log1p(-gammaincc(k, x)))
    rate = 1.0 / (q * (1.0 + beyond_one))
    return Derivatives(value, rate, rate / q * (beyond_one / (1.0 + beyond_one) - x / k))


def _series(k: Array, log_x: Array) -> tuple[Array, Array]:
    """Return ln F, and x/(k + 1) + x^2/((k + 1)(k + 2)) + ... (Abramowitz & Stegun 6.5.29)."""
    x = np.exp(log_x)
    term = x / (k + 1.0)
    beyond_one = term.copy()
    for count in range(2, _MOST_TERMS):
        term = term * x / (k + count)
        beyond_one = beyond_one + term
        if not (term > _LAST_DIGIT * beyond_one).any():
            break
    return k * log_x - x - gammaln(k + 1.0) + np.log1p(beyond_one), beyond_one


def _lower_of_large(q: Array, w: Array) -> Derivatives:
    return _lower_with(q, w, np.log1p(-np.exp(_upper_by_fraction(q, w).value)))


def _upper_by_fraction(q: Array, w: Array) -> Derivatives:
    """Take S/f from Legendre's continued fraction (Abramowitz & Stegun 6.5.31), evaluated by Lentz's method."""
    k = 1.0 / (q * q)
    x = k * np.exp(q * w)
    base = x + 1.0 - k
    c, d = np.full_like(x, 1e300), 1.0 / base
    fraction = d.copy()
    for term in range(1, _MOST_TERMS):
        coefficient = -term * (term - k)
        base = base + 2.0
        d = 1.0 / (coefficient * d + base)
        c = base + coefficient / c
        fraction = fraction * (c * d)
        if not (np.abs(c * d - 1.0) > _SETTLED).any():
            break
    density = log_gamma_density(q, w)
    rate = q / fraction
    return Derivatives(density.value - np.log(rate), -rate, -rate * (density.first + rate))
