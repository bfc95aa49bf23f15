"""The standard normal distribution: the lognormal family's ln life, and the normal family's life itself."""

from __future__ import annotations

import numpy as np
from scipy.special import erfcx, log_ndtr, ndtr, ndtri

from reliability_app.engine.families.base import Array, Derivatives, StandardDistribution

_HALF_LOG_TWO_PI = 0.5 * np.log(2.0 * np.pi)
_ROOT_HALF = np.sqrt(0.5)
_ROOT_TWO_OVER_PI = np.sqrt(2.0 / np.pi)


class Normal(StandardDistribution):
    """f(z) = exp(-z^2/2)/sqrt(2 pi)."""

    mean = 0.0

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
