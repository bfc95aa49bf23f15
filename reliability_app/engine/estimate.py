"""Estimate: a maximum that exists, in the standardised coordinates in which the engine works."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import Family
from reliability_app.engine.likelihood import Terms, log_likelihood
from reliability_app.engine.sample import Sample

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Estimate:
    """The maximum likelihood estimate of one sample.

    Attributes
    ----------
    a, b : float
        -mu/sigma and 1/sigma on the standardised line of the family.
    terms : Terms
        Log-likelihood (without Jacobian) and derivatives there, each of shape (1,).
    gradient_norm, decrement, steps
        How the maximisation ended.
    """

    family: Family
    sample: Sample
    a: float
    b: float
    terms: Terms
    gradient_norm: float
    decrement: float
    steps: int

    @property
    def mu(self) -> float:
        """Location on the line of the family: of ln life, or of life itself."""
        return self.sample.shift - self.sample.spread * self.a / self.b

    @property
    def sigma(self) -> float:
        """Spread on the line of the family."""
        return self.sample.spread / self.b

    @property
    def b_is_fixed(self) -> bool:
        """True where the family fixes sigma."""
        return self.family.fixed_sigma is not None

    @property
    def is_concave(self) -> bool:
        """True where the log-likelihood is concave in (a, b): no unit entered late, or there is only a."""
        return self.b_is_fixed or not self.sample.entered.size

    @property
    def log_likelihood(self) -> float:
        """Log-likelihood of the lives themselves."""
        failures = float(self.sample.failed.total[0])
        jacobian = self.sample.log_slope[0] - failures * np.log(self.sample.spread)
        return float(self.terms.value[0] + jacobian)

    @cached_property
    def covariance_ab(self) -> Array:
        """Inverse observed information of (a, b), shape (2, 2); zero for a fixed b."""
        p, q, r = (-float(column[0]) for column in (self.terms.d_aa, self.terms.d_ab, self.terms.d_bb))
        if self.b_is_fixed:
            return np.array([[1.0 / p, 0.0], [0.0, 0.0]])
        return np.array([[r, -q], [-q, p]]) / (p * r - q * q)

    @cached_property
    def covariance(self) -> Array:
        """Inverse observed information of (mu, ln sigma); of mu alone where sigma is fixed."""
        if self.b_is_fixed:
            return self.covariance_ab[:1, :1] * self.sigma**2
        # d(a, b)/d(mu, ln sigma) = [[-1/sigma, -a], [0, -b]], and its inverse carries the covariance over.
        jacobian = np.array([[-1.0 / self.sigma, -self.a], [0.0, -self.b]])
        inverse = np.linalg.inv(jacobian)
        return np.asarray(inverse @ self.covariance_ab @ inverse.T)

    def evaluate(self, a: Array, b: Array) -> Terms:
        """Return the log-likelihood terms of the sample at other points."""
        return log_likelihood(self.sample, self.family.standard, a, b)
