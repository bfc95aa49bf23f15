"""Further readings as smooth functions of (a, b): conditional reliability, mean residual life, mean, mode, hazard age.

Each is taken on the scale on which a Wald bound is formed: the logarithm of the hazard accumulated between two ages,
the logarithm of a mean residual life, of a mean life and of a mode (of ln life; those of life itself are lives), and
the standardised place of an age at which a hazard is reached. All rise or fall with a, whatever b.
"""

from __future__ import annotations

from abc import abstractmethod
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.concave_integrals import log_moment, peak, residual_mean
from reliability_app.engine.crossings import first_reached
from reliability_app.engine.families.base import Derivatives, StandardDistribution
from reliability_app.engine.life_measures import Measure, column
from reliability_app.engine.likelihood import Terms
from reliability_app.engine.line import Line

Array = NDArray[np.float64]
Places = NDArray[np.intp]

# A difference of two cumulative hazards over less than this, in z, is integrated, so that nothing cancels.
_SHORT = 0.5
_GAUSS_X, _GAUSS_WEIGHT = np.polynomial.legendre.leggauss(20)
_DIFFERENCE = 1e-4
_MODE_REACHED = 1e-15
# exp of minus this is 0 to any age.
_NOUGHT = 700.0
# So far left of a mode, or out in a tail, the log density is as steep as it gets.
_LEFT = 60.0


class FurtherMeasure(Measure):
    """A reading that rises or falls with a.

    Attributes
    ----------
    rises_with_a : bool
    limit : float
        The side, 1 above or -1 below, on which the reading lies at a b at which no a gives it a value asked for.
    """

    rises_with_a: bool
    limit: float = 1.0

    @abstractmethod
    def at(self, places: Places) -> FurtherMeasure:
        """Return the chosen ones of these functions."""

    @abstractmethod
    def in_scores(self, a: float, b: float) -> FurtherMeasure:
        """Return the same question put in z = a + b y."""


@dataclass(frozen=True, eq=False)
class ConditionalMeasure(FurtherMeasure):
    """ln of the hazard accumulated from y = `given` (minus infinity: the start) to y, which is -ln(S(y)/S(given))."""

    y: Array
    given: Array
    standard: StandardDistribution
    rises_with_a = True
    limit = -1.0

    @property
    def size(self) -> int:
        """How many pairs of ages."""
        return self.y.size

    def at(self, places: Places) -> ConditionalMeasure:
        """Return the chosen pairs."""
        return ConditionalMeasure(self.y[places], self.given[places], self.standard)

    def in_scores(self, a: float, b: float) -> ConditionalMeasure:
        """Return the pairs in z."""
        return ConditionalMeasure(a + b * self.y, a + b * self.given, self.standard)

    def terms(self, a: Array, b: Array) -> Terms:
        """Return the logarithm of the difference of two cumulative hazards."""
        return log_accumulated(self.standard, column(self.y, a), column(self.given, a), a, b)


@dataclass(frozen=True, eq=False)
class ResidualMeasure(FurtherMeasure):
    """ln of the mean residual life at y; at minus infinity, the start of a line of ln life, ln of the mean life."""

    y: Array
    line: Line
    standard: StandardDistribution
    rises_with_a = False

    @property
    def size(self) -> int:
        """How many ages."""
        return self.y.size

    def at(self, places: Places) -> ResidualMeasure:
        """Return the chosen ages."""
        return ResidualMeasure(self.y[places], self.line, self.standard)

    def in_scores(self, a: float, b: float) -> ResidualMeasure:
        """Return the ages in z."""
        return ResidualMeasure(a + b * self.y, self.line.in_scores(a, b), self.standard)

    def terms(self, a: Array, b: Array) -> Terms:
        """Return ln of the mean residual life; infinite where the tail is too heavy for a mean."""
        y, a, b = np.broadcast_arrays(column(self.y, a), a, b)
        return log_residual(self.standard, self.line, y, a, b)


