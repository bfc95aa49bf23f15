"""Calibrated bounds agree with exact ones where these exist, and have the properties every bound must have."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import minimize_scalar
from scipy.special import ndtr, ndtri
from scipy.stats import ks_2samp

from reliability_app.engine import Fit, LifeData, fit
from reliability_app.engine.bounds.calibrated import Calibrator, _find_root
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.life_measures import HazardMeasure, LifeMeasure
from reliability_app.engine.refitting import samples_at, with_readings
from reliability_app.engine.simulation import Draws, PlanKind, draw_sample, plan_of
from tests.reference.reference_data import units_of

# Invented lives of pumps on a rig.
LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711])


def stopped_at(end: float, lives: np.ndarray = LIVES) -> LifeData:
    return LifeData.right_censored(np.minimum(lives, end), lives <= end)


# The quantile of 8,000 signed roots has a standard error of about 0.025, and a root moves a bound by about its standard
# error in ln life; four of those are allowed.
def test_complete_lognormal_data_give_the_exact_bound() -> None:
    found = fit(LifeData.right_censored(LIVES, np.ones(LIVES.size)), "lognormal")
    error = np.log(found.life(0.1) / found.life_bounds(0.1, kind="wald")[0]) / 1.645
    for side, end in (("lower", 0), ("upper", 1)):
        exact = found.life_bounds(0.1, side=side, kind="exact")[end]
        calibrated = found.life_bounds(0.1, side=side, kind="calibrated")[end]
        assert np.log(calibrated / exact) == pytest.approx(0.0, abs=4 * 0.025 * error)


def test_the_mean_of_complete_lognormal_data_gives_students_bound() -> None:
    found = fit(LifeData.right_censored(LIVES, np.ones(LIVES.size)), "lognormal")
    exact = found.parameter_bounds("mu", side="two", kind="exact")
    calibrated = found.parameter_bounds("mu", side="two", kind="calibrated")
    width = exact[1] - exact[0]
    assert calibrated == pytest.approx(exact, abs=0.03 * width)


def test_the_signed_root_of_failure_truncated_data_does_not_depend_on_the_parameters() -> None:
    roots = []
    for scale, shape in ((1.0, 1.0), (300.0, 2.5)):
        data = stopped_at(float((scale * LIVES**shape)[5]), scale * LIVES**shape)
        found = fit(data, "weibull")
        plan = plan_of(data)
        assert plan.kind is PlanKind.FIXED_NUMBER
        calibrator = Calibrator(found.estimate, plan, Draws.of(plan, 500, 1))
        measure = LifeMeasure(found.family.standard.quantile(np.array([0.1])))
        roots.append(np.sort(calibrator.simulated_roots(measure, found.estimate.a, found.estimate.b, -1.0)))
    assert roots[0] == pytest.approx(roots[1], abs=1e-6)


@pytest.mark.parametrize("family", ["weibull", "exponential"])
def test_one_sided_95_is_the_end_of_two_sided_90_and_bounds_nest(family: str) -> None:
    found = fit(stopped_at(1200.0), family)
    one = found.life_bounds(0.1, confidence=0.95, side="lower", kind="calibrated")[0]
    lower, upper = found.life_bounds(0.1, confidence=0.90, side="two", kind="calibrated")
    assert one == pytest.approx(lower, rel=1e-12)
    wider = found.life_bounds(0.1, confidence=0.95, side="two", kind="calibrated")
    assert wider[0] < lower < found.life(0.1) < upper < wider[1]


@pytest.mark.parametrize("family", ["lognormal", "weibull"])
def test_a_life_and_the_reliability_at_it_bound_each_other(family: str) -> None:
    found = fit(stopped_at(1200.0), family)
    life = found.life_bounds(0.1, kind="calibrated")[0]
    reliability = found.reliability_bounds(life, kind="calibrated")[0]
    assert reliability == pytest.approx(0.9, abs=2e-3)


@pytest.mark.parametrize("ask", ["hazard", "shape", "reliability"])
def test_every_reading_can_be_calibrated(ask: str) -> None:
    found = fit(stopped_at(1200.0), "weibull")
    if ask == "hazard":
        lower, upper = found.hazard_bounds(900.0, side="two", kind="calibrated")
        estimate = found.hazard(900.0)
    elif ask == "shape":
        lower, upper = found.parameter_bounds("shape", side="two", kind="calibrated")
        estimate = found.parameters["shape"]
    else:
        lower, upper = found.reliability_bounds(900.0, side="two", kind="calibrated")
        estimate = found.reliability(900.0)
    assert 0 < lower < estimate < upper


def test_automatic_is_exact_where_exact_exists_and_calibrated_elsewhere() -> None:
    complete = fit(LifeData.right_censored(LIVES, np.ones(LIVES.size)), "lognormal")
    assert complete.life_question(0.1).bound_used("automatic") == "exact"
    assert complete.hazard_question(900.0).bound_used("automatic") == "calibrated"
    assert fit(stopped_at(1200.0), "lognormal").life_question(0.1).bound_used("automatic") == "calibrated"
    late = fit(units_of("syn14_left_truncated").life_data(), "weibull")
    assert late.life_question(0.1).bound_used("automatic") == "calibrated"


@pytest.mark.parametrize("age", [600.0, 900.0, 1200.0, 4000.0])
def test_hazards_of_a_stopped_test_are_bounded_where_the_simulated_share_meets_the_tail(age: float) -> None:
    found = fit(stopped_at(1200.0), "lognormal")
    measure, of_hazard = found.hazard_measure(age), found.hazard_of(age)
    ends = found.hazard_bounds(age, side="two", kind="calibrated")
    assert ends[0] < found.hazard(age) < ends[1]
    # Held against other draws: the share of 20,000 signed roots beyond that of the bound is the tail, within four
    # standard errors of that and of the 8,000 draws of the bound itself.
    again = Calibrator(found.estimate, plan_of(found.data), Draws.of(plan_of(found.data), 20_000, 5))
    for sign, end in zip((-1.0, 1.0), ends, strict=True):
        value = np.log(end) - np.log(of_hazard(np.zeros(1))[0])
        a, b, top = constrained_by_search(found, measure, float(value))
        root = np.sqrt(2.0 * (found.estimate.terms.value[0] - top))
        share = again.share_beyond(measure, a, b, sign, float(root))
        error = np.sqrt(0.025 * 0.975) * np.hypot(1 / np.sqrt(20_000), 1 / np.sqrt(8_000))
        assert share == pytest.approx(0.025, abs=4 * error)


def constrained_by_search(found: Fit, measure: HazardMeasure, value: float) -> tuple[float, float, float]:
    """Point and height of the log-likelihood where a log hazard has a value, by a search of scipy along z."""
    y = float(measure.y[0])

    def point(z: float) -> tuple[float, float]:
        b = float(np.exp(value - measure.standard.log_hazard(np.array([z])).value[0]))
        return z - b * y, b

    def loss(z: float) -> float:
        a, b = point(z)
        return -float(found.estimate.evaluate(np.array([a]), np.array([b])).value[0])

    start = found.estimate.a + found.estimate.b * y
    best = minimize_scalar(loss, bounds=(start - 6.0, start + 6.0), method="bounded", options={"xatol": 1e-9})
    return *point(float(best.x)), -float(best.fun)


def test_a_tail_too_small_for_the_simulation_is_refused() -> None:
    found = fit(stopped_at(1200.0), "weibull")
    assert 0 < found.life_bounds(0.1, confidence=0.999, kind="calibrated")[0] < found.life(0.1)
    with pytest.raises(BoundUnavailable, match="choose a lower confidence"):
        found.life_bounds(0.1, confidence=0.9999, kind="calibrated")


class TestTheSearch:
    def test_it_finds_the_place_of_a_step(self) -> None:
        root = _find_root(lambda root: 0.2 if root < 1.2345 else 0.01, 0.05, 1.6, precision=0.004)
        assert 1.2345 <= root <= 1.2345 + 0.004

    def test_a_bound_that_never_comes_is_refused_and_one_beyond_the_estimate_is_put_there(self) -> None:
        for end in (2.0, 1e9):
            with pytest.raises(BoundUnavailable, match="beyond all ages"):
                _find_root(lambda root, end=end: 0.2 if root < end else None, 0.05, 1.6, precision=0.004)
        assert _find_root(lambda _: 0.01, 0.05, 1.6, precision=0.004) < 0.01

    def test_an_open_end_beyond_the_bound_does_no_harm(self) -> None:
        root = _find_root(lambda at: float(ndtr(-at)) if at < 1.7 else None, 0.05, 3.0, precision=0.004)
        assert root == pytest.approx(-ndtri(0.05), abs=0.004)


def test_work_that_is_no_longer_wanted_can_be_ended() -> None:
    from dataclasses import replace

    class Unwanted(Exception):
        pass

    def proceed() -> None:
        raise Unwanted

    found = replace(fit(stopped_at(1200.0), "weibull"), proceed=proceed)
    with pytest.raises(Unwanted):
        found.life_bounds(0.1, kind="calibrated")


class TestPlans:
    def test_each_way_a_test_ends_is_told_from_the_data(self) -> None:
        assert plan_of(stopped_at(9000.0)).kind is PlanKind.COMPLETE
        assert plan_of(stopped_at(1200.0)).kind is PlanKind.FIXED_TIME
        assert plan_of(stopped_at(1010.0)).kind is PlanKind.FIXED_NUMBER
        mixed = LifeData.right_censored([100, 200, 300, 250], [1, 0, 1, 0])
        assert plan_of(mixed).kind is PlanKind.STAGGERED

    @pytest.mark.parametrize("family", ["lognormal", "weibull"])
    def test_samples_drawn_at_a_fixed_time_fail_in_the_expected_share(self, family: str) -> None:
        found = fit(stopped_at(1200.0), family)
        plan = plan_of(found.data)
        mu, sigma = found.estimate.mu, found.estimate.sigma
        draws = Draws.of(plan, 4000, 7)
        sample, failures = draw_sample(plan, draws, found.family.standard, a=-mu / sigma, b=1.0 / sigma)
        expected = 10 * (1 - found.reliability(1200.0))
        assert failures.mean() == pytest.approx(expected, abs=4 * np.sqrt(10 * 0.25 / 4000))
        assert (sample.failed.total + sample.running.total == 10).all()

    def test_removals_beyond_a_failure_are_drawn_from_the_removals_there(self) -> None:
        data = LifeData.right_censored([100, 150, 200, 300], [0, 1, 0, 0])
        found = fit(LifeData.right_censored([100, 150, 200, 300, 160], [0, 1, 0, 0, 1]), "weibull")
        plan = plan_of(data)
        draws = Draws.of(plan, 20_000, 3)
        # Every unit outlives its removal when the model's lives are put far beyond them.
        sample, failures = draw_sample(plan, draws, found.family.standard, a=-60.0, b=1.0)
        assert (failures == 0).all()
        ends = np.exp(sample.running.y + 60.0)
        assert np.unique(ends[:, 0].round(6)).tolist() == [100.0]
        drawn, counts = np.unique(ends[:, 1].round(6), return_counts=True)
        # Kaplan-Meier of leaving beyond 150: of the units there at 200 one of two leaves, the other at 300.
        assert drawn.tolist() == [200.0, 300.0]
        assert counts[0] / 20_000 == pytest.approx(0.5, abs=0.02)


def test_tests_drawn_with_three_failures_are_those_that_a_rejection_would_leave() -> None:
    stopped = LifeData.right_censored(np.append([410.0, 520.0, 690.0, 800.0], [900.0] * 8), np.arange(12) < 4)
    estimate = fit(stopped, "weibull").bounder.estimate
    plan = plan_of(stopped)
    a, b = estimate.a - 0.7, estimate.b  # fewer failures than seen: some three tests in five would be left out
    draws = Draws.of(plan, 8_000, 1)
    left = samples_at(estimate, plan, draws, a=a, b=b)
    drawn = samples_at(estimate, plan, with_readings(estimate, plan, draws, a=a, b=b), a=a, b=b)
    assert left.failures.size < 3_300
    assert drawn.failures.size == 8_000
    for one, other in ((left.failures, drawn.failures), (left.sample.failed.y[:, 0], drawn.sample.failed.y[:, 0])):
        assert ks_2samp(one, other).pvalue > 0.01
    again = with_readings(estimate, plan, draws, a=a + 1e-9, b=b).life
    np.testing.assert_allclose(again, with_readings(estimate, plan, draws, a=a, b=b).life, rtol=1e-7)


def test_an_upper_bound_is_found_where_few_tests_like_it_would_see_three_failures() -> None:
    # 4 of 10 had failed at the end; at B10 lives near the upper bound hardly a test would see three failures.
    life = np.array([0.21, 0.33, 0.38, 0.47, *[0.51] * 6])
    found = fit(LifeData.right_censored(life, np.arange(10) < 4), "weibull")
    upper = found.life_bounds(0.1, side="upper", confidence=0.95, kind="calibrated")[1]
    assert found.life(0.1) < found.life_bounds(0.1, side="upper", confidence=0.9, kind="calibrated")[1] < upper < 1.0
