"""What can be asked of a fit, each as a smooth function of (a, b) with its derivatives.

With y the standardised place of an age on the line of the family (ln life, or life itself), z = a + b y. The measures
are chosen on the scale on which a Wald bound is formed: that line for a life, z for a probability, the logarithm of a
hazard, the logarithm of 1/sigma.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from typing import Self

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import Derivatives, StandardDistribution
from reliability_app.engine.likelihood import Terms

Array = NDArray[np.float64]


class Measure(ABC):
    """A function of (a, b); an array of `size` such functions is one object."""

    @property
    @abstractmethod
    def size(self) -> int:
        """How many functions this is."""

    @abstractmethod
    def at(self, places: NDArray[np.intp]) -> Measure:
        """Return the chosen ones of these functions."""

    @abstractmethod
    def terms(self, a: Array, b: Array) -> Terms:
        """Return values and derivatives at a, b, which broadcast against the functions on the first axis."""


@dataclass(frozen=True, eq=False)
class LifeMeasure(Measure):
    """y at which z is reached: (z - a)/b, the standardised place of a life; z = 0 gives mu."""

    z: Array

    @property
    def size(self) -> int:
        """How many lives."""
        return self.z.size

    def at(self, places: NDArray[np.intp]) -> LifeMeasure:
        """Return the chosen lives."""
        return LifeMeasure(self.z[places])

    def terms(self, a: Array, b: Array) -> Terms:
        """Return the standardised place and its derivatives."""
        y = (column(self.z, a) - a) / b
        zero = np.zeros_like(y)
        inverse = 1.0 / b + zero
        return Terms(y, -inverse, -y * inverse, zero, inverse * inverse, 2.0 * y * inverse * inverse)


@dataclass(frozen=True, eq=False)
class ScoreMeasure(Measure):
    """z reached at y: a + b y; its distribution function is the failure probability at that age."""

    y: Array

    @property
    def size(self) -> int:
        """How many ages."""
        return self.y.size

    def at(self, places: NDArray[np.intp]) -> ScoreMeasure:
        """Return the scores at the chosen ages."""
        return ScoreMeasure(self.y[places])

    def terms(self, a: Array, b: Array) -> Terms:
        """Return z and its derivatives."""
        y = column(self.y, a)
        z = a + b * y
        zero = np.zeros_like(z)
        return Terms(z, zero + 1.0, zero + y, zero, zero, zero)


@dataclass(frozen=True, eq=False)
class RateMeasure(Measure):
    """Logarithm of something per unit of age, standardised, at y: ln b + ln g(a + b y)."""

    y: Array
    standard: StandardDistribution

    @property
    def size(self) -> int:
        """How many ages."""
        return self.y.size

    def at(self, places: NDArray[np.intp]) -> Self:
        """Return the measures at the chosen ages."""
        return type(self)(self.y[places], self.standard)

    @abstractmethod
    def log_rate(self, z: Array) -> Derivatives:
        """Return ln g at scores, with two derivatives."""

    def terms(self, a: Array, b: Array) -> Terms:
        """Return the logarithm and its derivatives."""
        y = column(self.y, a)
        inverse = 1.0 / b
        with np.errstate(over="ignore", invalid="ignore"):  # far out in a short tail the rate is 0
            value, first, second = self.log_rate(a + b * y)
            return Terms(
                np.log(b) + value,
                first,
                inverse + first * y,
                second,
                second * y,
                second * y * y - inverse * inverse,
            )


class HazardMeasure(RateMeasure):
    """Logarithm of the standardised hazard at y: ln b + ln h(a + b y)."""

    def log_rate(self, z: Array) -> Derivatives:
        """Return the log hazard of the standard distribution."""
        return self.standard.log_hazard(z)


class SlopeMeasure(Measure):
    """ln b, minus the logarithm of the standardised sigma."""

    @property
    def size(self) -> int:
        """One."""
        return 1

    def at(self, places: NDArray[np.intp]) -> SlopeMeasure:  # noqa: ARG002 - there is only one
        """Return itself."""
        return self

    def terms(self, a: Array, b: Array) -> Terms:
        """Return ln b and its derivatives."""
        value = np.log(b) + np.zeros_like(a)
        zero = np.zeros_like(value)
        return Terms(value, zero, 1.0 / b + zero, zero, zero, -1.0 / (b * b) + zero)


def column(values: Array, points: Array) -> Array:
    """Put the functions on the first axis of as many axes as the points have."""
    return values.reshape(values.shape + (1,) * (points.ndim - 1))
