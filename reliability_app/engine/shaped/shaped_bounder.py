"""Bounds of an estimate with a further parameter: Wald and likelihood ratio, and the refusal of the others by name."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.shaped.extremes import extremes, extremes_near
from reliability_app.engine.shaped.measures import ShapedMeasure
from reliability_app.engine.shaped.outline import Outline, outline_of
from reliability_app.engine.shaped.shaped_estimate import ShapedEstimate

Array = NDArray[np.float64]

# A band is computed at this many of its places and joined.
_BAND = 24
# With more records than this an outline is too slow to draw, and nearly an ellipsoid.
_LARGE, _MANY_FAILURES = 20_000, 2_000


@dataclass(frozen=True, eq=False)
class ShapedBounder:
    """Finds ends of bounds; outlines once drawn serve every later question."""

    estimate: ShapedEstimate
    title: str
    _outlines: dict[float, Outline] = field(default_factory=dict)

    def choices(self, kind: str) -> tuple[str, ...]:
        """Return the kinds that `kind` stands for: "automatic" is the likelihood ratio."""
        return ("likelihood",) if kind == "automatic" else (kind,)

    @property
    def is_large(self) -> bool:
        """True where there are too many records for an outline."""
        return self.estimate.sheaf.records > _LARGE

    def end(self, measure: ShapedMeasure, kind: str, tail: float, sign: float) -> Array:
        """Return the lower (sign -1) or upper (sign 1) ends with probability `tail` beyond, shape (measure.size,).

        Raises
        ------
        BoundUnavailable
            For a kind that does not exist for these families, and where the likelihood gives no bound.
        """
        return self._end(measure, kind, tail, sign, searched=True)

    def _end(self, measure: ShapedMeasure, kind: str, tail: float, sign: float, *, searched: bool) -> Array:
        (kind,) = self.choices(kind)
        if kind not in ("likelihood", "wald"):
            raise BoundUnavailable(
                f"Bounds of kind {kind!r} are not known for the {self.title} family: choose the likelihood bound."
            )
        if self.estimate.is_edge:
            raise BoundUnavailable(
                "The threshold is estimated at the first failure itself, where neither the Wald nor the "
                "likelihood-ratio bound holds: no bound can be given; choose the family without a threshold."
            )
        root = -float(ndtri(tail))
        if kind == "wald":
            return self._wald(measure, sign * root)
        with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
            if self.is_large:
                return extremes_near(self.estimate, measure, root, sign)
            return extremes(self.estimate, measure, self.outline(root), sign, searched=searched)

    def _wald(self, measure: ShapedMeasure, reach: float) -> Array:
        """Return the measure moved by some standard errors; NaN where it is infinite at the estimate."""
        value = self.estimate.value(measure)
        out = np.full_like(value, np.nan)
        there = np.flatnonzero(np.isfinite(value))
        if not there.size:
            raise BoundUnavailable("By this fit no unit can fail so early, so the Wald bound does not exist here.")
        out[there] = value[there] + reach * self.estimate.errors(measure.at(there))
        return out

    def band_end(self, measure: ShapedMeasure, kind: str, tail: float, sign: float) -> Array:
        """Return the same to the accuracy of a picture, quickly for many functions at once.

        In a large sample with many failures that is the Wald band, which no eye can tell from the likelihood's own.
        """
        (kind,) = self.choices(kind)
        if kind == "likelihood" and self.is_large and self.estimate.sheaf.failures > _MANY_FAILURES:
            return self.end(measure, "wald", tail, sign)
        if kind != "likelihood" or measure.size <= _BAND:
            return self.end(measure, kind, tail, sign)
        every = np.arange(measure.size)
        some = np.unique(np.linspace(0, measure.size - 1, _BAND).round().astype(np.intp))
        return np.asarray(np.interp(every, some, self._end(measure.at(some), kind, tail, sign, searched=False)))

    def outline(self, root: float) -> Outline:
        """Return the outline of the likelihood region at a signed root."""
        if root not in self._outlines:
            self._outlines[root] = outline_of(self.estimate, root)
        return self._outlines[root]
