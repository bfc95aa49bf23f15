"""ZeroFailureFit: what units that have run without any failure show, where only the scale is unknown.

No estimate exists, but a bound does: with H(t) = (t/scale)^shape and T the sum of t^shape over the units, less over
their entry ages, the scale is at least (T / -ln(1 - confidence))^(1/shape) (Meeker & Escobar 1998, section 8.6; Nelson
1985, J. Qual. Technol. 17, 140-146; both cited from memory).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds import Bounder
from reliability_app.engine.bounds.chi_square import zero_failure_end
from reliability_app.engine.cautions import Caution, Severity
from reliability_app.engine.errors import NoEstimate
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.fit_cautions import caution_of_assumed_shape
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.further_measures import FurtherMeasure
from reliability_app.engine.further_questions import PlainFurtherQuestions
from reliability_app.engine.life_measures import Measure
from reliability_app.engine.likelihood import Terms
from reliability_app.engine.question import Question
from reliability_app.engine.sample import Sample, sample_of

Array = NDArray[np.float64]

_NO_ESTIMATE = (
    "No unit has failed, so there is no estimate: the time survived so far gives bounds on the safe side only (lower "
    "ones of lives and reliabilities)."
)


@dataclass(frozen=True, eq=False)
class ZeroFailureFit(Fit):
    """No failure, and a family of which only the scale is unknown: bounds on the safe side without an estimate.

    Lives, reliabilities and means have lower bounds, hazards upper ones; the other ends are open: infinite lives,
    reliability 1, hazard 0. There is one bound only, an exact one, which answers for every kind that is asked for.
    """

    @property
    def has_zero_failure_bound(self) -> bool:
        """True."""
        return True

    @cached_property
    def cautions(self) -> tuple[Caution, ...]:
        """That there is no estimate, and what the bound rests on."""
        return Caution(self.outcome.value, Severity.SERIOUS, _NO_ESTIMATE), caution_of_assumed_shape(self.family)

    @cached_property
    def _sample(self) -> Sample:
        return sample_of(self.data, self.family.life_scale)

    @cached_property
    def _further(self) -> PlainFurtherQuestions:
        nothing = np.full(1, np.nan)
        unknown = Estimate(
            self.family,
            self._sample,
            np.nan,
            self._b,
            Terms(nothing, nothing, nothing, nothing, nothing, nothing),
            gradient_norm=np.nan,
            decrement=np.nan,
            steps=0,
        )
        return _FurtherBounds(unknown, Bounder(unknown, self.data), 0.0, self._question)

    def _found(self) -> Estimate:
        raise NoEstimate(_NO_ESTIMATE)

    @property
    def _b(self) -> float:
        return self._sample.spread / (self.family.fixed_sigma or 1.0)

    def _question(self, measure: Measure, to_reading: Callable[[Array], Array], *, falling: bool = False) -> Question:
        b = np.array([self._b])

        def value() -> Array:
            raise NoEstimate(_NO_ESTIMATE)

        def end(_: str, tail: float, sign: float) -> Array:
            with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
                terms = measure.terms(np.array([zero_failure_end(self._sample, self._b, tail)]), b)
            rising = measure.rises_with_a if isinstance(measure, FurtherMeasure) else terms.d_a > 0
            return np.where((sign > 0) == np.asarray(rising), terms.value, sign * np.inf)

        return Question(value, end, to_reading, lambda _: ("exact",), falling)


@dataclass(frozen=True, eq=False)
class _FurtherBounds(PlainFurtherQuestions):
    """The further questions, of which only the bounds have an answer."""

    ask: Callable[..., Question]

    def _asked(
        self,
        measure: FurtherMeasure,
        to_reading: Callable[[Array], Array],
        subject: str,  # noqa: ARG002 - for a reading whose estimate is infinite
        *,
        falling: bool = False,
    ) -> Question:
        return self.ask(measure, to_reading, falling=falling)
