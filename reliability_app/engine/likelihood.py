"""The censored log-likelihood in a = -mu/sigma, b = 1/sigma with its derivatives, over a batch axis.

With z = a + b y the log-likelihood of one sample is the sum of quantity times

    failed         ln b + ln f(z)         (and, for a family of ln life, - ln life: the Jacobian of the logarithm)
    running        ln S(z)
    found failed   ln(F(z_high) - F(z_low)), at the first look ln F(z_high)
    entered late   - ln S(z_entered)

It is concave in (a, b) for a log-concave f unless units entered late (Burridge 1981, J. R. Statist. Soc. B 43, 41-45).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import Derivatives, StandardDistribution
from reliability_app.engine.families.interval import IntervalDerivatives, log_interval
from reliability_app.engine.sample import IntervalPart, Part, Sample

Array = NDArray[np.float64]

# Intervals whose half is longer than this, in the spread of the failures, are held by their ends.
_WIDE = 1.0


@dataclass(frozen=True, eq=False)
class Terms:
    """Log-likelihood without the Jacobian term, and its derivatives; each of shape (points,)."""

    value: Array
    d_a: Array
    d_b: Array
    d_aa: Array
    d_ab: Array
    d_bb: Array

    def columns(self) -> tuple[Array, Array, Array, Array, Array, Array]:
        """Return value, d_a, d_b, d_aa, d_ab, d_bb."""
        return self.value, self.d_a, self.d_b, self.d_aa, self.d_ab, self.d_bb

    def rows(self, index: NDArray[np.bool_] | NDArray[np.intp]) -> Terms:
        """Return the terms of the chosen points."""
        return Terms(*(column[index] for column in self.columns()))


def log_likelihood(sample: Sample, standard: StandardDistribution, a: Array, b: Array) -> Terms:
    """Evaluate at the points (a, b), each of shape (points,).

    A batch of B samples is evaluated at B points, sample by sample; one sample at any number of points.
    Values outside the parameter space come out as -inf or NaN, never as an exception.
    """
    sums = np.zeros((6, a.size))
    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        failures = sample.failed.total
        sums[0] = failures * np.log(b)
        sums[2] = failures / b
        sums[5] = -sums[2] / b
        for part, function, sign in (
            (sample.failed, standard.log_density, 1.0),
            (sample.running, standard.log_survival, 1.0),
            (sample.left, standard.log_cdf, 1.0),
            (sample.entered, standard.log_survival, -1.0),
        ):
            if part.size:
                _add_part(sums, part, function, sign, a=a[:, None], b=b[:, None])
        if sample.between.size:
            _add_intervals(sums, sample.between, standard, a=a[:, None], b=b[:, None])
    return Terms(*sums)


def _add_part(
    sums: Array, part: Part, function: Callable[[Array], Derivatives], sign: float, *, a: Array, b: Array
) -> None:
    for y, weight, weight_y, weight_yy in part.blocks(a.size):
        z = y * b
        z += a
        value, first, second = function(z)
        total, slope = _total(value, weight), _total(first, weight_y)
        # Where the functions are one and the same (the Weibull's survival) so are their sums.
        level = total if first is value else _total(first, weight)
        bend = level if second is first else _total(second, weight)
        across = slope if second is first else _total(second, weight_y)
        for row, piece in enumerate((total, level, slope, bend, across, _total(second, weight_yy))):
            sums[row] += piece if sign > 0 else -piece


def _total(values: Array, weights: Array) -> Array:
    """Sum values times weights along n, where one row of weights may serve all rows of values."""
    if len(weights) == 1:
        return np.asarray(values @ weights[0])
    return np.asarray(np.einsum("ij,ij->i", values, weights))


def _add_intervals(sums: Array, part: IntervalPart, standard: StandardDistribution, *, a: Array, b: Array) -> None:
    low, high = part.ends
    gap = log_interval(standard, a + b * part.middle, b * part.half, ends=(a + b * low, a + b * high))
    slope, across, bend = _in_middle(gap, part.middle, part.half)
    wide = part.half > _WIDE
    if wide.any():
        of_ends = _in_ends(gap, low, high)
        slope, across, bend = (np.where(wide, *both) for both in zip(of_ends, (slope, across, bend), strict=True))
    for row, piece in enumerate((gap.value, gap.d_middle, slope, gap.d_middle_middle, across, bend)):
        sums[row] += _total(piece, part.weight)


def _in_middle(gap: IntervalDerivatives, middle: Array, half: Array) -> tuple[Array, Array, Array]:
    """Return the derivatives d_b, d_ab, d_bb of intervals from their middles and half widths."""
    along, across = middle * gap.d_middle_middle, half * gap.d_middle_half
    slope = middle * gap.d_middle + half * gap.d_half
    return slope, along + across, middle * (along + 2.0 * across) + half * half * gap.d_half_half


def _in_ends(gap: IntervalDerivatives, low: Array, high: Array) -> tuple[Array, Array, Array]:
    """Return the same from the ends: what is far out at one end drops out, and the other keeps its digits."""
    at_low, at_high = 0.5 * (gap.d_middle - gap.d_half), 0.5 * (gap.d_middle + gap.d_half)
    mean, twice = 0.25 * (gap.d_middle_middle + gap.d_half_half), 0.5 * gap.d_middle_half
    low_low, high_high, low_high = mean - twice, mean + twice, 0.25 * (gap.d_middle_middle - gap.d_half_half)
    return (
        high * at_high + low * at_low,
        high * (high_high + low_high) + low * (low_low + low_high),
        high * (high * high_high + low * low_high) + low * (low * low_low + high * low_high),
    )
