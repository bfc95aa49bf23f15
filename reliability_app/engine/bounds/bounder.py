"""Bounds of one estimate: the one place that turns a kind, a tail and a side into the end of a bound."""

from __future__ import annotations

from collections.abc import Callable
from contextlib import suppress
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.calibrated import Calibrator, Proceed, calibrator_for
from reliability_app.engine.bounds.exact import exact_end, has_exact_bounds
from reliability_app.engine.bounds.likelihood_ratio import EndPoints, likelihood_end, outline_end
from reliability_app.engine.bounds.profile import profile_end
from reliability_app.engine.bounds.region import Region, likelihood_region
from reliability_app.engine.bounds.wald import wald_end
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import HazardMeasure, Measure
from reliability_app.engine.simulation import can_be_simulated

Array = NDArray[np.float64]

# Where each end is slow to find a band is computed at this many of its places and joined.
_SLOW_BAND = 24
# A calibration is made at this many places of a band; the signed root changes slowly between them.
_CALIBRATED_PLACES = 13
_ROOT_LEVELS = 6
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
    _calibrators: list[Calibrator] = field(default_factory=list)

    def resolved(self, kind: str, *, of_hazard: bool) -> str:
        """Return the kind that "automatic" stands for: exact where it exists, else calibrated where a plan is known."""
        if kind != "automatic":
            return kind
        if has_exact_bounds(self.data, self.estimate.family.name) and not of_hazard:
            return "exact"
        failures = self.data.failed_count + self.data.found_failed_count
        return "calibrated" if can_be_simulated(self.data) and failures < ENOUGH_FAILURES else "likelihood"

    def end(self, measure: Measure, kind: str, tail: float, sign: float) -> Array:
        """Return the ends, shape (measure.size,); infinite where the bound is open to that side."""
        root = -float(ndtri(tail))
        ways: dict[str, Callable[[], Array]] = {
            "wald": lambda: wald_end(self.estimate, measure, root, sign),
            "likelihood": lambda: self._likelihood(measure, root, sign),
            "exact": lambda: exact_end(self.estimate, self.data, measure, tail, sign),
            "calibrated": lambda: self._calibrated(measure, tail, sign),
        }
        return ways[self._kind_for(kind, measure)]()

    def band_end(self, measure: Measure, kind: str, tail: float, sign: float) -> Array:
        """Return the same to the accuracy of a picture, quickly for many functions at once."""
        kind = self._kind_for(kind, measure)
        if kind == "likelihood" and self.estimate.is_concave:
            return outline_end(measure, self.region(-float(ndtri(tail))), sign)
        if kind == "wald" or measure.size <= _SLOW_BAND:
            return self.end(measure, kind, tail, sign)
        if kind == "calibrated":
            return self._calibrated_band(measure, tail, sign)
        every = np.arange(measure.size)
        some = np.unique(np.linspace(0, measure.size - 1, _SLOW_BAND).round().astype(np.intp))
        return np.asarray(np.interp(every, some, self.end(measure.at(some), kind, tail, sign)))

    def _kind_for(self, kind: str, measure: Measure) -> str:
        return self.resolved(kind, of_hazard=isinstance(measure, HazardMeasure))

    def region(self, root: float) -> Region:
        """Return the likelihood region at a signed root."""
        if root not in self._regions:
            self._regions[root] = likelihood_region(self.estimate, root)
        return self._regions[root]

    def _likelihood(self, measure: Measure, root: float, sign: float) -> Array:
        if self.estimate.is_concave:
            return likelihood_end(self.estimate, measure, self.region(root), sign).value
        return profile_end(self.estimate, measure, root, sign)

    def _calibrated(self, measure: Measure, tail: float, sign: float) -> Array:
        ends = []
        for place in range(measure.size):
            single = measure.at(np.array([place]))
            ends.append(self._points(single, self._root(single, tail, sign), sign).value[0])
        return np.array(ends)

    def _calibrated_band(self, measure: Measure, tail: float, sign: float) -> Array:
        """Join calibrations at some places of the band by a smooth curve of their signed roots."""
        places = np.unique(np.linspace(0, measure.size - 1, _CALIBRATED_PLACES).round().astype(np.intp))
        found: dict[int, float] = {}
        for place in places.tolist():
            nearest = next(reversed(found.values()), None)
            with suppress(BoundUnavailable):
                found[place] = self._root(measure.at(np.array([place])), tail, sign, first=nearest)
        if not found:
            raise BoundUnavailable("The band cannot be calibrated here: choose the likelihood bound.")
        # The same random numbers for all make the root a smooth function of the place.
        roots = smooth_through(np.array(list(found), dtype=np.float64), np.array(list(found.values())), measure.size)
        levels = np.linspace(roots.min(), roots.max(), _ROOT_LEVELS) if np.ptp(roots) > 0 else roots[:1]
        ends = np.stack([outline_end(measure, self.region(float(level)), sign) for level in levels])
        return np.array([np.interp(root, levels, column) for root, column in zip(roots, ends.T, strict=True)])

    def _root(self, measure: Measure, tail: float, sign: float, *, first: float | None = None) -> float:
        """Return the signed root at which the calibrated end of a measure of size 1 lies."""

        def point_at(root: float) -> tuple[float, float]:
            end = self._points(measure, root, sign)
            if not np.isfinite(end.value[0]):
                raise BoundUnavailable("The bound runs beyond all ages here, so it cannot be calibrated.")
            return float(end.a[0]), float(end.b[0])

        return self.calibrator.root(measure, sign, tail, point_at=point_at, first=first, proceed=self.proceed)

    def _points(self, measure: Measure, root: float, sign: float) -> EndPoints:
        return likelihood_end(self.estimate, measure, self.region(root), sign)

    @property
    def calibrator(self) -> Calibrator:
        """The calibrator of this estimate, whose draws serve every reading."""
        if not self._calibrators:
            self._calibrators.append(calibrator_for(self.estimate, self.data))
        return self._calibrators[0]


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
