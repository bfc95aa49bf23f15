"""At which ages units are inspected that are not watched all the time, as far as the data of a set show it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.life_data import LifeData, Mask
from reliability_app.engine.life_scale import LifeScale

Array = NDArray[np.float64]

# Where every unit was found failed the looks go on beyond the last one seen, each this much further on than the one
# before, so often: together some 2,000 times the last step, but not to ages beyond all numbers.
_FURTHER, _MORE_LOOKS, _LAST_AGE = 1.25, 27, 1e300
_ROUNDING = 1e-9
_MOST_FILLED = 500


@dataclass(frozen=True, eq=False)
class Looks:
    """The inspections of a set.

    Attributes
    ----------
    place : ndarray, shape (looks,)
        Places of the looks on the line of a family, rising.
    floor : float
        The place beyond which a life is known to lie before the first look; minus infinity where nothing is known.
    is_inspected : ndarray of bool, shape (units,)
        Which units are inspected; the others are watched all the time.
    only_one : bool
        True where each unit is looked at once, at a place of its own.
    is_shared : bool
        True where all inspected units share one schedule, so that `place` holds their looks themselves.
    """

    place: Array
    floor: float
    is_inspected: Mask
    only_one: bool = False
    is_shared: bool = False


def looks_of(data: LifeData, life_scale: LifeScale) -> Looks:
    """Return the inspections that data, one record a unit, show.

    A unit found failed is inspected, a unit with a known age at failure is watched all the time. A running unit counts
    as inspected if no unit of the set has a known age at failure, or if it was last seen at an age at which others were
    inspected. Then, in this order:

    - If every unit found failed was so at its first look, and units are left running, each unit is looked at once, at
      the age at which it was.
    - If no unit was found failed across the look of another one, the set shares one schedule: all looks of all units,
      and between them those at which nothing was seen, where the looks are otherwise evenly spaced (see `_filled`).
    - Otherwise schedules differ. Nobody's own is known in full, so all inspected units get one that is as fine as
      theirs: of all looks so many are kept that they lie the median width of the intervals apart, and a unit leaves at
      the look nearest to where it would have left.

    If no unit is left running, the looks go on beyond the last one seen, by steps on the line that grow by a quarter,
    until all have failed.
    """
    found, running, exact = data.is_found_failed, data.is_running, data.is_failed
    if not found.any():
        return Looks(np.empty(0), -np.inf, np.zeros(found.size, dtype=bool))
    seen = found & (data.lower > np.maximum(data.entered, 0.0))
    ends = np.concatenate([data.lower[seen], data.upper[found]])
    is_inspected = found | (running & (not exact.any() or np.isin(data.lower, ends)))
    ages = np.unique(np.concatenate([ends, data.lower[running & is_inspected]]))
    unseen = data.lower[found & (data.lower <= 0.0)]
    floor = float(unseen.min()) if unseen.size and np.isneginf(life_scale.origin) else -np.inf
    if running.any() and ages.size > 1 and not (exact.any() or seen.any() or data.entered.any()):
        return Looks(life_scale.to_line(ages), floor, is_inspected, only_one=True)
    first, last = np.searchsorted(ages, data.lower[found], side="right"), np.searchsorted(ages, data.upper[found])
    is_shared = not (last > first).any()
    if is_shared:
        ages = _filled(ages, data.lower[seen], data.upper[seen], from_start=not unseen.size)
    else:
        ages = _thinned(ages, float(np.median((data.upper - np.maximum(data.lower, 0.0))[found])))
    places = life_scale.to_line(ages)
    return Looks(places if running.any() else _going_on(places, life_scale), floor, is_inspected, is_shared=is_shared)


def _going_on(places: Array, life_scale: LifeScale) -> Array:
    """Return looks with those beyond the last one seen."""
    if places.size == 1:
        return places
    steps = (places[-1] - places[-2]) * _FURTHER ** np.arange(1, _MORE_LOOKS + 1)
    further = places[-1] + np.cumsum(steps)
    return np.concatenate([places, further[further < life_scale.to_line(np.array(_LAST_AGE))]])


def _filled(ages: Array, lower: Array, upper: Array, *, from_start: bool) -> Array:
    """Put looks at which nobody was found failed, left, or was last seen, between those that are known.

    The step is the median width of the intervals (`lower`, `upper`), in age or in its logarithm, whichever varies less
    among them. An interval holds no look. With nobody found failed at the first look known there were others before.
    """
    if not lower.size:
        return ages
    widths, ratios = upper - lower, np.log(upper / lower)
    is_even = np.ptp(widths) / widths.mean() <= np.ptp(ratios) / ratios.mean() + _ROUNDING
    place = ages if is_even else np.log(ages)
    step = max(float(np.median(widths if is_even else ratios)), float(np.ptp(place)) / _MOST_FILLED)
    if from_start and is_even and ages[0] > 1.5 * step:
        place = np.concatenate([[0.0], place])
    gaps = np.diff(place)
    parts = np.maximum(np.round(gaps / step), 1.0).astype(np.intp)
    # Each gap between known looks that is itself an interval in which a unit was found failed stays whole.
    parts[np.isin(place[:-1] if is_even else np.exp(place[:-1]), lower)] = 1
    between = [
        begin + gap / count * np.arange(1, count)
        for begin, gap, count in zip(place, gaps, parts.tolist(), strict=False)
        if count > 1
    ]
    filled = np.concatenate(between) if between else np.empty(0)
    return np.unique(np.concatenate([ages, filled if is_even else np.exp(filled)]))


def _thinned(ages: Array, width: float) -> Array:
    """Keep the first and the last age, and of the others so many that they lie at least `width` apart."""
    kept = [float(ages[0])]
    for age in ages[1:].tolist():
        if age >= kept[-1] + (1.0 - _ROUNDING) * width:
            kept.append(age)
    if len(kept) > 1 and ages[-1] < kept[-1] + 0.5 * width:
        kept.pop()
    return np.unique([*kept, float(ages[-1])])
