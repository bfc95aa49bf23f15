"""LifeScale: the line on which a family has a location and a spread (ln life, or life itself), both ways."""

from __future__ import annotations

from abc import ABC, abstractmethod

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Mask = NDArray[np.bool_]

# A spread that is a smaller part than this of what it is the spread of is rounding.
_ROUNDING = 1e-12


class LifeScale(ABC):
    """A strictly rising function from age to a line that runs from minus to plus infinity.

    Attributes
    ----------
    origin : float
        The age at the left end of the line, excluded: a life lies beyond it for certain.
    """

    origin: float

    @abstractmethod
    def to_line(self, age: Array) -> Array:
        """Return the places on the line of ages beyond `origin`."""

    @abstractmethod
    def from_line(self, x: Array) -> Array:
        """Return the ages at places on the line."""

    @abstractmethod
    def log_slope(self, x: Array) -> Array:
        """Return ln(dx/d age) at places on the line: what a log density on the line lacks of one over age."""

    @abstractmethod
    def half_width(self, lower: Array, upper: Array) -> Array:
        """Return half the length on the line of narrow intervals of age, to the last digit that the ages carry."""

    @abstractmethod
    def rounding(self, x: float) -> float:
        """Return the spread on the line, near `x`, below which ages differ by rounding only."""

    def admits(self, age: Array) -> Mask:
        """Return which ages are finite and lie on the line."""
        return np.asarray(np.isfinite(age) & (age > self.origin))


class LogLife(LifeScale):
    """ln life: no life is negative or zero."""

    origin = 0.0

    def to_line(self, age: Array) -> Array:
        """Return ln age."""
        return np.log(age)

    def from_line(self, x: Array) -> Array:
        """Return exp x."""
        return np.exp(x)

    def log_slope(self, x: Array) -> Array:
        """Return -ln age, which is -x."""
        return -x

    def half_width(self, lower: Array, upper: Array) -> Array:
        """Return half of ln(upper/lower), from the ratio of the width to the age."""
        return np.asarray(0.5 * np.log1p((upper - lower) / lower))

    def rounding(self, x: float) -> float:
        """Return the rounding of ln age: that of the age is relative, so absolute in the logarithm."""
        return _ROUNDING * max(1.0, abs(x))


class PlainLife(LifeScale):
    """Life itself: the family gives some share of the lives to negative ages."""

    origin = -np.inf

    def to_line(self, age: Array) -> Array:
        """Return the age."""
        return age

    def from_line(self, x: Array) -> Array:
        """Return x."""
        return x

    def log_slope(self, x: Array) -> Array:
        """Return zero."""
        return np.zeros_like(x)

    def half_width(self, lower: Array, upper: Array) -> Array:
        """Return half the difference."""
        return np.asarray(0.5 * (upper - lower))

    def rounding(self, x: float) -> float:
        """Return the rounding of an age."""
        return _ROUNDING * abs(x)


LOG_LIFE, PLAIN_LIFE = LogLife(), PlainLife()
