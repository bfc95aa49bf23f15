"""Families of ln life whose standard distribution has a shape: gamma, generalized gamma, inverse Gaussian."""

from __future__ import annotations

from abc import abstractmethod
from collections.abc import Sequence
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families import Derivatives
from reliability_app.engine.families.log_gamma import LogGamma
from reliability_app.engine.families.log_inverse_gaussian import LogInverseGaussian, centre_of, spread_of
from reliability_app.engine.families.shaped_standard import ShapedStandard
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.sample import Sample, sample_of
from reliability_app.engine.shaped.sheaf import Coordinate, End, Sheaf, Slices

Array = NDArray[np.float64]

# The generalized gamma is looked for between these values of lambda; beyond them it is its limit for all purposes.
MOST_LAMBDA = 12.0
_LAMBDA_POINTS = 41
_SHAPE_STEP = 0.7
_LEAST_Q = 1e-3
_DIFFERENCE = 0.03
_INSTEAD = "another family, such as lognormal or Weibull"


class LogLifeSheaf(Sheaf):
    """A family in which (ln life - mu)/sigma has a standard distribution with a shape."""

    def __init__(self, data: LifeData, sample: Sample | None = None) -> None:
        self.data = data
        self.sample = sample_of(data) if sample is None else sample

    @property
    def failures(self) -> float:
        """The units that failed."""
        sample = self.sample
        return float(sample.failed.total[0] + sample.left.total[0] + sample.between.weight.sum())

    @property
    def records(self) -> int:
        """The records that an evaluation sums over."""
        sample = self.sample
        return sample.failed.size + sample.running.size + sample.left.size + sample.between.size + sample.entered.size

    def thinned(self, most: int) -> LogLifeSheaf:
        """Return the family laid over a smaller sample."""
        return type(self)(self.data, self.sample.thinned(most))

    @abstractmethod
    def standard(self, kappa: Array) -> ShapedStandard:
        """Return the standard distribution at kappa."""

    @cached_property
    def _log_slope(self) -> float:
        return float(self.sample.log_slope[0] - self.sample.failed.total[0] * np.log(self.sample.spread))

    def slices(self, kappa: Array) -> Slices:
        """Return the problems at a list of kappa: the same units, another standard distribution each."""
        return Slices(self.sample, self.standard(kappa[:, None]), np.full(kappa.shape, self._log_slope), False)

    def to_y(self, age: Array, kappa: Array) -> Array:
        """Return the standardised ln age."""
        return self.sample.to_y(age) + 0.0 * kappa

    def log_slope_at(self, age: Array, kappa: Array) -> Array:
        """Return ln(dy/d age)."""
        return np.asarray(-np.log(age) - np.log(self.sample.spread) + 0.0 * kappa)

    def life_reading(self, y: Array, kappa: Array) -> Derivatives:  # noqa: ARG002 - the same at every kappa
        """Return ln age."""
        spread = np.full_like(y, self.sample.spread)
        return Derivatives(self.sample.shift + self.sample.spread * y, spread, np.zeros_like(y))

    def age_of(self, reading: Array) -> Array:
        """Return the age of a ln age."""
        with np.errstate(over="ignore"):
            return np.exp(reading)

    @property
    def share_failed(self) -> float:
        """The share of the units that failed."""
        return min(1.0, self.failures / self.data.unit_count)

    def _mu(self, a: float, b: float) -> float:
        return self.sample.shift - self.sample.spread * a / b


class GeneralizedGammaSheaf(LogLifeSheaf):
    """Generalized gamma in its lambda form; kappa is lambda."""

    coordinates = (
        Coordinate("mu", False, stays_finite=True),
        Coordinate("sigma", True),
        Coordinate("lambda", False),
    )
    ends = (
        End(
            "lambda-runs-down",
            "lambda falls without end, where the family turns into a Pareto distribution that starts at the first "
            "failure",
            "one of its special cases: lognormal, Weibull or gamma",
        ),
        End(
            "lambda-runs-up",
            "lambda grows without end, where the family turns into a power distribution that ends at the last life",
            "one of its special cases: lognormal, Weibull or gamma",
        ),
    )

    def grid(self) -> Array:
        """Return values of lambda between -12 and 12, closer about 0."""
        end = np.arcsinh(2.0 * MOST_LAMBDA)
        return 0.5 * np.sinh(np.linspace(-end, end, _LAMBDA_POINTS))

    def step(self, kappa: Array) -> Array:
        """Return 0.03, more where lambda is large."""
        return _DIFFERENCE * (0.5 + 0.3 * np.abs(kappa))

    def standard(self, kappa: Array) -> LogGamma:
        """Return the standard distribution at lambda."""
        return LogGamma(kappa)

    def pinned_b(self, kappa: Array) -> Array:
        """Return nothing of use: b is free."""
        return np.ones_like(kappa)

    def starts(self, kappa: Array) -> tuple[Array, Array]:
        """Start where the first failure and the last observation lie at quantiles that suit them.

        For a lambda far from 0 the distribution has a sharp edge on one side, and no unit may start beyond it.
        """
        low, high = self._reach
        share = self.share_failed
        fractions = np.array([[0.5 / self.data.unit_count, share - 0.5 * share / self.data.unit_count]])
        z = self.standard(kappa[:, None]).rough_quantile(np.tile(fractions, (kappa.size, 1)))
        b = (z[:, 1] - z[:, 0]) / (high - low)
        return z[:, 0] - b * low, b

    @cached_property
    def _reach(self) -> tuple[float, float]:
        """The places of the first failure and of the last observation."""
        ends = np.log(self.data.upper[~self.data.is_running])
        low, high = self.sample.to_y(np.array([np.exp(ends.min()), self.data.last_observation])).tolist()
        return low, high if high > low else low + 1.0

    def parts(self, kappa: Array) -> Sequence[tuple[Array | float, Array | float, Array | float]]:
        """Return mu, ln sigma and lambda."""
        shift, spread = self.sample.shift, self.sample.spread
        return ((shift, spread, 0.0), (np.log(spread), 0.0, -1.0), (kappa, 0.0, 0.0))

    def mean_life(self, a: float, b: float, kappa: float) -> float:
        """Return exp(mu) E exp(sigma z)."""
        power = np.array([self.sample.spread / b])
        with np.errstate(over="ignore"):
            return float(np.exp(self._mu(a, b) + self.standard(np.array([kappa])).log_moment(power)[0]))


