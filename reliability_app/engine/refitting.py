"""Draws batches of samples from a fitted model under the set's own plan, and fits every sample of a batch again."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray
from scipy.special import betainc, betaincinv

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import Family
from reliability_app.engine.life_data import LifeData, Mask
from reliability_app.engine.likelihood import Terms, log_likelihood
from reliability_app.engine.newton import Evaluate, Maximum, maximise
from reliability_app.engine.sample import Sample
from reliability_app.engine.simulation import CensoringPlan, Draws, PlanKind, draw_sample, plan_of

if TYPE_CHECKING:  # the bounds draw their samples here
    from reliability_app.engine.bounds import Proceed

Array = NDArray[np.float64]

# Of a test with fewer failures no reading would be given, so that it does not count in a simulation either.
FEWEST_FAILURES = 3
_LEAST_SHARE_OF_SAMPLES = 0.05
_LEAST_CHANCE = 1e-250
MOST_REPEATS, _FEWEST_REPEATS = 1000, 99
# From the model's own point 10 steps are enough but for a few samples in ten thousand.
_MOST_STEPS = 30
# Lives drawn for one reference in all, and in one piece between two calls of `proceed`.
_LIVES_DRAWN, _LIVES_A_PIECE = 1_000_000, 100_000
# With more units 99 repeats take many seconds, and the smallest departure is found out anyway.
_MOST_UNITS = 20_000


@dataclass(frozen=True, eq=False)
class DrawnSamples:
    """A batch in the scores z of the model it was drawn from, for which a = 0, b = 1; failures of shape (batch,)."""

    sample: Sample
    failures: Array

    def fitted_by(self, family: Family) -> Maximum:
        """Fit a family to every sample, from the model's own point."""
        count = self.failures.size
        fixed = family.fixed_sigma is not None
        start = np.zeros(count), np.ones(count)
        evaluate = self.likelihood_of(family)
        return maximise(evaluate, *start, failures=self.failures, b_is_fixed=fixed, most_steps=_MOST_STEPS)

    def likelihood_of(self, family: Family) -> Evaluate:
        """Return the log-likelihood of chosen samples at points of their own, as the maximisers take it."""

        def evaluate(rows: NDArray[np.intp], a: Array, b: Array) -> Terms:
            part = self.sample if rows.size == self.failures.size else self.sample.rows(rows)
            return log_likelihood(part, family.standard, a, b)

        return evaluate


def samples_at(estimate: Estimate, plan: CensoringPlan, draws: Draws, *, a: float, b: float) -> DrawnSamples:
    """Draw at the point (a, b) of an estimate's own scale; tests of which no reading would be given are left out.

    Raises
    ------
    BoundUnavailable
        If hardly any test would see three failures that determine an estimate.
    """
    original = estimate.sample
    slope = b / original.spread
    sample, failures = draw_sample(plan, draws, estimate.family.standard, a=a - slope * original.shift, b=slope)
    readable = failures >= FEWEST_FAILURES
    if plan.can_tie:
        readable &= has_estimate(sample, b_is_fixed=estimate.b_is_fixed)
    usable = np.flatnonzero(readable)
    if usable.size < _LEAST_SHARE_OF_SAMPLES * failures.size:
        raise BoundUnavailable(
            "Under this plan hardly any test would see three failures, so neither a bound nor a test can be simulated."
        )
    return DrawnSamples(sample.rows(usable), failures[usable])


def with_readings(estimate: Estimate, plan: CensoringPlan, draws: Draws, *, a: float, b: float) -> Draws:
    """Return draws whose tests all see three failures at (a, b), where a fixed end allows to draw them so.

    The third uniform order statistic is drawn given that it lies before the end: I(u; 3, n - 2), its distribution
    function, is scaled by its value at the end (inversion in a truncated distribution). The two before it and those
    beyond it are uniform order statistics of their own intervals and move along. Leaving tests out instead would leave
    next to none where few fail by the end, and no bound could be found there.

    Raises
    ------
    BoundUnavailable
        If three failures before the end are too improbable for the numbers of this machine.
    """
    if plan.kind is not PlanKind.FIXED_TIME or plan.goes_unit_by_unit or plan.units < FEWEST_FAILURES:
        return draws
    order = FEWEST_FAILURES, plan.units - FEWEST_FAILURES + 1
    share = float(estimate.family.standard.cdf(np.array(_end_score(estimate, plan, a=a, b=b))))
    chance = float(betainc(*order, share))
    if chance < _LEAST_CHANCE:
        raise BoundUnavailable("At a value that had to be tried no test would see three failures before its end.")
    third = draws.life[:, FEWEST_FAILURES - 1 : FEWEST_FAILURES]
    moved = np.minimum(betaincinv(*order, betainc(*order, third) * chance), share)
    life = np.where(
        draws.life <= third, draws.life * moved / third, 1.0 - (1.0 - draws.life) / (1.0 - third) * (1.0 - moved)
    )
    return Draws(life, draws.end)


