"""How often bounds hold: tests like the one in hand simulated at its fit, each kind of bound held against the truth.

For a calibrated bound no search is needed: the true value lies inside when the observed signed root for it does not
exceed the quantile simulated at the fit constrained to it. Only tests with three failures or more count, because from
fewer no reading would be given.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine.bounds.calibrated import Calibrator, Proceed, share_at_least
from reliability_app.engine.bounds.constrained import curve_of, maximise_along
from reliability_app.engine.bounds.profile import profiled_at
from reliability_app.engine.bounds.wald import wald_end
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.fit_result import Fit
from reliability_app.engine.fitting import fit
from reliability_app.engine.life_data import LifeData
from reliability_app.engine.life_measures import LifeMeasure
from reliability_app.engine.methods import MAXIMUM_LIKELIHOOD
from reliability_app.engine.refitting import FEWEST_FAILURES
from reliability_app.engine.simulation import Draws, drawn_tests, plan_of

Array = NDArray[np.float64]

JUDGED_KINDS = ("wald", "likelihood", "calibrated")
TESTS, INNER_TESTS, SEED = 400, 1000, 20_260_102


@dataclass(frozen=True)
class Coverage:
    """How often a kind of bound held in simulated tests.

    Attributes
    ----------
    kind, side : str
    confidence : float
        What was promised.
    held : float
        Share of the tests in which the true value lay inside the bound.
    standard_error : float
        Of `held`, from the number of tests.
    tests : int
        Tests with three failures or more.
    """

    kind: str
    side: str
    confidence: float
    held: float
    standard_error: float
    tests: int


def coverage_of_life(
    found: Fit,
    fraction: float,
    *,
    confidence: float = 0.95,
    side: str = "lower",
    tests: int = TESTS,
    inner_tests: int = INNER_TESTS,
    seed: int = SEED,
    proceed: Proceed | None = None,
) -> tuple[Coverage, ...]:
    """Simulate the plan of a fit's data at the fit, and say how often each kind of one-sided bound of a life held.

    Parameters
    ----------
    side : str
        "lower" or "upper".
    proceed : callable, optional
        Called before each test; what it raises ends the work.

    Raises
    ------
    NoEstimate
        Without a fit.
    BoundUnavailable
        If hardly any simulated test would see three failures, or the fit is one by another method.
    """
    if found.method != MAXIMUM_LIKELIHOOD:
        raise BoundUnavailable(f"A plan is simulated for fits by {MAXIMUM_LIKELIHOOD} only: choose that method.")
    score, estimate = found.family.standard.quantile(np.array([fraction])), found.bounder.estimate
    true_place = estimate.mu + estimate.sigma * float(score[0])
    held = dict.fromkeys(JUDGED_KINDS, 0)
    used = 0
    for place, test in enumerate(simulated_tests(found, 4 * tests, seed)):
        if proceed is not None:
            proceed()
        refitted = fit(test, found.family.name, shape=found.given_shape)
        if not refitted.converged:
            continue
        try:
            judged = judge(refitted, score, true_place, confidences=(confidence,), batch=inner_tests, seed=place)
        except BoundUnavailable:  # of this test no calibrated bound would be given
            continue
        for kind in JUDGED_KINDS:
            held[kind] += judged[kind, confidence, side]
        used += 1
        if used == tests:
            break
    if used < tests // 4:
        raise BoundUnavailable(
            "Under this plan hardly any test would see three failures, so there is nothing to simulate."
        )
    return tuple(_coverage(kind, side, confidence, held[kind], used) for kind in JUDGED_KINDS)


def simulated_tests(found: Fit, tests: int, seed: int) -> Iterator[LifeData]:
    """Give tests drawn at the fit under its data's plan; those with too few failures are left out."""
    life_scale, estimate = found.family.life_scale, found.bounder.estimate
    plan = plan_of(found.data, life_scale)
    draws = Draws.of(plan, tests, seed)
    a, b = -estimate.mu / estimate.sigma, 1.0 / estimate.sigma
    for test, failures in drawn_tests(plan, draws, found.family.standard, life_scale, a=a, b=b):
        if failures >= FEWEST_FAILURES:
            yield test


def judge(
    found: Fit, score: Array, true_place: float, *, confidences: tuple[float, ...], batch: int, seed: int
) -> dict[tuple[str, float, str], bool]:
    """Say for each kind, confidence and side whether the true life at a score lies inside the bound of a fit.

    Parameters
    ----------
    score : ndarray, shape (1,)
        z of the fraction failed.
    true_place : float
        The place, on the line of the family, of the true life at which that fraction has failed.
    batch, seed : int
        Tests simulated for the calibration, and the seed of their draws.
    """
    estimate, measure = found.bounder.estimate, LifeMeasure(score)
    truth = (true_place - estimate.sample.shift) / estimate.sample.spread
    value = float(measure.terms(np.array([estimate.a]), np.array([estimate.b])).value[0])
    a, b, top = _constrained(found, measure, truth)
    observed = float(np.sqrt(max(2.0 * (float(estimate.terms.value[0]) - top), 0.0)) * np.sign(value - truth))
    plan = plan_of(found.data, found.family.life_scale)
    calibrator = Calibrator(estimate, plan, Draws.of(plan, batch, seed))
    roots = calibrator.simulated_roots(measure, a, b, -1.0)
    answer = {}
    for side, sign in (("lower", -1.0), ("upper", 1.0)):
        for confidence in confidences:
            normal = float(ndtri(confidence))
            end = float(wald_end(estimate, measure, normal, sign)[0])
            beyond = share_at_least(-sign * roots, -sign * observed)
            answer["wald", confidence, side] = bool(sign * (end - truth) >= 0)
            answer["likelihood", confidence, side] = bool(-sign * observed <= normal)
            answer["calibrated", confidence, side] = beyond > 1.0 - confidence
    return answer


def _constrained(found: Fit, measure: LifeMeasure, value: float) -> tuple[float, float, float]:
    """Return the fit constrained to a value of a life, and its log-likelihood."""
    estimate = found.bounder.estimate
    if estimate.b_is_fixed:
        a = float(measure.z[0]) - value * estimate.b
        return a, estimate.b, float(estimate.evaluate(np.array([a]), np.array([estimate.b])).value[0])
    if not estimate.is_concave:
        top, a, b = profiled_at(estimate, measure, value)
        return a, b, top
    curve = curve_of(measure, value)
    start = np.array([curve.start(estimate.a, estimate.b)])
    held = maximise_along(lambda _, a, b: estimate.evaluate(a, b), curve, start)
    return float(held.a[0]), float(held.b[0]), float(held.value[0])


def _coverage(kind: str, side: str, confidence: float, held: int, tests: int) -> Coverage:
    share = held / tests
    return Coverage(kind, side, confidence, share, float(np.sqrt(share * (1.0 - share) / tests)), tests)
