"""Plans of inspected units and of units that came late: recovered, simulated, and calibrated under."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import LifeData, fit
from reliability_app.engine.bounds.calibrated import Calibrator, calibrator_for, signed_roots
from reliability_app.engine.coverage import coverage_of_life
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.families import family
from reliability_app.engine.life_measures import LifeMeasure
from reliability_app.engine.life_scale import LOG_LIFE
from reliability_app.engine.refitting import DrawnSamples, has_estimate
from reliability_app.engine.simulation import CensoringPlan, Draws, PlanKind, draw_sample, drawn_tests, plan_of
from tests.engine.naive_likelihood import NaiveFit, life_reading
from tests.reference.reference_data import Units

# Invented lives and looks.
LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711])
INSPECTED = LifeData.from_intervals(
    [0, 500, 750, 1000, 1250, 1250], [500, 750, 1000, 1250, np.inf, 1e12], quantity=[1, 3, 4, 2, 9, 1]
)
MIXED = LifeData.from_intervals(
    [0, 500, 750, 620, 910, 750, 430], [500, 750, 1000, 620, 910, np.inf, np.inf], quantity=[1, 2, 2, 1, 1, 3, 2]
)
LATE = LifeData.right_censored(
    [612, 701, 744, 850, 913, 1010, 1105, 1290, 1530],
    [1, 0, 1, 1, 0, 1, 1, 1, 0],
    entered=[0, 0, 300, 700, 700, 0, 850, 900, 1000],
)
LATE_INSPECTED = LifeData.from_intervals(
    [500, 750, 500, 1000, 750, 620, 1000],
    [750, 1000, 750, np.inf, 1000, 750, np.inf],
    entered=[0, 300, 0, 800, 620, 620, 0],
)
PLANS = {"inspected": INSPECTED, "mixed": MIXED, "late": LATE, "late and inspected": LATE_INSPECTED}


def looked_at(ages: np.ndarray, lives: np.ndarray) -> LifeData:
    """Lives known to lie between two of the ages, or beyond the last."""
    ends = np.concatenate([[0.0], ages, [np.inf]])
    place = np.searchsorted(ends, lives)
    return LifeData.from_intervals(ends[place - 1], ends[place])


def scored(data: LifeData, name: str, batch: int, seed: int) -> tuple[CensoringPlan, Draws, float, float]:
    plan, estimate = plan_of(data), fit(data, name).estimate
    return plan, Draws.of(plan, batch, seed), -estimate.mu / estimate.sigma, 1.0 / estimate.sigma


class TestRecovered:
    def test_a_shared_schedule_is_that_of_all_looks(self) -> None:
        plan = plan_of(looked_at(np.array([500.0, 750, 1000, 1250]), LIVES))
        # Nobody was found failed at 500, so that there was a look at 250 as well.
        assert np.exp(plan.looks.place) == pytest.approx([250, 500, 750, 1000, 1250])
        assert plan.looks.is_shared
        assert plan.looks.is_inspected.all()
        assert (plan.kind, plan.units, np.exp(plan.end)) == (PlanKind.FIXED_TIME, 10, pytest.approx(1250))

    @pytest.mark.parametrize(
        ("lower", "upper", "looks"),
        [
            ([0, 200, 600], [100, 300, np.inf], [100, 200, 300, 400, 500, 600]),
            ([0, 1000, 2000, 16_000], [1000, 2000, 4000, np.inf], [1000, 2000, 4000, 8000, 16_000]),
            ([0, 100, 400], [100, 150, np.inf], [100, 150, 200, 250, 300, 350, 400]),
            ([0, 100, 230, 500], [100, 230, 500, np.inf], [100, 230, 500]),
        ],
    )
    def test_looks_at_which_nothing_was_seen_are_put_in(
        self, lower: list[float], upper: list[float], looks: list[float]
    ) -> None:
        assert np.exp(plan_of(LifeData.from_intervals(lower, upper)).looks.place) == pytest.approx(looks)

    def test_looks_go_on_where_every_unit_was_found_failed(self) -> None:
        looks = np.exp(plan_of(LifeData.from_intervals([0, 100, 200], [100, 200, 300])).looks.place)
        assert looks[:3] == pytest.approx([100, 200, 300])
        assert looks[3] == pytest.approx(300 * 1.5**1.25)
        assert 1e100 < looks[-1] < np.inf

    def test_one_look_a_unit_is_known_for_each(self) -> None:
        plan = plan_of(LifeData.from_intervals([0, 300, 0, 200], [400, np.inf, 100, np.inf], quantity=[2, 1, 1, 1]))
        assert plan.looks.only_one
        assert np.exp(plan.known_end) == pytest.approx([400, 400, 300, 100, 200])

    def test_differing_schedules_become_one_as_fine_as_theirs(self) -> None:
        begins = np.arange(100.0, 1000.0, 37.0)
        looks = plan_of(LifeData.from_intervals(begins, begins + 200.0)).looks
        assert not looks.is_shared
        ages = np.exp(looks.place[looks.place <= np.log(begins.max() + 200.5)])
        assert ages[[0, -1]] == pytest.approx([100.0, begins.max() + 200.0])
        assert np.diff(ages)[:-1] == pytest.approx(200.0, abs=37.0)

    def test_units_with_a_known_age_at_failure_are_watched_all_the_time(self) -> None:
        plan = plan_of(MIXED)
        # In the order of the records: three units found failed, two known failures, those running at a look or not.
        assert plan.looks.is_inspected.tolist() == [True] * 5 + [False] * 2 + [True] * 3 + [False] * 2

    def test_one_length_of_watch_from_entry_is_that_of_every_unit(self) -> None:
        entered = np.array([100.0, 300, 500, 250, 0])
        data = LifeData.right_censored([600, 800, 700, 750, 420], [0, 0, 1, 0, 1], entered=entered)
        assert np.exp(plan_of(data).known_end) == pytest.approx(entered + 500.0)

    def test_entry_at_zero_changes_nothing(self) -> None:
        records = [612, 701, 744, 850, 913, 1010], [1, 0, 1, 1, 0, 1]
        plain, entered = (LifeData.right_censored(*records, entered=late) for late in (None, np.zeros(6)))
        bounds = [fit(data, "weibull").life_bounds(0.1, kind="calibrated") for data in (plain, entered)]
        assert bounds[0] == bounds[1]


class TestDrawn:
    @pytest.mark.parametrize("case", PLANS)
    def test_the_batch_and_its_tests_one_by_one_are_the_same_samples(self, case: str) -> None:
        plan, draws, a, b = scored(PLANS[case], "weibull", 60, 3)
        standard = family("weibull").standard
        sample, failures = draw_sample(plan, draws, standard, a=a, b=b)
        batch = DrawnSamples(sample, failures).likelihood_of(family("weibull"))(np.arange(60), *np.ones((2, 60)))
        for row, (test, count) in enumerate(drawn_tests(plan, draws, standard, LOG_LIFE, a=a, b=b)):
            assert test.unit_count == plan.units
            assert count == failures[row] == test.failed_count + test.found_failed_count
            # z = 1 + 1 (a + b x) on the line; the density of x has b more than that of the score.
            naive = NaiveFit(Units(test.lower, test.upper, test.quantity, test.entered), "weibull")
            jacobian = test.failed_count * np.log(b) - np.log(test.lower[test.is_failed]).sum()
            there = naive.log_likelihood(-(1.0 + a) / b, -np.log(b))
            assert batch.value[row] == pytest.approx(there - jacobian, abs=1e-7)

    def test_inspected_units_are_found_in_each_span_as_often_as_the_model_says(self) -> None:
        plan, draws, a, b = scored(looked_at(np.array([500.0, 750, 1000, 1250]), LIVES), "lognormal", 4000, 5)
        sample, failures = draw_sample(plan, draws, family("lognormal").standard, a=a, b=b)
        chances = np.diff(stats.norm.cdf(np.concatenate([[-np.inf], a + b * plan.looks.place, [np.inf]])))
        shares = np.concatenate([sample.left.total[None], sample.between.weight.T, sample.running.total[None]]) / 10
        errors = np.sqrt(chances * (1 - chances) / 40_000)
        assert (np.abs(shares.mean(axis=1) - chances) < 4 * errors).all()
        assert (failures + sample.running.total == 10).all()

    def test_lives_of_late_units_are_those_that_outlive_their_entry(self) -> None:
        data = LifeData.right_censored([900, 1000, 1200, 1900], [1, 1, 1, 1], entered=[800, 0, 800, 1500])
        plan, draws, a, b = scored(data, "weibull", 3000, 8)
        sample, _ = draw_sample(plan, draws, family("weibull").standard, a=a, b=b)
        entry = a + b * np.log([800.0, 1500.0])
        beyond = stats.gumbel_l.sf(sample.failed.y[:, [0, 3]]) / stats.gumbel_l.sf(entry)
        assert (beyond <= 1).all()
        for column in beyond.T:
            assert stats.kstest(column, "uniform").pvalue > 0.001


class TestCalibrated:
    @pytest.mark.parametrize("case", PLANS)
    def test_signed_roots_are_those_of_a_naive_likelihood(self, case: str) -> None:
        plan, draws, a, b = scored(PLANS[case], "lognormal", 40, 6)
        chosen, score = family("lognormal"), family("lognormal").standard.quantile(np.array([0.1]))
        sample, failures = draw_sample(plan, draws, chosen.standard, a=a, b=b)
        rows = np.flatnonzero((failures >= 3) & has_estimate(sample, b_is_fixed=False))[:4]
        roots = signed_roots(DrawnSamples(sample.rows(rows), failures[rows]), chosen, LifeMeasure(score), -1.0)
        tests = list(drawn_tests(plan, draws, chosen.standard, LOG_LIFE, a=a, b=b))
        true, reading = float(score[0] - a) / b, life_reading("lognormal", 0.1)
        naive_roots = []
        for row in rows.tolist():
            test = tests[row][0]
            naive = NaiveFit(Units(test.lower, test.upper, test.quantity, test.entered), "lognormal")
            drop = naive.largest - naive.profile(reading, true, reading.nuisance(*naive.maximum))[0]
            naive_roots.append(np.sign(reading.value(*naive.maximum) - true) * np.sqrt(2 * max(drop, 0.0)))
        assert roots == pytest.approx(naive_roots, abs=1e-5)

    def test_an_interval_without_end_is_right_censoring(self) -> None:
        running = replace(INSPECTED, upper=np.where(INSPECTED.upper > 1e11, np.inf, INSPECTED.upper))
        endless = replace(INSPECTED, upper=np.where(INSPECTED.upper > 1e11, 1e12, INSPECTED.upper))
        shares = []
        for data in (running, endless):
            found, plan = fit(data, "weibull"), plan_of(data)
            calibrator = Calibrator(found.estimate, plan, Draws.of(plan, 800, 2))
            a, b = found.estimate.a, found.estimate.b
            measure = LifeMeasure(family("weibull").standard.quantile(np.array([0.1])))
            shares.append([calibrator.share_beyond(measure, a, b, -1.0, root) for root in (0.5, 1.0, 1.5, 2.0)])
        assert shares[0] == shares[1]

    def test_ever_finer_looks_tend_to_the_exact_bound_of_known_ages(self) -> None:
        exact = fit(LifeData.right_censored(LIVES, np.ones(10)), "lognormal").life_bounds(0.1, kind="exact")[0]
        found = fit(looked_at(np.arange(500.0, 1730.0, 4.0), LIVES), "lognormal")
        bound = found.life_bounds(0.1, kind="calibrated")[0]
        error = np.log(found.life(0.1) / found.life_bounds(0.1, kind="wald")[0]) / 1.645
        # 3,076 samples: a limit at 95 % has a standard error of 0.038 in the root; four of those.
        assert np.log(bound / exact) == pytest.approx(0.0, abs=4 * 0.038 * error)
        # The likelihood-ratio bound lies too high by more than that, and the test would see it.
        assert np.log(found.life_bounds(0.1)[0] / exact) > 4 * 0.038 * error

    def test_a_lump_at_the_observed_root_counts_as_beyond(self) -> None:
        found, plan = fit(INSPECTED, "weibull"), plan_of(INSPECTED)
        calibrator = Calibrator(found.estimate, plan, Draws.of(plan, 400, 2))
        measure = LifeMeasure(family("weibull").standard.quantile(np.array([0.1])))
        roots = calibrator.simulated_roots(measure, found.estimate.a, found.estimate.b, -1.0)
        values, counts = np.unique(roots.round(5), return_counts=True)
        lump = float(values[np.argmax(counts)])
        assert counts.max() > 1
        share = calibrator.share_beyond(measure, found.estimate.a, found.estimate.b, -1.0, lump)
        assert share == pytest.approx(np.mean(roots > lump - 1e-5))

    def test_the_seed_decides_bounds_and_work_no_longer_wanted_ends(self) -> None:
        class Unwanted(Exception):
            pass

        def proceed() -> None:
            raise Unwanted

        found, again = (fit(INSPECTED, "weibull") for _ in range(2))
        lower = found.life_bounds(0.1, confidence=0.9, kind="calibrated")[0]
        assert lower == again.life_bounds(0.1, confidence=0.9, kind="calibrated")[0]
        assert 0 < lower < found.life(0.1)
        for data in (MIXED, LATE):
            with pytest.raises(Unwanted):
                replace(fit(data, "weibull"), proceed=proceed).life_bounds(0.1, kind="calibrated")

    def test_tests_that_leave_the_parameters_open_are_counted_and_refused(self) -> None:
        data = LifeData.right_censored([100, 110, 120, 130], [1, 1, 1, 1], entered=[99, 109, 119, 129])
        found = fit(data, "lognormal")
        assert found.converged
        with pytest.raises(BoundUnavailable, match="could not be fitted"):
            found.life_bounds(0.1, kind="calibrated")

    @pytest.mark.parametrize("case", ["mixed", "late"])
    def test_coverage_can_be_simulated(self, case: str) -> None:
        shares = coverage_of_life(fit(PLANS[case], "weibull"), 0.10, tests=20, inner_tests=100)
        assert {entry.tests for entry in shares} == {20}
        # Fewer than 15 of 20 would have a chance of 0.0003 at 95 %.
        assert shares[2].held >= 0.75


def test_more_samples_are_drawn_for_a_smaller_tail() -> None:
    found = fit(INSPECTED, "weibull")
    sizes = [len(calibrator_for(found.estimate, INSPECTED, tail).draws.life) for tail in (0.05, 0.001)]
    assert sizes[0] < sizes[1] == 8000
