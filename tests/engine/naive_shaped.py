"""Families with a further parameter by scipy.stats alone: likelihood, readings, and their profiles.

Each family is a form (one or two free coordinates) and a scale of the lives beyond a threshold (0 for most). A reading
fixes the scale once the form is given, so that its profile is a climb over the form alone, by scipy's maximisers.
Nothing of the engine is used.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy import optimize, stats

from tests.reference.reference_data import Units

Point = NDArray[np.float64]
Lives = Any  # what a frozen distribution of scipy.stats can do, as far as it is used
Unscaled = Callable[[Point], Callable[[float, float], Lives]]


@dataclass(frozen=True)
class ScaledLives:
    """A distribution of scipy.stats of one shape, scaled and moved.

    It calls scipy's formulas without the checks of each argument: those, and to freeze a distribution anew for each
    likelihood, take nearly all of the time.
    """

    distribution: Any
    shape: float
    scale: float
    start: float

    def _beyond(self, formula: Callable[[Any, float], Any], age: Any, before: float) -> Any:
        """A formula of the distribution at ages beyond its start, and its value at or before it."""
        x = (np.asarray(age, float) - self.start) / self.scale
        return np.where(x > 0, formula(np.where(x > 0, x, 1.0), self.shape), before)

    def logpdf(self, age: Any) -> Any:
        """ln of the density."""
        return self._beyond(self.distribution._logpdf, age, -math.inf) - math.log(self.scale)

    def logsf(self, age: Any) -> Any:
        """ln of the reliability."""
        return self._beyond(self.distribution._logsf, age, 0.0)

    def cdf(self, age: Any) -> Any:
        """The failure probability."""
        return self._beyond(self.distribution._cdf, age, 0.0)

    def ppf(self, fraction: Any) -> Any:
        """The life at a fraction failed."""
        return self.distribution.ppf(fraction, self.shape, self.start, self.scale)

    def isf(self, share: Any) -> Any:
        """The life at a share still running."""
        return self.distribution.isf(share, self.shape, self.start, self.scale)

    def mean(self) -> Any:
        """The mean life."""
        return self.distribution.mean(self.shape, self.start, self.scale)


@dataclass(frozen=True)
class GeneralizedGammaLives:
    """exp(lambda w)/lambda^2 has a gamma distribution of shape 1/lambda^2, w = (ln life - mu)/sigma; mu = ln scale."""

    sigma: float
    lam: float
    scale: float

    @property
    def _shape(self) -> float:
        return 1 / self.lam**2

    def _x(self, age: Any) -> Any:
        return np.exp(self.lam * (np.log(age) - math.log(self.scale)) / self.sigma) / self.lam**2

    def logpdf(self, age: Any) -> Any:
        """ln of the density."""
        x = self._x(age)
        return stats.gamma._logpdf(x, self._shape) + np.log(x) + math.log(abs(self.lam) / self.sigma) - np.log(age)

    def logsf(self, age: Any) -> Any:
        """ln of the reliability."""
        return (stats.gamma._logsf if self.lam > 0 else stats.gamma._logcdf)(self._x(age), self._shape)

    def cdf(self, age: Any) -> Any:
        """The failure probability."""
        return (stats.gamma._cdf if self.lam > 0 else stats.gamma._sf)(self._x(age), self._shape)

    def ppf(self, fraction: Any) -> Any:
        """The life at a fraction failed."""
        x = (stats.gamma.ppf if self.lam > 0 else stats.gamma.isf)(fraction, self._shape)
        return self.scale * np.exp(self.sigma / self.lam * np.log(x * self.lam**2))

    def isf(self, share: Any) -> Any:
        """The life at a share still running."""
        return self.ppf(1 - share)


def _generalized_gamma(form: Point) -> Callable[[float, float], Lives]:
    """The form is ln sigma and lambda."""
    sigma, lam = math.exp(form[0]), float(form[1])
    if abs(lam) < 1e-3:
        return lambda scale, start: ScaledLives(stats.lognorm, sigma, scale, start)
    return lambda scale, _start: GeneralizedGammaLives(sigma, lam, scale)


def _by(distribution: Any) -> Unscaled:
    return lambda form: lambda scale, start: ScaledLives(distribution, math.exp(form[0]), scale, start)


FORMS: dict[str, Unscaled] = {
    "gamma": _by(stats.gamma),
    "birnbaum_saunders": _by(stats.fatiguelife),
    # ln(shape/mean), and the mean as the scale.
    "inverse_gaussian": lambda form: (
        lambda scale, start: ScaledLives(stats.invgauss, math.exp(-form[0]), scale * math.exp(form[0]), start)
    ),
    "generalized_gamma": _generalized_gamma,
    "weibull_threshold": _by(stats.weibull_min),
    "loglogistic_threshold": _by(stats.fisk),
    "lognormal_threshold": _by(stats.lognorm),
}


def log_likelihood(units: Units, lives: Lives) -> float:
    """Log-likelihood of the units; minus infinity outside the parameter space."""
    lower, upper, entered = units.lower, units.upper, units.entered
    exact, running, late = lower == upper, np.isinf(upper), entered > 0
    between = ~exact & ~running
    term = np.zeros(lower.size)
    with np.errstate(all="ignore"):
        term[exact] = lives.logpdf(lower[exact])
        term[running] = lives.logsf(lower[running])
        if between.any():
            term[between] = np.log(lives.cdf(upper[between]) - lives.cdf(lower[between]))
        term[late] -= lives.logsf(entered[late])
        total = float(units.quantity @ term)
    return total if np.isfinite(total) else -math.inf


@dataclass(frozen=True)
class Naive:
    """One family laid over some units, near a maximum given by its parameters."""

    family: str
    units: Units
    parameters: dict[str, float]

    @property
    def first(self) -> float:
        """The first failure."""
        return float(self.units.upper[np.isfinite(self.units.upper)].min())

    @property
    def form(self) -> Point:
        """The form of the parameters; the threshold last, as the logarithm of its distance to the first failure."""
        p = self.parameters
        form = {
            "gamma": lambda: [math.log(p["shape"])],
            "birnbaum_saunders": lambda: [math.log(p["shape"])],
            "inverse_gaussian": lambda: [math.log(p["shape"] / p["mean"])],
            "generalized_gamma": lambda: [math.log(p["sigma"]), p["lambda"]],
        }.get(self.family, lambda: [math.log(p["sigma"] if "sigma" in p else p["shape"])])()
        return np.array([*form, math.log(self.first - p["threshold"])] if "threshold" in p else form)

    @property
    def scale(self) -> float:
        """The scale of the parameters."""
        p = self.parameters
        return p["scale"] if "scale" in p else p["mean"] if "mean" in p else math.exp(p["mu"])

    def value(self, form: Point, scale: float) -> float:
        """The log-likelihood at a form and a scale."""
        return log_likelihood(self.units, FORMS[self.family](form)(scale, self._threshold(form)))

    def _threshold(self, form: Point) -> float:
        return self.first - math.exp(form[-1]) if "threshold" in self.parameters else 0.0

    def scales_with(self, ask: str, at: float, value: float, form: Point) -> list[float]:
        """The scales at which a reading has a value: one for a life or a reliability, any number for a hazard."""
        unscaled, threshold = FORMS[self.family](form)(1.0, 0.0), self._threshold(form)
        with np.errstate(all="ignore"):
            if ask == "life":
                return [(value - threshold) / float(unscaled.ppf(at))]
            if ask == "reliability":
                return [(at - threshold) / float(unscaled.isf(value))]
            beyond = at - threshold
            if beyond <= 0:
                return []

            def gap(log_x: Any) -> Any:
                x = np.exp(log_x)
                return unscaled.logpdf(x) - unscaled.logsf(x) + log_x - math.log(value * beyond)

            grid = math.log(beyond / self.scale) + np.linspace(-6, 6, 121)
            gaps = gap(grid)
            crossed = np.flatnonzero(np.isfinite(gaps[:-1] + gaps[1:]) & (gaps[:-1] * gaps[1:] <= 0))
            roots = [optimize.brentq(gap, grid[place], grid[place + 1], xtol=1e-13) for place in crossed]
            return [beyond / math.exp(root) for root in roots]

    def highest_with(self, ask: str, at: float, value: float) -> float:
        """The highest log-likelihood among points at which a reading has a value."""

        def loss(form: Point) -> float:
            scales = [scale for scale in self.scales_with(ask, at, value, form) if 0 < scale < 1e300]
            return min([1e30, *(-self.value(form, scale) for scale in scales)])

        return climbed(loss, self.form)

    def highest_at_form(self, place: int, value: float) -> float:
        """The highest log-likelihood among points at which one coordinate of the form has a value."""
        others = [at for at in range(self.form.size) if at != place]

        def loss(free: Point) -> float:
            form = np.empty(self.form.size)
            form[place], form[others] = value, free[1:]
            return min(1e30, -self.value(form, math.exp(free[0])))

        return climbed(loss, np.array([math.log(self.scale), *self.form[others]]))

    def highest_at_scale(self, scale: float) -> float:
        """The highest log-likelihood among points at which the scale has a value."""
        return climbed(lambda form: min(1e30, -self.value(form, scale)), self.form)


def climbed(loss: Callable[[Point], float], start: Point) -> float:
    """Minus the least loss, by the simplex of Nelder and Mead, started anew where it stopped."""
    found = None
    for _ in range(2):
        options = {"xatol": 1e-7, "fatol": 1e-9, "maxfev": 600}
        found = optimize.minimize(loss, start if found is None else found.x, method="Nelder-Mead", options=options)
    return -float(found.fun)
