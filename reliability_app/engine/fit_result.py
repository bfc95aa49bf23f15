"""Fit: the frozen result of a fit, and the questions it answers."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reliability_app.engine.asking import Asking, FurtherQuestions
from reliability_app.engine.bounds import Bounder, Proceed
from reliability_app.engine.cautions import Caution
from reliability_app.engine.errors import BoundUnavailable, DataError, NoEstimate
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.existence import Outcome
from reliability_app.engine.families import Family, Rule
from reliability_app.engine.fit_cautions import (
    caution_of_assumed_shape,
    cautions_of_fit,
    cautions_of_share_below_zero,
)
from reliability_app.engine.further_questions import PlainFurtherQuestions
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import (
    HazardMeasure,
    LifeMeasure,
    Measure,
    ScoreMeasure,
    SlopeMeasure,
)
from reliability_app.engine.question import Question
from reliability_app.engine.sample import Sample

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Fit(Asking):
    """A family fitted to life data, or the named reason why it could not be.

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

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """What must be known before relying on anything read off this fit."""
        if self.estimate is None:
            return (self.outcome.caution,)
        assumed = (caution_of_assumed_shape(self.family),) if self.given_shape is not None else ()
        return cautions_of_fit(self.data) + assumed + self._cautions_below_zero()

    def mean_life(self) -> float:
        """Return the mean life of the fitted distribution; infinite where its tail is too heavy for one."""
        found = self._found()
        return self.family.mean_life(found.mu, found.sigma)

    def score(self, age: ArrayLike) -> Array:
        """Return z at `age`, always as an array."""
        found = self._found()
        return found.a + found.b * self._y(age)

    def score_measure(self, age: ArrayLike) -> ScoreMeasure:
        """Return z at `age` as a measure to be bounded."""
        return ScoreMeasure(self._y(age))

    def hazard_measure(self, age: ArrayLike) -> HazardMeasure:
        """Return the logarithm of the hazard at `age` as a measure to be bounded."""
        return HazardMeasure(self._y(age), self.family.standard)

    def hazard_of(self, age: ArrayLike) -> Callable[[Array], Array]:
        """Return the function that turns the hazard measure at `age` into a hazard rate."""
        log_slope = self._sample.log_slope_at(self._y(age))
        return lambda log_hazard: np.exp(log_hazard + log_slope)

    @cached_property
    def bounder(self) -> Bounder:
        """The bounds of this fit's estimate, which keep what they have once computed."""
        return Bounder(self._found(), self.data, self.proceed)

    @property
    def _further(self) -> FurtherQuestions:
        floor = 0.0 if self._starts_at_zero or self.data.lower.min() >= 0 else -np.inf
        return PlainFurtherQuestions(self._found(), self.bounder, floor)

    @property
    def _starts_at_zero(self) -> bool:
        return self.family.of_log_life

    def _question(self, measure: Measure, to_reading: Callable[[Array], Array], *, falling: bool = False) -> Question:
        found = self._found()
        point = np.array([found.a]), np.array([found.b])

        def end(kind: str, tail: float, sign: float) -> Array:
            return self.bounder.end(measure, kind, tail, sign)

        def kinds(kind: str) -> tuple[str, ...]:
            return self.bounder.choices(kind, measure)

        return Question(lambda: measure.terms(*point).value, end, to_reading, kinds, falling)

    def _life_question(self, fractions: Array) -> Question:
        return self._question(LifeMeasure(self.family.standard.quantile(fractions)), self._sample.to_age)

    def _reliability_question(self, ages: Array) -> Question:
        return self._question(self.score_measure(ages), self.family.standard.survival, falling=True)

    def _hazard_question(self, ages: Array) -> Question:
        return self._question(self.hazard_measure(ages), self.hazard_of(ages))

    def _parameter_question(self, name: str) -> Question:
        rule, sample = self.family.rules[name], self._sample
        if name == "shape" and self.given_shape is not None:
            raise BoundUnavailable("The shape was given and not estimated, so it has no bound.")
        measure: Measure = LifeMeasure(np.zeros(1)) if rule.is_of_mu else SlopeMeasure()

        def customary(value: Array) -> Array:
            mu = sample.shift + sample.spread * value if rule.is_of_mu else np.zeros_like(value)
            sigma = np.ones_like(value) if rule.is_of_mu else sample.spread * np.exp(-value)
            return np.array([rule.of(*pair) for pair in zip(mu.tolist(), sigma.tolist(), strict=True)])

        return self._question(measure, customary, falling=rule is Rule.SIGMA)

    def _parameter(self, name: str) -> float | None:
        if name == "shape" and self.given_shape is not None:
            return self.given_shape
        return None if self.estimate is None else self.family.rules[name].of(self.estimate.mu, self.estimate.sigma)

    def _standard_error(self, name: str) -> float | None:
        if self.estimate is None or (name == "shape" and self.given_shape is not None):
            return None
        rule, error = self.family.rules[name], np.sqrt(np.diagonal(self.estimate.covariance))
        value = rule.of(self.estimate.mu, self.estimate.sigma)
        return float(error[0 if rule.is_of_mu else 1] * (value if rule.is_logarithmic else 1.0))

    def _ages(self, age: ArrayLike) -> Array:
        ages = np.atleast_1d(np.asarray(age, dtype=np.float64))
        life_scale = self.family.life_scale
        if not life_scale.admits(ages).all():
            kind = "positive" if np.isfinite(life_scale.origin) else "finite"
            raise DataError([f"An age must be a {kind} number."])
        return ages

    def _y(self, age: ArrayLike) -> Array:
        return self._sample.to_y(self._ages(age))

    def _cdf(self, ages: Array) -> Array:
        return self.family.standard.cdf(self.score(ages))

    def _survival(self, ages: Array) -> Array:
        return self.family.standard.survival(self.score(ages))

    def _density(self, ages: Array) -> Array:
        found, y = self._found(), self._y(ages)
        with np.errstate(over="ignore"):  # a short tail: the density there is 0
            log_density = self.family.standard.log_density(found.a + found.b * y).value
        return np.asarray(found.b * np.exp(log_density + found.sample.log_slope_at(y)))

    def _cautions_below_zero(self) -> tuple[Caution, ...]:
        first = self.data.first_failure
        if self.family.of_log_life or first is None or first <= 0:
            return ()
        return cautions_of_share_below_zero(float(self.failure_probability(0.0)))

    @property
    def _sample(self) -> Sample:
        return self._found().sample

    def _found(self) -> Estimate:
        if self.estimate is None:
            raise NoEstimate(self.outcome.caution.text)
        return self.estimate
