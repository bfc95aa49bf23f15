"""Draws batches of samples from a fitted model under the set's own plan, and fits every sample of a batch again."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import Family
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_scale import LifeScale
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
MOST_REPEATS, _FEWEST_REPEATS = 1000, 99
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
        return maximise(self.likelihood_of(family), *start, failures=self.failures, b_is_fixed=fixed)

    def likelihood_of(self, family: Family) -> Evaluate:
        """Return the log-likelihood of chosen samples at points of their own, as the maximisers take it."""

        def evaluate(rows: NDArray[np.intp], a: Array, b: Array) -> Terms:
            part = self.sample if rows.size == self.failures.size else self.sample.rows(rows)
            return log_likelihood(part, family.standard, a, b)

        return evaluate


def samples_at(estimate: Estimate, plan: CensoringPlan, draws: Draws, *, a: float, b: float) -> DrawnSamples:
    """Draw at the point (a, b) of an estimate's own scale; tests with fewer than three failures are left out.

    Raises
    ------
    BoundUnavailable
        If hardly any test would see three failures.
    """
    original = estimate.sample
    slope = b / original.spread
    sample, failures = draw_sample(plan, draws, estimate.family.standard, a=a - slope * original.shift, b=slope)
    usable = np.flatnonzero(failures >= FEWEST_FAILURES)
    if usable.size < _LEAST_SHARE_OF_SAMPLES * failures.size:
        raise BoundUnavailable(
            "Under this plan hardly any test would see three failures, so neither a bound nor a test can be simulated."
        )
    return DrawnSamples(sample.rows(usable), failures[usable])


def samples_like(
    estimate: Estimate, data: LifeData, *, repeats: int | None = None, seed: int, proceed: Proceed | None = None
) -> Iterator[DrawnSamples]:
    """Give samples drawn at an estimate under the plan of its data, piece by piece.

    Where the test stopped at a fixed age each sample has as many failures as the data: their number says little about
    the family, and a reference in which it varied would be too wide.

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
        If the plan cannot be simulated, there are too many units, or hardly any test would see three failures.
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
        if plan.kind is PlanKind.FIXED_TIME:
            end = estimate.a + estimate.b * (plan.end - estimate.sample.shift) / estimate.sample.spread
            draws = with_as_many_failures(draws, plan, float(estimate.family.standard.cdf(np.array(end))))
        yield samples_at(estimate, plan, draws, a=estimate.a, b=estimate.b)


def with_as_many_failures(draws: Draws, plan: CensoringPlan, share: float) -> Draws:
    """Return draws for a fixed end of test by which just as many units fail as in the data.

    The ratios of the first uniform order statistics to the next one are order statistics of a uniform sample of their
    own; `share` of the model's lives lie before the end.
    """
    before, after = draws.life[:, : plan.failures], draws.life[:, plan.failures :]
    life = np.concatenate([share * before / after[:, :1], np.full_like(after, 0.5 * (1.0 + share))], axis=1)
    return Draws(life, draws.removal)


def life_data_of(sample: Sample, row: int, life_scale: LifeScale) -> LifeData:
    """Return one sample of a batch as life data, its places taken as places on a line."""
    failed, running = sample.failed.rows(np.array([row])), sample.running.rows(np.array([row]))
    place = np.concatenate([failed.y[0], running.y[0]])
    weight = np.concatenate([failed.weight[0], running.weight[0]])
    there, has_failed = weight > 0, np.arange(place.size) < failed.size
    return LifeData.right_censored(life_scale.from_line(place[there]), has_failed[there], quantity=weight[there])
