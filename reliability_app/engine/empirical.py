"""Estimates without a family: Kaplan-Meier with Greenwood errors, plotting positions, median and adjusted ranks."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.special import betaincinv, ndtri

from reliability_app.engine.errors import BoundUnavailable, UnknownName
from reliability_app.engine.life_data import LifeData

Array = NDArray[np.float64]

_MOST_RANKED = 1_000_000
PLOTTING_METHODS = ("kaplan_meier_midpoint", "median_rank", "benard")


@dataclass(frozen=True, eq=False)
class SurvivalSteps:
    """A survival estimate that steps down at each age with a failure; all arrays of shape (ages,).

    Attributes
    ----------
    age : ndarray
        Ages at which units failed, rising.
    survival : ndarray
        Share running just after that age.
    standard_error : ndarray
        Greenwood's; NaN where the survival is 0.
    lower, upper : ndarray
        Two-sided pointwise bounds formed on ln(-ln S); NaN where the survival is 0.
    at_risk, failures : ndarray
        Units watched just before that age, and how many of them failed at it.
    """

    age: Array
    survival: Array
    standard_error: Array
    lower: Array
    upper: Array
    at_risk: Array
    failures: Array


@dataclass(frozen=True, eq=False)
class PlottingPositions:
    """Where failures are drawn on probability paper; all arrays of shape (points,).

    Attributes
    ----------
    age : ndarray
    fraction : ndarray
        Failure probability at which the point is drawn.
    adjusted_rank : ndarray
        Johnson's adjusted rank of the last failure at that point; NaN where units entered late, for which ranks are
        not defined.
    """

    age: Array
    fraction: Array
    adjusted_rank: Array


def kaplan_meier(data: LifeData, *, confidence: float = 0.95) -> SurvivalSteps:
    """Return the product-limit estimate (Kaplan & Meier 1958, J. Am. Statist. Ass. 53, 457-481).

    A unit whose age at leaving equals an age at failure counts as watched at that age; a unit that entered late is
    watched from just after its entry.

    Raises
    ------
    BoundUnavailable
        If some units are only known to have failed between two ages.
    """
    _refuse_intervals(data, "Kaplan-Meier steps")
    failed = data.is_failed
    age, where = np.unique(data.lower[failed], return_inverse=True)
    failures = np.bincount(where, weights=data.quantity[failed], minlength=age.size).astype(np.float64)
    at_risk = _total_from(data.lower, data.quantity, age) - _total_from(data.entered, data.quantity, age)
    with np.errstate(divide="ignore", invalid="ignore"):
        survival = np.cumprod(1.0 - failures / at_risk).astype(np.float64)
        variance = np.cumsum(failures / (at_risk * (at_risk - failures)))
        error = np.where(survival > 0, survival * np.sqrt(variance), np.nan)
        width = ndtri(0.5 + 0.5 * confidence) * np.sqrt(variance) / np.abs(np.log(survival))
        lower, upper = survival ** np.exp(width), survival ** np.exp(-width)
    known = survival > 0
    return SurvivalSteps(
        age,
        survival,
        error,
        np.where(known, lower, np.nan),
        np.where(known, upper, np.nan),
        at_risk,
        failures,
    )


def removal_steps(data: LifeData) -> tuple[Array, Array]:
    """Return the product-limit estimate of the age at which units leave the test still running.

    Failures end the watch on a unit before it leaves; at equal ages failures come first.

    Returns
    -------
    age, share : ndarray, shape (ages,)
        Ages at which units left, rising, and the share that would still be under test just after each.
    """
    running = data.is_running
    age, where = np.unique(data.lower[running], return_inverse=True)
    left = np.bincount(where, weights=data.quantity[running], minlength=age.size).astype(np.float64)
    failed = data.is_failed
    order = np.argsort(data.lower[failed], kind="stable")
    failed_by = np.concatenate([[0.0], np.cumsum(data.quantity[failed][order])])
    beyond = failed_by[-1] - failed_by[np.searchsorted(data.lower[failed][order], age, side="right")]
    at_risk = _total_from(data.lower[running], data.quantity[running], age) + beyond
    return age, np.cumprod(1.0 - left / at_risk).astype(np.float64)


def plotting_positions(data: LifeData, *, method: str = "kaplan_meier_midpoint") -> PlottingPositions:
    """Return where the failures are drawn.

    Parameters
    ----------
    method : str
        "kaplan_meier_midpoint": one point a failure age, half way down its Kaplan-Meier step.
        "median_rank": one point a failed unit, at the median of the adjusted rank's beta distribution.
        "benard": the same by Benard's approximation (rank - 0.3)/(n + 0.4).

    Raises
    ------
    UnknownName
        If there is no such method.
    BoundUnavailable
        If some units are only known to have failed between two ages.
    """
    if method not in PLOTTING_METHODS:
        raise UnknownName(
            f"There are no plotting positions called {method!r}. There are: {', '.join(PLOTTING_METHODS)}."
        )
    _refuse_intervals(data, "Plotting positions")
    if method != "kaplan_meier_midpoint":
        age, rank = adjusted_ranks(data)
        place = median_rank if method == "median_rank" else benard_rank
        return PlottingPositions(age, place(rank, data.unit_count), rank)
    steps = kaplan_meier(data)
    before = np.concatenate([[1.0], steps.survival[:-1]])
    # The product over the units of one age telescopes, so that their number does not matter.
    if data.entered.any():
        unknown = np.full_like(steps.age, np.nan)
        return PlottingPositions(steps.age, 1.0 - 0.5 * (before + steps.survival), unknown)
    remaining = _total_from(data.lower, data.quantity, steps.age)
    kept = np.cumprod((remaining - steps.failures + 1.0) / (remaining + 1.0)).astype(np.float64)
    rank = (data.unit_count + 1) * (1.0 - kept)
    return PlottingPositions(steps.age, 1.0 - 0.5 * (before + steps.survival), rank)


def adjusted_ranks(data: LifeData) -> tuple[Array, Array]:
    """Return the age and Johnson's adjusted rank of each failed unit, in rising order.

    Each rank exceeds the one before by (n + 1 - previous rank)/(1 + units at or beyond), failures counted before
    running units of the same age and units of a quantity one after the other (Johnson 1964, from memory).
    """
    failed = data.is_failed
    if data.entered.any():
        raise BoundUnavailable("Ranks are not defined where units came under observation late: use the mid-points.")
    if data.failed_count > _MOST_RANKED:
        raise BoundUnavailable(
            f"Ranks are given unit by unit, for {_MOST_RANKED} failures at the most: use the Kaplan-Meier mid-points."
        )
    order = np.argsort(data.lower[failed], kind="stable")
    age = np.repeat(data.lower[failed][order], data.quantity[failed][order].astype(np.intp))
    place = np.arange(age.size) - np.searchsorted(age, age, side="left")
    remaining = _total_from(data.lower, data.quantity, age) - place
    # With q = (n + 1 - rank)/(n + 1) the recursion is the product of remaining/(remaining + 1).
    unit_count = data.unit_count
    return age, (unit_count + 1) * (1.0 - np.cumprod(remaining / (remaining + 1.0)).astype(np.float64))


def median_rank(order: ArrayLike, n: int) -> Array:
    """Return the median of the failure probability at the `order`-th of `n` failures: beta(order, n - order + 1)."""
    rank = np.asarray(order, dtype=np.float64)
    return np.asarray(betaincinv(rank, n - rank + 1.0, 0.5))


def benard_rank(order: ArrayLike, n: int) -> Array:
    """Return Benard's approximation of the median rank (NIST/SEMATECH e-Handbook 8.2.2.1)."""
    return (np.asarray(order, dtype=np.float64) - 0.3) / (n + 0.4)


def _total_from(ages: Array, weight: Array, at: Array) -> Array:
    """Return the total weight of the records whose age is at or beyond each of `at`."""
    order = np.argsort(ages, kind="stable")
    total = np.concatenate([[0.0], np.cumsum(weight[order])])
    return np.asarray(total[-1] - total[np.searchsorted(ages[order], at, side="left")])


def _refuse_intervals(data: LifeData, what: str) -> None:
    if data.is_found_failed.any():
        raise BoundUnavailable(
            f"{what} cannot be given here while some units are only known to have failed between two ages."
        )
