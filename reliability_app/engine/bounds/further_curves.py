"""The curves (a, b) on which further readings keep their value, with u = ln b as the free coordinate, or near it.

A mode or a mean may exist only while sigma is below a limit (1 for the mode of a Weibull life). Towards it the place
runs away like a logarithm, and with it the likelihood falls: u is then ln(b - limit of b), in which such a curve has no
end and hardly bends, so that constrained maxima near the limit are found like any other.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds.curve import Curve, CurvePoints
from reliability_app.engine.further_measures import ConditionalMeasure, MeanMeasure, ModeMeasure, ResidualMeasure

Array = NDArray[np.float64]

# The table: u from and to, and its step, at which pieces of the fifth degree are right to some 1e-11. Where b has a
# limit, at the nearest to it the location lies a factor exp(18) from where it began.
_LOWEST, _NEAREST, _HIGHEST, _STEP = -4.0, -18.0, 6.02, 0.06
_MOST_STEPS, _LONGEST, _REACHED, _SOLVED = 30, 4.0, 1e-12, 1e-8


class FurtherCurve(Curve):
    """A curve on which a is a function of b, with u = ln(b - least_b)."""

    @property
    def least_b(self) -> float:
        """The b at and below which the curve has no point."""
        return 0.0

    def place(self, b: Array) -> Array:
        """Return u of b; not a number at and below the least b."""
        return np.log(np.where(b > self.least_b, b - self.least_b, np.nan))

    def start(self, a: float, b: float) -> float:  # noqa: ARG002 - the curve itself gives a
        """Return u of b."""
        return float(self.place(np.asarray(b)))


@dataclass(frozen=True, eq=False)
class MovedCurve(FurtherCurve):
    """A mean or a mode: value = log_shift - sigma a + factor(sigma), with sigma = slope/b."""

    measure: MeanMeasure | ModeMeasure
    value: float

    @cached_property
    def least_b(self) -> float:
        """The b at which sigma is the greatest with which the reading exists."""
        return float(self.measure.line.slope) / self.measure.most_sigma

    def points(self, u: Array) -> CurvePoints:
        """Return the points at u; not a number where no location gives such a value."""
        grown = np.exp(u)
        b = self.least_b + grown
        sigma = np.asarray(self.measure.line.slope / b)
        factor = self.measure.of_sigma(sigma)
        with np.errstate(invalid="ignore"):
            a = (self.measure.line.log_shift - self.value + factor.value) / sigma
            a = np.where(np.isfinite(a), a, np.nan)
        # Of ln b: d sigma/d ln b = -sigma; then of u, in which ln b rises by b's share above the least b.
        share = grown / b
        first = a - factor.first
        second = first + sigma * factor.second
        return CurvePoints(a, b, share * first, grown, share * share * second + share * (1.0 - share) * first, grown)


@dataclass(frozen=True, eq=False)
class SolvedCurve(FurtherCurve):
    """A reading at an age that is monotone in a at every b, solved for a."""

    measure: ConditionalMeasure | ResidualMeasure
    value: float

    def points(self, u: Array) -> CurvePoints:
        """Return the points at u = ln b, by Newton's method held back where it would leap into a tail."""
        b = np.exp(u).ravel()
        y = float(self.measure.y[0])
        # Where z is 0 at the reading's own age.
        a = -b * y if np.isfinite(y) else np.zeros_like(b)
        active = np.arange(b.size)
        with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
            for _ in range(_MOST_STEPS):
                at = self.measure.terms(a[active], b[active])
                gap = self.value - at.value
                step = np.minimum(gap / at.d_a, _LONGEST)
                a[active] += step
                settled = (np.abs(step) <= _REACHED * (1.0 + np.abs(a[active]))) | (np.abs(gap) <= _REACHED)
                active = active[~settled & np.isfinite(step)]
                if not active.size:
                    break
            at = self.measure.terms(a, b)
            a[~(np.abs(self.value - at.value) <= _SOLVED)] = np.nan
            first = -at.d_b * b / at.d_a
            second = -(at.d_aa * first**2 + (2.0 * at.d_ab * first + at.d_bb * b + at.d_b) * b) / at.d_a
        return CurvePoints(*(column.reshape(u.shape) for column in (a, b, first, b, second, b)))


@dataclass(frozen=True, eq=False)
class TabulatedCurve(FurtherCurve):
    """A curve that is slow to find: computed once on a table in u and interpolated."""

    exact: MovedCurve | SolvedCurve

    @property
    def least_b(self) -> float:
        """That of the curve itself."""
        return self.exact.least_b

    def points(self, u: Array) -> CurvePoints:
        """Return the points at u; not a number where the curve has none, or b is beyond all that units can mean."""
        known = (u >= self._lowest) & (u < _HIGHEST)
        with np.errstate(invalid="ignore"):
            a, first, second = self._between(np.where(known, u, 0.0))
        a = np.where(known, a, np.nan)
        grown = np.exp(u)
        return CurvePoints(a, self.least_b + grown, first, grown, second, grown)

    @property
    def _lowest(self) -> float:
        return _NEAREST if self.least_b > 0 else _LOWEST

    @cached_property
    def _table(self) -> Array:
        at = self.exact.points(np.arange(self._lowest, _HIGHEST + 0.5 * _STEP, _STEP))
        return np.stack([at.a, at.a_first, at.a_second])

    def _between(self, u: Array) -> tuple[Array, Array, Array]:
        """Return a and its derivatives by pieces of the fifth degree through two values with two derivatives each."""
        place = np.minimum(((u - self._lowest) / _STEP).astype(np.intp), self._table.shape[1] - 2)
        t = (u - self._lowest) / _STEP - place
        a0, s0, b0 = self._table[:, place]
        a1, s1, b1 = self._table[:, place + 1]
        s0, s1, b0, b1 = s0 * _STEP, s1 * _STEP, b0 * _STEP**2, b1 * _STEP**2
        gap, tilt, turn = a1 - a0 - s0 - 0.5 * b0, s1 - s0 - b0, b1 - b0
        c3 = 10.0 * gap - 4.0 * tilt + 0.5 * turn
        c4 = -15.0 * gap + 7.0 * tilt - turn
        c5 = 6.0 * gap - 3.0 * tilt + 0.5 * turn
        a = a0 + t * (s0 + t * (0.5 * b0 + t * (c3 + t * (c4 + t * c5))))
        first = s0 + t * (b0 + t * (3.0 * c3 + t * (4.0 * c4 + t * 5.0 * c5)))
        second = b0 + t * (6.0 * c3 + t * (12.0 * c4 + t * 20.0 * c5))
        return a, first / _STEP, second / _STEP**2
