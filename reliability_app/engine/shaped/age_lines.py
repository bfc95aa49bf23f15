"""What lies behind the further readings of a fit with a further parameter: how the age grows along its line.

For a family of ln life, or of ln(life - threshold), d age/dy is exp(offset + slope y) at every kappa, and the formulas
of the location-scale families serve; the Birnbaum-Saunders family has its own file.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.crossings import crossed_first
from reliability_app.engine.families import Derivatives, StandardDistribution
from reliability_app.engine.further_measures import (
    hazard_along,
    hazard_place,
    implicit_place,
    log_mean_factor,
    log_mode_factor,
    log_residual,
    moved_by_location,
)
from reliability_app.engine.likelihood import Terms
from reliability_app.engine.line import Line
from reliability_app.engine.shaped.log_life_sheaves import LogLifeSheaf
from reliability_app.engine.shaped.sheaf import Sheaf
from reliability_app.engine.shaped.threshold_sheaf import ThresholdSheaf

Array = NDArray[np.float64]

# Places between which the first crossing of a hazard that may rise and fall is looked for.
_GRID = np.concatenate(
    [
        np.linspace(-700.0, -45.0, 40),
        np.linspace(-40.0, -6.5, 36),
        np.linspace(-6.0, 12.0, 73),
        np.geomspace(13.0, 700.0, 20),
    ]
)
_NOUGHT = 700.0


class AgeLine(ABC):
    """Further readings of a sheaf at points (a, b, kappa), all of one shape, with derivatives in (a, b).

    A mean, a mode and an age at a hazard come on the scale of `Sheaf.life_reading`, a mean residual life as its
    logarithm.
    """

    @abstractmethod
    def mean(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the mean life."""

    @abstractmethod
    def mode(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the age of the highest density."""

    @abstractmethod
    def residual(self, age: Array, a: Array, b: Array, kappa: Array) -> Terms:
        """Return ln of the mean residual life at ages."""

    @abstractmethod
    def hazard_age(self, rate: Array, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the first age at which the hazard reaches rates."""


def reading_of(sheaf: Sheaf, place: Terms, kappa: Array) -> Terms:
    """Return the reading of a life at a place y that depends on (a, b); infinite where the place is."""
    inside = np.isfinite(place.value)
    value, first, second = sheaf.life_reading(np.where(inside, place.value, 0.0), kappa)
    return Terms(
        np.where(inside, value, place.value),
        first * place.d_a,
        first * place.d_b,
        second * place.d_a**2 + first * place.d_aa,
        second * place.d_a * place.d_b + first * place.d_ab,
        second * place.d_b**2 + first * place.d_bb,
    )


@dataclass(frozen=True, eq=False)
class LogLifeLine(AgeLine):
    """A family of ln life."""

    sheaf: LogLifeSheaf

    def _line(self) -> Line:
        return Line.of(self.sheaf.sample)

    def mean(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return ln of the mean life."""
        factor = log_mean_factor(self.sheaf.standard(kappa.ravel()), self.sheaf.sample.spread / b)
        return moved_by_location(self._line(), factor, a, b)

    def mode(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return ln of the mode; minus infinity where the density falls from the start."""
        factor = log_mode_factor(self.sheaf.standard(kappa), self.sheaf.sample.spread / b)
        return moved_by_location(self._line(), factor, a, b)

    def residual(self, age: Array, a: Array, b: Array, kappa: Array) -> Terms:
        """Return ln of the mean residual life."""
        with np.errstate(divide="ignore"):
            y = self.sheaf.to_y(age, kappa)
        return log_residual(self.sheaf.standard(kappa.ravel()), self._line(), y, a, b)

    def hazard_age(self, rate: Array, a: Array, b: Array, kappa: Array) -> Terms:
        """Return ln of the first age at which the hazard reaches the rate."""
        line, standard = self._line(), self.sheaf.standard(kappa)
        slope, level = np.full_like(b, line.slope), np.log(rate) + line.offset
        sigma = slope / b
        wanted, rising = level - np.log(b) - sigma * a, hazard_along(standard, sigma)
        z = crossed_first(rising, wanted, _GRID.reshape((-1,) + (1,) * b.ndim) + 0.0 * b)
        # Before the grid the hazard runs like a power of the age: above the rate only if it falls from infinity.
        z = np.where(rising(-_NOUGHT / sigma)[0] >= wanted, -np.inf, z)
        return reading_of(self.sheaf, implicit_place(standard, z, slope, a, b), kappa)


@dataclass(frozen=True, eq=False)
class ThresholdLine(AgeLine):
    """A family of ln(life - threshold), and at g = 0 of life itself."""

    sheaf: ThresholdSheaf

    def mean(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the mean life."""
        return self._moved(log_mean_factor(self._standard, self._line(kappa).slope / b), a, b, kappa)

    def mode(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the mode; the threshold where the density falls from there."""
        return self._moved(log_mode_factor(self._standard, self._line(kappa).slope / b), a, b, kappa)

    def residual(self, age: Array, a: Array, b: Array, kappa: Array) -> Terms:
        """Return ln of the mean residual life; before the threshold, of the mean less the age."""
        y = self.sheaf.to_y(age, kappa)
        beyond = np.isfinite(y)
        inside = log_residual(self._standard, self._line(kappa), np.where(beyond, y, 0.0), a, b)
        if beyond.all():
            return inside
        mean = self.mean(a, b, kappa)
        with np.errstate(invalid="ignore", divide="ignore"):
            left = mean.value - age
            d_a, d_b = mean.d_a / left, mean.d_b / left
            whole = Terms(
                np.log(left),
                d_a,
                d_b,
                mean.d_aa / left - d_a * d_a,
                mean.d_ab / left - d_a * d_b,
                mean.d_bb / left - d_b * d_b,
            )
        pairs = zip(inside.columns(), whole.columns(), strict=True)
        return Terms(*(np.where(beyond, part, of_whole) for part, of_whole in pairs))

    def hazard_age(self, rate: Array, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the first age at which the hazard reaches the rate; the threshold where it starts at or above it."""
        line = self._line(kappa)
        place = hazard_place(self._standard, np.log(rate) + line.offset, np.asarray(line.slope), a, b)
        found = reading_of(self.sheaf, place, kappa)
        value = np.where(np.isneginf(place.value), self.sheaf.threshold(kappa), found.value)
        return Terms(value, *found.columns()[1:])

    @property
    def _standard(self) -> StandardDistribution:
        return self.sheaf.family.standard

    def _g(self, kappa: Array) -> Array:
        return np.asarray(np.sinh(kappa) / self.sheaf.range)

    def _line(self, kappa: Array) -> Line:
        """Return the line of ln(life - threshold) on which v = ln(1 + g (life - first))/g is laid; of life at g = 0."""
        g = self._g(kappa)
        mean, spread = self.sheaf.centre(g)
        return Line(np.log(spread) + g * mean, g * spread)

    def _moved(self, factor: Derivatives, a: Array, b: Array, kappa: Array) -> Terms:
        """Return first + (exp(E) - 1)/g with E = g mean - sigma a + factor(sigma), or its limit at g = 0."""
        g = self._g(kappa)
        mean, spread = self.sheaf.centre(g)
        per_g, finite = spread / b, np.isfinite(factor.value)
        sigma, beyond = g * per_g, factor.first - a
        with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
            exponent = g * mean - sigma * a + factor.value
            risen = np.where(g > 0, np.expm1(exponent) / g, mean + per_g * beyond)
            grown = np.where(finite, np.exp(exponent), 0.0)
        e_b = -sigma / b * beyond
        columns = (
            -grown * per_g,
            -grown * per_g / b * beyond,
            grown * per_g * sigma,
            grown * (-per_g * e_b + per_g / b),
            grown * (-e_b * per_g / b * beyond + 2.0 * per_g / b**2 * beyond + sigma * per_g / b**2 * factor.second),
        )
        return Terms(self.sheaf.first + risen, *columns)
