"""Calibrated bounds: test inversion at the constrained estimate.

A value of the reading lies inside the bound when the observed signed-root likelihood ratio for it does not exceed the
quantile of the same statistic simulated at the fit constrained to that value, under the set's own censoring plan
(test-inversion bootstrap, Carpenter 1999; hybrid resampling, Chuang & Lai 2000; both cited from memory). Only samples
for which a reading would be given count: three failures or more.

The bound is sought along the signed root: `root` stands for the value of the reading at which the observed signed root
is `root`; there the simulated quantile must be `root` again. All values see the same random numbers.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.constrained import curve_of, maximise_along
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.estimate import Estimate
from reliability_app.engine.families import Family
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import HazardMeasure, Measure, ScoreMeasure
from reliability_app.engine.refitting import DrawnSamples, samples_at
from reliability_app.engine.simulation import CensoringPlan, Draws, plan_of

Array = NDArray[np.float64]
PointAt = Callable[[float], tuple[float, float]]
Proceed = Callable[[], None]
"""Called between pieces of slow work; raises to end it."""

# Samples in a batch: fewer where each is large, because then the quantile is smoother and each refit costs more.
_MOST_SAMPLES, _FEWEST_SAMPLES, _DRAWN_LIVES = 8_000, 1_000, 400_000
SEED = 20_260_101
# A quantile from some thousand samples is not known better than this.
_ROOT_REACHED = 0.004
_MOST_EVALUATIONS = 12
_SMALLEST_ROOT, _LARGEST_ROOT = 0.05, 8.0


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
            argument, on this side.
        first : float, optional
            Where to begin the search; the root of the likelihood-ratio bound if not given.
        proceed : callable, optional
            Called before each batch; what it raises ends the work.

        Raises
        ------
        BoundUnavailable
            If the bound runs away, or hardly any simulated sample would give a reading.
        """

        def excess(root: float) -> float:
            if proceed is not None:
                proceed()
            roots = self.simulated_roots(measure, *point_at(root), sign)
            if not roots.size:
                raise BoundUnavailable("No simulated test can be fitted with this value, so it cannot be calibrated.")
            return float(np.quantile(roots, 1.0 - tail)) - root

        return _find_root(excess, -float(ndtri(tail)) if first is None else first)

    def simulated_roots(self, measure: Measure, a: float, b: float, sign: float) -> Array:
        """Return signed roots for the true value of samples drawn at (a, b), for those that would give a reading."""
        drawn = samples_at(self.estimate, self.plan, self.draws, a=a, b=b)
        return signed_roots(drawn, self.estimate.family, _in_scores(measure, a, b), sign)


def calibrator_for(estimate: Estimate, data: LifeData) -> Calibrator:
    """Return a calibrator under the plan of the data, with the usual number of samples and the usual seed."""
    plan = plan_of(data, estimate.family.life_scale)
    batch = int(np.clip(_DRAWN_LIVES // plan.units, _FEWEST_SAMPLES, _MOST_SAMPLES))
    return Calibrator(estimate, plan, Draws.of(plan, batch, SEED))


def signed_roots(drawn: DrawnSamples, family: Family, measure: Measure, sign: float) -> Array:
    """Return the signed roots sqrt(2 (l_max - l_constrained)) for the true value of each sample of a batch.

    A root is positive where the estimate lies above the true value for a lower end (sign -1), below it for an upper end
    (sign 1).
    """
    count, top, evaluate = drawn.failures.size, drawn.fitted_by(family), drawn.likelihood_of(family)
    own = np.zeros(count), np.ones(count)
    true_value = float(measure.terms(own[0][:1], own[1][:1]).value[0])

    if family.fixed_sigma is not None:
        held, reached = evaluate(np.arange(count), *own).value, top.converged
    else:
        curve = curve_of(measure, true_value)
        along = maximise_along(evaluate, curve, np.full(count, curve.start(0.0, 1.0)))
        held, reached = along.value, top.converged & along.converged
    root = np.sqrt(2.0 * np.maximum(top.terms.value - held, 0.0))
    side = np.sign(measure.terms(top.a[None, :], top.b[None, :]).value[0] - true_value)
    return np.asarray((-sign * side * root)[reached])


def _in_scores(measure: Measure, a: float, b: float) -> Measure:
    """Return the same question put in the scores z = a + b y, in which the model itself has a = 0, b = 1."""
    match measure:
        case ScoreMeasure():
            return ScoreMeasure(a + b * measure.y)
        case HazardMeasure():
            return HazardMeasure(a + b * measure.y, measure.standard)
        case _:
            return measure


def _find_root(excess: Callable[[float], float], first: float) -> float:
    """Solve excess(root) = 0 from `first` by secants: the simulated quantile changes slowly with the root."""
    here, gap = first, excess(first)
    there, wider = here, gap
    for _ in range(_MOST_EVALUATIONS):
        if abs(gap) <= _ROOT_REACHED:
            return here
        slope = (gap - wider) / (here - there) if here != there else -1.0
        step = -gap / slope if slope < -0.2 else gap
        there, wider = here, gap
        here = float(np.clip(here + np.clip(step, -1.0, 1.0), _SMALLEST_ROOT, _LARGEST_ROOT))
        gap = excess(here)
    raise BoundUnavailable("The calibration of this bound did not settle: choose the likelihood bound.")
