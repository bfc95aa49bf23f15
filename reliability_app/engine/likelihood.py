"""The censored log-likelihood in a = -mu/sigma, b = 1/sigma with its derivatives, over a batch axis.

With z = a + b y the log-likelihood of one sample is the sum of quantity times

    failed         ln b + ln f(z)         (and - ln life, the Jacobian of the logarithm)
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
from reliability_app.engine.families.interval import log_interval
from reliability_app.engine.sample import IntervalPart, Part, Sample

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Terms:
    """Log-likelihood without the Jacobian term, and its derivatives; each of shape (points,)."""

    value: Array
    d_a: Array
    d_b: Array
    d_aa: Array
    d_ab: Array
    d_bb: Array

    def __add__(self, other: Terms) -> Terms:
        return Terms(*(mine + theirs for mine, theirs in zip(self.columns(), other.columns(), strict=True)))

    def scaled(self, factor: float) -> Terms:
        """Return the terms multiplied by `factor`."""
        return Terms(*(factor * column for column in self.columns()))

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
    with np.errstate(over="ignore", invalid="ignore", divide="ignore", under="ignore"):
        terms = _exact(sample.failed, a, b, standard.log_density)
        failures = sample.failed.weight.sum(axis=1)
        zero = np.zeros_like(a)
        terms += Terms(failures * np.log(b) + zero, zero, failures / b + zero, zero, zero, -failures / (b * b) + zero)
        for part, function, sign in (
            (sample.running, standard.log_survival, 1.0),
            (sample.left, standard.log_cdf, 1.0),
            (sample.entered, standard.log_survival, -1.0),
        ):
            if part.y.shape[1]:
                terms += _exact(part, a, b, function).scaled(sign)
        if sample.between.middle.shape[1]:
            terms += _interval(sample.between, a, b, standard)
    return terms


def _exact(part: Part, a: Array, b: Array, function: Callable[[Array], Derivatives]) -> Terms:
    sums = [np.zeros_like(a) for _ in range(6)]
    for block in part.blocks(a.size):
        z = block.y * b[:, None]
        z += a[:, None]
        value, first, second = function(z)
        weighted_y = block.weight * block.y
        pieces = (
            _total(value, block.weight),
            _total(first, block.weight),
            _total(first, weighted_y),
            _total(second, block.weight),
            _total(second, weighted_y),
            _total(second, weighted_y * block.y),
        )
        for total, piece in zip(sums, pieces, strict=True):
            total += piece
    return Terms(*sums)


def _total(values: Array, weights: Array) -> Array:
    """Sum values times weights along n, where one row of weights may serve all rows of values.

    Not by a matrix product: its threads wait for each other whenever another program is busy.
    """
    total = np.einsum("ij,j->i", values, weights[0]) if len(weights) == 1 else np.einsum("ij,ij->i", values, weights)
    return np.asarray(total)


def _interval(part: IntervalPart, a: Array, b: Array, standard: StandardDistribution) -> Terms:
    middle, half, weight = part.middle, part.half, part.weight
    gap = log_interval(standard, a[:, None] + b[:, None] * middle, b[:, None] * half)
    across = middle * half * gap.d_middle_half
    return Terms(
        _total(gap.value, weight),
        _total(gap.d_middle, weight),
        _total(middle * gap.d_middle + half * gap.d_half, weight),
        _total(gap.d_middle_middle, weight),
        _total(middle * gap.d_middle_middle + half * gap.d_middle_half, weight),
        _total(middle * middle * gap.d_middle_middle + 2.0 * across + half * half * gap.d_half_half, weight),
    )
