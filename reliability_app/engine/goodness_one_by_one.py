"""The statistics of goodness for fits that are refitted one sample at a time: any family that `fit` knows.

The batch of `refitting.py` is for families of location and spread alone. Here a sample is drawn as ages from the fitted
quantiles, fitted anew by the same way as the data, and judged in normal scores: F(t) under its own fit turned into a
standard normal quantile. Anderson-Darling depends on F(t) alone, so that it is the same statistic; the plot correlation
is that of the scores with the normal quantiles at the plotting positions.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.batch_survival import BatchSteps, batch_steps
from reliability_app.engine.families.normal import Normal
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitted_scores import log_tails, normal_score
from reliability_app.engine.goodness_at_looks import look_statistics
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.refitting import FEWEST_FAILURES, with_as_many_failures
from reliability_app.engine.sample import sample_of
from reliability_app.engine.simulation import Draws, PlanKind, drawn_tests, plan_of

if TYPE_CHECKING:
    from reliability_app.engine.bounds import Proceed

Array = NDArray[np.float64]

NORMAL = Normal()
REPEATS_ONE_BY_ONE = 199
_BELOW_ONE = float(np.nextafter(1.0, 0.0))


class FittedLives:
    """The lives of a fit as a distribution to draw from, at their places on the line of its family."""

    def __init__(self, found: Fit) -> None:
        self.found = found

    def quantile(self, fraction: Array) -> Array:
        """Return the places of the lives at fractions of any shape; 0, which a draw can be, counts as the least."""
        drawn = np.maximum(fraction, np.finfo(np.float64).tiny).ravel()
        lives = np.asarray(self.found.life(drawn))
        return self.found.family.life_scale.to_line(lives).reshape(fraction.shape)

    def survival(self, z: Array) -> Array:
        """Return the shares of lives beyond places."""
        return np.asarray(self.found.reliability(self.found.family.life_scale.from_line(z)))

    def survival_quantile(self, share: Array) -> Array:
        """Return the places beyond which shares lie."""
        return self.quantile(np.minimum(1.0 - share, _BELOW_ONE))


def data_like(found: Fit, *, repeats: int, seed: int, proceed: Proceed | None = None) -> Iterator[LifeData]:
    """Give tests drawn at a fit under the plan of its data, one by one; those with too few failures are left out.

    Raises
    ------
    BoundUnavailable
        If hardly any life would reach beyond the entry of some unit.
    """
    life_scale = found.family.life_scale
    plan = plan_of(found.data, life_scale)
    for place in range(repeats):
        if proceed is not None:
            proceed()
        draws = Draws.of(plan, 1, seed + place)
        if plan.kind is PlanKind.FIXED_TIME and not plan.goes_unit_by_unit:
            end = float(life_scale.from_line(np.array(plan.end)))
            draws = with_as_many_failures(draws, plan, float(found.failure_probability(end)))
        for test, failures in drawn_tests(plan, draws, FittedLives(found), life_scale, a=0.0, b=1.0):
            if failures >= FEWEST_FAILURES:
                yield test


def scored_steps(found: Fit) -> BatchSteps:
    """Return the Kaplan-Meier steps of a fit's data, a batch of one, with normal scores in the place of ages."""
    sample = sample_of(found.data, found.family.life_scale)
    steps = batch_steps(sample)
    failed = steps.failures > 0
    scores = np.zeros_like(steps.y)
    scores[failed] = _scores(found, sample.to_age(steps.y[failed]))
    return replace(steps, y=scores, end=_scores(found, np.array([found.data.last_observation])))


def scored_looks(found: Fit, looks: Array) -> tuple[Array, Array]:
    """Return Anderson-Darling and plot correlation at places of common looks, with normal scores in their place."""
    sample = sample_of(found.data, found.family.life_scale)
    y = (looks - sample.shift) / sample.spread
    scores = _scores(found, found.family.life_scale.from_line(looks))
    return look_statistics(sample, y, NORMAL, np.zeros(1), np.ones(1), fewest=FEWEST_FAILURES, scores=scores)


def _scores(found: Fit, age: Array) -> Array:
    return normal_score(*log_tails(found, age))
