"""Calibrated bounds agree with exact ones where these exist, and have the properties every bound must have."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import LifeData, fit
from reliability_app.engine.bounds.calibrated import Calibrator
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.life_measures import LifeMeasure
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


@pytest.mark.parametrize("family", ["lognormal", "weibull", "exponential"])
def test_bounds_scale_with_the_lives(family: str) -> None:
    here = fit(stopped_at(1200.0), family).life_bounds(0.1, kind="calibrated")[0]
    there = fit(stopped_at(12.0, LIVES / 100.0), family).life_bounds(0.1, kind="calibrated")[0]
    assert here == pytest.approx(100.0 * there, rel=1e-6)


@pytest.mark.parametrize("family", ["lognormal", "weibull", "exponential"])
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
    assert complete.bound_used("automatic") == "exact"
    assert complete.bound_used("automatic", of_hazard=True) == "calibrated"
    assert fit(stopped_at(1200.0), "lognormal").bound_used("automatic") == "calibrated"
    late = fit(units_of("syn14_left_truncated").life_data(), "weibull")
    assert late.bound_used("automatic") == "likelihood"


def test_a_plan_that_is_not_known_is_refused_by_name() -> None:
    late = fit(units_of("syn14_left_truncated").life_data(), "weibull")
    with pytest.raises(BoundUnavailable, match="No plan can be simulated"):
        late.life_bounds(0.1, kind="calibrated")


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
