"""How well a fit agrees with its units: Anderson-Darling and plot correlation, each with a simulated reference.

No table covers fitted parameters together with censoring, so both statistics are referred to the same statistics of
samples drawn from the fit under the set's own plan and fitted anew.

Anderson-Darling, n times the integral of (F_KM - F)^2/(F (1 - F)) dF from 0 to the last unit observed, with F_KM the
Kaplan-Meier estimate. Koziol & Green put the product-limit estimate into the like integral without the weight (1976,
Biometrika 63, 465-474), "Tests based on EDF statistics for randomly censored normal distributions when parameters are
unknown" (2019, abstract read) into this one; for one common end of test it is Pettitt & Stephens' (1976, Biometrika 63,
291-298, from memory). For complete data the integral runs on to F = 1 and is the classical statistic.

Plot correlation: the correlation of ln life (or life itself) with the quantiles of the family at the plotting
positions, which measures how straight the points lie on the paper (Filliben 1975, Technometrics 17, 111-117; for
censored data Chen 1984, Biometrika 71, 315-322; from memory); the positions are the mid-points of the Kaplan-Meier
steps.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.batch_survival import BatchSteps, batch_steps
from reliability_app.engine.bounds import Proceed
from reliability_app.engine.errors import BoundUnavailable, NoEstimate
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import StandardDistribution
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitting import fit
from reliability_app.engine.goodness_one_by_one import NORMAL, REPEATS_ONE_BY_ONE, data_like, scored_steps
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.refitting import FEWEST_FAILURES, samples_like
from reliability_app.engine.simulation import can_be_simulated

Array = NDArray[np.float64]

SEED = 20_260_103
_LEAST_SHARE_FITTED = 0.05


@dataclass(frozen=True)
class Tested:
    """A statistic and the share of simulated samples that agree with the family no better.

    Attributes
    ----------
    statistic : float
    p_value : float or None
        (1 + worse)/(repeats + 1) (Davison & Hinkley 1997, from memory); None where it could not be simulated.
    """

    statistic: float
    p_value: float | None


@dataclass(frozen=True)
class Goodness:
    """How well a fit agrees with its units.

    Attributes
    ----------
    anderson_darling : Tested or None
        Large where fit and units differ; None where some units are only known to have failed between two ages.
    correlation : Tested or None
        1 for points on a straight line; None also with fewer than three ages at failure.
    repeats : int
        Simulated samples behind the p-values.
    reason : str
        A sentence that says why something is missing; empty where nothing is.
    """

    anderson_darling: Tested | None
    correlation: Tested | None
    repeats: int
    reason: str = ""


def goodness_of(
    found: Fit, *, repeats: int | None = None, seed: int = SEED, proceed: Proceed | None = None
) -> Goodness:
    """Return how well a fit agrees with its units, with p-values simulated under the set's own plan.

    The p-values are exact for complete data and a fixed number of failures. For a fixed end of test and for units that
    leave at ages of their own they err a little to the side of the family: in own simulations of 1,500 sets of 30 units
    a true family had p <= 0.05 in 2 to 7 % of them, p <= 0.10 in 7 to 11 %. Lives rounded so far that many coincide
    look worse than they are, because simulated lives do not coincide.

    Parameters
    ----------
    repeats : int, optional
        Simulated samples; if not given 1,000, fewer for more than 1,000 units.
    seed : int
        The same seed gives the same p-values.
    proceed : callable, optional
        Called between pieces of the simulation; what it raises ends the work.

    Raises
    ------
    NoEstimate
        Without a fit.
    """
    if not found.converged:
        raise NoEstimate(found.cautions[0].text)
    if found.data.is_found_failed.any():
        return Goodness(None, None, 0, _INTERVALS)
    distance, straightness = statistics_of(found)
    try:
        distances, straightnesses = _simulated(found, repeats, seed, proceed)
    except BoundUnavailable as trouble:
        return _goodness((distance, None), (straightness, None), 0, str(trouble))
    worse = int(np.sum(distances >= distance)), int(np.sum(straightnesses <= straightness))
    p_values = [(1 + count) / (distances.size + 1) for count in worse]
    return _goodness((distance, p_values[0]), (straightness, p_values[1]), distances.size, "")


_NO_PLAN = (
    "The p-values are not given, because the plan under which these units were watched cannot be simulated: "
    "compare the families by AICc."
)
_INTERVALS = (
    "Anderson-Darling and plot correlation are not given while units are only known to have failed between two ages: "
    "compare the families by AICc."
)


def _goodness(
    distance: tuple[float, float | None], straightness: tuple[float, float | None], repeats: int, reason: str
) -> Goodness:
    correlation = Tested(*straightness) if np.isfinite(straightness[0]) else None
    return Goodness(Tested(*distance), correlation, repeats, reason)


def anderson_darling(steps: BatchSteps, standard: StandardDistribution, a: Array, b: Array) -> Array:
    """Return the statistic of each sample at its own fit z = a + b y; all of shape (batch,).

    With c the estimate of the share failed, the integrand is c^2/u + (1 - c)^2/(1 - u) - 1, so that the integral over
    the steps is a sum over the failures alone, and a term for the end.
    """
    z, last = a[:, None] + b[:, None] * steps.y, a + b * steps.end
    failed_before, failed_after, running = 1.0 - steps.before, 1.0 - steps.after, steps.after[:, -1]
    with np.errstate(over="ignore", under="ignore", invalid="ignore"):
        left = (failed_before**2 - failed_after**2) * standard.log_cdf(z).value
        right = (steps.after**2 - steps.before**2) * standard.log_survival(z).value
        end = (1.0 - running) ** 2 * standard.log_cdf(last).value - standard.cdf(last)
        end = np.where(running > 0, end - running**2 * standard.log_survival(last).value, end)
    complete = steps.failures.sum(axis=1) == steps.units
    return np.asarray(steps.units * (left.sum(axis=1) + right.sum(axis=1) + np.where(complete, -1.0, end)))


def plot_correlation(steps: BatchSteps, standard: StandardDistribution) -> Array:
    """Return the correlation of each sample's points on probability paper, shape (batch,); NaN below three ages."""
    # Where units entered late the estimate can reach 0 before the last failure: no position exists after that.
    there = (steps.failures > 0) & (steps.before > 0)
    weight = np.where(there, steps.failures, 0.0)
    score = standard.survival_quantile(np.where(there, 0.5 * (steps.before + steps.after), 0.5))
    total = weight.sum(axis=1, keepdims=True)
    y, z = (values - np.sum(weight * values, axis=1, keepdims=True) / total for values in (steps.y, score))
    with np.errstate(invalid="ignore", divide="ignore"):
        together = np.sum(weight * y * z, axis=1)
        correlation = together / np.sqrt(np.sum(weight * y * y, axis=1) * np.sum(weight * z * z, axis=1))
    return np.where(there.sum(axis=1) >= FEWEST_FAILURES, correlation, np.nan)


