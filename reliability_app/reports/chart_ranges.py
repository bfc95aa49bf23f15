"""Which part of the paper a chart shows when it is left to itself: all units, the reading, and usual percents."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale, ProbabilityScale
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.reports.reading_places import age_at
from reliability_app.session.picture import SetPicture

Floats = NDArray[np.float64]

_USUAL = (0.01, 0.9)  # fractions failed that a paper shows at least
_EMPTY_DECADE = (100.0, 1000.0)
_LEAST_WIDTH = {"log": 0.9, "linear": 0.0}
_FIT_BEYOND = 0.45  # the fit may widen the ages of the units by this share of their width on either side
_BOUND_BEYOND = 1.2  # and a bound by this share; a bound further off runs out of the picture
_PADDING = 0.05


@dataclass(frozen=True)
class Range:
    """A visible part, in positions of the two axes."""

    left: float
    right: float
    low: float
    high: float

    def holds(self, mark: ReadingMark | None) -> bool:
        """True where a mark's point lies inside, or no view could hold it."""
        if mark is None or not np.isfinite(mark.age):
            return True
        return self.left <= mark.age <= self.right and self.low <= mark.value <= self.high

    def padded(self, *, left: float, right: float, low: float, high: float) -> Range:
        """Return the range widened by shares of its size."""
        width, height = self.right - self.left, self.high - self.low
        return Range(
            self.left - left * width,
            self.right + right * width,
            self.low - low * height,
            self.high + high * height,
        )


def unit_ages(pictures: Sequence[SetPicture], scale: AgeScale) -> tuple[float, float]:
    """Return the positions of the least and the greatest age at which a unit failed or ran."""
    ages = np.concatenate([np.concatenate([p.point_age, p.running_age]) for p in pictures] or [np.empty(0)])
    positions = scale.to_scale(ages)
    positions = positions[np.isfinite(positions)]
    if positions.size == 0:
        ends = scale.to_scale(_EMPTY_DECADE)
        return float(ends[0]), float(ends[1])
    low, high = float(positions.min()), float(positions.max())
    missing = 0.5 * max(0.0, _LEAST_WIDTH[scale.kind] - (high - low))
    if scale.kind == "linear" and high == low:
        return 0.0, 2.0 * high
    return low - missing, high + missing


def paper_range(
    pictures: Sequence[SetPicture], mark: ReadingMark | None, probability: ProbabilityScale, scale: AgeScale
) -> Range:
    """Return the part of probability paper that shows every unit, the reading, and from 1 % to 90 % at least."""
    usual = probability.to_scale(_USUAL)
    fractions = np.concatenate([p.point_fraction for p in pictures] or [np.empty(0)])
    heights = probability.to_scale(fractions[(fractions > 0.0) & (fractions < 1.0)]).tolist()
    if mark is not None:
        heights.append(mark.value)
    low, high = min([float(usual[0]), *heights]), max([float(usual[1]), *heights])
    units = unit_ages(pictures, scale)
    width = units[1] - units[0]
    fits = [p for p in pictures if p.failure is not None and p.failure.x.size > 1]
    reached = [
        float(scale.to_scale(age_at(p, fraction)))
        for p in fits
        for fraction in probability.from_scale([low, high]).tolist()
    ]
    left, right = _widened(*units, reached, _FIT_BEYOND * width)
    left, right = _with_mark(left, right, mark, _BOUND_BEYOND * width)
    whole = Range(left, right, low, high).padded(left=_PADDING, right=_PADDING, low=0.09, high=_PADDING)
    drawn = scale.to_scale([end for p in fits if p.failure is not None for end in p.failure.x[[0, -1]]])
    return whole if drawn.size == 0 else _within_drawn(whole, (float(drawn.min()), float(drawn.max())), (left, right))


def _within_drawn(whole: Range, drawn: tuple[float, float], needed: tuple[float, float]) -> Range:
    """Keep the ends of the drawn curves out of sight, as far as all that must be seen allows."""
    left = min(max(whole.left, drawn[0]), needed[0])
    right = max(min(whole.right, drawn[1]), needed[1])
    return replace(whole, left=left, right=right)


def curve_range(pictures: Sequence[SetPicture], mark: ReadingMark | None, scale: AgeScale, *, high: float) -> Range:
    """Return the ages of the units and of the reading, over values from 0 to `high`."""
    left, right = unit_ages(pictures, scale)
    if scale.kind == "linear":
        left = 0.0
    left, right = _with_mark(left, right, mark, _BOUND_BEYOND * (right - left))
    if scale.kind == "linear":
        return Range(0.0, right, 0.0, high).padded(left=0.0, right=_PADDING, low=0.0, high=0.04)
    return Range(left, right, 0.0, high).padded(left=_PADDING, right=_PADDING, low=0.0, high=0.04)


def hazard_top(pictures: Sequence[SetPicture], mark: ReadingMark | None, within: tuple[float, float]) -> float:
    """Return a value above the hazard rates at the units' ages, not above what a wide band or a pole would ask."""
    return curves_top([picture.hazard for picture in pictures], mark, within)


def curves_top(curves: Sequence[Curve | None], mark: ReadingMark | None, within: tuple[float, float]) -> float:
    """Return a value above some curves within these ages, not above what a wide band or a pole would ask."""
    tops: list[float] = [] if mark is None else [mark.value]
    for curve in curves:
        if curve is None:
            continue
        inside = (curve.x >= within[0]) & (curve.x <= within[1])
        values = curve.y[inside] if inside.any() else curve.y
        values = values[np.isfinite(values)]
        if values.size == 0:
            continue
        top = float(values.max())
        # A hazard that starts at infinity is shown down from where most of it lies.
        top = min(top, 4.0 * float(np.median(values)))
        if curve.upper is not None:
            bounds = curve.upper[inside]
            bounds = bounds[np.isfinite(bounds)]
            top = max(top, min(2.0 * top, float(bounds.max()) if bounds.size else top))
        tops.append(top)
    highest = max(tops, default=0.0)
    return 1.06 * highest if highest > 0.0 else 1.0


def _widened(left: float, right: float, reached: Sequence[float], most: float) -> tuple[float, float]:
    finite = [position for position in reached if np.isfinite(position)]
    return max(left - most, min([left, *finite])), min(right + most, max([right, *finite]))


def _with_mark(left: float, right: float, mark: ReadingMark | None, most: float) -> tuple[float, float]:
    """Widen a range of ages by a reading, wherever it is, and by its bound as far as is reasonable."""
    if mark is None:
        return left, right
    if np.isfinite(mark.age):
        left, right = min(left, mark.age), max(right, mark.age)
    if mark.along == "value":
        return left, right
    return _widened(left, right, [position for position, _, _ in mark.ends], most)
