"""The standard normal distribution: the lognormal family's ln life."""

from __future__ import annotations

import numpy as np
from scipy.special import erfcx, log_ndtr, ndtr, ndtri

from reliability_app.engine.families.base import Array, Derivatives, StandardDistribution

_HALF_LOG_TWO_PI = 0.5 * np.log(2.0 * np.pi)
_ROOT_HALF = np.sqrt(0.5)
_ROOT_TWO_OVER_PI = np.sqrt(2.0 / np.pi)
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
# A gap whose density varies by less than about e over its width is integrated; a wider one is subtracted.
_NARROW = 1.0


class Normal(StandardDistribution):
    """f(z) = exp(-z^2/2)/sqrt(2 pi)."""

    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z)."""
        return Derivatives(-0.5 * z * z - _HALF_LOG_TWO_PI, -z, np.full_like(z, -1.0))

    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z); its slope is minus the hazard, taken from the scaled complementary error function."""
        hazard = _ROOT_TWO_OVER_PI / erfcx(z * _ROOT_HALF)
        return Derivatives(log_ndtr(-z), -hazard, -hazard * (hazard - z))

    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z), the mirror image of ln S."""
        mirrored = self.log_survival(-z)
        return Derivatives(mirrored.value, -mirrored.first, mirrored.second)

    def log_cdf_gap(self, low: Array, high: Array) -> Array:
        """Return ln(F(high) - F(low)): by Gauss-Legendre where narrow, by subtraction in the smaller tail else."""
        flip = low + high > 0.0
        left, right = np.where(flip, -high, low), np.where(flip, -low, high)
        middle, half = 0.5 * (left + right), 0.5 * (high - low)
        narrow = half * (np.abs(middle) + 1.0) < _NARROW
        offsets = np.where(narrow, half, 0.0)[..., None] * _NODES
        inside = np.sum(_WEIGHTS * np.exp(-offsets * (middle[..., None] + 0.5 * offsets)), axis=-1)
        integrated = -0.5 * middle * middle - _HALF_LOG_TWO_PI + np.log(half) + np.log(inside)
        upper = log_ndtr(right)
        ratio = np.where(narrow, -1.0, log_ndtr(left) - upper)
        return np.where(narrow, integrated, upper + np.log1p(-np.exp(ratio)))

    def cdf(self, z: Array) -> Array:
        """Return F(z)."""
        return np.asarray(ndtr(z))

    def survival(self, z: Array) -> Array:
        """Return S(z)."""
        return np.asarray(ndtr(-z))

    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""
        return np.asarray(ndtri(fraction))

    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share."""
        return -np.asarray(ndtri(share))

    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power z) = power^2/2."""
        return 0.5 * np.square(power)
