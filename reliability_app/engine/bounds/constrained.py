"""Maximises the log-likelihood along the curve of points (a, b) on which a measure keeps one value, over a batch.

Each curve has one free coordinate u; its points come with two derivatives in u, so that Newton's method in u needs no
more than the terms of the log-likelihood.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.bounds.curve import Curve, CurvePoints
from reliability_app.engine.bounds.further_curves import MovedCurve, SolvedCurve, TabulatedCurve
from reliability_app.engine.families import StandardDistribution
from reliability_app.engine.further_measures import (
    ConditionalMeasure,
    FurtherMeasure,
    HazardAgeMeasure,
    MeanMeasure,
    ModeMeasure,
    ResidualMeasure,
)
from reliability_app.engine.life_measures import HazardMeasure, LifeMeasure, Measure, ScoreMeasure, SlopeMeasure
from reliability_app.engine.newton import DECREMENT_REACHED, Evaluate

Array = NDArray[np.float64]

_MOST_STEPS = 80
_MOST_HALVINGS = 50
_ROUNDING = 1e-13


@dataclass(frozen=True)
class ScoreCurve(Curve):
    """The score is z at y: a = z - b y, with u = ln b. Lives and reliabilities keep their value along it."""

    z: float
    y: float

    def points(self, u: Array) -> CurvePoints:
        """Return the points at u = ln b."""
        b = np.exp(u)
        slope = -self.y * b
        return CurvePoints(self.z + slope, b, slope, b, slope, b)

    def start(self, a: float, b: float) -> float:  # noqa: ARG002 - the curve itself gives a
        """Return ln b."""
        return float(np.log(b))


@dataclass(frozen=True)
class SlopeCurve(Curve):
    """b keeps its value; u = a."""

    b: float

    def points(self, u: Array) -> CurvePoints:
        """Return the points at u = a."""
        zero = np.zeros_like(u)
        return CurvePoints(u, zero + self.b, zero + 1.0, zero, zero, zero)

    def start(self, a: float, b: float) -> float:
        """Return a, moved so that the score at the middle of the sample (y = 0) stays."""
        return a * self.b / b if np.isfinite(a) else 0.0


@dataclass(frozen=True)
class HazardCurve(Curve):
    """The logarithm of the hazard at y is `value`: with u the score at y, ln b = value - ln h(u), a = u - b y."""

    value: float
    y: float
    standard: StandardDistribution

    def points(self, u: Array) -> CurvePoints:
        """Return the points at the score u."""
        log_hazard, first, second = self.standard.log_hazard(u)
        b = np.exp(self.value - log_hazard)
        b_first = -b * first
        b_second = b * (first * first - second)
        return CurvePoints(u - b * self.y, b, 1.0 - b_first * self.y, b_first, -b_second * self.y, b_second)

    def start(self, a: float, b: float) -> float:
        """Return the score at y."""
        return a + b * self.y


def curve_of(measure: Measure, value: float) -> Curve:
    """Return the curve on which a measure of size 1 has this value."""
    match measure:
        case LifeMeasure():
            return ScoreCurve(z=float(measure.z[0]), y=value)
        case ScoreMeasure():
            return ScoreCurve(z=value, y=float(measure.y[0]))
        case HazardMeasure():
            return HazardCurve(value, float(measure.y[0]), measure.standard)
        case SlopeMeasure():
            return SlopeCurve(float(np.exp(value)))
        case HazardAgeMeasure():
            return HazardCurve(float(measure.level[0]) + measure.slope * value, value, measure.standard)
        case MeanMeasure() | ModeMeasure():
            return TabulatedCurve(MovedCurve(measure, value))
        case ResidualMeasure() | ConditionalMeasure():
            return TabulatedCurve(SolvedCurve(measure, value))
    raise TypeError(f"{type(measure).__name__} has no curve on which it is constant.")


def side_of(measure: Measure, curve: Curve, value: float, a: Array, b: Array) -> Array:
    """Return on which side of `value` a measure of size 1 lies at points: 1 above it, -1 below, 0 on its curve."""
    if isinstance(measure, FurtherMeasure) and isinstance(curve, TabulatedCurve):
        # The curve says it without asking the measure at thousands of points.
        away = a - curve.points(curve.place(b)).a
        side = np.sign(away) if measure.rises_with_a else -np.sign(away)
        return np.where(np.isnan(away), measure.limit, side)
    return np.asarray(np.sign(measure.terms(a[None, :], b[None, :]).value[0] - value))


@dataclass(frozen=True, eq=False)
class CurveMaximum:
    """The highest points along a curve for a batch: coordinates, log-likelihood, and whether each was reached."""

    u: Array
    a: Array
    b: Array
    value: Array
    converged: NDArray[np.bool_]


def maximise_along(evaluate: Evaluate, curve: Curve, u: Array) -> CurveMaximum:
    """Climb along `curve` from the starts u, shape (batch,), sample by sample.

    `evaluate(rows, a, b)` returns the terms of the samples `rows` at the points (a, b).
    """
    u = u.copy()
    active = np.arange(u.size)
    value, slope, bend = _along(evaluate, curve, active, u)
    decrement = np.full(u.size, np.inf)
    for _ in range(_MOST_STEPS):
        slopes, bends = slope[active], bend[active]
        steps = slopes / np.where(bends < 0, -bends, np.abs(bends) + 1.0)
        # u is a logarithm or a score: longer steps than this are never right far from the maximum.
        steps = np.clip(steps, -2.0, 2.0)
        decrement[active] = steps * slopes
        moving = decrement[active] > DECREMENT_REACHED
        active, steps = active[moving], steps[moving]
        if not active.size:
            break
        moved = _step(evaluate, curve, active, u, steps, (value, slope, bend))
        active = active[moved]
    points = curve.points(u)
    reached = (decrement <= DECREMENT_REACHED * np.maximum(1.0, np.abs(value))) & np.isfinite(value)
    return CurveMaximum(u, points.a, points.b, value + 0.5 * np.where(reached, decrement, 0.0), reached)


def _along(evaluate: Evaluate, curve: Curve, rows: NDArray[np.intp], u: Array) -> tuple[Array, Array, Array]:
    with np.errstate(over="ignore", invalid="ignore"):
        at = curve.points(u)
        terms = evaluate(rows, at.a, at.b)
        slope = terms.d_a * at.a_first + terms.d_b * at.b_first
        bend = (
            terms.d_aa * at.a_first**2
            + 2.0 * terms.d_ab * at.a_first * at.b_first
            + terms.d_bb * at.b_first**2
            + terms.d_a * at.a_second
            + terms.d_b * at.b_second
        )
    return terms.value.copy(), slope, bend


def _step(
    evaluate: Evaluate,
    curve: Curve,
    active: NDArray[np.intp],
    u: Array,
    steps: Array,
    columns: tuple[Array, Array, Array],
) -> NDArray[np.bool_]:
    """Move each active row by the longest of 1, 1/2, 1/4 ... of its step that does not lose; say which moved."""
    waiting = np.arange(active.size)
    length = np.ones(active.size)
    moved = np.zeros(active.size, dtype=bool)
    for _ in range(_MOST_HALVINGS):
        rows = active[waiting]
        tried_u = u[rows] + length[waiting] * steps[waiting]
        tried = _along(evaluate, curve, rows, tried_u)
        kept = columns[0][rows]
        good = tried[0] >= kept - _ROUNDING * np.maximum(1.0, np.abs(kept))
        u[rows[good]] = tried_u[good]
        for column, values in zip(columns, tried, strict=True):
            column[rows[good]] = values[good]
        moved[waiting[good]] = True
        waiting = waiting[~good]
        if not waiting.size:
            break
        length[waiting] *= 0.5
    return moved
