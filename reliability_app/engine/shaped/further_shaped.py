"""The further questions to a fit with a further parameter, and their measures."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import Enum

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.asking import FurtherQuestions
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.further_measures import log_accumulated
from reliability_app.engine.likelihood import Terms
from reliability_app.engine.question import Question
from reliability_app.engine.shaped.age_lines import AgeLine, LogLifeLine, ThresholdLine
from reliability_app.engine.shaped.birnbaum_saunders_line import BirnbaumSaundersLine
from reliability_app.engine.shaped.birnbaum_saunders_sheaf import BirnbaumSaundersSheaf
from reliability_app.engine.shaped.falling_start import FallingStart
from reliability_app.engine.shaped.log_life_sheaves import LogLifeSheaf
from reliability_app.engine.shaped.measures import Places, ShapedMeasure
from reliability_app.engine.shaped.shaped_bounder import ShapedBounder
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate
from reliability_app.engine.shaped.sheaf import Sheaf
from reliability_app.engine.shaped.threshold_sheaf import ThresholdSheaf

Array = NDArray[np.float64]


class Reading(Enum):
    """A further reading, by what it is asked with: an age, nothing, a rate."""

    RESIDUAL = "mean residual life"
    MEAN = "mean life"
    MODE = "mode"
    HAZARD_AGE = "age at which the hazard reaches this rate"


def line_of(sheaf: Sheaf) -> AgeLine:
    """Return how the age grows along the line of a sheaf."""
    match sheaf:
        case LogLifeSheaf():
            return LogLifeLine(sheaf)
        case ThresholdSheaf():
            return ThresholdLine(sheaf)
        case BirnbaumSaundersSheaf():
            return BirnbaumSaundersLine(sheaf)
    raise TypeError(f"{type(sheaf).__name__} has no line of ages.")


@dataclass(frozen=True, eq=False)
class ShapedConditional(ShapedMeasure):
    """ln of the hazard accumulated between two ages, `given` and `age`, each of shape (size,)."""

    sheaf: Sheaf
    age: Array
    given: Array

    @property
    def size(self) -> int:
        """How many pairs of ages."""
        return self.age.size

    def at(self, places: Places) -> ShapedConditional:
        """Return the chosen pairs."""
        return ShapedConditional(self.sheaf, self.age[places], self.given[places])

    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the logarithm; minus infinity where no unit fails before `age`."""
        a, b, kappa, age, given = np.broadcast_arrays(a, b, kappa, self.age, self.given)
        started = given > 0 if isinstance(self.sheaf, LogLifeSheaf | BirnbaumSaundersSheaf) else given > -np.inf
        y, before = self.sheaf.to_y(age, kappa), self.sheaf.to_y(np.where(started, given, age), kappa)
        inside = np.isfinite(y)
        before = np.where(started, before, -np.inf)
        found = log_accumulated(self.sheaf.standard(kappa), np.where(inside, y, 0.0), before, a, b)
        return Terms(np.where(inside, found.value, -np.inf), *found.columns()[1:])


@dataclass(frozen=True, eq=False)
class ShapedFurther(ShapedMeasure):
    """A further reading of one kind, asked with ages or rates of shape (size,)."""

    sheaf: Sheaf
    reading: Reading
    asked: Array

    @property
    def size(self) -> int:
        """How many are asked."""
        return self.asked.size

    @property
    def has_corner(self) -> bool:
        """True where the reading may be the threshold itself, which it leaves in a corner."""
        return self.reading in (Reading.MODE, Reading.HAZARD_AGE)

    def at(self, places: Places) -> ShapedFurther:
        """Return the chosen ones."""
        return ShapedFurther(self.sheaf, self.reading, self.asked[places])

    def terms(self, a: Array, b: Array, kappa: Array) -> Terms:
        """Return the reading on its own scale."""
        a, b, kappa, asked = np.broadcast_arrays(a, b, kappa, self.asked)
        line = line_of(self.sheaf)
        match self.reading:
            case Reading.RESIDUAL:
                return line.residual(asked, a, b, kappa)
            case Reading.MEAN:
                return line.mean(a, b, kappa)
            case Reading.MODE:
                return line.mode(a, b, kappa)
            case Reading.HAZARD_AGE:
                return line.hazard_age(asked, a, b, kappa)


@dataclass(frozen=True, eq=False)
class ShapedFurtherQuestions(FurtherQuestions):
    """Of one estimate."""

    estimate: ShapedEstimate
    bounder: ShapedBounder

    def conditional(self, ages: Array, given: float) -> Question:
        """Return the question for the share still running at some ages of those running at `given`."""
        same = ages == given
        # Of the age reached itself the answer is known; any later age may stand in.
        later = np.where(same, ages + max(abs(given), 1.0), ages)
        measure = ShapedConditional(self.estimate.sheaf, later, np.full_like(ages, given))
        return self._asked(
            measure, lambda value: np.where(same, 1.0, np.exp(-np.exp(value))), "conditional reliability", falling=True
        )

    def residual(self, ages: Array) -> Question:
        """Return the question for mean residual lives."""
        return self._further(Reading.RESIDUAL, ages, np.exp)

    def mean(self) -> Question:
        """Return the question for the mean life."""
        return self._further(Reading.MEAN, np.zeros(1), self._age_of)

    def mode(self) -> Question:
        """Return the question for the age of the highest density."""
        return self._further(Reading.MODE, np.zeros(1), self._age_of)

    def hazard_age(self, rates: Array) -> Question:
        """Return the question for the first ages at which the hazard reaches some rates."""
        return self._further(Reading.HAZARD_AGE, rates, self._age_of)

    def _age_of(self, reading: Array) -> Array:
        """Return an age, never below 0 though a threshold may be, nor below a threshold at the first failure itself."""
        sheaf = self.estimate.sheaf
        floor = sheaf.first if self.estimate.is_edge and isinstance(sheaf, ThresholdSheaf) else 0.0
        return np.maximum(sheaf.age_of(reading), floor)

    def _further(self, reading: Reading, asked: Array, to_reading: Callable[[Array], Array]) -> Question:
        return self._asked(ShapedFurther(self.estimate.sheaf, reading, asked), to_reading, reading.value)

    def _asked(
        self, measure: ShapedMeasure, to_reading: Callable[[Array], Array], subject: str, *, falling: bool = False
    ) -> Question:
        def value() -> Array:
            return self.estimate.value(measure)

        def end(kind: str, tail: float, sign: float) -> Array:
            if kind == "wald" and not np.isfinite(value()).any():
                raise BoundUnavailable(
                    f"By this fit the {subject} is 0 or infinite, so no Wald bound of it exists: choose the "
                    "likelihood bound."
                )
            ends = self.bounder.end(measure, kind, tail, sign)
            if kind != "wald" and sign < 0 and isinstance(measure, ShapedFurther) and measure.has_corner:
                ends = np.minimum(ends, self._lowest_falling_start(tail))
            return ends

        return Question(value, end, to_reading, self.bounder.choices, falling)

    def _lowest_falling_start(self, tail: float) -> float:
        sheaf = self.estimate.sheaf
        if not isinstance(sheaf, ThresholdSheaf) or self.bounder.is_large:
            return np.inf
        outline = self.bounder.outline(-float(ndtri(tail)))
        return FallingStart(self.estimate, sheaf).lowest_threshold(outline)
