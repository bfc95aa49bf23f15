"""Coverage under plans in which all tests share one reference: thousands judged in a batch, without inner noise.

Under a fixed end, the quantiles of the signed root simulated at the fit constrained to the true life depend on a test
through the one free coordinate of that fit alone. They are simulated on a
grid of it and interpolated, so that each test costs no more than its own two fits.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from coverage_designs import Cell
from numpy.typing import NDArray
from scipy.special import ndtri

from reliability_app.engine import LifeData
from reliability_app.engine.bounds.calibrated import signed_roots
from reliability_app.engine.bounds.constrained import curve_of, maximise_along
from reliability_app.engine.families import family
from reliability_app.engine.life_measures import LifeMeasure
from reliability_app.engine.refitting import FEWEST_FAILURES, DrawnSamples
from reliability_app.engine.simulation import CensoringPlan, Draws, draw_sample, plan_of

Array = NDArray[np.float64]
Judged = dict[tuple[str, float, str], NDArray[np.bool_]]

_NODES, _SAMPLES, _DRAWN_LIVES = 13, (2_000, 6_000), 200_000
# The program gives no calibrated bound where fewer of the simulated tests can be read.
_LEAST_SHARE = 0.05
_SIDES = (("lower", -1.0), ("upper", 1.0))


@dataclass(frozen=True, eq=False)
class Tests:
    """Tests with three failures or more: signed root of the true life, ln b of the fit constrained to it, Wald root."""

    root: Array
    log_b: Array
    wald: Array
    has_all_failed: NDArray[np.bool_]
    drawn: int


def judge_at_once(cell: Cell, percent: float, confidences: tuple[float, ...], tests: int) -> tuple[Judged, int, int]:
    """Say of each test that gives a bound whether those of each kind hold; then how many give no reading, no bound.

    Of a complete test or a fixed number of failures nothing is said for calibrated bounds: exact ones take their place.
    """
    plan, measure = design_plan(cell), LifeMeasure(np.array([cell.place(percent / 100.0)]))
    seen = _tests(cell, plan, measure, tests)
    levels = np.array([level for c in confidences for level in (1.0 - c, c)])
    is_exact = cell.plan != "fixed time"
    limits = np.zeros((seen.root.size, levels.size)) if is_exact else _limits(cell, plan, measure, seen, levels)
    has_bound = np.isfinite(limits).all(axis=1)
    judged: Judged = {}
    for side, sign in _SIDES:
        for place, confidence in enumerate(confidences):
            normal = float(ndtri(confidence))
            # A bound holds where the root, positive for an estimate beyond the true life, is not too great on its side.
            limit = limits[:, 2 * place + 1] if sign < 0 else -limits[:, 2 * place]
            judged["wald", confidence, side] = (-sign * seen.wald <= normal)[has_bound]
            judged["likelihood", confidence, side] = (-sign * seen.root <= normal)[has_bound]
            if not is_exact:
                judged["calibrated", confidence, side] = (-sign * seen.root <= limit)[has_bound]
    return judged, seen.drawn - seen.root.size, int((~has_bound).sum())


def design_plan(cell: Cell) -> CensoringPlan:
    """Return the plan of a cell, as the program recovers it from data that show it."""
    units, failures = cell.units, round(cell.failing * cell.units)
    match cell.plan:
        case "complete":
            return plan_of(LifeData.right_censored(np.exp(np.linspace(-1.0, 1.0, units)), np.ones(units)))
        case "fixed number":
            place = np.minimum(np.arange(units), failures - 1.0)
            return plan_of(LifeData.right_censored(np.exp(place), np.arange(units) < failures))
        case "fixed time":
            end = cell.place(cell.failing)
            return plan_of(LifeData.right_censored(np.exp([end - 1.0, end]), [1, 0], quantity=[1, units - 1]))
    raise ValueError(f"{cell.plan} cannot be judged at once.")


def _drawn(cell: Cell, plan: CensoringPlan, count: int, seed: int, b: float, score: float) -> DrawnSamples:
    """Draw tests at the point of slope b that gives the life of the score its true place."""
    draws = Draws.of(plan, count, seed)
    sample, failures = draw_sample(plan, draws, cell.standard, a=score - b * score, b=b)
    usable = np.flatnonzero(failures >= FEWEST_FAILURES)
    return DrawnSamples(sample.rows(usable), failures[usable])


def _tests(cell: Cell, plan: CensoringPlan, measure: LifeMeasure, count: int) -> Tests:
    score = float(measure.z[0])
    drawn = _drawn(cell, plan, count, cell.seed, 1.0, score)
    chosen = family(cell.family)
    top, curve = drawn.fitted_by(chosen), curve_of(measure, score)
    along = maximise_along(drawn.likelihood_of(chosen), curve, np.zeros(drawn.failures.size))
    assert (top.converged & along.converged).all()
    life = (score - top.a) / top.b
    root = np.sqrt(2.0 * np.maximum(top.terms.value - along.value, 0.0)) * np.sign(life - score)
    terms = top.terms
    p, q, r = -terms.d_aa, -terms.d_ab, -terms.d_bb
    # The life is (z - a)/b, its gradient -(1, life)/b; the information is [[p, q], [q, r]].
    error = np.sqrt((r - 2.0 * q * life + p * life * life) / (p * r - q * q)) / top.b
    has_all_failed = np.asarray(drawn.failures == cell.units)
    return Tests(root, np.log(along.b), (life - score) / error, has_all_failed, count)


def _limits(cell: Cell, plan: CensoringPlan, measure: LifeMeasure, seen: Tests, levels: Array) -> Array:
    """Return the simulated quantiles of the signed root, shape (tests, levels); NaN for a test without a bound."""
    samples = int(np.clip(_DRAWN_LIVES // cell.units, *_SAMPLES))

    def quantiles(at: CensoringPlan, b: float, seed: int) -> Array:
        drawn = _drawn(cell, at, samples, seed, b, float(measure.z[0]))
        if drawn.failures.size < _LEAST_SHARE * samples:
            return np.full(levels.size, np.nan)
        return np.quantile(signed_roots(drawn, family(cell.family), measure, -1.0), levels)

    nodes = np.linspace(seen.log_b.min() - 0.01, np.quantile(seen.log_b, 0.9999) + 0.01, _NODES)
    table = np.array([quantiles(plan, float(np.exp(node)), cell.seed + 1 + k) for k, node in enumerate(nodes)])
    limits = np.stack([np.interp(seen.log_b, nodes, column) for column in table.T], axis=1)
    if seen.has_all_failed.any():
        # Where all units failed before the end the data look like a complete test, and the program takes them for one.
        complete = design_plan(Cell(cell.family, cell.units, "complete", 1.0))
        limits[seen.has_all_failed] = quantiles(complete, 1.0, cell.seed + 1 + _NODES)
    return limits
