"""ShapedFit: the result of a fit with a further parameter, which answers the same questions as any other."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import expit

from reliability_app.engine.bounds import check_bound
from reliability_app.engine.bounds.kinds import OPPOSITE_SIDE, tail_of
from reliability_app.engine.cautions import Caution
from reliability_app.engine.curves import Curve
from reliability_app.engine.errors import BoundUnavailable, DataError, NoEstimate, UnknownName
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import Derivatives, StandardDistribution
from reliability_app.engine.fit_cautions import cautions_of_fit
from reliability_app.engine.fit_result import Ends, Fit, Number, reading_ends
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

    @property
    def parameters(self) -> dict[str, float | None]:
        """Customary parameters by name; None for each where there is no estimate."""
        return {name: self._parameter(name) for name in self.family.parameter_names}

    def _parameter(self, name: str) -> float | None:
        if self.shaped is None:
            return None
        if self.shaped.is_edge and name == "threshold":
            return self.data.first_failure
        coordinate, measure = self._coordinate(name)
        return float(coordinate.parameter(self.shaped.value(measure))[0])

    @property
    def standard_errors(self) -> dict[str, float | None]:
        """Standard errors of the customary parameters, by the delta method; None where no error can be given."""
        return {name: self._standard_error(name) for name in self.family.parameter_names}

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

    @property
    def aicc(self) -> float | None:
        """Akaike's criterion with the small-sample term, as for every family."""
        count, units = self.family.parameter_count, self.data.unit_count
        if self.shaped is None or units <= count + 1:
            return None
        return -2.0 * self.shaped.log_likelihood + 2.0 * count * units / (units - count - 1)

    @property
    def bic(self) -> float | None:
        """Schwarz's criterion, as for every family."""
        if self.shaped is None:
            return None
        return -2.0 * self.shaped.log_likelihood + self.family.parameter_count * float(np.log(self.data.unit_count))

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """What must be known before relying on anything read off this fit."""
        if self.shaped is None:
            return (self._reason,)
        return cautions_of_fit(self.data) + cautions_of_shape(self.shaped)

    @property
    def _reason(self) -> Caution:
        return self.outcome.caution if self.no_estimate is None else self.no_estimate

    def life(self, fraction: ArrayLike) -> Number:
        """Return the age by which `fraction` of the units have failed (0.10: the B10 life)."""
        found = self._shaped()
        return _like(fraction, found.sheaf.age_of(found.value(self._life_measure(fraction))))

    def life_bounds(
        self, fraction: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the life at `fraction`."""
        measure = self._life_measure(fraction)
        return self._bounds(measure, measure.sheaf.age_of, fraction, (kind, side, confidence))

    def failure_probability(self, age: ArrayLike) -> Number:
        """Return the share of units that have failed by `age`."""
        return _like(age, np.exp(self._log_cdf(_ages(age))))

    def reliability(self, age: ArrayLike) -> Number:
        """Return the share of units still running at `age`."""
        return _like(age, np.exp(self._log_survival(_ages(age))))

    def reliability_bounds(
        self, age: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the reliability at `age`."""
        measure = ShapedReliability(self._shaped().sheaf, _ages(age))
        return self._bounds(measure, _from_odds, age, (kind, side, confidence))

    def hazard(self, age: ArrayLike) -> Number:
        """Return the hazard rate at `age`, failures per unit and unit of age."""
        found = self._shaped()
        return _like(age, np.exp(found.value(ShapedHazard(found.sheaf, _ages(age)))))

    def hazard_bounds(
        self, age: ArrayLike, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of the hazard rate at `age`."""
        return self._bounds(ShapedHazard(self._shaped().sheaf, _ages(age)), np.exp, age, (kind, side, confidence))

    def density(self, age: ArrayLike) -> Number:
        """Return the probability density at `age`, per unit of age."""
        found, ages = self._shaped(), _ages(age)
        _, b, kappa = found.point
        z = self._z_at(ages)
        inside = np.isfinite(z)
        value = self._standard(z).log_density(np.where(inside, z, 0.0)).value
        slope = found.sheaf.log_slope_at(ages, np.full_like(ages, kappa))
        return _like(age, np.where(inside, b * np.exp(value + np.where(inside, slope, 0.0)), 0.0))

    def mean_life(self) -> float:
        """Return the mean life of the fitted distribution; infinite where its tail is too heavy for one."""
        found = self._shaped()
        return found.sheaf.mean_life(*found.point.tolist())

    def conditional_reliability(self, age: ArrayLike, *, given: float) -> Number:
        """Return the share of the units running at `given` that are still running at `age` (age >= given)."""
        ages = _ages(age)
        if (ages < given).any():
            raise DataError([f"A conditional reliability needs an age of at least the age reached ({given:g})."])
        return _like(age, np.exp(self._log_survival(ages) - self._log_survival(_ages(given))))

    def bound_used(self, kind: str, *, of_hazard: bool = False) -> str:  # noqa: ARG002 - one for all readings
        """Return the kind of bound that `kind` stands for here: "automatic" is the likelihood ratio."""
        return "likelihood" if kind == "automatic" else kind

    def parameter_bounds(
        self, name: str, *, confidence: float = 0.95, side: str = "lower", kind: str = "likelihood"
    ) -> Ends:
        """Return the bounds of one customary parameter."""
        coordinate, measure = self._coordinate(name)
        bound = (kind, side, confidence)
        return self._bounds(measure, coordinate.parameter, 0.0, bound, falling=coordinate.falls)

    def score(self, age: ArrayLike) -> Array:
        """Return z at `age`, always as an array; minus infinity where no life can be so short."""
        return self._z_at(_ages(age))

    def probability_curves(self, ages: Array, *, confidence: float, side: str, kind: str) -> tuple[Curve, Curve]:
        """Return the failure probability and the reliability over age; `side` is that of the failure probability."""
        measure = ShapedReliability(self._shaped().sheaf, ages)
        lower, upper = self._band(measure, (kind, OPPOSITE_SIDE[side], confidence))
        failure = (None if edge is None else np.asarray(expit(-edge)) for edge in (upper, lower))
        survival = (None if edge is None else _from_odds(edge) for edge in (lower, upper))
        return (
            Curve(ages, np.exp(self._log_cdf(ages)), *failure),
            Curve(ages, np.exp(self._log_survival(ages)), *survival),
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

    def _bounds(
        self,
        measure: ShapedMeasure,
        to_reading: Callable[[Array], Array],
        asked: ArrayLike,
        bound: tuple[str, str, float],
        *,
        falling: bool = False,
    ) -> Ends:
        kind, side, confidence = bound
        check_bound(kind, side, confidence)
        tail, bounder = tail_of(side, confidence), self.shaped_bounder
        return reading_ends(
            lambda sign: to_reading(bounder.end(measure, kind, tail, sign)),
            asked,
            side,
            lowest=1.0 if falling else -1.0,
        )

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
        if name not in self.family.parameter_names:
            names = ", ".join(self.family.parameter_names)
            raise UnknownName(f"{self.family.title} has no parameter called {name!r}. It has: {names}.")
        sheaf: Sheaf = self._shaped().sheaf
        place = next(place for place, entry in enumerate(sheaf.coordinates) if entry.name == name)
        return sheaf.coordinates[place], ShapedCoordinate(sheaf, place)

    def _life_measure(self, fraction: ArrayLike) -> ShapedLife:
        fractions = np.atleast_1d(np.asarray(fraction, dtype=np.float64))
        if not ((fractions > 0) & (fractions < 1)).all():
            raise DataError(["A fraction failed must lie between 0 and 1, both excluded: B10 is 0.10."])
        return ShapedLife(self._shaped().sheaf, fractions)

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

    def _log_cdf(self, ages: Array) -> Array:
        return self._log_tail(ages, upper=False)

    def _log_survival(self, ages: Array) -> Array:
        return self._log_tail(ages, upper=True)

    def _shaped(self) -> ShapedEstimate:
        if self.shaped is None:
            raise NoEstimate(self._reason.text)
        return self.shaped

    def _found(self) -> Estimate:
        self._shaped()
        raise BoundUnavailable(f"This is not known for the {self.family.title} family.")


def _ages(age: ArrayLike) -> Array:
    ages = np.atleast_1d(np.asarray(age, dtype=np.float64))
    if not ((ages > 0) & np.isfinite(ages)).all():
        raise DataError(["An age must be a positive number."])
    return ages


def _from_odds(log_odds: Array) -> Array:
    """Return the reliability of log odds."""
    return np.asarray(expit(log_odds))


def _like(asked: ArrayLike, values: Array) -> Number:
    return float(values[0]) if np.ndim(asked) == 0 else values
