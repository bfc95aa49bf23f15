"""A slow, plain likelihood from scipy.stats, written apart from the engine, to hold its bounds against.

It shares no formula with the engine: scipy.stats densities, a direct search for the maximum, Brent's
method for the nuisance parameter and the roots of the profile, differences for the information matrix.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import optimize, stats

from tests.reference.reference_data import Units

STANDARD = {
    "lognormal": stats.norm,
    "weibull": stats.gumbel_l,
    "exponential": stats.gumbel_l,
    "loglogistic": stats.logistic,
    "frechet": stats.gumbel_r,
    "normal": stats.norm,
    "smallest_extreme_value": stats.gumbel_l,
    "largest_extreme_value": stats.gumbel_r,
    "logistic": stats.logistic,
}
OF_LIFE_ITSELF = ("normal", "smallest_extreme_value", "largest_extreme_value", "logistic")
Point = tuple[float, float]  # mu, ln sigma


@dataclass(frozen=True)
class Reading:
    """A quantity on the scale on which it is profiled, and how to place a fit that has a given value of it.

    Attributes
    ----------
    value : callable (mu, ln sigma) -> float
        On its own scale: ln of a life, z of a probability, ln of a hazard or of a scale parameter.
    place : callable (value, nuisance) -> (mu, ln sigma)
    nuisance : callable (mu, ln sigma) -> float
    shown : callable value -> float
        From the profiled scale to what the user reads.
    """

    value: Callable[[float, float], float]
    place: Callable[[float, float], Point]
    nuisance: Callable[[float, float], float]
    shown: Callable[[float], float]


@dataclass(frozen=True)
class NaiveFit:
    """Units, a family name, and what follows from their likelihood."""

    units: Units
    family: str

    @property
    def one_parameter(self) -> bool:
        return self.family == "exponential"

    def line(self, age: NDArray[np.float64]) -> NDArray[np.float64]:
        """ln age, or the age itself, whichever has a location and a spread; before age 0 ln age is minus infinity."""
        return age if self.family in OF_LIFE_ITSELF else np.log(np.maximum(age, 0.0))

    @cached_property
    def places(self) -> tuple[NDArray[np.float64], ...]:
        """On the line: failures, units still running, lower and upper end of looks between, and late entries."""
        units = self.units
        exact, running = units.lower == units.upper, np.isinf(units.upper)
        between, late = ~exact & ~running, units.entered > 0
        with np.errstate(divide="ignore"):
            low, high, entered = (self.line(ages) for ages in (units.lower, units.upper, units.entered))
        return low[exact], low[running], low[between], high[between], entered[late]

    @cached_property
    def quantities(self) -> tuple[NDArray[np.float64], ...]:
        """Units at the failures, still running, found between looks, and entered late."""
        units = self.units
        exact, running = units.lower == units.upper, np.isinf(units.upper)
        return tuple(units.quantity[rows] for rows in (exact, running, ~exact & ~running, units.entered > 0))

    def log_likelihood(self, mu: float, log_sigma: float) -> float:
        """Log-likelihood of the lives themselves; minus infinity where a term underflows."""
        sigma, standard = math.exp(log_sigma), STANDARD[self.family]
        failed, running, found, late = self.quantities
        with np.errstate(all="ignore"):
            at, beyond, low, high, entered = ((ages - mu) / sigma for ages in self.places)
            # scipy's formulas without its checks of each argument, which take nearly all of the time.
            total = failed @ (standard._logpdf(at) - log_sigma)
            if self.family not in OF_LIFE_ITSELF:
                total -= failed @ self.places[0]
            total += running @ standard._logsf(beyond)
            if found.size:
                total += found @ np.log(standard._cdf(high) - standard._cdf(low))
            if late.size:
                total -= late @ standard._logsf(entered)
        return float(total) if math.isfinite(total) else -1e300

    @cached_property
    def maximum(self) -> Point:
        """Where the log-likelihood is largest, by a restarted simplex search."""
        ages = np.where(np.isinf(self.units.upper), self.units.lower, self.units.upper)
        if self.one_parameter:
            found = optimize.minimize_scalar(
                lambda mu: -self.log_likelihood(mu, 0.0),
                bracket=(math.log(np.mean(ages)) - 1.0, math.log(np.mean(ages)) + 1.0),
                options={"xtol": 1e-12},
            )
            return float(found.x), 0.0
        point = np.array([math.log(float(np.mean(ages))), -0.5])
        if self.family in OF_LIFE_ITSELF:
            point = np.array([float(np.mean(ages)), math.log(float(np.std(ages)))])
        for _ in range(3):
            point = optimize.minimize(
                lambda at: -self.log_likelihood(at[0], at[1]),
                point,
                method="Nelder-Mead",
                options={"xatol": 1e-10, "fatol": 1e-13, "maxiter": 4000},
            ).x
        return float(point[0]), float(point[1])

    @cached_property
    def largest(self) -> float:
        """The log-likelihood at its maximum."""
        return self.log_likelihood(*self.maximum)

    def profile(self, reading: Reading, value: float, start: float) -> tuple[float, float]:
        """Largest log-likelihood among fits with this value of the reading, and the nuisance there."""
        if self.one_parameter:
            return self.log_likelihood(*reading.place(value, 0.0)), 0.0
        found = optimize.minimize_scalar(
            lambda nuisance: -self.log_likelihood(*reading.place(value, nuisance)),
            bracket=(start - 0.05, start + 0.05),
            options={"xtol": 1e-9},
        )
        return -float(found.fun), float(found.x)

    def likelihood_limit(self, reading: Reading, tail: float, direction: int) -> float:
        """The value beyond which the likelihood ratio rejects, with this tail probability; inf if never."""
        drop = stats.norm.isf(tail) ** 2
        value, nuisance = reading.value(*self.maximum), reading.nuisance(*self.maximum)
        step, inside = 0.5 * self.wald_error(reading), value
        for _ in range(60):
            outside = inside + direction * step
            log_likelihood, nuisance_out = self.profile(reading, outside, nuisance)
            if 2 * (self.largest - log_likelihood) > drop:
                break
            inside, nuisance, step = outside, nuisance_out, step * 1.3
        else:
            return direction * math.inf
        root = optimize.brentq(
            lambda at: 2 * (self.largest - self.profile(reading, at, nuisance)[0]) - drop,
            inside,
            outside,
            xtol=1e-11,
        )
        return float(root)

    def likelihood_bounds(self, reading: Reading, confidence: float, side: str) -> tuple[float, float]:
        """Lower and upper bound as the user reads them, both at the tail probability of this side."""
        tail = (1 - confidence) / (2 if side == "two" else 1)
        ends = [reading.shown(self.likelihood_limit(reading, tail, way)) for way in (-1, 1)]
        return min(ends), max(ends)

    @cached_property
    def covariance(self) -> NDArray[np.float64]:
        """Inverse of the observed information for (mu, ln sigma), by fourth-order central differences."""
        mu, log_sigma = self.maximum
        scale = math.exp(log_sigma)
        size = 1 if self.one_parameter else 2
        steps = np.diag([1e-2 * scale, 1e-2])[:size]

        def at(offset: NDArray[np.float64]) -> float:
            return self.log_likelihood(mu + float(offset[0]), log_sigma + float(offset[1]))

        information = np.empty((size, size))
        for i in range(size):
            for j in range(size):
                information[i, j] = -sum(
                    a * b * at(k * steps[i] + m * steps[j]) for k, a in STENCIL for m, b in STENCIL
                ) / (steps[i, i] * steps[j, j])
        inverse: NDArray[np.float64] = np.linalg.inv(information)
        return inverse

    def wald_error(self, reading: Reading) -> float:
        """Standard error of the reading on its own scale, with the gradient taken by differences."""
        mu, log_sigma = self.maximum
        step = 1e-3
        along = step * math.exp(log_sigma)
        gradient = [
            sum(weight * reading.value(mu + k * along, log_sigma) for k, weight in STENCIL) / along,
            sum(weight * reading.value(mu, log_sigma + k * step) for k, weight in STENCIL) / step,
        ]
        slope = np.array(gradient[: len(self.covariance)])
        return float(np.sqrt(slope @ self.covariance @ slope))

    def wald_bounds(self, reading: Reading, confidence: float, side: str) -> tuple[float, float]:
        """Lower and upper bound as the user reads them, from the delta method on the reading's own scale."""
        tail = (1 - confidence) / (2 if side == "two" else 1)
        centre, reach = reading.value(*self.maximum), stats.norm.isf(tail) * self.wald_error(reading)
        ends = [reading.shown(centre + way * reach) for way in (-1, 1)]
        return min(ends), max(ends)