@dataclass(frozen=True, eq=False)
class MeanMeasure(FurtherMeasure):
    """ln of the mean life of a family of ln life."""

    line: Line
    standard: StandardDistribution
    rises_with_a = False

    @property
    def size(self) -> int:
        """One."""
        return 1

    def at(self, places: Places) -> MeanMeasure:  # noqa: ARG002 - there is only one
        """Return itself."""
        return self

    def in_scores(self, a: float, b: float) -> MeanMeasure:
        """Return the mean asked in z."""
        return MeanMeasure(self.line.in_scores(a, b), self.standard)

    @property
    def most_sigma(self) -> float:
        """The sigma from which on the tail is too heavy for a mean; infinite where none is."""
        return -_limit_of_slope(self.standard, np.inf)

    def of_sigma(self, sigma: Array) -> Derivatives:
        """Return what ln of the mean has beyond the location: ln E exp(sigma z)."""
        return log_mean_factor(self.standard, sigma)

    def terms(self, a: Array, b: Array) -> Terms:
        """Return ln of the mean; infinite where the tail is too heavy for one."""
        return moved_by_location(self.line, self.of_sigma(np.asarray(self.line.slope / b)), a, b)


@dataclass(frozen=True, eq=False)
class ModeMeasure(FurtherMeasure):
    """ln of the age of the highest density of a family of ln life; minus infinity where that falls from the start."""

    line: Line
    standard: StandardDistribution
    rises_with_a = False
    limit = -1.0

    @property
    def size(self) -> int:
        """One."""
        return 1

    def at(self, places: Places) -> ModeMeasure:  # noqa: ARG002 - there is only one
        """Return itself."""
        return self

    def in_scores(self, a: float, b: float) -> ModeMeasure:
        """Return the mode asked in z."""
        return ModeMeasure(self.line.in_scores(a, b), self.standard)

    @property
    def most_sigma(self) -> float:
        """The sigma from which on the density falls from the start; infinite where none is."""
        return most_sigma_of_mode(self.standard)

    def of_sigma(self, sigma: Array) -> Derivatives:
        """Return what ln of the mode has beyond the location: sigma times the z at which the density is highest."""
        return log_mode_factor(self.standard, sigma)

    def terms(self, a: Array, b: Array) -> Terms:
        """Return ln of the mode."""
        return moved_by_location(self.line, self.of_sigma(np.asarray(self.line.slope / b)), a, b)


@dataclass(frozen=True, eq=False)
class HazardAgeMeasure(FurtherMeasure):
    """The place y at which the hazard first reaches rates.

    Minus infinity where the hazard starts at or above the rate, infinity where it never reaches it. With y fixed, the
    points (a, b) of this value are those at which the hazard at y is the rate: the same constraint as that of a hazard.

    Attributes
    ----------
    level : ndarray
        Logarithms of the rates, less the line's own part of ln hazard at y = 0: ln(rate) + offset.
    """

    level: Array
    slope: float
    standard: StandardDistribution
    rises_with_a = False

    @property
    def size(self) -> int:
        """How many rates."""
        return self.level.size

    def at(self, places: Places) -> HazardAgeMeasure:
        """Return the chosen rates."""
        return HazardAgeMeasure(self.level[places], self.slope, self.standard)

    def in_scores(self, a: float, b: float) -> HazardAgeMeasure:
        """Return the ages in z."""
        return HazardAgeMeasure(self.level - np.log(b) - self.slope * a / b, self.slope / b, self.standard)

    def terms(self, a: Array, b: Array) -> Terms:
        """Return the place of the first age at which the hazard reaches the rate."""
        return hazard_place(self.standard, column(self.level, a), np.asarray(self.slope), a, b)


