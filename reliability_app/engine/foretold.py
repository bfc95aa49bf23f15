"""How many running units a fit foretells to fail by ages still to be reached, with limits that reckon with its doubt.

The number that fail is a sum of independent trials, one a unit: a unit running at age c fails by age t with chance
(F(t) - F(c)) / S(c). With the fitted parameters put in as if known ("plug-in"), limits of that number hold 72-88 % of
the time where 95 % is promised, however many units there are. Here the chances are averaged over a simulated
confidence distribution of the parameters: tests drawn at the fit under the set's own plan are fitted anew, and each
refit is reflected about the fit, mu** = mu + (mu - mu*) sigma/sigma*, sigma** = sigma^2/sigma* (generalized pivotal
quantities; for the number failing among units of one test: Tian, Meng, Meeker & Escobar, "Predicting the number of
future events", J. Am. Stat. Assoc. 2022; cited from memory).

These refits are exact pivots where a test stops at a failure. Where it stopped at a fixed age, r failures so far mean
something between a test that stopped at its r-th failure and one that would have stopped at the next: the foretold
distribution is the mean of the two, as half a failure is added to a count in other places. For a constant hazard these
are the gamma distributions with r and r + 1 of its exact limits. `tests/benchmarks/foretold_study.py` measures how
often the limits hold.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.special import gammaln, xlog1py, xlogy

from reliability_app.engine.bounds import Proceed
from reliability_app.engine.errors import BoundUnavailable, DataError, NoEstimate
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitting import fit
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.refitting import samples_at
from reliability_app.engine.simulation import CensoringPlan, Draws, PlanKind, plan_of

Array = NDArray[np.float64]

SEED = 20_260_104
# Refits in all, and units drawn in one piece of them between two calls of `proceed`.
_MOST_REFITS, _FEWEST_REFITS, _UNITS_DRAWN, _UNITS_A_PIECE = 8_000, 1_000, 4_000_000, 400_000
# Where ages differ the number that fails is drawn this many times for each refit.
_COUNTS_A_REFIT = 25
_MOST_GROUPS_AT_ONCE = 64
_LEAST_SHARE_FITTED = 0.95


@dataclass(frozen=True, eq=False)
class Watch:
    """Units that were running at one look and have been watched since.

    Attributes
    ----------
    then : ndarray, shape (groups,)
        Age at which the units were seen running.
    reached : ndarray, shape (groups,)
        Age that they have since reached, or would have reached had they not failed; not below `then`.
    quantity : ndarray, shape (groups,)
        Units of these ages.
    """

    then: Array
    reached: Array
    quantity: NDArray[np.intp]

    @classmethod
    def of(cls, then: Sequence[float], reached: Sequence[float], quantity: Sequence[int] | None = None) -> Watch:
        """Check and sum up units of the same ages.

        Raises
        ------
        DataError
            If an age is not finite, a unit is younger than it was, or the lengths differ.
        """
        start, end = np.asarray(then, dtype=np.float64), np.asarray(reached, dtype=np.float64)
        count = np.ones(start.size, dtype=np.intp) if quantity is None else np.asarray(quantity, dtype=np.intp)
        if not start.size == end.size == count.size:
            raise DataError(["The ages then, the ages reached and the quantities must be of one length."])
        if not (np.isfinite(start).all() and np.isfinite(end).all() and (end >= start).all() and (count > 0).all()):
            raise DataError(["Every unit watched needs two finite ages, the second not below the first."])
        pairs, where = np.unique(np.column_stack([start, end]), axis=0, return_inverse=True)
        return cls(pairs[:, 0], pairs[:, 1], np.bincount(where.ravel(), weights=count).astype(np.intp))

    @property
    def units(self) -> int:
        """Units watched in all."""
        return int(self.quantity.sum())


@dataclass(frozen=True, eq=False)
class Foretold:
    """The foretold number of failures among units watched.

    Attributes
    ----------
    watch : Watch
    chance : ndarray, shape (groups,)
        Of one unit of each group to fail by the age reached.
    probability : ndarray, shape (units + 1,)
        Of 0, 1, 2 ... failures.
    """

    watch: Watch
    chance: Array
    probability: Array

    @property
    def expected(self) -> float:
        """The mean number of failures foretold."""
        return float(self.chance @ self.watch.quantity)

    def at_most(self, confidence: float) -> int:
        """Return the smallest number that is not exceeded with at least this confidence."""
        reached = np.cumsum(self.probability) >= confidence - 1e-12
        return int(np.argmax(reached)) if reached.any() else self.watch.units

    def at_least(self, confidence: float) -> int:
        """Return the largest number that is reached with at least this confidence."""
        or_more = np.cumsum(self.probability[::-1])[::-1]
        return int(np.flatnonzero(or_more >= confidence - 1e-12).max(initial=0))

    def share_above(self, observed: int) -> float:
        """Return the chance of more failures than observed, that of just as many counted half (mid-p)."""
        self._check(observed)
        return float(self.probability[observed + 1 :].sum() + 0.5 * self.probability[observed])

    def mid_p(self, observed: int) -> float:
        """Return the two-sided mid-p value of an observed number: twice the smaller tail, 1 at the most."""
        above = self.share_above(observed)
        return float(min(1.0, 2.0 * min(above, 1.0 - above)))

    def _check(self, observed: int) -> None:
        if not 0 <= observed <= self.watch.units:
            raise DataError([f"{observed} failures cannot be among {self.watch.units} units watched."])


def foretell(found: Fit, watch: Watch, *, seed: int = SEED, proceed: Proceed | None = None) -> Foretold:
    """Foretell how many of the units watched fail.

    Parameters
    ----------
    found : Fit
        A location-scale fit by maximum likelihood of the data as they were known then.
    watch : Watch
        Ages in the unit of the data.
    seed : int
        The same seed gives the same answer.
    proceed : callable, optional
        Called between pieces of slow work; what it raises ends the work.

    Raises
    ------
    NoEstimate
        Without a fit.
    BoundUnavailable
        If the plan of the data cannot be simulated, or hardly any simulated test can be fitted.
    """
    if found.estimate is None:
        raise NoEstimate(found.outcome.caution.text)
    sources = _sources(found)
    told = [_foretold_by(source, plan, watch, seed=seed, proceed=proceed) for source, plan in sources]
    chance = np.mean([one.chance for one in told], axis=0)
    return Foretold(watch, chance, np.mean([one.probability for one in told], axis=0))


def _sources(found: Fit) -> list[tuple[Fit, CensoringPlan]]:
    """Return the fits and plans over which the foretold distribution is the mean."""
    plan = plan_of(found.data, found.family.life_scale)
    if plan.kind is not PlanKind.FIXED_TIME or plan.goes_unit_by_unit:
        return [(found, plan)]
    counted = replace(plan, kind=PlanKind.FIXED_NUMBER)
    sources = [(found, counted)]
    one_more = fit(_with_one_more_failure(found.data), found.family.name)
    if isinstance(one_more, Fit) and one_more.converged:
        sources.append((one_more, replace(counted, failures=plan.failures + 1)))
    return sources


def _with_one_more_failure(data: LifeData) -> LifeData:
    """Return data in which one of the running units, all of one age, has just failed."""
    running = int(np.flatnonzero(data.is_running)[0])
    quantity = data.quantity.copy()
    quantity[running] -= 1
    keep = quantity > 0
    return LifeData.from_intervals(
        np.append(data.lower[keep], data.lower[running]),
        np.append(data.upper[keep], data.lower[running]),
        quantity=np.append(quantity[keep], 1),
    )


def _foretold_by(
    found: Fit, plan: CensoringPlan, watch: Watch, *, seed: int, proceed: Proceed | None = None
) -> Foretold:
    line = found.family.life_scale
    then, reached = (
        np.where(line.admits(age), found.score(np.where(line.admits(age), age, 1.0)), -np.inf)
        for age in (watch.then, watch.reached)
    )
    a, b = _refits(found, plan, seed=seed, proceed=proceed)
    if watch.then.size == 1:
        each = _chances(found, then, reached, a, b)[:, 0]
        return Foretold(watch, np.array([each.mean()]), _mean_binomial(int(watch.quantity[0]), each))
    generator = np.random.default_rng(seed)
    chance, counts = np.zeros(watch.then.size), np.zeros(a.size * _COUNTS_A_REFIT, dtype=np.intp)
    for start in range(0, watch.then.size, _MOST_GROUPS_AT_ONCE):
        if proceed is not None:
            proceed()
        part = slice(start, start + _MOST_GROUPS_AT_ONCE)
        each = _chances(found, then[part], reached[part], a, b)
        chance[part] = each.mean(axis=0)
        drawn = generator.binomial(watch.quantity[part], np.repeat(each, _COUNTS_A_REFIT, axis=0))
        counts += drawn.sum(axis=1)
    return Foretold(watch, chance, np.bincount(counts, minlength=watch.units + 1) / counts.size)


def _refits(found: Fit, plan: CensoringPlan, *, seed: int, proceed: Proceed | None) -> tuple[Array, Array]:
    """Return (a, b) of refits in the scores z of the fit; their reflections put a score z at (z - a)/b.

    In the scores the fit has location 0 and spread 1, a refit location -a/b and spread 1/b, its reflection location a
    and spread b.
    """
    estimate = found.bounder.estimate
    count = int(np.clip(_UNITS_DRAWN // plan.units, _FEWEST_REFITS, _MOST_REFITS))
    piece = max(1, _UNITS_A_PIECE // plan.units)
    drawn = 0
    parts: list[tuple[Array, Array]] = []
    for start in range(0, count, piece):
        if proceed is not None:
            proceed()
        draws = Draws.of(plan, min(piece, count - start), seed + 1 + start)
        top = samples_at(estimate, plan, draws, a=estimate.a, b=estimate.b).fitted_by(found.family)
        parts.append((top.a[top.converged], top.b[top.converged]))
        drawn += top.a.size
    a, b = (np.concatenate(column) for column in zip(*parts, strict=True))
    if a.size < _LEAST_SHARE_FITTED * drawn:
        raise BoundUnavailable("Too few simulated tests like this one can be fitted, so nothing can be foretold.")
    return a, b


def _chances(found: Fit, then: Array, reached: Array, a: Array, b: Array) -> Array:
    """Return the chance of each group under each reflected refit, shape (refits, groups)."""
    standard = found.family.standard
    start = standard.log_survival((then - a[:, None]) / b[:, None]).value
    end = standard.log_survival((reached - a[:, None]) / b[:, None]).value
    # With a unit certain to have failed before it was seen running, no more can be told than that it is overdue.
    fall = np.where(np.isneginf(start), -np.inf, end - np.where(np.isneginf(start), 0.0, start))
    return np.clip(-np.expm1(np.minimum(fall, 0.0)), 0.0, 1.0)


def _mean_binomial(units: int, chance: Array) -> Array:
    """Return the mean over chances of the binomial probabilities of 0 ... units."""
    k = np.arange(units + 1, dtype=np.float64)
    log_ways = gammaln(units + 1.0) - gammaln(k + 1.0) - gammaln(units - k + 1.0)
    total = np.zeros(units + 1)
    for some in np.array_split(chance, max(1, chance.size * (units + 1) // 2_000_000 + 1)):
        each = log_ways + xlogy(k, some[:, None]) + xlog1py(units - k, -some[:, None])
        total += np.exp(each).sum(axis=0)
    return np.asarray(total / total.sum())
