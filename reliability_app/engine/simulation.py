"""Censoring plans, and batches of samples drawn under them in the scores z of the model they are drawn from."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from reliability_app.engine.empirical import removal_steps
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_scale import LOG_LIFE, LifeScale
from reliability_app.engine.sample import NO_INTERVALS, NO_PART, Part, Sample

Array = NDArray[np.float64]


class PlanKind(Enum):
    """How a test ends for its units."""

    COMPLETE = "every unit runs to failure"
    FIXED_TIME = "the test stops at a fixed age"
    FIXED_NUMBER = "the test stops at a fixed number of failures"
    STAGGERED = "units leave at ages of their own"


@dataclass(frozen=True, eq=False)
class CensoringPlan:
    """The plan under which a set of units was watched, as far as the data show it, in places on the line of a family.

    Attributes
    ----------
    kind : PlanKind
    units : int
    failures : int
        For a fixed number of failures: that number.
    end : float
        For a fixed time: its place.
    known_end, drawn_beyond : ndarray, shape (units,)
        For staggered removals: the place at which a unit would leave, NaN where the unit failed first; then that of its
        failure, beyond which the age at leaving is drawn.
    removal_age, removal_share : ndarray
        Steps of the Kaplan-Meier estimate of leaving, from which it is drawn: place, share still under test after it.
    """

    kind: PlanKind
    units: int
    failures: int
    end: float
    known_end: Array
    drawn_beyond: Array
    removal_age: Array
    removal_share: Array


def can_be_simulated(data: LifeData) -> bool:
    """True where `plan_of` knows the plan of the data."""
    return not (data.is_found_failed.any() or data.entered.any())


def plan_of(data: LifeData, life_scale: LifeScale = LOG_LIFE) -> CensoringPlan:
    """Return the plan that the data show, on the line of a family.

    All running units at one age, not below any failure, show a fixed time; if that age is the last failure's, a fixed
    number of failures. Anything else is taken as staggered removals.

    Raises
    ------
    BoundUnavailable
        If units were found failed between two ages, or came under observation late.
    """
    if not can_be_simulated(data):
        raise BoundUnavailable(
            "No plan can be simulated yet where units were found failed between two ages or came under observation "
            "late: choose the likelihood bound."
        )
    quantity = data.quantity.astype(np.intp)
    life, failed = life_scale.to_line(np.repeat(data.lower, quantity)), np.repeat(data.is_failed, quantity)
    running = life[~failed]
    kind = PlanKind.STAGGERED
    if not running.size:
        kind = PlanKind.COMPLETE
    elif (running == running[0]).all() and (failed.any() and running[0] >= life[failed].max()):
        kind = PlanKind.FIXED_NUMBER if running[0] == life[failed].max() else PlanKind.FIXED_TIME
    age, share = removal_steps(data) if kind is PlanKind.STAGGERED else (np.empty(0), np.empty(0))
    return CensoringPlan(
        kind=kind,
        units=life.size,
        failures=int(failed.sum()),
        end=float(running[0]) if running.size else np.inf,
        known_end=np.where(failed, np.nan, life),
        drawn_beyond=np.where(failed, life, np.nan),
        removal_age=life_scale.to_line(age),
        removal_share=share,
    )


@dataclass(frozen=True, eq=False)
class Draws:
    """The random numbers of a batch, kept so that every value tried sees the same ones; shape (batch, units) each."""

    life: Array
    removal: Array

    @classmethod
    def of(cls, plan: CensoringPlan, batch: int, seed: int) -> Draws:
        """Draw for a plan; the same seed gives the same draws."""
        generator = np.random.default_rng(seed)
        life = generator.random((batch, plan.units))
        if plan.kind is not PlanKind.STAGGERED:
            return cls(np.sort(life, axis=1), np.empty((0, 0)))
        return cls(life, generator.random((batch, plan.units)))


class HasQuantiles(Protocol):
    """All that is needed of a distribution to draw from it."""

    def quantile(self, fraction: Array) -> Array:
        """Return the quantiles at fractions of any shape."""


def draw_sample(
    plan: CensoringPlan, draws: Draws, standard: HasQuantiles, *, a: float, b: float
) -> tuple[Sample, Array]:
    """Return a batch of samples in scores z = a + b x, x the place of a life, and the number of failures of each."""
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
            ends = a + b * _removals(plan, draws.removal)
            failed = z <= ends
            running = Part(np.where(failed, 0.0, ends), (~failed).astype(np.float64))
    # Sorted draws put the failures first, so that the columns beyond the longest row are empty.
    width = int(failed.sum(axis=1).max()) if plan.kind is not PlanKind.STAGGERED else plan.units
    dead = failed[:, :width]
    lives = Part(np.where(dead, z[:, :width], 0.0), dead.astype(np.float64))
    sample = Sample(lives, running, NO_INTERVALS, NO_PART, NO_PART, shift=0.0, spread=1.0, log_slope=np.zeros(len(z)))
    return sample, failed.sum(axis=1, dtype=np.float64)


def _removals(plan: CensoringPlan, uniform: Array) -> Array:
    """Return places at leaving: known for units that left, drawn beyond their failure for those that failed first."""
    ends = np.broadcast_to(plan.known_end, uniform.shape).copy()
    for unit in np.flatnonzero(np.isnan(plan.known_end)).tolist():
        start = np.searchsorted(plan.removal_age, plan.drawn_beyond[unit], side="left")
        share_there = plan.removal_share[start - 1] if start else 1.0
        # The share still under test falls below u times the share at the failure at the age drawn.
        place = np.searchsorted(-plan.removal_share[start:], -uniform[:, unit] * share_there, side="left") + start
        beyond = place >= plan.removal_age.size
        ages = plan.removal_age[np.minimum(place, plan.removal_age.size - 1)]
        ends[:, unit] = np.where(beyond, np.inf, ages)
    return ends
