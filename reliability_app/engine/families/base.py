"""What a family must give: a standard distribution with derivatives, and the customary names of its parameters."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Mapping
from dataclasses import dataclass
from enum import Enum
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_scale import LOG_LIFE, PLAIN_LIFE, LifeScale

Array = NDArray[np.float64]


class Derivatives(NamedTuple):
    """A function of z with its first and second derivative in z, each of the shape of z."""

    value: Array
    first: Array
    second: Array


class StandardDistribution(ABC):
    """The distribution of z = (y - mu)/sigma: formulas and limits only.

    Every method takes an array of any shape and returns arrays of the same shape; each function is right to near
    machine precision in both tails. The density must be log-concave, which makes the likelihood concave in
    (-mu/sigma, 1/sigma) (Burridge 1981, J. R. Statist. Soc. B 43, 41-45).

    Attributes
    ----------
    mean : float
        E z.
    """

    mean: float

    @abstractmethod
    def log_density(self, z: Array) -> Derivatives:
        """Return ln f(z)."""

    @abstractmethod
    def log_survival(self, z: Array) -> Derivatives:
        """Return ln S(z) = ln(1 - F(z))."""

    @abstractmethod
    def log_cdf(self, z: Array) -> Derivatives:
        """Return ln F(z)."""

    @abstractmethod
    def cdf(self, z: Array) -> Array:
        """Return F(z)."""

    @abstractmethod
    def survival(self, z: Array) -> Array:
        """Return S(z) = 1 - F(z), without the cancellation of the subtraction."""

    @abstractmethod
    def quantile(self, fraction: Array) -> Array:
        """Return z with F(z) = fraction."""

    @abstractmethod
    def survival_quantile(self, share: Array) -> Array:
        """Return z with S(z) = share; the better question where the share is small."""

    @abstractmethod
    def log_moment(self, power: Array) -> Array:
        """Return ln E exp(power * z), the logarithm of a moment of the life itself."""

    def picked(self, chosen: NDArray[np.bool_]) -> StandardDistribution:  # noqa: ARG002 - one serves all places
        """Return the distribution for the chosen places of an array of z, which then stand in one row."""
        return self

    def log_hazard(self, z: Array) -> Derivatives:
        """Return ln(f(z)/S(z))."""
        density, survival = self.log_density(z), self.log_survival(z)
        return Derivatives(
            density.value - survival.value, density.first - survival.first, density.second - survival.second
        )


class Rule(Enum):
    """How a customary parameter follows from mu or sigma."""

    MU = "mu"
    EXP_MU = "exp(mu)"
    SIGMA = "sigma"
    ONE_OVER_SIGMA = "1/sigma"

    def of(self, mu: float, sigma: float) -> float:
        """Return the customary parameter."""
        match self:
            case Rule.MU:
                return mu
            case Rule.EXP_MU:
                return float(np.exp(mu))
            case Rule.SIGMA:
                return sigma
            case Rule.ONE_OVER_SIGMA:
                return 1.0 / sigma

    @property
    def is_of_mu(self) -> bool:
        """True for a location, False for a spread."""
        return self in (Rule.MU, Rule.EXP_MU)

    @property
    def is_logarithmic(self) -> bool:
        """True where a Wald bound is formed on the logarithm of the parameter."""
        return self is not Rule.MU


@dataclass(frozen=True)
class Family:
    """A family of life distributions in which (ln life - mu)/sigma, or (life - mu)/sigma, has a standard distribution.

    Attributes
    ----------
    name : str
        The name in code, files and on the command line.
    title : str
        The name on screen.
    standard : StandardDistribution
        The distribution of (ln life - mu)/sigma or (life - mu)/sigma.
    rules : mapping of str to Rule
        The customary parameters in customary order.
    fixed_sigma : float or None
        The value of sigma where the family fixes it (exponential: 1).
    of_log_life : bool
        True where mu and sigma belong to ln life, False where they belong to life itself.
    """

    name: str
    title: str
    standard: StandardDistribution
    rules: Mapping[str, Rule]
    fixed_sigma: float | None = None
    of_log_life: bool = True

    @property
    def life_scale(self) -> LifeScale:
        """The line to which mu and sigma belong."""
        return LOG_LIFE if self.of_log_life else PLAIN_LIFE

    def mean_life(self, mu: float, sigma: float) -> float:
        """Return the mean of the lives; infinite where the upper tail is too heavy for one."""
        if not self.of_log_life:
            return mu + sigma * self.standard.mean
        with np.errstate(over="ignore"):
            return float(np.exp(mu + self.standard.log_moment(np.array(sigma))))

    @property
    def has_threshold(self) -> bool:
        """True for a family of ln(life - threshold), which goes by the name of that of ln life."""
        return False

    @property
    def given_shape(self) -> float | None:
        """The shape where the user gave it, so that only the scale is estimated."""
        return None

    @property
    def parameter_names(self) -> tuple[str, ...]:
        """The customary parameters in customary order."""
        return tuple(self.rules)

    @property
    def parameter_count(self) -> int:
        """The number of parameters estimated."""
        return len(self.parameter_names) - (self.given_shape is not None)