class _TiedSheaf(LogLifeSheaf):
    """A family in which sigma follows from q = exp(kappa), the shape of its own standard distribution."""

    b_is_pinned = True
    most_q: float

    def grid(self) -> Array:
        """Return values of ln q from far below the spread of ln life to far above."""
        low = np.log(min(self.sample.spread, 1.0) * _LEAST_Q)
        high = np.log(self.most_q)
        return np.linspace(low, high, 1 + int(np.ceil((high - low) / _SHAPE_STEP)))

    def step(self, kappa: Array) -> Array:
        """Return 0.03."""
        return np.full_like(kappa, _DIFFERENCE)

    def starts(self, kappa: Array) -> tuple[Array, Array]:
        """Start where half of the share failed lies at the middle of the failures."""
        share = np.full((kappa.size, 1), 0.5 * self.share_failed)
        return self.standard(kappa[:, None]).rough_quantile(share)[:, 0], self.pinned_b(kappa)


class GammaSheaf(_TiedSheaf):
    """Gamma: the generalized gamma family with sigma = lambda = 1/sqrt(shape)."""

    coordinates = (Coordinate("shape", True), Coordinate("scale", True))
    most_q = 30.0
    ends = (
        End("shape-runs-up", "the shape grows without end and all lives become alike", _INSTEAD),
        End("shape-runs-down", "the shape falls to 0 and the scale grows without end", _INSTEAD),
    )

    def standard(self, kappa: Array) -> LogGamma:
        """Return the standard distribution at q = exp(kappa)."""
        return LogGamma(np.exp(kappa))

    def pinned_b(self, kappa: Array) -> Array:
        """Return 1/q on the standardised line; mu is then ln mean."""
        return self.sample.spread * np.exp(-kappa)

    def parts(self, kappa: Array) -> Sequence[tuple[Array | float, Array | float, Array | float]]:
        """Return ln shape and ln scale = ln(mean/shape)."""
        return ((-2.0 * kappa, 0.0, 0.0), (self.sample.shift + 2.0 * kappa, self.sample.spread, 0.0))

    def mean_life(self, a: float, b: float, kappa: float) -> float:  # noqa: ARG002 - mu is ln mean at every shape
        """Return exp(mu)."""
        return float(np.exp(self._mu(a, b)))


class InverseGaussianSheaf(_TiedSheaf):
    """Inverse Gaussian: q^2 is the mean over the shape."""

    coordinates = (Coordinate("mean", True), Coordinate("shape", True, stays_finite=True))
    most_q = 1e4
    ends = (
        End("shape-runs-up", "the shape grows without end and all lives become alike", _INSTEAD),
        End(
            "mean-runs-up",
            "the mean grows without end, where the family turns into the first passage of a motion without drift",
            _INSTEAD,
        ),
    )

    def standard(self, kappa: Array) -> LogInverseGaussian:
        """Return the standard distribution at q = exp(kappa)."""
        return LogInverseGaussian(np.exp(kappa))

    def pinned_b(self, kappa: Array) -> Array:
        """Return the reciprocal spread that the standard distribution is made for."""
        return self.sample.spread / spread_of(np.exp(kappa))

    def parts(self, kappa: Array) -> Sequence[tuple[Array | float, Array | float, Array | float]]:
        """Return ln mean and ln shape = ln mean - 2 kappa."""
        mean = self.sample.shift + centre_of(np.exp(kappa))
        return ((mean, self.sample.spread, 0.0), (mean - 2.0 * kappa, self.sample.spread, 0.0))

    def mean_life(self, a: float, b: float, kappa: float) -> float:
        """Return exp of ln mean."""
        return float(np.exp(self._mu(a, b) + centre_of(np.exp(np.array(kappa)))))
