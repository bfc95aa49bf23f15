"""Quantile residuals: each unit's life as a standard normal score under the fit, with censored units drawn at random.

For a unit that failed at age t the residual is the normal quantile of F(t); for one still running, or found failed
between two ages, the score is known to lie in an interval, and one value in it is drawn at random, as likely as the fit
makes it (Dunn & Smyth 1996, J. Comp. Graph. Statist. 5, 236-244). If the family is right the values are a standard
normal sample: against row, age, or any other column of the table they should show no pattern. Both are given, the
interval, which is all that is known, and the drawn value, which can be plotted and tested like any complete sample.
A unit that entered late is judged by the lives of units that reached its age of entry.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri_exp

from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitted_scores import Tails, log_complement, log_tails, normal_score

Array = NDArray[np.float64]
Records = NDArray[np.intp]

SEED = 20_260_104


@dataclass(frozen=True, eq=False)
class QuantileResiduals:
    """Standard normal scores of the units, one each, in the order of the records; all arrays of shape (units,).

    Attributes
    ----------
    lower, upper : ndarray
        Between which the score is known to lie; equal for a unit that failed at a known age.
    value : ndarray
        That score, or one drawn from the interval.
    record : ndarray of int
        The record of the life data each unit belongs to.
    """

    lower: Array
    upper: Array
    value: Array
    record: Records


def quantile_residuals(found: Fit, *, seed: int = SEED) -> QuantileResiduals:
    """Return the quantile residuals of the units of a fit; the same seed gives the same draws.

    Raises
    ------
    NoEstimate
        Without a fit.
    """
    data = found.data
    record = np.repeat(np.arange(data.lower.size), data.quantity.astype(np.intp))
    low, high = _tails_of_unit(found, data.lower), _tails_of_unit(found, data.upper)
    share = np.random.default_rng(seed).random(record.size)
    drawn = _between((low[0][record], low[1][record]), (high[0][record], high[1][record]), share)
    lower, upper = normal_score(*low)[record], normal_score(*high)[record]
    value = np.where(data.is_failed[record], lower, np.clip(normal_score(*drawn), lower, upper))
    return QuantileResiduals(lower, upper, value, record)


def surprising_units(residuals: QuantileResiduals, *, level: float = 0.05) -> NDArray[np.intp]:
    """Return which units lie so far out that among so many a fit that is right has any such with probability `level`.

    Bonferroni's limit on both sides; a unit counts only when the whole interval of its score lies beyond.
    """
    limit = -float(ndtri_exp(np.log(0.5 * level / residuals.record.size)))
    return np.flatnonzero((residuals.upper < -limit) | (residuals.lower > limit))


def _tails_of_unit(found: Fit, age: Array) -> Tails:
    """Return ln F and ln S at the ages, those of units that entered late given that they reached their entry."""
    log_cdf, log_survival = log_tails(found, age)
    late = found.data.entered > 0
    if late.any():
        _, start = log_tails(found, np.where(late, found.data.entered, found.data.last_observation))
        # A unit found failed may have been looked at last before it entered.
        given = np.minimum(log_survival - start, 0.0)
        log_survival = np.where(late, given, log_survival)
        log_cdf = np.where(late, log_complement(given), log_cdf)
    return log_cdf, log_survival


def _between(low: Tails, high: Tails, share: Array) -> Tails:
    """Return the tails at a share of the probability between two points, each from the tail it is smaller in."""
    (cdf_low, survival_low), (cdf_high, survival_high) = low, high
    with np.errstate(divide="ignore"):
        ratio = np.exp(cdf_low - cdf_high), np.exp(survival_high - survival_low)
        log_cdf = cdf_high + np.log(ratio[0] + share * (1.0 - ratio[0]))
        log_survival = survival_low + np.log(1.0 - share * (1.0 - ratio[1]))
    in_left = cdf_high < survival_low
    return (
        np.where(in_left, log_cdf, log_complement(log_survival)),
        np.where(in_left, log_complement(log_cdf), log_survival),
    )
