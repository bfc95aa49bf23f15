"""What can be asked of a fit with a further parameter, as smooth functions of (a, b, kappa) with derivatives in (a, b).

Each is taken on the scale on which a Wald bound is formed: the reading of a life (its logarithm; the age itself where
there is a threshold), the log odds of a reliability, the logarithm of a hazard, a named coordinate.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.likelihood import Terms
from reliability_app.engine.shaped.sheaf import Sheaf

Array = NDArray[np.float64]
Places = NDArray[np.intp]


class ShapedMeasure(ABC):
    """Functions of (a, b, kappa), `size` of them in one object, along the last axis of what they are asked with."""

    sheaf: Sheaf

    @property
    @abstractmethod
    def size(self) -> int:
        """How many functions this is."""

    @abstractmethod
    def at(self, places: Places) -> ShapedMeasure:
        """Return the chosen ones of these functions."""

    @abstractmethod
    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return values and derivatives in (a, b); the arguments broadcast against the functions on their last axis."""

    @property
    def diverges_at_ends(self) -> bool:
        """True where the measure runs to infinity with kappa, so that an open end leaves no bound."""
        return False

    @property
    def of_kappa_alone(self) -> bool:
        """True where the measure follows from kappa whatever a and b are."""
        return False


@dataclass(frozen=True, eq=False)
class ShapedLife(ShapedMeasure):
    """The reading of the life at fractions failed, shape (size,)."""

    sheaf: Sheaf
    fraction: Array

    @property
    def size(self) -> int:
        """How many lives."""
        return self.fraction.size

    def at(self, places: Places) -> ShapedLife:
        """Return the chosen lives."""
        return ShapedLife(self.sheaf, self.fraction[places])

    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the reading at y = (z - a)/b."""
        at_kappa, fraction = np.broadcast_arrays(kappa, self.fraction)
        z = self.sheaf.standard(at_kappa).quantile(fraction)
        y = (z - a) / b
        value, first, second = self.sheaf.life_reading(y, kappa)
        inverse = 1.0 / b
        y_a, y_b = -inverse, -y * inverse
        return Terms(
            value,
            first * y_a,
            first * y_b,
            second * y_a * y_a,
            second * y_a * y_b + first * inverse * inverse,
            second * y_b * y_b + 2.0 * first * y * inverse * inverse,
        )


@dataclass(frozen=True, eq=False)
class ShapedReliability(ShapedMeasure):
    """The log odds ln(S/F) of the reliability at ages, shape (size,); infinite where no life can be so short."""

    sheaf: Sheaf
    age: Array

    @property
    def size(self) -> int:
        """How many ages."""
        return self.age.size

    def at(self, places: Places) -> ShapedReliability:
        """Return the reliabilities at the chosen ages."""
        return ShapedReliability(self.sheaf, self.age[places])

    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the log odds at z = a + b y."""
        y = self.sheaf.to_y(self.age, kappa)
        inside = np.isfinite(y)
        safe = np.where(inside, y, 0.0)
        z = a + b * safe
        standard = self.sheaf.standard(np.broadcast_to(kappa, z.shape))
        survival, failure = standard.log_survival(z), standard.log_cdf(z)
        value = np.where(inside, survival.value - failure.value, np.inf)
        first, second = survival.first - failure.first, survival.second - failure.second
        return Terms(value, first, first * safe, second, second * safe, second * safe * safe)


@dataclass(frozen=True, eq=False)
class ShapedHazard(ShapedMeasure):
    """The logarithm of the hazard rate at ages, shape (size,); minus infinity where no life can be so short."""

    sheaf: Sheaf
    age: Array

    @property
    def size(self) -> int:
        """How many ages."""
        return self.age.size

    def at(self, places: Places) -> ShapedHazard:
        """Return the hazards at the chosen ages."""
        return ShapedHazard(self.sheaf, self.age[places])

    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return ln h(z) + ln b + ln(dy/d age)."""
        y = self.sheaf.to_y(self.age, kappa)
        inside = np.isfinite(y)
        safe = np.where(inside, y, 0.0)
        z = a + b * safe
        value, first, second = self.sheaf.standard(np.broadcast_to(kappa, z.shape)).log_hazard(z)
        inverse = 1.0 / b
        value = value + np.log(b) + self.sheaf.log_slope_at(self.age, kappa)
        return Terms(
            np.where(inside, value, -np.inf),
            first,
            first * safe + inverse,
            second,
            second * safe,
            second * safe * safe - inverse * inverse,
        )


@dataclass(frozen=True, eq=False)
class ShapedCoordinate(ShapedMeasure):
    """One named coordinate of the family, by its place."""

    sheaf: Sheaf
    place: int

    @property
    def size(self) -> int:
        """One."""
        return 1

    def at(self, places: Places) -> ShapedCoordinate:  # noqa: ARG002 - there is only one
        """Return itself."""
        return self

    @property
    def diverges_at_ends(self) -> bool:
        """True but for a coordinate that says otherwise."""
        return not self.sheaf.coordinates[self.place].stays_finite

    @property
    def of_kappa_alone(self) -> bool:
        """True where neither location nor slope enters."""
        _, *of_both = self.sheaf.parts(np.zeros(1))[self.place]
        return all(isinstance(part, float) and part == 0.0 for part in of_both)

    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return base + of_location (-a/b) + of_slope ln b."""
        base, of_location, of_slope = self.sheaf.parts(kappa)[self.place]
        zero = 0.0 * (a + b + kappa)
        inverse = 1.0 / b + zero
        return Terms(
            base + of_location * -a * inverse + of_slope * np.log(b) + zero,
            -of_location * inverse,
            of_location * a * inverse**2 + of_slope * inverse,
            zero,
            of_location * inverse**2,
            -2.0 * of_location * a * inverse**3 - of_slope * inverse**2,
        )
