"""Anderson-Darling and plot correlation where all units share one schedule of inspections.

Nothing is known between two looks, so that fit and units are compared at the looks alone. Anderson-Darling for grouped
data is n times the sum over the looks of (S_PL - S)^2 p/(S (1 - S)), with p the probability of the span that ends there
(Choulakian, Lockhart & Stephens 1994, Canad. J. Statist. 22, 125-137, from memory), here with the product-limit (life
table) estimate S_PL in the place of the share still running, and only as far as units are looked at. The points of the
plot lie at the looks at which units were found failed, at S_PL just after it; where it is 0 there is no point.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.families import StandardDistribution
from reliability_app.engine.inspections import looks_of
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_scale import LifeScale
from reliability_app.engine.sample import Part, Sample

Array = NDArray[np.float64]


def common_looks(data: LifeData, life_scale: LifeScale) -> Array | None:
    """Return the places of the looks that all units share from the start, or None where they do not."""
    looks = looks_of(data, life_scale)
    is_common = looks.is_shared and looks.is_inspected.all() and not data.entered.any()
    return looks.place if is_common else None


def look_statistics(
    sample: Sample,
    looks: Array,
    standard: StandardDistribution,
    a: Array,
    b: Array,
    *,
    fewest: int,
    scores: Array | None = None,
) -> tuple[Array, Array]:
    """Return Anderson-Darling and plot correlation of each sample at its own fit z = a + b y; all of shape (batch,).

    Parameters
    ----------
    looks : ndarray, shape (looks,)
        In y.
    fewest : int
        With fewer points the correlation is NaN.
    scores : ndarray, shape (looks,), optional
        What stands for y in the statistics, if not the looks themselves.
    """
    found, units_there, after = _life_table(sample, looks)
    looks = looks if scores is None else scores
    with np.errstate(over="ignore", under="ignore", invalid="ignore", divide="ignore"):
        z = a[:, None] + b[:, None] * looks
        share, rest = standard.cdf(z), standard.survival(z)
        span = np.diff(share, axis=1, prepend=0.0)
        parts = (after - rest) ** 2 * span / (share * rest)
    # Where the model leaves no room for either outcome the span has no probability either.
    counted = (units_there > 0) & (share > 0) & (rest > 0)
    distance = units_there[:, 0] * np.sum(np.where(counted, parts, 0.0), axis=1)
    point = (found > 0) & (after > 0)
    score = standard.survival_quantile(np.where(point, after, 0.5))
    return distance, weighted_correlation(looks, score, np.where(point, found, 0.0), fewest=fewest)


def weighted_correlation(y: Array, score: Array, weight: Array, *, fewest: int) -> Array:
    """Return the correlation of y and score in each row, shape (batch,); NaN with fewer than `fewest` points."""
    total = weight.sum(axis=1, keepdims=True)
    with np.errstate(invalid="ignore", divide="ignore"):
        y, score = (values - np.sum(weight * values, axis=1, keepdims=True) / total for values in (y, score))
        together = np.sum(weight * y * score, axis=1)
        correlation = together / np.sqrt(np.sum(weight * y * y, axis=1) * np.sum(weight * score * score, axis=1))
    return np.where((weight > 0).sum(axis=1) >= fewest, correlation, np.nan)


def _life_table(sample: Sample, looks: Array) -> tuple[Array, Array, Array]:
    """Return units found failed at each look, units looked at, and the product-limit estimate after it, by sample."""
    rows = max(part.weight.shape[0] for part in (sample.left, sample.between, sample.running))
    at_ends = Part(sample.between.ends[1], sample.between.weight)
    found = _at_looks(sample.left, looks, rows) + _at_looks(at_ends, looks, rows)
    gone = found + _at_looks(sample.running, looks, rows)
    there = np.flip(np.cumsum(np.flip(gone, axis=1), axis=1), axis=1)
    after = np.cumprod(1.0 - found / np.where(there > 0, there, 1.0), axis=1)
    return found, there, np.asarray(after)


def _at_looks(part: Part, looks: Array, rows: int) -> Array:
    """Return the units of a part by the look nearest to each, shape (rows, looks)."""
    y, weight = (np.broadcast_to(values, (rows, part.size)) for values in (part.y, part.weight))
    number = np.searchsorted(0.5 * (looks[1:] + looks[:-1]), y) + looks.size * np.arange(rows)[:, None]
    counts = np.bincount(number.ravel(), weights=weight.ravel(), minlength=rows * looks.size)
    return counts.reshape(rows, looks.size).astype(np.float64)
