"""Where a reading stands on density and cumulative hazard, and which part of each further chart is seen."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from reliability_app.engine.curves import Curve
from reliability_app.engine.paper import AgeScale
from reliability_app.reports.chart_ranges import Range, curve_range, curves_top, unit_ages
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.reports.reading_places import Place, aged_mark, value_at
from reliability_app.session.further_pictures import RegionPicture, ResidualPicture
from reliability_app.session.picture import SetPicture
from reliability_app.session.wording import SAFE_SIDES, number_text

_PADDING = 0.06
_WITHIN_OPEN = 4.0  # of a region without an end so many middling distances from the maximum are shown


def density_mark(curve: Curve | None, place: Place, age: AgeScale, life_unit: str) -> ReadingMark | None:
    """Return the mark of a reading on the density."""
    if curve is None:
        return None
    density = value_at(curve, place.age)
    return aged_mark(place, density, age, life_unit, value_text=number_text(density))


def cumulative_mark(place: Place, age: AgeScale, life_unit: str) -> ReadingMark:
    """Return the mark of a reading on the cumulative hazard; a reliability that was asked for brings its bound."""
    hazard = hazard_of(place.fraction)
    if place.fractions == (None, None):
        return aged_mark(place, hazard, age, life_unit, value_text=number_text(hazard))
    ends = [None if end is None else hazard_of(end) for end in place.fractions]
    texts = [
        "" if end is None else number_text(end, toward=toward) for end, toward in zip(ends, SAFE_SIDES, strict=True)
    ]
    position = float(age.to_scale(place.age))
    return ReadingMark(position, hazard, "value", ends[0], ends[1], place.age_text, number_text(hazard), *texts)


def hazard_of(fraction: float) -> float:
    """Return the hazard accumulated when a fraction has failed."""
    return float(-np.log1p(-fraction))


def density_range(
    pictures: Sequence[SetPicture], curves: Sequence[Curve | None], mark: ReadingMark | None, age: AgeScale
) -> Range:
    """Return the ages of the units and of the reading, and densities up to what most of the curves reach."""
    ends = age.from_scale(unit_ages(pictures, age))
    return curve_range(pictures, mark, age, high=curves_top(curves, mark, (float(ends[0]), float(ends[1]))))


def cumulative_range(
    pictures: Sequence[SetPicture],
    curves: Sequence[Curve | None],
    steps: Sequence[Curve | None],
    mark: ReadingMark | None,
    age: AgeScale,
) -> Range:
    """Return the ages of the units and of the reading, up to the last step and the fit at the last unit."""
    last = float(age.from_scale(unit_ages(pictures, age))[1])
    tops = [0.0 if mark is None else mark.value]
    for curve in curves:
        inside = np.empty(0) if curve is None else curve.y[(curve.x <= last) & np.isfinite(curve.y)]
        tops.append(float(inside.max()) if inside.size else 0.0)
    for curve in steps:
        known = np.empty(0) if curve is None else curve.y[np.isfinite(curve.y)]
        tops.append(float(known.max()) if known.size else 0.0)
    return curve_range(pictures, mark, age, high=1.06 * max(tops) or 1.0)


def region_range(regions: Sequence[RegionPicture]) -> Range:
    """Return the part that shows all joint regions; of one that runs on without an end, what lies near its maximum."""
    lows, highs = [], []
    for region in regions:
        points = np.stack([region.joint.first, region.joint.second])
        points = points[:, np.isfinite(points).all(axis=0)]
        peak = np.array(region.maximum)[:, None]
        if not region.joint.is_closed and points.size:
            reach = _WITHIN_OPEN * np.median(np.abs(points - peak), axis=1, keepdims=True)
            points = np.clip(points, peak - reach, peak + reach)
        points = np.concatenate([points, peak], axis=1)
        lows.append(points.min(axis=1))
        highs.append(points.max(axis=1))
    if not lows:
        return Range(0.0, 1.0, 0.0, 1.0)
    (left, low), (right, high) = np.min(lows, axis=0).tolist(), np.max(highs, axis=0).tolist()
    return _padded(left, right, low, high)


def residual_range(pictures: Sequence[ResidualPicture]) -> Range:
    """Return the part that shows all residuals and the middle of what is expected of them."""
    if not pictures:
        return Range(-2.0, 2.0, -2.0, 2.0)
    widest = max(float(np.abs(picture.expected).max()) for picture in pictures)
    values = np.concatenate([[-widest, widest], *(p.value[np.isfinite(p.value)] for p in pictures)])
    values = np.concatenate([values, *((p.low, p.high)[side] for p in pictures for side in (0, 1))])
    return _padded(-widest, widest, float(values.min()), float(values.max()))


def _padded(left: float, right: float, low: float, high: float) -> Range:
    """Widen a range a little, and one of no width by as much as its own size."""
    right = right if right > left else left + (abs(left) or 1.0)
    high = high if high > low else low + (abs(low) or 1.0)
    return Range(left, right, low, high).padded(left=_PADDING, right=_PADDING, low=_PADDING, high=_PADDING)