def _end_score(estimate: Estimate, plan: CensoringPlan, *, a: float, b: float) -> float:
    """Return the score of a fixed end of test at a point of an estimate's own scale."""
    return a + b * (plan.end - estimate.sample.shift) / estimate.sample.spread


def samples_like(
    estimate: Estimate, data: LifeData, *, repeats: int | None = None, seed: int, proceed: Proceed | None = None
) -> Iterator[DrawnSamples]:
    """Give samples drawn at an estimate under the plan of its data, piece by piece.

    Where the test stopped at a fixed age, and all units were watched all the time from the start, each sample has as
    many failures as the data: their number says little about the family, and a reference in which it varied would be
    too wide.

    Parameters
    ----------
    repeats : int, optional
        Samples drawn; if not given 1,000, fewer for more than 1,000 units, 99 at the least.
    seed : int
        The same seed gives the same samples.
    proceed : callable, optional
        Called before each piece; what it raises ends the work.

    Raises
    ------
    BoundUnavailable
        If there are too many units, or hardly any test would see three failures.
    """
    plan = plan_of(data, estimate.family.life_scale)
    if plan.units > _MOST_UNITS:
        raise BoundUnavailable(
            f"Nothing is simulated for more than {_MOST_UNITS} units: so many show every departure on the paper."
        )
    count = repeats or int(np.clip(_LIVES_DRAWN // plan.units, _FEWEST_REPEATS, MOST_REPEATS))
    piece = max(1, _LIVES_A_PIECE // plan.units)
    for start in range(0, count, piece):
        if proceed is not None:
            proceed()
        draws = Draws.of(plan, min(piece, count - start), seed + start)
        if plan.kind is PlanKind.FIXED_TIME and not plan.goes_unit_by_unit:
            end = _end_score(estimate, plan, a=estimate.a, b=estimate.b)
            draws = with_as_many_failures(draws, plan, float(estimate.family.standard.cdf(np.array(end))))
        yield samples_at(estimate, plan, draws, a=estimate.a, b=estimate.b)


def with_as_many_failures(draws: Draws, plan: CensoringPlan, share: float) -> Draws:
    """Return draws for a fixed end of test by which just as many units fail as in the data.

    The ratios of the first uniform order statistics to the next one are order statistics of a uniform sample of their
    own; `share` of the model's lives lie before the end.
    """
    before, after = draws.life[:, : plan.failures], draws.life[:, plan.failures :]
    life = np.concatenate([share * before / after[:, :1], np.full_like(after, 0.5 * (1.0 + share))], axis=1)
    return Draws(life, draws.end)


def has_estimate(sample: Sample, *, b_is_fixed: bool) -> Mask:
    """Return which samples of a batch can have an estimate, by the rule of `outcome_before_fitting`; shape (batch,).

    Not all units may agree with one single age; with sigma fixed it is enough that one is known to have survived some.
    """
    rows = sample.log_slope.shape[0]
    survived, failed_by = np.full(rows, -np.inf), np.full(rows, np.inf)
    low, high = sample.between.ends
    for y, weight in (
        (sample.failed.y, sample.failed.weight), (sample.running.y, sample.running.weight), (low, sample.between.weight)
    ):  # fmt: skip
        survived = np.maximum(survived, np.max(np.where(weight > 0, y, -np.inf), axis=1, initial=-np.inf))
    for y, weight in (
        (sample.failed.y, sample.failed.weight), (sample.left.y, sample.left.weight), (high, sample.between.weight)
    ):  # fmt: skip
        failed_by = np.minimum(failed_by, np.min(np.where(weight > 0, y, np.inf), axis=1, initial=np.inf))
    return np.isfinite(survived) if b_is_fixed else np.asarray(survived > failed_by)