# First derivative by central differences of sixth order: offset in steps, weight.
STENCIL = ((-3, -1 / 60), (-2, 9 / 60), (-1, -45 / 60), (1, 45 / 60), (2, -9 / 60), (3, 1 / 60))


def life_reading(family: str, fraction: float) -> Reading:
    """The age by which a fraction has failed, profiled as its logarithm, or as it is."""
    z = float(STANDARD[family].ppf(fraction))
    return Reading(
        value=lambda mu, log_sigma: mu + math.exp(log_sigma) * z,
        place=lambda value, log_sigma: (value - math.exp(log_sigma) * z, log_sigma),
        nuisance=lambda _mu, log_sigma: log_sigma,
        shown=float if family in OF_LIFE_ITSELF else _exponential,
    )


def reliability_reading(family: str, age: float) -> Reading:
    """The reliability at an age, profiled as z = (y - mu)/sigma with y = ln age or age."""
    y = age if family in OF_LIFE_ITSELF else math.log(age)
    return Reading(
        value=lambda mu, log_sigma: (y - mu) / math.exp(log_sigma),
        place=lambda value, log_sigma: (y - math.exp(log_sigma) * value, log_sigma),
        nuisance=lambda _mu, log_sigma: log_sigma,
        shown=lambda value: float(STANDARD[family].sf(value)),
    )