def statistics_of(found: Fit) -> tuple[float, float]:
    """Return Anderson-Darling and plot correlation of a fit with its own data."""
    estimate = found.estimate
    if isinstance(estimate, Estimate):
        steps, standard, a, b = batch_steps(estimate.sample), found.family.standard, estimate.a, estimate.b
    else:
        steps, standard, a, b = scored_steps(found), NORMAL, 0.0, 1.0
    distance = anderson_darling(steps, standard, np.array([a]), np.array([b]))
    return float(distance[0]), float(plot_correlation(steps, standard)[0])


def _simulated(found: Fit, repeats: int | None, seed: int, proceed: Proceed | None) -> tuple[Array, Array]:
    """Return both statistics of samples drawn at the fit, each at its own fit."""
    if not can_be_simulated(found.data):
        raise BoundUnavailable(_NO_PLAN)
    if found.data.failed_count < FEWEST_FAILURES:
        raise BoundUnavailable("With fewer than three failures nothing can be said about how well a family fits.")
    if isinstance(found.estimate, Estimate):
        return _simulated_in_batches(found.estimate, found.data, repeats, seed, proceed)
    return simulated_one_by_one(found, repeats=repeats, seed=seed, proceed=proceed)


def _simulated_in_batches(
    estimate: Estimate, data: LifeData, repeats: int | None, seed: int, proceed: Proceed | None
) -> tuple[Array, Array]:
    standard = estimate.family.standard
    statistics: list[tuple[Array, Array]] = []
    for drawn in samples_like(estimate, data, repeats=repeats, seed=seed, proceed=proceed):
        top, steps = drawn.fitted_by(estimate.family), batch_steps(drawn.sample)
        distance = anderson_darling(steps, standard, top.a, top.b)
        statistics.append((distance[top.converged], plot_correlation(steps, standard)[top.converged]))
    distances, straightnesses = (np.concatenate(column) for column in zip(*statistics, strict=True))
    return distances, straightnesses


def simulated_one_by_one(
    found: Fit, *, repeats: int | None = None, seed: int = SEED, proceed: Proceed | None = None
) -> tuple[Array, Array]:
    """Return both statistics of samples drawn at any fit, refitted one at a time; 199 of them if not said otherwise.

    Raises
    ------
    BoundUnavailable
        If the plan cannot be simulated, or hardly any sample could be fitted.
    """
    count = repeats or REPEATS_ONE_BY_ONE
    name, threshold = found.family.name, found.family.has_threshold
    tests = data_like(found, repeats=count, seed=seed, proceed=proceed)
    refits = (fit(test, name, threshold=threshold) for test in tests)
    statistics = np.array([statistics_of(refit) for refit in refits if refit.converged]).reshape(-1, 2)
    if len(statistics) < _LEAST_SHARE_FITTED * count:
        raise BoundUnavailable("Hardly any simulated sample could be fitted, so there is no reference for this family.")
    return statistics[:, 0], statistics[:, 1]
