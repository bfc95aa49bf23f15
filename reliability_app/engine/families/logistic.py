"""The standard logistic distribution: ln life of the loglogistic family, and life itself of the logistic."""

from __future__ import annotations

import numpy as np
from scipy.special import expit, gammaln, logit

from reliability_app.engine.families.base import Array, Derivatives, StandardDistribution


class Logistic(StandardDistribution):
    """F(z) = 1/(1 + exp(-z))."""

    mean = 0.0

    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z) = ln F(z) + ln S(z), from the distance to the middle: f is even."""
        far = np.exp(-np.abs(z))
        root = 1.0 + far
        return Derivatives(-np.abs(z) - 2.0 * np.log1p(far), -np.tanh(0.5 * z), -2.0 * far / (root * root))

    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z) = -ln(1 + exp z); its slope is -F(z)."""
        cdf = expit(z)
        return Derivatives(-np.logaddexp(0.0, z), -cdf, -cdf * expit(-z))

    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z) = -ln(1 + exp(-z)); its slope is S(z)."""
        survival = expit(-z)
        return Derivatives(-np.logaddexp(0.0, -z), survival, -survival * expit(z))

    def log_hazard(self, z: Array) -> Derivatives:
        """Return ln(f(z)/S(z)), which is ln F(z): the hazard of the logistic is its distribution function."""
        return self.log_cdf(z)

    def cdf(self, z: Array) -> Array:
        """Return F(z)."""
        return np.asarray(expit(z))

    def survival(self, z: Array) -> Array:
        """Return S(z)."""
        return np.asarray(expit(-z))

    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""
        return np.asarray(logit(fraction))

    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share."""
        return -np.asarray(logit(share))

    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power z) = ln Gamma(1 + power) + ln Gamma(1 - power); infinite from power 1 on."""
        below = np.minimum(power, 1.0)
        return np.where(power < 1.0, gammaln(1.0 + below) + gammaln(1.0 - below), np.inf)