def log_accumulated(standard: StandardDistribution, y: Array, given: Array, a: Array, b: Array) -> Terms:
    """Return ln(H(a + b y) - H(a + b given)) with derivatives, H the cumulative hazard -ln S."""
    y, given, a, b = np.broadcast_arrays(y, given, a, b)
    from_start = ~np.isfinite(given)
    start = np.where(from_start, y, given)
    z, z_given = a + b * y, a + b * start
    upper, lower = standard.log_survival(z), standard.log_survival(z_given)
    kept = np.where(from_start, 0.0, 1.0)
    difference = kept * lower.value - upper.value
    difference = np.where(~from_start & (z - z_given < _SHORT), _integrated_hazard(standard, z_given, z), difference)
    with np.errstate(divide="ignore", invalid="ignore"):
        pairs = ((upper, y, -1.0), (lower, start, kept))
        d_a = sum(sign * part.first for part, _, sign in pairs) / difference
        d_b = sum(sign * part.first * at for part, at, sign in pairs) / difference
        d_aa = sum(sign * part.second for part, _, sign in pairs) / difference - d_a * d_a
        d_ab = sum(sign * part.second * at for part, at, sign in pairs) / difference - d_a * d_b
        d_bb = sum(sign * part.second * at * at for part, at, sign in pairs) / difference - d_b * d_b
        return Terms(np.log(difference), *(np.asarray(part) for part in (d_a, d_b, d_aa, d_ab, d_bb)))


def _integrated_hazard(standard: StandardDistribution, low: Array, high: Array) -> Array:
    """Return the integral of the hazard by Gauss's rule of 20 points."""
    half = 0.5 * (high - low)
    z = (low + half)[..., None] + half[..., None] * _GAUSS_X
    with np.errstate(over="ignore", under="ignore"):
        return np.asarray(half * (np.exp(standard.log_hazard(z).value) @ _GAUSS_WEIGHT))


def log_residual(standard: StandardDistribution, line: Line, y: Array, a: Array, b: Array) -> Terms:
    """Return ln of the mean residual life at y with derivatives: offset + slope y - ln b + M(a + b y, slope/b).

    The arrays are of one shape; a standard distribution with a shape has one for each point, raveled.
    """
    started = np.isfinite(y)
    at, slope = np.where(started, y, 0.0), line.slope + 0.0 * b
    sigma = slope / b
    found = residual_mean(standard, (a + b * at).ravel(), sigma.ravel())
    m, m_z, m_s, m_zz, m_zs, m_ss = (part.reshape(b.shape) for part in found)
    value = line.offset + slope * at - np.log(b) + m
    s_b, s_bb = -sigma / b, 2.0 * sigma / b**2
    inside = Terms(
        value,
        m_z,
        -1.0 / b + at * m_z + s_b * m_s,
        m_zz,
        at * m_zz + s_b * m_zs,
        1.0 / b**2 + at * at * m_zz + 2.0 * at * s_b * m_zs + s_b * s_b * m_ss + s_bb * m_s,
    )
    if started.all():
        return inside
    whole = moved_by_location(line, log_mean_factor(standard, sigma), a, b)
    pairs = zip(inside.columns(), whole.columns(), strict=True)
    return Terms(*(np.where(started, part, of_whole) for part, of_whole in pairs))


def log_mean_factor(standard: StandardDistribution, sigma: Array) -> Derivatives:
    """Return ln E exp(sigma z) with derivatives in sigma, of the shape of sigma."""
    return Derivatives(*(part.reshape(sigma.shape) for part in log_moment(standard, sigma.ravel())))


def log_mode_factor(standard: StandardDistribution, sigma: Array) -> Derivatives:
    """Return sigma z with z where the slope of the log density is sigma, with derivatives in sigma.

    Minus infinity where the slope is smaller than sigma everywhere: then the density of the life falls from the start.
    """
    with np.errstate(over="ignore", under="ignore", invalid="ignore", divide="ignore"):
        z = peak(standard.log_density, np.full_like(sigma, -np.inf), -sigma, reached=_MODE_REACHED)
        further_left = standard.log_density(z - _LEFT).first
    inside = (further_left > sigma) & ((sigma == 0) | (sigma * z > -_NOUGHT))
    at = np.where(inside, z, 0.0)
    second = standard.log_density(at).second
    step = _DIFFERENCE
    third = (standard.log_density(at + step).second - standard.log_density(at - step).second) / (2.0 * step)
    value = np.where(inside, sigma * at, -np.inf)
    first = np.where(inside, at + sigma / second, 0.0)
    return Derivatives(value, first, np.where(inside, 2.0 / second - sigma * third / second**3, 0.0))