def hazard_reading(family: str, age: float) -> Reading:
    """The hazard rate at an age, profiled as its logarithm, with z at that age as the nuisance."""
    y, standard = age if family in OF_LIFE_ITSELF else math.log(age), STANDARD[family]
    jacobian = 0.0 if family in OF_LIFE_ITSELF else -y  # ln of the slope of y over age

    def log_ratio(z: float) -> float:
        return float(standard._logpdf(z) - standard._logsf(z))

    def place(value: float, z: float) -> Point:
        if family == "exponential":
            return -value, 0.0
        log_sigma = log_ratio(z) + jacobian - value
        return y - math.exp(log_sigma) * z, log_sigma

    return Reading(
        value=lambda mu, log_sigma: log_ratio((y - mu) / math.exp(log_sigma)) - log_sigma + jacobian,
        place=place,
        nuisance=lambda mu, log_sigma: (y - mu) / math.exp(log_sigma),
        shown=_exponential,
    )


def parameter_reading(name: str) -> Reading:
    """A parameter in its customary name: mu, sigma, shape, scale or mean."""
    if name in ("sigma", "shape"):
        sign = 1 if name == "sigma" else -1
        return Reading(
            value=lambda _mu, log_sigma: sign * log_sigma,
            place=lambda value, mu: (mu, sign * value),
            nuisance=lambda mu, _log_sigma: mu,
            shown=_exponential,
        )
    return Reading(
        value=lambda mu, _log_sigma: mu,
        place=lambda value, log_sigma: (value, log_sigma),
        nuisance=lambda _mu, log_sigma: log_sigma,
        shown=float if name == "mu" else _exponential,
    )


def _exponential(value: float) -> float:
    return math.exp(value) if value < 700 else math.inf
