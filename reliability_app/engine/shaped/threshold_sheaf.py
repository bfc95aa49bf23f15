"""Families with a threshold: ln(life - threshold) has a location and a spread.

The threshold is followed from minus infinity to the first failure by g = 1/(first failure - threshold), on the line

    v = ln(1 + g (life - first failure))/g,

which at g = 0 is life itself: there the Weibull family with a threshold is the smallest extreme value family of life
itself, the lognormal the normal, the loglogistic the logistic. kappa = arcsinh(g range), so that it runs like g where
the threshold is far off and like its logarithm near the first failure.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families import Derivatives, Family, Rule, StandardDistribution
from reliability_app.engine.families.log_gamma_density import rise
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.sample import telling_ends
from reliability_app.engine.shaped.sheaf import Coordinate, End, Sheaf, Slices
from reliability_app.engine.shaped.transformed_sample import RawSample

Array = NDArray[np.float64]

# A threshold more than 300 ranges of the lives below the first failure is not told from one at minus infinity.
_FURTHEST = 1.0 / 300.0
# How near to the first failure, in ranges of the lives, the threshold is looked for.
_NEAREST = 1e-9
_STEP = 0.4
_DIFFERENCE = 0.03
_TINY = 1e-8
_CENTRED_ON = 100
_LIMITS = {"weibull": "smallest extreme value", "lognormal": "normal", "loglogistic": "logistic"}


class ThresholdSheaf(Sheaf):
    """A family of ln(life - threshold)."""

    def __init__(self, data: LifeData, family: Family, raw: RawSample | None = None) -> None:
        self.data = data
        self.family = family
        self.raw = RawSample.of(data, -np.inf) if raw is None else raw
        self.first = float(data.first_failure or 0.0)
        ends = telling_ends(data)
        width = float(ends.max()) - self.first
        self.range = width if width > 0 else max(abs(self.first), 1.0)
        self.b_is_pinned = family.fixed_sigma is not None
        self._centred_on = self._places(ends[~data.is_running])

    @property
    def coordinates(self) -> tuple[Coordinate, ...]:
        """mu and ln sigma by the names that the family has for them, and the threshold."""
        named = tuple(
            Coordinate(
                name,
                rule.is_logarithmic,
                falls=rule is Rule.ONE_OVER_SIGMA,
                called="mu" if rule.is_of_mu else "ln sigma",
            )
            for name, rule in sorted(self.family.rules.items(), key=lambda entry: not entry[1].is_of_mu)
        )
        return (*named, Coordinate("threshold", False))

    @property
    def ends(self) -> tuple[End, End]:
        """A threshold at minus infinity, and one at the first failure."""
        limit = _LIMITS.get(self.family.name)
        far, instead = "the threshold falls without end", "the family without a threshold"
        if limit is not None:
            far += f", where the family turns into the {limit} family of life itself"
            instead = f"that family, or {instead}"
        near = "the threshold nears the first failure"
        if not self.b_is_pinned:
            near += ", where it has no upper limit"
        return (
            End("threshold-runs-down", far, instead, is_limit=limit is not None),
            End("threshold-at-first-failure", near, "the family without a threshold", is_limit=False),
        )

    @property
    def failures(self) -> float:
        """The units that failed."""
        return self.raw.failures

    @property
    def records(self) -> int:
        """The records that an evaluation sums over."""
        return self.raw.records

    def thinned(self, most: int) -> ThresholdSheaf:
        """Return the family laid over a smaller sample."""
        return ThresholdSheaf(self.data, self.family, self.raw.thinned(most))

    def grid(self) -> Array:
        """Return values of kappa from (nearly) minus infinity to nearly the first failure."""
        low, high = float(np.arcsinh(_FURTHEST)), float(np.arcsinh(1.0 / _NEAREST))
        inner = np.linspace(0.0, high, 1 + int(np.ceil(high / _STEP)))[1:]
        return np.concatenate([[low] if self.b_is_pinned else [0.0, low], [0.03, 0.1], inner])

    def step(self, kappa: Array) -> Array:
        """Return 0.03."""
        return np.full_like(kappa, _DIFFERENCE)

    def standard(self, kappa: Array) -> StandardDistribution:  # noqa: ARG002 - the same at every kappa
        """Return the family's standard distribution."""
        return self.family.standard

    def _g(self, kappa: Array) -> Array:
        return np.sinh(kappa) / self.range

    def _v(self, age: Array, g: Array) -> Array:
        """Return ln(1 + g d)/g with d the age beyond the first failure; minus infinity at the threshold and before."""
        x = g * (age - self.first)
        inside = x > -1.0
        safe = np.where(inside, x, 0.0)
        tiny = np.abs(safe) < _TINY
        ratio = np.where(tiny, 1.0 - 0.5 * safe, np.log1p(safe) / np.where(tiny, 1.0, safe))
        return np.where(inside, (age - self.first) * ratio, -np.inf)

    def _places(self, failures: Array) -> Array:
        """Return the ages by which units failed, or some of them: the line is centred on these."""
        ends = np.unique(failures)
        if ends.size == 1:
            ends = np.append(ends, self.first + self.range)
        return ends[:: max(1, ends.size // _CENTRED_ON)]

    def centre(self, g: Array) -> tuple[Array, Array]:
        """Return location and spread of the failures on the line at g = 1/(first failure - threshold)."""
        # In ranges, since the squares of ages in a very small unit may be beyond all numbers.
        v = self._v(self._centred_on, g[..., None]) / self.range
        return self.range * v.mean(axis=-1), self.range * v.std(axis=-1)

    def slices(self, kappa: Array) -> Slices:
        """Return the problems at a list of kappa: the units on another line each."""
        g = self._g(kappa)
        mean, spread = self.centre(g)
        column, slope = g[:, None], spread[:, None]

        def to_y(age: Array) -> Array:
            return (self._v(age, column) - mean[:, None]) / slope

        def half_width(lower: Array, upper: Array) -> Array:
            room = 1.0 / (1.0 + column * (lower - self.first))
            x = column * (upper - lower) * room
            ratio = np.where(np.abs(x) < _TINY, 1.0 - 0.5 * x, np.log1p(x) / np.where(np.abs(x) < _TINY, 1.0, x))
            return 0.5 * (upper - lower) * room * ratio / slope

        failed = self.raw.failed
        log_room = np.log1p(column * (failed.age - self.first)) @ failed.quantity
        log_slope = -log_room - failed.quantity.sum() * np.log(spread)
        return Slices(self.raw.carried(to_y, half_width), self.family.standard, log_slope, False)

    def pinned_b(self, kappa: Array) -> Array:
        """Return 1/sigma on the line where the family fixes sigma."""
        if self.family.fixed_sigma is None:
            return np.ones_like(kappa)
        g = self._g(kappa)
        return g * self.centre(g)[1] / self.family.fixed_sigma

    def starts(self, kappa: Array) -> tuple[Array, Array]:
        """Start where half of the share failed lies at the middle of the failures, with their own spread."""
        share = np.array([0.5 * min(1.0, self.failures / self.data.unit_count)])
        return np.full_like(kappa, self.family.standard.quantile(share)[0]), self.pinned_b(kappa)

    def to_y(self, age: Array, kappa: Array) -> Array:
        """Return the place on the line of an age; minus infinity at the threshold and before."""
        g = self._g(kappa)
        mean, spread = self.centre(g)
        return (self._v(age, g) - mean) / spread

    def log_slope_at(self, age: Array, kappa: Array) -> Array:
        """Return ln(dy/d age); minus infinity at the threshold and before."""
        g = self._g(kappa)
        room = 1.0 + g * (age - self.first)
        inside = room > 0.0
        return np.where(inside, -np.log(np.where(inside, room, 1.0)) - np.log(self.centre(g)[1]), -np.inf)

    def life_reading(self, y: Array, kappa: Array) -> Derivatives:
        """Return the age itself at a place on the line, with derivatives in y."""
        g = self._g(kappa)
        mean, spread = self.centre(g)
        v = mean + spread * y
        with np.errstate(over="ignore", invalid="ignore"):
            stretch = spread * np.exp(g * v)
            return Derivatives(self.first + v * rise(g * v), stretch, g * spread * stretch)

    def age_of(self, reading: Array) -> Array:
        """Return the age: the reading itself."""
        return reading

    def threshold(self, kappa: Array) -> Array:
        """Return the threshold."""
        with np.errstate(divide="ignore"):
            return np.asarray(self.first - 1.0 / self._g(kappa))

    def parts(self, kappa: Array) -> Sequence[tuple[Array | float, Array | float, Array | float]]:
        """Return mu = ln(scale of the line) + ..., ln sigma, and the threshold."""
        g = self._g(kappa)
        mean, spread = self.centre(g)
        with np.errstate(divide="ignore"):
            mu = (-np.log(g) + g * mean, g * spread, 0.0)
            log_sigma = (np.log(g * spread), 0.0, -1.0)
        threshold = (self.threshold(kappa), 0.0, 0.0)
        return (mu, threshold) if self.b_is_pinned else (mu, log_sigma, threshold)

    def mean_life(self, a: float, b: float, kappa: float) -> float:
        """Return threshold + E exp(mu + sigma z)."""
        at = np.array([kappa])
        (base, of_location, _), *rest = self.parts(at)
        mu = float(np.asarray(base)[0] - np.asarray(of_location)[0] * a / b)
        sigma = float(self._g(at)[0] * self.centre(self._g(at))[1][0]) / b
        return float(np.asarray(rest[-1][0])[0]) + self.family.mean_life(mu, sigma)
