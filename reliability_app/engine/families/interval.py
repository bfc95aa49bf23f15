"""The probability of an interval in z with its derivatives, derived once for all families.

An interval is given by its middle and its half width, because the derivatives in these stay exact for the narrowest
intervals, where those in its two ends cancel.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families.base import Array, Derivatives, StandardDistribution

_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(12)
_SHARES = 0.5 * _WEIGHTS
# Where the density varies by less than about e over the interval it is integrated; elsewhere two tails are subtracted.
_NARROW = 0.5


class IntervalDerivatives(NamedTuple):
    """ln(F(middle + half) - F(middle - half)) and its derivatives, each of the shape of the arguments."""

    value: Array
    d_middle: Array
    d_half: Array
    d_middle_middle: Array
    d_middle_half: Array
    d_half_half: Array


def log_interval(
    standard: StandardDistribution, middle: Array, half: Array, ends: tuple[Array, Array] | None = None
) -> IntervalDerivatives:
    """Return the log probability of intervals, and its derivatives; all half widths positive.

    `ends` are the two ends themselves, where they are known better than middle and half width tell: of an interval that
    is wide beside its distance from the middle of the distribution.
    """
    at_middle = standard.log_density(middle)
    widest = _NARROW / (np.abs(at_middle.first) + 1.0)
    narrow = half < widest
    if narrow.all():
        return _integrated(standard, at_middle, middle, half)
    low, high = ends or (middle - half, middle + half)
    if not narrow.any():
        return _subtracted(standard, low, high, middle < 0.0)
    found = IntervalDerivatives(*(np.empty_like(middle) for _ in IntervalDerivatives._fields))
    at_narrow = Derivatives(*(column[narrow] for column in at_middle))
    wide = ~narrow
    for chosen, part in (
        (narrow, _integrated(standard.picked(narrow), at_narrow, middle[narrow], half[narrow])),
        (wide, _subtracted(standard.picked(wide), low[wide], high[wide], middle[wide] < 0.0)),
    ):
        for column, values in zip(found, part, strict=True):
            column[chosen] = values
    return found


def _integrated(
    standard: StandardDistribution, at_middle: Derivatives, middle: Array, half: Array
) -> IntervalDerivatives:
    """Integrate the density by Gauss-Legendre; slope and curvature are its means over the interval."""
    at_nodes = standard.log_density(middle[..., None] + half[..., None] * _NODES)
    relative = _SHARES * np.exp(at_nodes.value - at_middle.value[..., None])
    inside = relative.sum(axis=-1)
    weights = relative / inside[..., None]
    slope = np.sum(weights * at_nodes.first, axis=-1)
    about = at_nodes.first - slope[..., None]
    curvature = np.sum(weights * (at_nodes.second + about * about), axis=-1)
    value = at_middle.value + np.log(2.0 * half) + np.log(inside)
    low, high = standard.log_density(middle - half), standard.log_density(middle + half)
    scale = 1.0 / (2.0 * half * inside)
    ratios = np.exp(low.value - at_middle.value) * scale, np.exp(high.value - at_middle.value) * scale
    return _assembled(value, ratios, (low, high), slope=slope, curvature=curvature)


def _subtracted(
    standard: StandardDistribution, low: Array, high: Array, left: NDArray[np.bool_]
) -> IntervalDerivatives:
    """Take the difference in the smaller tail, with the ratios of density to probability from that tail's hazard."""
    below, above = _tail(standard, low, left), _tail(standard, high, left)
    larger, drop = np.where(left, above.value, below.value), -np.abs(above.value - below.value)
    share = -np.expm1(drop)
    rest = np.exp(drop)
    ratio_low = _product(np.where(left, rest, 1.0), np.abs(below.first)) / share
    ratio_high = _product(np.where(left, 1.0, rest), np.abs(above.first)) / share
    ends = standard.log_density(low), standard.log_density(high)
    return _assembled(larger + np.log(share), (ratio_low, ratio_high), ends)


def _tail(standard: StandardDistribution, z: Array, left: NDArray[np.bool_]) -> Derivatives:
    """Return ln F where `left`, else ln S."""
    cdf, survival = standard.log_cdf(z), standard.log_survival(z)
    return Derivatives(*(np.where(left, *both) for both in zip(cdf, survival, strict=True)))


def _product(vanishing: Array, other: Array) -> Array:
    """Return the product, 0 where the first has underflowed: an end far in a short tail has no part in anything."""
    return np.multiply(vanishing, other, where=vanishing > 0.0, out=np.zeros_like(vanishing))


def _assembled(
    value: Array,
    ratios: tuple[Array, Array],
    ends: tuple[Derivatives, Derivatives],
    *,
    slope: Array | None = None,
    curvature: Array | None = None,
) -> IntervalDerivatives:
    """Put the derivatives together from density over probability at both ends."""
    (ratio_low, ratio_high), (low, high) = ratios, ends
    bend_low, bend_high = _product(ratio_low, low.first), _product(ratio_high, high.first)
    slope = ratio_high - ratio_low if slope is None else slope
    stretch = ratio_high + ratio_low
    return IntervalDerivatives(
        value,
        slope,
        stretch,
        bend_high - bend_low - slope * slope if curvature is None else curvature,
        bend_high + bend_low - slope * stretch,
        bend_high - bend_low - stretch * stretch,
    )
