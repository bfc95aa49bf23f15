"""The standard largest extreme value distribution: ln life of the Frechet family; the smallest one mirrored."""

from __future__ import annotations

import numpy as np
from scipy.special import gammaln

from reliability_app.engine.families.base import Array, Derivatives, StandardDistribution
from reliability_app.engine.families.smallest_extreme_value import SmallestExtremeValue

_MIRRORED = SmallestExtremeValue()


class LargestExtremeValue(StandardDistribution):
    """F(z) = exp(-exp(-z)): z is largest where -z is smallest extreme value distributed."""

    mean = float(np.euler_gamma)

    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z) = -z - exp(-z)."""
        return _turned(_MIRRORED.log_density(-z))

    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z)."""
        return _turned(_MIRRORED.log_cdf(-z))

    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z) = -exp(-z)."""
        return _turned(_MIRRORED.log_survival(-z))

    def log_hazard(self, z: Array) -> Derivatives:
        """Return ln(f(z)/S(z)); minus infinity where exp(-z) overflows."""
        with np.errstate(over="ignore"):
            return super().log_hazard(z)

    def cdf(self, z: Array) -> Array:
        """Return F(z)."""
        return _MIRRORED.survival(-z)

    def survival(self, z: Array) -> Array:
        """Return S(z)."""
        return _MIRRORED.cdf(-z)

    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""
        return -_MIRRORED.survival_quantile(fraction)

    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share."""
        return -_MIRRORED.quantile(share)

    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power z) = ln Gamma(1 - power); infinite from power 1 on."""
        below = np.minimum(power, 1.0)
        return np.where(power < 1.0, gammaln(1.0 - below), np.inf)


def _turned(mirrored: Derivatives) -> Derivatives:
    """Return the derivatives in z of a function of -z."""
    return Derivatives(mirrored.value, -mirrored.first, mirrored.second)
