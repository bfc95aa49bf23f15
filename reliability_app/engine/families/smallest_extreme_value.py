"""The standard smallest extreme value distribution: ln life of the Weibull and the exponential family."""

from __future__ import annotations

import numpy as np
from scipy.special import gammaln

from reliability_app.engine.families.base import Array, Derivatives, StandardDistribution

# 1 - x - x/expm1(x) = -x/2 - sum B_2k x^(2k)/(2k)!, k = 1..6 (Bernoulli numbers; Abramowitz & Stegun 23.1.1).
_SERIES = (1 / 12, -1 / 720, 1 / 30240, -1 / 1209600, 1 / 47900160, -691 / 1307674368000)
_SERIES_BELOW = 0.5
_FIRST_ORDER_BELOW = 1e-8
_SUBTRACTION_LOSES_BELOW = 1e-2
_LARGEST = 1e300


class SmallestExtremeValue(StandardDistribution):
    """F(z) = 1 - exp(-exp z)."""

    mean = -float(np.euler_gamma)

    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z) = z - exp z."""
        x = np.exp(z)
        slope = 1.0 - x
        near = np.abs(z) < _SUBTRACTION_LOSES_BELOW
        if near.any():
            slope[near] = -np.expm1(z[near])
        return Derivatives(z - x, slope, -x)

    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z) = -exp z."""
        minus_x = -np.exp(z)
        return Derivatives(minus_x, minus_x, minus_x)

    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z); the slope is g = x/expm1(x) with x = exp z, the curvature g (1 - x - g)."""
        with np.errstate(over="ignore", divide="ignore", invalid="ignore"):
            x = np.minimum(np.exp(z), _LARGEST)
            tail = np.exp(-x)
            value = np.where(x < _FIRST_ORDER_BELOW, z - 0.5 * x, np.log(-np.expm1(-x)))
            value = np.where(tail < 0.5, np.log1p(-tail), value)
            slope = np.where(x > 0.0, x * tail / -np.expm1(-x), 1.0)
        return Derivatives(value, slope, slope * _one_minus_x_minus_slope(x, slope))

    def log_hazard(self, z: Array) -> Derivatives:
        """Return ln(f(z)/S(z)) = z."""
        zero = np.zeros_like(z)
        return Derivatives(z, zero + 1.0, zero)

    def cdf(self, z: Array) -> Array:
        """Return F(z)."""
        with np.errstate(over="ignore"):
            return -np.expm1(-np.exp(z))

    def survival(self, z: Array) -> Array:
        """Return S(z)."""
        with np.errstate(over="ignore"):
            return np.exp(-np.exp(z))

    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""
        return np.log(-np.log1p(-fraction))

    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share."""
        return np.log(-np.log(share))

    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power z) = ln Gamma(1 + power)."""
        return np.asarray(gammaln(1.0 + power))


def _one_minus_x_minus_slope(x: Array, slope: Array) -> Array:
    """Return 1 - x - g without cancellation at small x."""
    small = np.minimum(x, _SERIES_BELOW)
    square = small * small
    series = np.zeros_like(small)
    for coefficient in reversed(_SERIES):
        series = (series + coefficient) * square
    return np.where(x < _SERIES_BELOW, -0.5 * small - series, 1.0 - x - slope)
