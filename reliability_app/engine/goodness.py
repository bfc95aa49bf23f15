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
steps. Where all units share one schedule of inspections the statistics are those of `goodness_at_looks`.
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
from reliability_app.engine.goodness_at_looks import common_looks, look_statistics, weighted_correlation
from reliability_app.engine.goodness_one_by_one import NORMAL, REPEATS_ONE_BY_ONE, data_like, scored_looks, scored_steps
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.methods import MAXIMUM_LIKELIHOOD
from reliability_app.engine.refitting import FEWEST_FAILURES, samples_like

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
        Large where fit and units differ; None where units found failed between two ages do not share one schedule of
        inspections with all others.
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
    looks = _looks(found)
    if found.data.is_found_failed.any() and looks is None:
        return Goodness(None, None, 0, _INTERVALS)
    distance, straightness = statistics_of(found, looks)
    try:
        distances, straightnesses = _simulated(found, repeats, seed, proceed)
    except BoundUnavailable as trouble:
        return _goodness((distance, None), (straightness, None), 0, str(trouble))
    worse = int(np.sum(distances >= distance)), int(np.sum(straightnesses <= straightness))
    p_values = [(1 + count) / (distances.size + 1) for count in worse]
    return _goodness((distance, p_values[0]), (straightness, p_values[1]), distances.size, "")


_INTERVALS = (
    "Anderson-Darling and plot correlation are not given, because units found failed between two ages do not share one "
    "schedule of inspections, from age 0, with all other units: compare the families by AICc."
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
    return weighted_correlation(steps.y, score, weight, fewest=FEWEST_FAILURES)


def statistics_of(found: Fit, looks: Array | None = None) -> tuple[float, float]:
    """Return Anderson-Darling and plot correlation of a fit with its own data, at places of common looks if given."""
    estimate = found.estimate
    if isinstance(estimate, Estimate):
        sample, standard, a, b = estimate.sample, found.family.standard, np.array([estimate.a]), np.array([estimate.b])
        if looks is not None:
            looks = (looks - sample.shift) / sample.spread
            distance, straightness = look_statistics(sample, looks, standard, a, b, fewest=FEWEST_FAILURES)
            return float(distance[0]), float(straightness[0])
        steps = batch_steps(sample)
    elif looks is not None:
        distance, straightness = scored_looks(found, looks)
        return float(distance[0]), float(straightness[0])
    else:
        steps, standard, a, b = scored_steps(found), NORMAL, np.zeros(1), np.ones(1)
    return float(anderson_darling(steps, standard, a, b)[0]), float(plot_correlation(steps, standard)[0])


def _looks(found: Fit) -> Array | None:
    """Return the places of the looks that all units share, or None."""
    return common_looks(found.data, found.family.life_scale)


def _simulated(found: Fit, repeats: int | None, seed: int, proceed: Proceed | None) -> tuple[Array, Array]:
    """Return both statistics of samples drawn at the fit, each at its own fit."""
    if found.data.failed_count + found.data.found_failed_count < FEWEST_FAILURES:
        raise BoundUnavailable("With fewer than three failures nothing can be said about how well a family fits.")
    if found.method != MAXIMUM_LIKELIHOOD:
        raise BoundUnavailable(f"A p-value is simulated for fits by {MAXIMUM_LIKELIHOOD} only: choose that method.")
    if isinstance(found.estimate, Estimate):
        return _simulated_in_batches(found.estimate, found.data, repeats, seed, proceed)
    return simulated_one_by_one(found, repeats=repeats, seed=seed, proceed=proceed)


def _simulated_in_batches(
    estimate: Estimate, data: LifeData, repeats: int | None, seed: int, proceed: Proceed | None
) -> tuple[Array, Array]:
    standard, looks = estimate.family.standard, common_looks(data, estimate.family.life_scale)
    if looks is not None:
        looks = estimate.a + estimate.b * (looks - estimate.sample.shift) / estimate.sample.spread
    statistics: list[tuple[Array, Array]] = []
    for drawn in samples_like(estimate, data, repeats=repeats, seed=seed, proceed=proceed):
        top = drawn.fitted_by(estimate.family)
        if looks is not None:
            both = look_statistics(drawn.sample, looks, standard, top.a, top.b, fewest=FEWEST_FAILURES)
        else:
            steps = batch_steps(drawn.sample)
            both = anderson_darling(steps, standard, top.a, top.b), plot_correlation(steps, standard)
        statistics.append((both[0][top.converged], both[1][top.converged]))
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
    looks = _looks(found)
    statistics = np.array([statistics_of(refit, looks) for refit in refits if refit.converged]).reshape(-1, 2)
    if len(statistics) < _LEAST_SHARE_FITTED * count:
        raise BoundUnavailable("Hardly any simulated sample could be fitted, so there is no reference for this family.")
    return statistics[:, 0], statistics[:, 1]
