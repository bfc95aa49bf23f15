"""Bounds of one estimate: the one place that turns a kind, a tail and a side into the end of a bound."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import suppress
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.calibrated import Calibrator, Proceed, calibrator_for
from reliability_app.engine.bounds.exact import ExactBounds, has_exact_bounds
from reliability_app.engine.bounds.further_profile import further_end
from reliability_app.engine.bounds.likelihood_ratio import EndPoints, likelihood_end, outline_end
from reliability_app.engine.bounds.profile import profile_end
from reliability_app.engine.bounds.region import Region, likelihood_region
from reliability_app.engine.bounds.wald import wald_end
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.further_measures import FurtherMeasure
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import HazardMeasure, Measure

Array = NDArray[np.float64]

# Where each end is slow to find a band is computed at this many of its places and joined.
_SLOW_BAND = 24
# A calibration is made at this many places of a band; the signed root changes slowly between them.
_CALIBRATED_PLACES = 13
_ROOT_LEVELS = 6
# Where so many places of a band cannot be calibrated and none can, it is given up.
_TRIED_IN_VAIN = 3
# With this many failures the likelihood-ratio bound keeps its promise to well within a point by itself.
ENOUGH_FAILURES = 300


@dataclass(frozen=True, eq=False)
class Bounder:
    """Finds ends of bounds; regions, calibrations and draws once made serve every later question.

    The ends of a measure are its lower (sign -1) or upper (sign 1) bounds with probability `tail` beyond. `proceed` is
    called between pieces of slow work; what it raises ends the work.
    """

    estimate: Estimate
    data: LifeData
    proceed: Proceed | None = None
    _regions: dict[float, Region] = field(default_factory=dict)
    _calibrators: dict[float, Calibrator] = field(default_factory=dict)

    def choices(self, kind: str, measure: Measure) -> tuple[str, ...]:
        """Return the kinds that `kind` stands for, to be tried in turn until one can be computed.

        "automatic" is exact where such a bound is known, else calibrated, which many failures make needless, and the
        likelihood ratio where nothing else can be had.
        """
        if kind != "automatic":
            return (kind,)
        failures = self.data.failed_count + self.data.found_failed_count
        exact = ("exact",) if self._has_exact(measure) else ()
        return (*exact, *(("calibrated",) if failures < ENOUGH_FAILURES else ()), "likelihood")

    def _has_exact(self, measure: Measure) -> bool:
        of_hazard = isinstance(measure, HazardMeasure | FurtherMeasure)
        return has_exact_bounds(self.data, self.estimate.family, of_hazard=of_hazard)

    def end(self, measure: Measure, kind: str, tail: float, sign: float) -> Array:
        """Return the ends, shape (measure.size,); infinite where the bound is open to that side."""
        root = -float(ndtri(tail))
        ways: dict[str, Callable[[], Array]] = {
            "wald": lambda: wald_end(self.estimate, measure, root, sign),
            "likelihood": lambda: self._likelihood(measure, root, sign),
            "exact": lambda: self.exact.end(measure, tail, sign),
            "calibrated": lambda: self._calibrated(measure, tail, sign),
        }
        return ways[self.choices(kind, measure)[0]]()

    def band_end(self, measure: Measure, kind: str, tail: float, sign: float) -> Array:
        """Return the same to the accuracy of a picture, quickly for many functions at once."""
        kind = self.choices(kind, measure)[0]
        if kind == "likelihood" and self.estimate.is_concave:
            return outline_end(measure, self.region(-float(ndtri(tail))), sign)
        if kind == "wald" or measure.size <= _SLOW_BAND:
            return self.end(measure, kind, tail, sign)
        if kind == "calibrated":
            return self._calibrated_band(measure, tail, sign)
        every = np.arange(measure.size)
        some = np.unique(np.linspace(0, measure.size - 1, _SLOW_BAND).round().astype(np.intp))
        return np.asarray(np.interp(every, some, self.end(measure.at(some), kind, tail, sign)))

    @cached_property
    def exact(self) -> ExactBounds:
        """The exact bounds of this estimate, where there are any."""
        return ExactBounds(self.estimate, self.data)

    def region(self, root: float) -> Region:
        """Return the likelihood region at a signed root."""
        if root not in self._regions:
            self._regions[root] = likelihood_region(self.estimate, root)
        return self._regions[root]

    def _likelihood(self, measure: Measure, root: float, sign: float) -> Array:
        return self._points(measure, root, sign).value

    def _calibrated(self, measure: Measure, tail: float, sign: float) -> Array:
        ends = []
        for place in range(measure.size):
            single = measure.at(np.array([place]))
            ends.append(self._points(single, self._root(single, tail, sign), sign).value[0])
        return np.array(ends)

    def _calibrated_band(self, measure: Measure, tail: float, sign: float) -> Array:
        """Join calibrations at some places of the band by a smooth curve of their signed roots."""
        places = np.unique(np.linspace(0, measure.size - 1, _CALIBRATED_PLACES).round().astype(np.intp)).tolist()
        found: dict[int, float] = {}
        # From the middle outwards, each from the root beside it.
        for tried, place in enumerate(sorted(places, key=lambda place: abs(2 * place - measure.size + 1))):
            if not found and tried == _TRIED_IN_VAIN:
                break
            nearest = found[min(found, key=lambda known: abs(known - place))] if found else None
            with suppress(BoundUnavailable):
                found[place] = self._root(measure.at(np.array([place])), tail, sign, first=nearest)
        if not found:
            raise BoundUnavailable("The band cannot be calibrated here: choose the likelihood bound.")
        found = dict(sorted(found.items()))
        # The same random numbers for all make the root a smooth function of the place.
        roots = smooth_through(np.array(list(found), dtype=np.float64), np.array(list(found.values())), measure.size)
        if not self.estimate.is_concave:
            return self._joined_ends(measure, roots, sign)
        levels = np.linspace(roots.min(), roots.max(), _ROOT_LEVELS) if np.ptp(roots) > 0 else roots[:1]
        ends = np.stack([outline_end(measure, self.region(float(level)), sign) for level in levels])
        return np.array([np.interp(root, levels, column) for root, column in zip(roots, ends.T, strict=True)])

    def _joined_ends(self, measure: Measure, roots: Array, sign: float) -> Array:
        """Return ends at a root for each place, where there is no outline: found at some places and joined."""
        some = np.unique(np.linspace(0, measure.size - 1, _SLOW_BAND).round().astype(np.intp)).tolist()
        ends = [self._points(measure.at(np.array([place])), float(roots[place]), sign).value[0] for place in some]
        return np.asarray(np.interp(np.arange(measure.size), some, ends))

    def _root(self, measure: Measure, tail: float, sign: float, *, first: float | None = None) -> float:
        """Return the signed root at which the calibrated end of a measure of size 1 lies."""

        def point_at(root: float) -> tuple[float, float] | None:
            end = self._points(measure, root, sign)
            return (float(end.a[0]), float(end.b[0])) if np.isfinite(end.value[0]) else None

        return self.calibrator(tail).root(measure, sign, tail, point_at=point_at, first=first, proceed=self.proceed)

    def _points(self, measure: Measure, root: float, sign: float) -> EndPoints:
        if self.estimate.is_concave:
            return likelihood_end(self.estimate, measure, self.region(root), sign)
        if isinstance(measure, FurtherMeasure):
            return further_end(self.estimate, measure, root, sign)
        return profile_end(self.estimate, measure, root, sign)

    def calibrator(self, tail: float) -> Calibrator:
        """Return the calibrator of this estimate for a tail, whose draws serve every reading."""
        if tail not in self._calibrators:
            self._calibrators[tail] = calibrator_for(self.estimate, self.data, tail)
        return self._calibrators[tail]


def smooth_through(places: Array, values: Array, size: int) -> Array:
    """Return values at 0 ... size - 1 by cubic pieces through the given ones, constant beyond the outermost."""
    if places.size == 1:
        return np.full(size, values[0])
    slopes = np.gradient(values, places)
    at = np.clip(np.arange(size, dtype=np.float64), places[0], places[-1])
    left = np.clip(np.searchsorted(places, at, side="right") - 1, 0, places.size - 2)
    width = places[left + 1] - places[left]
    t = (at - places[left]) / width
    return np.asarray(
        values[left] * (1 + 2 * t) * (1 - t) ** 2
        + slopes[left] * width * t * (1 - t) ** 2
        + values[left + 1] * t * t * (3 - 2 * t)
        - slopes[left + 1] * width * t * t * (1 - t)
    )
