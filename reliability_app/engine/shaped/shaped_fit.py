"""ShapedFit: the result of a fit with a further parameter, which answers the same questions as any other."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import expit

from reliability_app.engine.asking import FurtherQuestions
from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import OPPOSITE_SIDE, tail_of
from reliability_app.engine.cautions import Caution
from reliability_app.engine.curves import Curve
from reliability_app.engine.errors import BoundUnavailable, DataError, NoEstimate
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import Derivatives, StandardDistribution
from reliability_app.engine.fit_cautions import cautions_of_fit
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.question import Question
from reliability_app.engine.shaped.further_shaped import ShapedFurtherQuestions
from reliability_app.engine.shaped.measures import (
    ShapedCoordinate,
    ShapedHazard,
    ShapedLife,
    ShapedMeasure,
    ShapedReliability,
)
from reliability_app.engine.shaped.shaped_bounder import ShapedBounder
from reliability_app.engine.shaped.shaped_cautions import cautions_of_shape
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate
from reliability_app.engine.shaped.sheaf import Coordinate, Sheaf

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class ShapedFit(Fit):
    """A family with a further parameter fitted to life data, or the named reason why it could not be.

    Wald bounds are formed on ln of a life (on the life itself where there is a threshold), on the log odds of a
    reliability, on the logarithm of a hazard and on the coordinates that `covariance` belongs to. Exact and calibrated
    bounds are refused; automatic stands for the likelihood ratio.

    Attributes
    ----------
    family : ShapedFamily
    shaped : ShapedEstimate or None
        In the place of `estimate`, which is always None.
    no_estimate : Caution or None
        The reason in words where there is no estimate.
    """

    shaped: ShapedEstimate | None = None
    no_estimate: Caution | None = None

    @property
    def converged(self) -> bool:
        """True where an estimate exists and was reached."""
        return self.shaped is not None

    def _parameter(self, name: str) -> float | None:
        if self.shaped is None:
            return None
        if self.shaped.is_edge and name == "threshold":
            return self.data.first_failure
        coordinate, measure = self._coordinate(name)
        return float(coordinate.parameter(self.shaped.value(measure))[0])

    def _standard_error(self, name: str) -> float | None:
        value = self._parameter(name)
        if self.shaped is None or value is None or self.shaped.is_edge:
            return None
        coordinate, measure = self._coordinate(name)
        return float(self.shaped.errors(measure)[0]) * (value if coordinate.is_logarithm else 1.0)

    @property
    def coordinates(self) -> tuple[str, ...]:
        """The coordinates to which `covariance` belongs."""
        if self.shaped is None:
            return ()
        return tuple(coordinate.title for coordinate in self.shaped.sheaf.coordinates)

    @property
    def covariance(self) -> Array | None:
        """Inverse observed information of `coordinates`."""
        return None if self.shaped is None or self.shaped.is_edge else self.shaped.covariance

    @property
    def log_likelihood(self) -> float | None:
        """Log-likelihood of the lives themselves, quantities counted."""
        return None if self.shaped is None else self.shaped.log_likelihood

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """What must be known before relying on anything read off this fit."""
        if self.shaped is None:
            return (self._reason,)
        return cautions_of_fit(self.data) + cautions_of_shape(self.shaped)

    @property
    def _reason(self) -> Caution:
        return self.outcome.caution if self.no_estimate is None else self.no_estimate

    def mean_life(self) -> float:
        """Return the mean life of the fitted distribution; infinite where its tail is too heavy for one."""
        found = self._shaped()
        return found.sheaf.mean_life(*found.point.tolist())

    def score(self, age: ArrayLike) -> Array:
        """Return z at `age`, always as an array; minus infinity where no life can be so short."""
        return self._z_at(self._ages(age))

    def probability_curves(self, ages: Array, *, confidence: float, side: str, kind: str) -> tuple[Curve, Curve]:
        """Return the failure probability and the reliability over age; `side` is that of the failure probability."""
        measure = ShapedReliability(self._shaped().sheaf, ages)
        lower, upper = self._band(measure, (kind, OPPOSITE_SIDE[side], confidence))
        failure = (None if edge is None else np.asarray(expit(-edge)) for edge in (upper, lower))
        survival = (None if edge is None else _from_odds(edge) for edge in (lower, upper))
        return (
            Curve(ages, self._cdf(ages), *failure),
            Curve(ages, self._survival(ages), *survival),
        )

    def hazard_curve(self, ages: Array, *, confidence: float, side: str, kind: str) -> Curve:
        """Return the hazard rate over age; `side` is that of the hazard."""
        band = self._band(ShapedHazard(self._shaped().sheaf, ages), (kind, side, confidence))
        with np.errstate(over="ignore"):
            edges = [None if edge is None else np.exp(edge) for edge in band]
        return Curve(ages, np.asarray(self.hazard(ages)), *edges)

    @cached_property
    def shaped_bounder(self) -> ShapedBounder:
        """The bounds of this fit's estimate, which keep what they have once computed."""
        return ShapedBounder(self._shaped(), self.family.title)

    @property
    def _further(self) -> FurtherQuestions:
        return ShapedFurtherQuestions(self._shaped(), self.shaped_bounder)

    @property
    def _starts_at_zero(self) -> bool:
        return True

    def _shaped_question(
        self, measure: ShapedMeasure, to_reading: Callable[[Array], Array], *, falling: bool = False
    ) -> Question:
        found = self._shaped()

        def end(kind: str, tail: float, sign: float) -> Array:
            return self.shaped_bounder.end(measure, kind, tail, sign)

        return Question(lambda: found.value(measure), end, to_reading, self.shaped_bounder.choices, falling)

    def _life_question(self, fractions: Array) -> Question:
        sheaf = self._shaped().sheaf
        return self._shaped_question(ShapedLife(sheaf, fractions), sheaf.age_of)

    def _reliability_question(self, ages: Array) -> Question:
        return self._shaped_question(ShapedReliability(self._shaped().sheaf, ages), _from_odds)

    def _hazard_question(self, ages: Array) -> Question:
        return self._shaped_question(ShapedHazard(self._shaped().sheaf, ages), np.exp)

    def _parameter_question(self, name: str) -> Question:
        coordinate, measure = self._coordinate(name)
        return self._shaped_question(measure, coordinate.parameter, falling=coordinate.falls)

    def _band(self, measure: ShapedMeasure, bound: tuple[str, str, float]) -> tuple[Array | None, Array | None]:
        """Return the edges of a band of a measure; None on an open side, and where this kind does not exist."""
        kind, side, confidence = bound
        check_bound(kind, side, confidence)
        tail, bounder = tail_of(side, confidence), self.shaped_bounder
        try:
            lower = None if side == "upper" else bounder.band_end(measure, kind, tail, -1.0)
            upper = None if side == "lower" else bounder.band_end(measure, kind, tail, 1.0)
        except BoundUnavailable:
            return None, None
        return lower, upper

    def _coordinate(self, name: str) -> tuple[Coordinate, ShapedCoordinate]:
        sheaf: Sheaf = self._shaped().sheaf
        place = next(place for place, entry in enumerate(sheaf.coordinates) if entry.name == name)
        return sheaf.coordinates[place], ShapedCoordinate(sheaf, place)

    def _z_at(self, ages: Array) -> Array:
        found = self._shaped()
        a, b, kappa = found.point
        return np.asarray(a + b * found.sheaf.to_y(ages, np.full_like(ages, kappa)))

    def _standard(self, z: Array) -> StandardDistribution:
        found = self._shaped()
        return found.sheaf.standard(np.full_like(z, found.point[2]))

    def _log_tail(self, ages: Array, *, upper: bool) -> Array:
        z = self._z_at(ages)
        inside = np.isfinite(z)
        safe = np.where(inside, z, 0.0)
        tail: Derivatives = (self._standard(z).log_survival if upper else self._standard(z).log_cdf)(safe)
        return np.where(inside, tail.value, 0.0 if upper else -np.inf)

    def _cdf(self, ages: Array) -> Array:
        return np.exp(self._log_tail(ages, upper=False))

    def _survival(self, ages: Array) -> Array:
        return np.exp(self._log_survival(ages))

    def _log_survival(self, ages: Array) -> Array:
        return self._log_tail(ages, upper=True)

    def _density(self, ages: Array) -> Array:
        found = self._shaped()
        _, b, kappa = found.point
        z = self._z_at(ages)
        inside = np.isfinite(z)
        value = self._standard(z).log_density(np.where(inside, z, 0.0)).value
        slope = found.sheaf.log_slope_at(ages, np.full_like(ages, kappa))
        return np.where(inside, b * np.exp(value + np.where(inside, slope, 0.0)), 0.0)

    def _ages(self, age: ArrayLike) -> Array:
        ages = np.atleast_1d(np.asarray(age, dtype=np.float64))
        if not ((ages > 0) & np.isfinite(ages)).all():
            raise DataError(["An age must be a positive number."])
        return ages

    def _shaped(self) -> ShapedEstimate:
        if self.shaped is None:
            raise NoEstimate(self._reason.text)
        return self.shaped

    def _found(self) -> Estimate:
        self._shaped()
        raise BoundUnavailable(f"This is not known for the {self.family.title} family.")


def _from_odds(log_odds: Array) -> Array:
    """Return the reliability of log odds."""
    return np.asarray(expit(log_odds))
