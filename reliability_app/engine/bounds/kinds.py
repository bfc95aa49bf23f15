"""The kinds of bound by name, and the one place that turns a confidence and a side into an interval."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.exact import exact_interval
from reliability_app.engine.bounds.likelihood_ratio import likelihood_interval, outline_interval
from reliability_app.engine.bounds.profile import profile_interval
from reliability_app.engine.bounds.region import Region, likelihood_region
from reliability_app.engine.bounds.wald import wald_interval
from reliability_app.engine.errors import BoundUnavailable, DataError, UnknownName
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import Measure

Array = NDArray[np.float64]
Interval = tuple[Array, Array]

BOUND_KINDS = ("likelihood", "wald", "exact")
_PROMISED = ("automatic", "calibrated")
SIDES = ("lower", "upper", "two")
OPPOSITE_SIDE = {"lower": "upper", "upper": "lower", "two": "two"}
# Where each bound is slow a band is computed at this many of its ages and joined.
_SLOW_BAND = 24
_LEAST_CONFIDENCE, _MOST_CONFIDENCE = 0.5, 0.999999


def check_bound(kind: str, side: str, confidence: float) -> None:
    """Raise UnknownName, BoundUnavailable or DataError where the three do not name a bound."""
    if kind in _PROMISED:
        raise BoundUnavailable(
            f"The {kind} bound does not exist in this version. The kinds of bound are: {', '.join(BOUND_KINDS)}."
        )
    if kind not in BOUND_KINDS:
        raise UnknownName(
            f"There is no kind of bound called {kind!r}. The kinds of bound are: {', '.join(BOUND_KINDS)}."
        )
    if side not in SIDES:
        raise UnknownName(f"There is no side called {side!r}. The sides are: {', '.join(SIDES)}.")
    if not _LEAST_CONFIDENCE < confidence <= _MOST_CONFIDENCE:
        raise DataError(
            [f"A confidence of {confidence:g} cannot be used: give a number above 0.5 and below 1, such as 0.95."]
        )


def tail_of(side: str, confidence: float) -> float:
    """Return the probability left beyond each end: all of it on a one-sided bound's side, half of it on two sides."""
    return 0.5 * (1.0 - confidence) if side == "two" else 1.0 - confidence


@dataclass(frozen=True, eq=False)
class Bounder:
    """Bounds of one estimate; a likelihood region once found serves every reading at its confidence."""

    estimate: Estimate
    data: LifeData
    _regions: dict[float, Region] = field(default_factory=dict)

    def region(self, tail: float) -> Region:
        """Return the likelihood region whose pointwise extremes leave `tail` beyond each end."""
        if tail not in self._regions:
            self._regions[tail] = likelihood_region(self.estimate, -float(ndtri(tail)))
        return self._regions[tail]

    def interval(self, measure: Measure, kind: str, tail: float) -> Interval:
        """Return both ends of the bound of a measure, each of shape (measure.size,)."""
        chosen: dict[str, Callable[[], Interval]] = {
            "wald": lambda: wald_interval(self.estimate, measure, -float(ndtri(tail))),
            "likelihood": lambda: self._likelihood(measure, tail),
            "exact": lambda: exact_interval(self.estimate, self.data, measure, tail),
        }
        return chosen[kind]()

    def band(self, measure: Measure, kind: str, tail: float) -> Interval:
        """Return the same to the accuracy of a picture, quickly for many functions at once."""
        if kind == "likelihood" and self.estimate.is_concave:
            return outline_interval(measure, self.region(tail))
        if kind == "wald" or measure.size <= _SLOW_BAND:
            return self.interval(measure, kind, tail)
        every = np.arange(measure.size)
        some = np.unique(np.linspace(0, measure.size - 1, _SLOW_BAND).round().astype(np.intp))
        low, high = self.interval(measure.at(some), kind, tail)
        return np.interp(every, some, low), np.interp(every, some, high)

    def _likelihood(self, measure: Measure, tail: float) -> Interval:
        if self.estimate.is_concave:
            return likelihood_interval(self.estimate, measure, self.region(tail))
        return profile_interval(self.estimate, measure, -float(ndtri(tail)))
