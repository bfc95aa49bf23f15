"""Fit: the frozen result of a fit, and the questions it answers."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reliability_app.engine.bounds import Bounder, Proceed, check_bound
from reliability_app.engine.bounds.kinds import tail_of
from reliability_app.engine.cautions import Caution
from reliability_app.engine.errors import DataError, NoEstimate, UnknownName
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.existence import Outcome
from reliability_app.engine.families import Family, Rule
from reliability_app.engine.fit_cautions import cautions_of_fit, cautions_of_share_below_zero
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import (
    HazardMeasure,
    LifeMeasure,
    Measure,
    ScoreMeasure,
    SlopeMeasure,
)

Array = NDArray[np.float64]
Number = float | Array
Ends = tuple[Number | None, Number | None]


@dataclass(frozen=True, eq=False)
class Fit:
    """A family fitted to life data, or the named reason why it could not be.

    Ages are in the unit of the data. A question takes a number or an array and answers in kind. Bounds come as
    (lower, upper) with None on an open side; `confidence` is that of the statement made: 0.95 with side="lower" is a
    one-sided 95 % bound, with side="two" each tail holds 2.5 %. Kinds: "automatic",
    "calibrated", "likelihood", "wald", "exact".

    Every question raises NoEstimate where `outcome` is not ESTIMATED; the properties are None there.

    Attributes
    ----------
    data : LifeData
    family : Family
    outcome : Outcome
    estimate : Estimate or None
    proceed : callable or None
        Called between pieces of slow work (a calibration); what it raises ends the work.
    """

    data: LifeData
    family: Family
    outcome: Outcome
    estimate: Estimate | None
    proceed: Proceed | None = None

    @property
    def converged(self) -> bool:
        """True where an estimate exists and was reached."""
        return self.estimate is not None

    @property
    def parameters(self) -> dict[str, float | None]:
        """Customary parameters by name; None for each where there is no estimate."""
        if self.estimate is None:
            return dict.fromkeys(self.family.rules)
        mu, sigma = self.estimate.mu, self.estimate.sigma
        return {name: rule.of(mu, sigma) for name, rule in self.family.rules.items()}

    @property
    def standard_errors(self) -> dict[str, float | None]:
        """Standard errors of the customary parameters, by the delta method."""
        if self.estimate is None:
            return dict.fromkeys(self.family.rules)
        error = np.sqrt(np.diagonal(self.estimate.covariance))
        values = self.parameters
        return {
            name: float(error[0 if rule.is_of_mu else 1] * (values[name] or 0.0 if rule.is_logarithmic else 1.0))
            for name, rule in self.family.rules.items()
        }

    @property
    def coordinates(self) -> tuple[str, ...]:
        """The coordinates to which `covariance` belongs."""
        return ("mu",) if self.family.fixed_sigma is not None else ("mu", "ln sigma")

    @property
    def covariance(self) -> Array | None:
        """Inverse observed information of `coordinates`."""
        return None if self.estimate is None else self.estimate.covariance

    @property
    def log_likelihood(self) -> float | None:
        """Log-likelihood of the lives themselves, quantities counted."""
        return None if self.estimate is None else self.estimate.log_likelihood

    @property
    def aicc(self) -> float | None:
        """Akaike's criterion with the small-sample term (Hurvich & Tsai 1989, Biometrika 76, 297-307).

        None also where there are no more units than parameters + 1, for which it is not defined.
        """
        count, units = self.family.parameter_count, self.data.unit_count
        if self.estimate is None or units <= count + 1:
            return None
        return -2.0 * self.estimate.log_likelihood + 2.0 * count * units / (units - count - 1)

    @property
    def bic(self) -> float | None:
        """Schwarz's criterion (1978, Ann. Statist. 6, 461-464), a parameter costing the logarithm of all units."""
        if self.estimate is None:
            return None
        return -2.0 * self.estimate.log_likelihood + self.family.parameter_count * float(np.log(self.data.unit_count))

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """What must be known before relying on anything read off this fit."""
        if self.estimate is None:
            return (self.outcome.caution,)
        return cautions_of_fit(self.data) + self._cautions_below_zero()

    def life(self, fraction: ArrayLike) -> Number:
        """Return the age by which `fraction` of the units have failed (0.10: the B10 life)."""
        found = self._found()
        measure = LifeMeasure(self._z(fraction))
        return _like(fraction, self._age_of(measure.terms(*_point(found)).value))

    def life_bounds(
        self, fraction: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the life at `fraction`."""
        measure = LifeMeasure(self._z(fraction))
        return self._ends(measure, self._age_of, fraction, (kind, side, confidence))

    def failure_probability(self, age: ArrayLike) -> Number:
        """Return the share of units that have failed by `age`."""
        return _like(age, self.family.standard.cdf(self.score(age)))

    def reliability(self, age: ArrayLike) -> Number:
        """Return the share of units still running at `age`."""
        return _like(age, self.family.standard.survival(self.score(age)))

    def reliability_bounds(
        self, age: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the reliability at `age`."""
        survival = self.family.standard.survival
        return self._ends(self.score_measure(age), survival, age, (kind, side, confidence), falling=True)

    def hazard(self, age: ArrayLike) -> Number:
        """Return the hazard rate at `age`, failures per unit and unit of age."""
        log_hazard = self.hazard_measure(age).terms(*_point(self._found())).value
        return _like(age, self.hazard_of(age)(log_hazard))

    def hazard_bounds(
        self, age: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the hazard rate at `age`."""
        return self._ends(self.hazard_measure(age), self.hazard_of(age), age, (kind, side, confidence))

    def density(self, age: ArrayLike) -> Number:
        """Return the probability density at `age`, per unit of age."""
        found, y = self._found(), self._y(age)
        with np.errstate(over="ignore"):  # a short tail: the density there is 0
            log_density = self.family.standard.log_density(found.a + found.b * y).value
        return _like(age, found.b * np.exp(log_density + found.sample.log_slope_at(y)))

    def mean_life(self) -> float:
        """Return the mean life of the fitted distribution; infinite where its tail is too heavy for one."""
        found = self._found()
        return self.family.mean_life(found.mu, found.sigma)

    def conditional_reliability(self, age: ArrayLike, *, given: float) -> Number:
        """Return the share of the units running at `given` that are still running at `age` (age >= given)."""
        ages = np.atleast_1d(np.asarray(age, dtype=np.float64))
        if (ages < given).any():
            raise DataError([f"A conditional reliability needs an age of at least the age reached ({given:g})."])
        standard = self.family.standard
        start = standard.log_survival(self.score(given)).value
        return _like(age, np.exp(standard.log_survival(self.score(ages)).value - start))

    def bound_used(self, kind: str, *, of_hazard: bool = False) -> str:
        """Return the kind of bound that `kind` stands for here: "automatic" chooses by the data."""
        return self.bounder.resolved(kind, of_hazard=of_hazard)

    def parameter_bounds(
        self, name: str, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of one customary parameter."""
        if name not in self.family.rules:
            names = ", ".join(self.family.rules)
            raise UnknownName(f"{self.family.title} has no parameter called {name!r}. It has: {names}.")
        rule, sample = self.family.rules[name], self._found().sample
        measure: Measure = LifeMeasure(np.zeros(1)) if rule.is_of_mu else SlopeMeasure()

        def customary(value: Array) -> Array:
            mu = sample.shift + sample.spread * value if rule.is_of_mu else np.zeros_like(value)
            sigma = np.ones_like(value) if rule.is_of_mu else sample.spread * np.exp(-value)
            return np.array([rule.of(*pair) for pair in zip(mu.tolist(), sigma.tolist(), strict=True)])

        return self._ends(measure, customary, 0.0, (kind, side, confidence), falling=rule is Rule.SIGMA)

    @cached_property
    def bounder(self) -> Bounder:
        """The bounds of this fit's estimate, which keep what they have once computed."""
        return Bounder(self._found(), self.data, self.proceed)

    def _ends(
        self,
        measure: Measure,
        to_reading: Callable[[Array], Array],
        asked: ArrayLike,
        bound: tuple[str, str, float],
        *,
        falling: bool = False,
    ) -> Ends:
        kind, side, confidence = bound
        check_bound(kind, side, confidence)
        tail, lowest = tail_of(side, confidence), 1.0 if falling else -1.0
        return reading_ends(
            lambda sign: to_reading(self.bounder.end(measure, kind, tail, sign)), asked, side, lowest=lowest
        )

    def _cautions_below_zero(self) -> tuple[Caution, ...]:
        first = self.data.first_failure
        if self.family.of_log_life or first is None or first <= 0:
            return ()
        return cautions_of_share_below_zero(float(self.failure_probability(0.0)))

    def _found(self) -> Estimate:
        if self.estimate is None:
            raise NoEstimate(self.outcome.caution.text)
        return self.estimate

    def _z(self, fraction: ArrayLike) -> Array:
        fractions = np.atleast_1d(np.asarray(fraction, dtype=np.float64))
        if not ((fractions > 0) & (fractions < 1)).all():
            raise DataError(["A fraction failed must lie between 0 and 1, both excluded: B10 is 0.10."])
        return self.family.standard.quantile(fractions)

    def _y(self, age: ArrayLike) -> Array:
        ages = np.atleast_1d(np.asarray(age, dtype=np.float64))
        life_scale = self.family.life_scale
        if not life_scale.admits(ages).all():
            kind = "positive" if np.isfinite(life_scale.origin) else "finite"
            raise DataError([f"An age must be a {kind} number."])
        return self._found().sample.to_y(ages)

    def score(self, age: ArrayLike) -> Array:
        """Return z at `age`, always as an array."""
        found = self._found()
        return found.a + found.b * self._y(age)

    def _age_of(self, y: Array) -> Array:
        return self._found().sample.to_age(y)

    def score_measure(self, age: ArrayLike) -> ScoreMeasure:
        """Return z at `age` as a measure to be bounded."""
        return ScoreMeasure(self._y(age))

    def hazard_measure(self, age: ArrayLike) -> HazardMeasure:
        """Return the logarithm of the hazard at `age` as a measure to be bounded."""
        return HazardMeasure(self._y(age), self.family.standard)

    def hazard_of(self, age: ArrayLike) -> Callable[[Array], Array]:
        """Return the function that turns the hazard measure at `age` into a hazard rate."""
        log_slope = self._found().sample.log_slope_at(self._y(age))
        return lambda log_hazard: np.exp(log_hazard + log_slope)


def reading_ends(end: Callable[[float], Array], asked: ArrayLike, side: str, *, lowest: float) -> Ends:
    """Return (lower, upper) of a reading from the ends that are needed; `lowest` is the sign of its lower end."""
    with np.errstate(over="ignore", under="ignore"):
        lower = None if side == "upper" else _like(asked, end(lowest))
        upper = None if side == "lower" else _like(asked, end(-lowest))
    return lower, upper


def _point(found: Estimate) -> tuple[Array, Array]:
    return np.array([found.a]), np.array([found.b])


def _like(asked: ArrayLike, values: Array) -> Number:
    return float(values[0]) if np.ndim(asked) == 0 else values
