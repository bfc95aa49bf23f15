"""Batches of samples drawn under a censoring plan, in the scores z of the model they are drawn from."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.censoring_plan import CensoringPlan, PlanKind, plan_of
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_scale import LifeScale
from reliability_app.engine.removals import drawn_ends
from reliability_app.engine.sample import NO_INTERVALS, NO_PART, Part, Sample
from reliability_app.engine.watched_units import Drawable, places_of, sample_seen, watch

__all__ = ["CensoringPlan", "Draws", "PlanKind", "draw_sample", "drawn_tests", "plan_of"]

Array = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class Draws:
    """The random numbers of a batch, kept so that every value tried sees the same ones.

    Attributes
    ----------
    life : ndarray, shape (batch, units)
        Uniform; in rising order where it does not matter which unit is which.
    end : ndarray, shape (batch, units)
        Places at which the units leave, where that is at ages of their own or units are watched each in its own way;
        else empty.
    """

    life: Array
    end: Array

    @classmethod
    def of(cls, plan: CensoringPlan, batch: int, seed: int) -> Draws:
        """Draw for a plan; the same seed gives the same draws."""
        generator = np.random.default_rng(seed)
        life = generator.random((batch, plan.units))
        if plan.kind is not PlanKind.STAGGERED and not plan.goes_unit_by_unit:
            return cls(np.sort(life, axis=1), np.empty((0, 0)))
        uniform = generator.random((batch, plan.units))
        return cls(life, drawn_ends(plan.known_end, plan.drawn_beyond, (plan.removal_age, plan.removal_stay), uniform))


def draw_sample(plan: CensoringPlan, draws: Draws, standard: Drawable, *, a: float, b: float) -> tuple[Sample, Array]:
    """Return a batch of samples in scores z = a + b x, x the place of a life, and the number of failures of each.

    Raises
    ------
    BoundUnavailable
        If hardly any life would reach beyond the entry of some unit.
    """
    if plan.goes_unit_by_unit:
        seen = watch(plan, draws.life, draws.end, standard, a=a, b=b)
        return sample_seen(plan, seen, a=a, b=b), seen.failures
    z = standard.quantile(draws.life)
    match plan.kind:
        case PlanKind.COMPLETE:
            failed, running = np.ones(z.shape, dtype=bool), NO_PART
        case PlanKind.FIXED_TIME:
            end = a + b * plan.end
            failed = z <= end
            left = plan.units - failed.sum(axis=1, dtype=np.float64)
            running = Part(np.full((len(z), 1), end), left[:, None])
        case PlanKind.FIXED_NUMBER:
            failed = np.broadcast_to(np.arange(plan.units) < plan.failures, z.shape)
            last = z[:, plan.failures - 1 : plan.failures]
            running = Part(last, np.full_like(last, plan.units - plan.failures))
        case PlanKind.STAGGERED:
            ends = a + b * draws.end
            failed = z <= ends
            running = Part(np.where(failed, 0.0, ends), (~failed).astype(np.float64))
    # Sorted draws put the failures first, so that the columns beyond the longest row are empty.
    width = int(failed.sum(axis=1).max()) if plan.kind is not PlanKind.STAGGERED else plan.units
    dead = failed[:, :width]
    lives = Part(np.where(dead, z[:, :width], 0.0), dead.astype(np.float64))
    sample = Sample(lives, running, NO_INTERVALS, NO_PART, NO_PART, shift=0.0, spread=1.0, log_slope=np.zeros(len(z)))
    return sample, failed.sum(axis=1, dtype=np.float64)


def drawn_tests(
    plan: CensoringPlan, draws: Draws, standard: Drawable, life_scale: LifeScale, *, a: float, b: float
) -> Iterator[tuple[LifeData, int]]:
    """Give each test of a batch as life data, in ages, with the number of its failures."""
    if plan.goes_unit_by_unit:
        seen = watch(plan, draws.life, draws.end, standard, a=a, b=b)
        lower, upper = places_of(plan, seen, a=a, b=b)
        entered = np.where(plan.entered > -np.inf, life_scale.from_line(plan.entered), 0.0)
        for row, failures in enumerate(seen.failures.tolist()):
            ages = (life_scale.from_line(lower[row]), life_scale.from_line(upper[row]))
            yield LifeData.from_intervals(*ages, entered=entered), int(failures)
        return
    sample, count = draw_sample(plan, draws, standard, a=a, b=b)
    for row, failures in enumerate(count.tolist()):
        failed, running = sample.failed.rows(np.array([row])), sample.running.rows(np.array([row]))
        place = (np.concatenate([failed.y[0], running.y[0]]) - a) / b
        weight = np.concatenate([failed.weight[0], running.weight[0]])
        there, has_failed = weight > 0, np.arange(place.size) < failed.size
        life = life_scale.from_line(place[there])
        yield LifeData.right_censored(life, has_failed[there], quantity=weight[there]), int(failures)
