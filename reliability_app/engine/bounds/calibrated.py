"""Calibrated bounds: test inversion at the constrained estimate.

A value of the reading lies inside the bound when the observed signed-root likelihood ratio for it does not exceed the
quantile of the same statistic simulated at the fit constrained to that value, under the set's own censoring plan
(test-inversion bootstrap, Carpenter 1999; hybrid resampling, Chuang & Lai 2000; both cited from memory). Only samples
for which a reading would be given count: three failures or more.

Signed roots come in lumps where units are inspected, because two samples can then be one and the same. A value is left
out only if samples with as great a root as the observed one, those as great included, make up no more than the tail, so
that lumps can make a bound wider than promised, never narrower.

The bound is sought along the signed root: `root` stands for the value of the reading at which the observed signed root
is `root`; there the simulated share of greater or equal roots must come down to the tail. That share, as a normal
quantile, falls nearly in a straight line with the root. All values see the same random numbers.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.constrained import curve_of, maximise_along, side_of
from reliability_app.engine.errors import BoundUnavailable, BoundWithoutEnd
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import Family
from reliability_app.engine.further_measures import FurtherMeasure
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import HazardMeasure, Measure, ScoreMeasure
from reliability_app.engine.refitting import DrawnSamples, samples_at, with_readings
from reliability_app.engine.simulation import CensoringPlan, Draws, PlanKind, plan_of

Array = NDArray[np.float64]
PointAt = Callable[[float], tuple[float, float] | None]
Proceed = Callable[[], None]
"""Called between pieces of slow work; raises to end it."""

# Samples in a batch: fewer where each is large, because then the quantile is smoother and each refit costs more. An
# interval costs as much as so many known lives. (With 1,000 samples a limit at 95 % is off by some 0.07 in the root, by
# which the share held moves no more than 0.0005 on average.)
_MOST_SAMPLES, _FEWEST_SAMPLES, _DRAWN_LIVES = 8_000, 1_000, 400_000
_COST_OF_INTERVAL = 12
SEED = 20_260_101
# The root is sought to this part of its simulation error.
_PART_OF_ERROR = 0.15
_MOST_EVALUATIONS = 40
_SMALLEST_ROOT, _LARGEST_ROOT = 1e-3, 8.0
# Roots that differ by less are one root, rounded.
_TIE = 1e-6
# With fewer simulated tests beyond a bound on average its place would be a guess.
_FEWEST_BEYOND = 5
# Refits that end neither at a maximum nor at an edge of the family; more of them than this share might bend the result.
_MOST_STUCK = 0.03
_NO_SLOPE, _NO_SPREAD = 1e-6, 1e-3


@dataclass(frozen=True, eq=False)
class Calibrator:
    """Calibrates readings of one estimate under one plan; the draws serve every reading."""

    estimate: Estimate
    plan: CensoringPlan
    draws: Draws

    def root(
        self,
        measure: Measure,
        sign: float,
        tail: float,
        *,
        point_at: PointAt,
        first: float | None = None,
        proceed: Proceed | None = None,
    ) -> float:
        """Return the signed root at which the bound of a measure of size 1 lies.

        Parameters
        ----------
        measure : Measure
        sign : float
            -1 for the lower end of the measure, 1 for the upper.
        tail : float
            Probability beyond that end.
        point_at : callable
            The constrained estimate (a, b) for the value of the measure at which the observed signed root is the
            argument, on this side; None where the root does not rise so far.
        first : float, optional
            Where to begin the search; the root of the likelihood-ratio bound if not given.
        proceed : callable, optional
            Called before each batch; what it raises ends the work.

        Raises
        ------
        BoundUnavailable
            If the bound runs away, too few tests are simulated for so small a tail, or hardly any would give a reading.
        """
        tests = len(self.draws.life)
        if tests * tail < _FEWEST_BEYOND:
            raise BoundUnavailable(
                f"From {tests} simulated tests no bound can be told that leaves out less than "
                f"{_FEWEST_BEYOND / tests:.2g} on its side: choose a lower confidence, or the likelihood bound."
            )

        def beyond(root: float) -> float | None:
            if proceed is not None:
                proceed()
            point = point_at(root)
            return None if point is None else self.share_beyond(measure, *point, sign, root)

        normal = float(ndtri(tail))
        error = np.sqrt(tail * (1.0 - tail) / tests) * np.sqrt(2.0 * np.pi) * np.exp(0.5 * normal * normal)
        return _find_root(beyond, tail, -normal if first is None else first, precision=_PART_OF_ERROR * float(error))

    def share_beyond(self, measure: Measure, a: float, b: float, sign: float, root: float) -> float:
        """Return the share of samples drawn at (a, b) whose signed root is as great as `root` or greater."""
        roots = self.simulated_roots(measure, a, b, sign)
        if not roots.size:
            raise BoundUnavailable("No simulated test can be fitted with this value, so it cannot be calibrated.")
        return share_at_least(roots, root)

    def simulated_roots(self, measure: Measure, a: float, b: float, sign: float) -> Array:
        """Return signed roots for the true value of samples drawn at (a, b), for those that would give a reading."""
        draws = with_readings(self.estimate, self.plan, self.draws, a=a, b=b)
        drawn = samples_at(self.estimate, self.plan, draws, a=a, b=b)
        return signed_roots(drawn, self.estimate.family, _in_scores(measure, a, b), sign)


def share_at_least(roots: Array, root: float) -> float:
    """Return the share of simulated roots that are as great as `root` or greater."""
    return float(np.mean(roots >= root - _TIE))


def calibrator_for(estimate: Estimate, data: LifeData, tail: float) -> Calibrator:
    """Return a calibrator under the plan of the data, with enough samples for a tail and the usual seed."""
    plan = plan_of(data, estimate.family.life_scale)
    cost = _cost_of_sample(plan)
    batch = int(np.clip(max(_DRAWN_LIVES // cost, 2 * _FEWEST_BEYOND / tail), _FEWEST_SAMPLES, _MOST_SAMPLES))
    return Calibrator(estimate, plan, Draws.of(plan, batch, SEED))


def _cost_of_sample(plan: CensoringPlan) -> int:
    """Return the work of evaluating one sample, in that of one known life."""
    inspected = plan.looks.is_inspected
    own_spans = int(np.sum(inspected & (plan.entered > -np.inf)))
    intervals = min(plan.looks.place.size + own_spans, int(inspected.sum()))
    # Units that leave at ages of their own are evaluated as failed and as running.
    watched = plan.units * (2 if plan.kind is PlanKind.STAGGERED else 1)
    return watched + _COST_OF_INTERVAL * intervals


def signed_roots(drawn: DrawnSamples, family: Family, measure: Measure, sign: float) -> Array:
    """Return the signed roots sqrt(2 (l_max - l_constrained)) for the true value of each sample of a batch.

    A root is positive where the estimate lies above the true value for a lower end (sign -1), below it for an upper end
    (sign 1). Samples whose likelihood rises towards an edge of the family are left out: they have no estimate.

    Raises
    ------
    BoundUnavailable
        If more than a few refits did not settle (possible where units entered late).
    """
    count, top, evaluate = drawn.failures.size, drawn.fitted_by(family), drawn.likelihood_of(family)
    own = np.zeros(count), np.ones(count)
    true_value = float(measure.terms(own[0][:1], own[1][:1]).value[0])

    curve = curve_of(measure, true_value)
    if family.fixed_sigma is not None:
        held, reached = evaluate(np.arange(count), *own).value, top.converged
    else:
        along = maximise_along(evaluate, curve, np.full(count, curve.start(0.0, 1.0)))
        held, reached = along.value, top.converged & along.converged
    drop = top.terms.value - held
    reached &= drop >= -_TIE * np.maximum(1.0, np.abs(held))
    # Where the likelihood rises to an edge of the family it flattens there without a peak.
    stuck = ~reached & (top.b > _NO_SPREAD) & (top.decrement > _NO_SLOPE)
    if np.mean(stuck) > _MOST_STUCK:
        raise BoundUnavailable(
            f"Of the simulated tests {100 * np.mean(stuck):.0f} % could not be fitted (units watched only late in life "
            "can leave the parameters open), so the bound cannot be calibrated: choose the likelihood bound."
        )
    side = side_of(measure, curve, true_value, top.a, top.b)
    return np.asarray((-sign * side * np.sqrt(2.0 * np.maximum(drop, 0.0)))[reached])


def _in_scores(measure: Measure, a: float, b: float) -> Measure:
    """Return the same question put in the scores z = a + b y, in which the model itself has a = 0, b = 1."""
    match measure:
        case ScoreMeasure():
            return ScoreMeasure(a + b * measure.y)
        case HazardMeasure():
            return HazardMeasure(a + b * measure.y, measure.standard)
        case FurtherMeasure():
            return measure.in_scores(a, b)
        case _:
            return measure


def _find_root(beyond: Callable[[float], float | None], tail: float, first: float, *, precision: float) -> float:
    """Return where the share beyond a root comes down to `tail`, inside a bracket that only ever shrinks.

    The share may fall in steps; the root is then the one at which a step goes below the tail. A bound that would lie
    beyond the estimate, on its other side, is put at the estimate.
    """
    inside, outside = (0.0, np.inf), (np.inf, -np.inf)
    here, open_at = float(np.clip(first, _SMALLEST_ROOT, _LARGEST_ROOT)), np.inf
    for _ in range(_MOST_EVALUATIONS):
        share = beyond(here)
        open_at = here if share is None else open_at
        gap = -np.inf if share is None else float(ndtri(share) - ndtri(tail))
        if abs(gap) <= precision:
            return here + gap
        if gap > 0:
            inside = here, gap
        else:
            outside = here, gap
        if outside[0] == _SMALLEST_ROOT:
            return _SMALLEST_ROOT
        if outside[0] - inside[0] <= precision and outside[0] < open_at:
            return outside[0]
        if inside[0] == _LARGEST_ROOT or outside[0] - inside[0] <= precision:
            raise BoundWithoutEnd("The bound runs beyond all ages here, so it cannot be calibrated.")
        here = _next_root(inside, outside)
    raise BoundUnavailable(
        f"The calibration did not settle within {_MOST_EVALUATIONS} steps: choose the likelihood bound."
    )


def _next_root(inside: tuple[float, float], outside: tuple[float, float]) -> float:
    """Return the root to try next, from the last one inside and outside the bound and their gaps."""
    (low, above), (high, below) = inside, outside
    if np.isinf(high):
        return min(low + min(above, 1.0), _LARGEST_ROOT)
    if low == 0.0:
        return max(high + max(below, -1.0), _SMALLEST_ROOT)
    if np.isinf(above) or np.isinf(below):
        return 0.5 * (low + high)
    share = float(np.clip(above / (above - below), 0.1, 0.9))
    return low + share * (high - low)
