"""Asking: the questions that every fit answers, whatever it was estimated with.

A fit says how each question becomes a smooth measure with an estimate and ends of bounds (a Question); what can be
asked, and what may be asked about, is written once, here.
"""

from __future__ import annotations

from abc import ABC, abstractmethod

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reliability_app.engine.errors import DataError, UnknownName
from reliability_app.engine.families import Family
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.methods import MAXIMUM_LIKELIHOOD
from reliability_app.engine.question import Ends, Number, Question, like

Array = NDArray[np.float64]


class FurtherQuestions(ABC):
    """The questions about more than one point of the distribution."""

    @abstractmethod
    def conditional(self, ages: Array, given: float) -> Question:
        """Return the question for the share still running at some ages of those running at `given`."""

    @abstractmethod
    def residual(self, ages: Array) -> Question:
        """Return the question for mean residual lives."""

    @abstractmethod
    def mean(self) -> Question:
        """Return the question for the mean life."""

    @abstractmethod
    def mode(self) -> Question:
        """Return the question for the age of the highest density."""

    @abstractmethod
    def hazard_age(self, rates: Array) -> Question:
        """Return the question for the first ages at which the hazard reaches some rates."""


class Asking(ABC):
    """The questions that a fit answers.

    Ages are in the unit of the data. A question takes a number or an array and answers in kind. Bounds come as
    (lower, upper) with None on an open side; `confidence` is that of the statement made: 0.95 with side="lower" is a
    one-sided 95 % bound, with side="two" each tail holds 2.5 %. Kinds: "automatic",
    "calibrated", "likelihood", "wald", "exact".
    """

    data: LifeData
    family: Family

    @property
    @abstractmethod
    def log_likelihood(self) -> float | None:
        """Log-likelihood of the lives themselves, quantities counted."""

    @property
    def method(self) -> str:
        """The method of estimation, one of `METHODS`."""
        return MAXIMUM_LIKELIHOOD

    @property
    def given_shape(self) -> float | None:
        """The shape where the user gave it, so that only the scale was estimated."""
        return self.family.given_shape

    @property
    def has_zero_failure_bound(self) -> bool:
        """True where bounds exist although no unit has failed."""
        return False

    @property
    def parameters(self) -> dict[str, float | None]:
        """Customary parameters by name; None for each where there is no estimate."""
        return {name: self._parameter(name) for name in self.family.parameter_names}

    @property
    def standard_errors(self) -> dict[str, float | None]:
        """Standard errors of the customary parameters, by the delta method; None where no error can be given."""
        return {name: self._standard_error(name) for name in self.family.parameter_names}

    @property
    def aicc(self) -> float | None:
        """Akaike's criterion with the small-sample term (Hurvich & Tsai 1989, Biometrika 76, 297-307).

        None also where there are no more units than parameters + 1, for which it is not defined.
        """
        count, units = self.family.parameter_count, self.data.unit_count
        if self.log_likelihood is None or units <= count + 1:
            return None
        return -2.0 * self.log_likelihood + 2.0 * count * units / (units - count - 1)

    @property
    def bic(self) -> float | None:
        """Schwarz's criterion (1978, Ann. Statist. 6, 461-464), a parameter costing the logarithm of all units."""
        if self.log_likelihood is None:
            return None
        return -2.0 * self.log_likelihood + self.family.parameter_count * float(np.log(self.data.unit_count))

    def life(self, fraction: ArrayLike) -> Number:
        """Return the age by which `fraction` of the units have failed (0.10: the B10 life)."""
        return _answer(self.life_question(fraction), fraction)

    def life_question(self, fraction: ArrayLike) -> Question:
        """Return the question for the life at `fraction`."""
        return self._life_question(_fractions(fraction))

    def life_bounds(
        self, fraction: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the life at `fraction`."""
        return _bounds(self.life_question(fraction), fraction, (kind, side, confidence))

    def failure_probability(self, age: ArrayLike) -> Number:
        """Return the share of units that have failed by `age`."""
        return like(age, self._cdf(self._ages(age)))

    def reliability(self, age: ArrayLike) -> Number:
        """Return the share of units still running at `age`."""
        return like(age, self._survival(self._ages(age)))

    def reliability_question(self, age: ArrayLike) -> Question:
        """Return the question for the reliability at `age`."""
        return self._reliability_question(self._ages(age))

    def reliability_bounds(
        self, age: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the reliability at `age`."""
        return _bounds(self.reliability_question(age), age, (kind, side, confidence))

    def hazard(self, age: ArrayLike) -> Number:
        """Return the hazard rate at `age`, failures per unit and unit of age."""
        return _answer(self.hazard_question(age), age)

    def hazard_question(self, age: ArrayLike) -> Question:
        """Return the question for the hazard rate at `age`."""
        return self._hazard_question(self._ages(age))

    def hazard_bounds(
        self, age: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the hazard rate at `age`."""
        return _bounds(self.hazard_question(age), age, (kind, side, confidence))

    def density(self, age: ArrayLike) -> Number:
        """Return the probability density at `age`, per unit of age."""
        return like(age, self._density(self._ages(age)))

    def conditional_reliability(self, age: ArrayLike, *, given: float) -> Number:
        """Return the share of the units running at `given` that are still running at `age` (age >= given)."""
        return _answer(self.conditional_question(age, given=given), age)

    def conditional_question(self, age: ArrayLike, *, given: float) -> Question:
        """Return the question for the reliability at `age` of the units running at `given`."""
        return self._further.conditional(_ages_beyond(age, given), given)

    def conditional_reliability_bounds(
        self,
        age: ArrayLike,
        *,
        given: float,
        confidence: float = 0.95,
        side: str = "lower",
        kind: str = "likelihood",
    ) -> Ends:
        """Return the bounds of the reliability at `age` of the units running at `given`.

        A Wald bound is formed on the logarithm of the hazard accumulated between the two ages.
        """
        return _bounds(self.conditional_question(age, given=given), age, (kind, side, confidence))

    def mean_residual_life(self, age: ArrayLike) -> Number:
        """Return the mean of the life still to come of the units running at `age`; infinite where there is none."""
        return _answer(self.residual_question(age), age)

    def residual_question(self, age: ArrayLike) -> Question:
        """Return the question for the mean residual life at `age`."""
        return self._further.residual(_arrived(age, self._starts_at_zero))

    def mean_residual_life_bounds(
        self, age: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the mean residual life at `age`; an infinite end is one that the units leave open."""
        return _bounds(self.residual_question(age), age, (kind, side, confidence))

    @abstractmethod
    def mean_life(self) -> float:
        """Return the mean life of the fitted distribution; infinite where its tail is too heavy for one."""

    def mean_life_bounds(self, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood") -> Ends:
        """Return the bounds of the mean life, not below 0 where no life is, infinite where the units leave it open."""
        return _bounds(self.mean_question(), 0.0, (kind, side, confidence))

    def mean_question(self) -> Question:
        """Return the question for the mean life."""
        return self._further.mean()

    def mode(self) -> float:
        """Return the age of the highest density; 0 where the density falls from the start."""
        return float(self.mode_question().reading()[0])

    def mode_question(self) -> Question:
        """Return the question for the mode."""
        return self._further.mode()

    def mode_bounds(self, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood") -> Ends:
        """Return the bounds of the mode."""
        return _bounds(self.mode_question(), 0.0, (kind, side, confidence))

    def age_at_hazard(self, rate: ArrayLike) -> Number:
        """Return the first age at which the hazard reaches `rate`, in failures per unit and unit of age.

        0 where the hazard starts at or above the rate; infinite where it never reaches it.
        """
        return _answer(self.hazard_age_question(rate), rate)

    def hazard_age_question(self, rate: ArrayLike) -> Question:
        """Return the question for the first age at which the hazard reaches `rate`."""
        return self._further.hazard_age(_rates(rate))

    def age_at_hazard_bounds(
        self, rate: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the first age at which the hazard reaches `rate`.

        What is bounded is the first crossing, taken as infinite where the hazard never reaches the rate. An age is
        left out where the hazard at it cannot be the rate: the constraint of a bound of the hazard at that age. So the
        lower end is the first age at which the upper bound of the hazard reaches the rate; where the hazard rises
        throughout, the upper end is the age at which its lower bound does. Where a hazard that rises and falls
        (lognormal, loglogistic, Frechet) may stay below the rate altogether, the upper end is infinite.

        Raises
        ------
        BoundUnavailable
            For a Wald bound where the age is 0 or infinite by this fit.
        """
        return _bounds(self.hazard_age_question(rate), rate, (kind, side, confidence))

    def parameter_bounds(
        self, name: str, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of one customary parameter."""
        if name not in self.family.parameter_names:
            names = ", ".join(self.family.parameter_names)
            raise UnknownName(f"{self.family.title} has no parameter called {name!r}. It has: {names}.")
        return _bounds(self._parameter_question(name), 0.0, (kind, side, confidence))

    @property
    @abstractmethod
    def _further(self) -> FurtherQuestions:
        """The questions about more than one point of the distribution."""

    @property
    @abstractmethod
    def _starts_at_zero(self) -> bool:
        """True for a family all of whose lives are positive."""

    @abstractmethod
    def _parameter(self, name: str) -> float | None:
        """Return a customary parameter; None where there is no estimate."""

    @abstractmethod
    def _standard_error(self, name: str) -> float | None:
        """Return the standard error of a customary parameter; None where none can be given."""

    @abstractmethod
    def _ages(self, age: ArrayLike) -> Array:
        """Return ages as an array; raise DataError for any that no question can be about."""

    @abstractmethod
    def _cdf(self, ages: Array) -> Array:
        """Return the shares failed by some ages."""

    @abstractmethod
    def _survival(self, ages: Array) -> Array:
        """Return the shares still running at some ages."""

    @abstractmethod
    def _density(self, ages: Array) -> Array:
        """Return the densities at some ages."""

    @abstractmethod
    def _life_question(self, fractions: Array) -> Question:
        """Return the question for lives."""

    @abstractmethod
    def _reliability_question(self, ages: Array) -> Question:
        """Return the question for reliabilities."""

    @abstractmethod
    def _hazard_question(self, ages: Array) -> Question:
        """Return the question for hazards."""

    @abstractmethod
    def _parameter_question(self, name: str) -> Question:
        """Return the question for a customary parameter."""


def _answer(question: Question, asked: ArrayLike) -> Number:
    return like(asked, question.reading())


def _bounds(question: Question, asked: ArrayLike, bound: tuple[str, str, float]) -> Ends:
    kind, side, confidence = bound
    return question.bounds(confidence=confidence, side=side, kind=kind).ends(asked)


def _fractions(fraction: ArrayLike) -> Array:
    fractions = np.atleast_1d(np.asarray(fraction, dtype=np.float64))
    if not ((fractions > 0) & (fractions < 1)).all():
        raise DataError(["A fraction failed must lie between 0 and 1, both excluded: B10 is 0.10."])
    return fractions


def _ages_beyond(age: ArrayLike, given: float) -> Array:
    ages = np.atleast_1d(np.asarray(age, dtype=np.float64))
    if (ages < given).any():
        raise DataError([f"A conditional reliability needs an age of at least the age reached ({given:g})."])
    return ages


def _arrived(age: ArrayLike, starts_at_zero: bool) -> Array:
    ages = np.atleast_1d(np.asarray(age, dtype=np.float64))
    if starts_at_zero and (ages < 0).any():
        raise DataError(["A mean residual life is asked at an age of 0 or more."])
    return ages


def _rates(rate: ArrayLike) -> Array:
    rates = np.atleast_1d(np.asarray(rate, dtype=np.float64))
    if not ((rates > 0) & np.isfinite(rates)).all():
        raise DataError(["A hazard must be a positive number: failures per unit and unit of age."])
    return rates
