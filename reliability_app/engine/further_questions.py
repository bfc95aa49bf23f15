"""The further questions to a location-scale fit: conditional reliability, residual life, mean, mode, hazard age."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.asking import FurtherQuestions
from reliability_app.engine.bounds import Bounder
from reliability_app.engine.concave_integrals import peak
from reliability_app.engine.errors import BoundUnavailable, BoundWithoutEnd, DataError
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import StandardDistribution
from reliability_app.engine.further_measures import (
    ConditionalMeasure,
    FurtherMeasure,
    HazardAgeMeasure,
    MeanMeasure,
    ModeMeasure,
    ResidualMeasure,
)
from reliability_app.engine.life_measures import LifeMeasure, Measure, ScoreMeasure
from reliability_app.engine.line import Line
from reliability_app.engine.question import Question

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class PlainFurtherQuestions(FurtherQuestions):
    """Of one estimate; `floor` is the age below which no life can lie though the family may say so."""

    estimate: Estimate
    bounder: Bounder
    floor: float

    @property
    def _standard(self) -> StandardDistribution:
        return self.estimate.family.standard

    @property
    def _line(self) -> Line:
        return Line.of(self.estimate.sample)

    def conditional(self, ages: Array, given: float) -> Question:
        """Return the question for the share still running at some ages of those running at `given`."""
        start = self._places(np.array([given]))
        same = ages == given
        if not np.isfinite(start[0]):
            # All that have begun: the reliability itself, with every kind of bound that it has.
            first = np.where(same, 1.0, ages)
            return self._plain(
                ScoreMeasure(self._places(first)),
                lambda z: np.where(same, 1.0, self._standard.survival(z)),
                falling=True,
            )
        # Of the age reached itself the answer is known; any later age may stand in.
        y = np.where(same, start + 1.0, self._places(ages))
        measure = ConditionalMeasure(y, np.full_like(y, start[0]), self._standard)
        return self._asked(
            measure, lambda value: np.where(same, 1.0, np.exp(-np.exp(value))), "conditional reliability", falling=True
        )

    def residual(self, ages: Array) -> Question:
        """Return the question for mean residual lives."""
        measure = ResidualMeasure(self._places(ages), self._line, self._standard)
        return self._asked(measure, np.exp, "mean residual life")

    def mean(self) -> Question:
        """Return the question for the mean life."""
        if self.estimate.family.of_log_life:
            return self._asked(MeanMeasure(self._line, self._standard), np.exp, "mean life")
        return self._life_at(np.array([self._standard.mean]))

    def mode(self) -> Question:
        """Return the question for the age of the highest density."""
        if self.estimate.family.of_log_life:
            return self._asked(ModeMeasure(self._line, self._standard), np.exp, "mode")
        zero = np.zeros(1)
        return self._life_at(peak(self._standard.log_density, zero - np.inf, zero, reached=1e-15))

    def hazard_age(self, rates: Array) -> Question:
        """Return the question for the first ages at which the hazard reaches some rates."""
        line = self._line
        measure = HazardAgeMeasure(np.log(rates) + line.offset, float(line.slope), self._standard)
        return self._asked(measure, self._age_of, "age at which the hazard reaches this rate")

    def _places(self, ages: Array) -> Array:
        """Return y of ages; minus infinity for one from which on every life is sure to lie."""
        scale = self.estimate.family.life_scale
        if not np.isfinite(ages).all():
            raise DataError(["An age must be a finite number."])
        inside = ages > scale.origin
        safe = np.where(inside, ages, 1.0)
        return np.where(inside, self.estimate.sample.to_y(safe), -np.inf)

    def _age_of(self, y: Array) -> Array:
        with np.errstate(over="ignore"):
            return np.maximum(self.estimate.sample.to_age(y), self.floor)

    def _life_at(self, z: Array) -> Question:
        return self._plain(LifeMeasure(z), self._age_of)

    def _plain(self, measure: Measure, to_reading: Callable[[Array], Array], *, falling: bool = False) -> Question:
        point = self._point
        return Question(
            lambda: measure.terms(*point).value,
            lambda kind, tail, sign: self.bounder.end(measure, kind, tail, sign),
            to_reading,
            lambda kind: self.bounder.choices(kind, measure),
            falling,
        )

    @property
    def _point(self) -> tuple[Array, Array]:
        return np.array([self.estimate.a]), np.array([self.estimate.b])

    def _asked(
        self, measure: FurtherMeasure, to_reading: Callable[[Array], Array], subject: str, *, falling: bool = False
    ) -> Question:
        def value() -> Array:
            return measure.terms(*self._point).value

        def end(kind: str, tail: float, sign: float) -> Array:
            if self.estimate.b_is_fixed:
                return self._by_location(measure, kind, tail, sign)
            known = np.isfinite(value())
            if kind == "wald" and not known.any():
                raise BoundUnavailable(
                    f"By this fit the {subject} is 0 or infinite, so no Wald bound of it exists: choose the "
                    "likelihood bound."
                )
            # A reading may be infinite at points of the region; a bound that runs there has no end.
            with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
                try:
                    ends = self.bounder.end(measure, kind, tail, sign)
                except BoundWithoutEnd:
                    return np.full(measure.size, sign * np.inf)
                if kind == "wald":
                    return np.where(known, ends, np.nan)
                return self._settled(measure, ends, value(), (tail, sign), subject)

        return Question(value, end, to_reading, lambda kind: self.bounder.choices(kind, measure), falling)

    def _settled(
        self, measure: FurtherMeasure, ends: Array, value: Array, bound: tuple[float, float], subject: str
    ) -> Array:
        """Put right an end without meaning where the reading is 0 or infinite at the estimate, on the other side of it.

        Where it is that all over the likelihood region, its bound is the same.
        """
        tail, sign = bound
        stuck = (value == -sign * np.inf) & (ends == sign * np.inf)
        if not stuck.any():
            return ends
        region = self.bounder.region(-float(ndtri(tail))) if self.estimate.is_concave else None
        if region is None or not region.closed.all():
            raise BoundUnavailable(
                f"By this fit the {subject} is 0 or infinite, and the units set no bound to it on the other side."
            )
        everywhere = (measure.terms(region.a[None], region.b[None]).value == value[:, None]).all(axis=1)
        return np.where(stuck & everywhere, value, ends)

    def _by_location(self, measure: FurtherMeasure, kind: str, tail: float, sign: float) -> Array:
        """Return the ends where only the location is free: the measure at the end of that."""
        way = -sign if measure.rises_with_a else sign
        place = self.bounder.end(LifeMeasure(np.zeros(1)), kind, tail, way)
        b = np.array([self.estimate.b])
        return measure.terms(-place * b, b).value