def most_sigma_of_mode(standard: StandardDistribution) -> float:
    """Return the sigma from which on the density of exp(mu + sigma z) falls from the start; infinite where none is."""
    return _limit_of_slope(standard, -np.inf)


def _limit_of_slope(standard: StandardDistribution, end: float) -> float:
    """Return what the slope of the log density tends to at an end of the line, infinite where it grows without end."""
    far = np.copysign(np.array([0.75 * _LEFT, _LEFT]), end)
    slope = standard.log_density(far).first
    return float(slope[1]) if slope[0] == slope[1] else float(-np.copysign(np.inf, end))


def moved_by_location(line: Line, factor: Derivatives, a: Array, b: Array) -> Terms:
    """Return log_shift - sigma a + factor(sigma), sigma = slope/b, with derivatives."""
    sigma = line.slope / b
    finite = np.isfinite(factor.value)
    beyond = -a + factor.first
    s_b, s_bb = -sigma / b, 2.0 * sigma / b**2
    zero = np.zeros_like(sigma + a)
    return Terms(
        line.log_shift - sigma * a + factor.value,
        -sigma + zero,
        np.where(finite, s_b * beyond, s_b),
        zero,
        -s_b + zero,
        np.where(finite, s_bb * beyond + s_b * s_b * factor.second, 0.0),
    )


def hazard_place(standard: StandardDistribution, level: Array, slope: Array, a: Array, b: Array) -> Terms:
    """Return the first y with ln b + ln h(a + b y) - slope y = level, with derivatives; the arrays broadcast.

    In z it is ln h(z) - sigma z, sigma = slope/b, that must reach level - ln b - sigma a. For every standard
    distribution without a shape ln h is concave, so Newton's method from the left cannot miss the first crossing.
    """
    level, slope, a, b = np.broadcast_arrays(level, slope, a, b)
    rising, wanted = hazard_along(standard, slope / b), level - np.log(b) - slope / b * a
    return implicit_place(standard, first_reached(rising, wanted), slope, a, b)


def hazard_along(standard: StandardDistribution, sigma: Array) -> Callable[[Array], tuple[Array, Array]]:
    """Return ln h(z) - sigma z with its slope, as a function of z."""

    def rising(z: Array) -> tuple[Array, Array]:
        hazard = standard.log_hazard(z)
        return hazard.value - sigma * z, hazard.first - sigma

    return rising


def implicit_place(standard: StandardDistribution, z: Array, slope: Array, a: Array, b: Array) -> Terms:
    """Return y = (z - a)/b where ln b + ln h(a + b y) - slope y stays what it is, with derivatives in (a, b)."""
    inside = np.isfinite(z)
    at = np.where(inside, z, 0.0)
    y, hazard = (at - a) / b, standard.log_hazard(at)
    first, second = hazard.first, hazard.second
    f_y, f_a, f_b = b * first - slope, first, 1.0 / b + first * y
    f_yy, f_ya, f_yb = b * b * second, b * second, first + b * y * second
    with np.errstate(divide="ignore", invalid="ignore"):
        y_a, y_b = -f_a / f_y, -f_b / f_y
        y_aa = -(second + 2.0 * f_ya * y_a + f_yy * y_a * y_a) / f_y
        y_ab = -(second * y + f_ya * y_b + f_yb * y_a + f_yy * y_a * y_b) / f_y
        y_bb = -(second * y * y - 1.0 / (b * b) + 2.0 * f_yb * y_b + f_yy * y_b * y_b) / f_y
    columns = (np.where(inside, part, 0.0) for part in (y_a, y_b, y_aa, y_ab, y_bb))
    return Terms(np.where(inside, y, z), *columns)
