"""Turnbull's estimate and Nelson-Aalen's against published and computed values, a slow second way, and properties."""

from __future__ import annotations

import time

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from reliability_app.engine import LifeData, fit, kaplan_meier, nelson_aalen, plotting_positions, turnbull
from reliability_app.engine.empirical import mark_age
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.fit_curves import step_curve
from tests.engine.naive_turnbull import promise, self_consistent
from tests.reference.reference_data import SET_NAMES, figures, interval_units, published, reference_set, units_of

WITH_MASSES = [name for name in SET_NAMES if "turnbull" in reference_set(name)]
WITH_HAZARD = [name for name in SET_NAMES if "nelson_aalen" in reference_set(name)]
WITH_STEPS = [name for name in SET_NAMES if "kaplan_meier" in reference_set(name)]


class TestComputed:
    """Each file tests/reference/<set>.json names its source: EM then Newton in R, and R's survfit for Nelson-Aalen."""

    def test_the_sets_are_there(self) -> None:
        assert WITH_MASSES == ["syn07a_interval_equal", "tobin", "turbine"]
        assert len(WITH_HAZARD) == 15

    @pytest.mark.parametrize("name", WITH_MASSES)
    def test_masses_survival_and_likelihood(self, name: str) -> None:
        expected, steps = reference_set(name)["turnbull"], turnbull(units_of(name).life_data())
        begin, end = [-np.inf if age is None else age for age in expected["left"]], figures(expected["right"])
        finite = np.isfinite(end)
        assert steps.begin.tolist() == np.array(begin)[finite].tolist()
        assert steps.age.tolist() == end[finite].tolist()
        assert steps.mass == pytest.approx(np.array(expected["mass"])[finite], abs=1e-10)
        survival = 1.0 - np.cumsum(expected["mass"])[finite]
        assert steps.survival == pytest.approx(survival, abs=1e-10)
        assert steps.log_likelihood == pytest.approx(expected["log_likelihood"], abs=1e-9)
        assert steps.tail_begin == (None if finite.all() else begin[-1])
        assert steps.is_unique
        assert steps.excess < 1e-12

    @pytest.mark.parametrize("name", WITH_HAZARD)
    def test_nelson_aalen_with_the_sum_of_failures_over_watched_squared(self, name: str) -> None:
        expected, steps = reference_set(name)["nelson_aalen"], nelson_aalen(units_of(name).life_data())
        rows = np.searchsorted(steps.age, expected["age"]) if "age" in expected else slice(None)
        assert steps.cumulative_hazard[rows] == pytest.approx(expected["cumulative_hazard"], rel=1e-8)
        assert steps.standard_error[rows] == pytest.approx(expected["standard_error"], rel=1e-8)


class TestPublished:
    def test_exact_left_and_right_records_of_turnbull_1974(self) -> None:
        """Turnbull (1974), J. Am. Statist. Ass. 69, 169-173, in R survival's own test; three decimals are printed."""
        item = published("turnbull-1974")
        data, age = item["data"], np.array(item["data"]["time"], dtype=float)
        lower, upper = np.concatenate([age, age, 0 * age]), np.concatenate([age, np.full(4, np.inf), age])
        count = np.array([*data["deaths"], *data["right"], *data["left"]])
        steps = turnbull(interval_units(lower[count > 0], upper[count > 0], count[count > 0]).life_data())
        assert steps.age.tolist() == data["time"]
        assert steps.survival == pytest.approx(item["expected"]["S"], abs=5e-4)
        assert steps.survival == pytest.approx(item["recomputed"]["S"], abs=1e-6)

    def test_heat_exchanger_tubes_with_greenwood_errors(self) -> None:
        """Meeker and Escobar (1998), chapter 3; the pooled table from memory."""
        item = published("heat-exchanger-nonparametric")
        entering, failed = np.array([*item["data"]["pooled"]["n"], 0]), np.array(item["data"]["pooled"]["d"])
        left = entering[:-1] - failed - entering[1:]
        left[-1] = entering[-2] - failed[-1]
        years = np.array([1.0, 2.0, 3.0])
        lower, upper = np.concatenate([years - 1.0, years]), np.concatenate([years, np.full(3, np.inf)])
        steps = turnbull(interval_units(lower, upper, np.concatenate([failed, left])).life_data())
        assert 1.0 - steps.survival == pytest.approx(item["expected"]["pooled_F"], abs=5e-5)
        assert 1.0 - steps.survival == pytest.approx(item["recomputed"]["pooled_F"], abs=5.001e-8)
        assert steps.standard_error == pytest.approx(item["expected"]["pooled_se"], abs=5.001e-5)
        assert steps.standard_error == pytest.approx(item["recomputed"]["pooled_se"], abs=5.001e-8)


class TestReducesToKaplanMeier:
    @pytest.mark.parametrize("name", WITH_STEPS)
    def test_without_intervals_estimate_errors_and_bounds_are_kaplan_meiers(self, name: str) -> None:
        data = units_of(name).life_data()
        general, usual = turnbull(data, confidence=0.9), kaplan_meier(data, confidence=0.9)
        assert general.begin.tolist() == general.age.tolist() == usual.age.tolist()
        for column in ("survival", "standard_error", "lower", "upper", "failures"):
            expected = getattr(usual, column)
            assert getattr(general, column) == pytest.approx(expected, rel=1e-9, abs=1e-13, nan_ok=True), column

    def test_late_entry_that_leaves_nobody_watched_counts_as_no_failure(self) -> None:
        data = LifeData.right_censored([100.0, 200.0, 300.0], [0, 1, 0], entered=[0.0, 150.0, 180.0])
        steps = turnbull(data)
        assert steps.survival.tolist() == [0.5]
        assert not steps.is_unique

    def test_survival_that_has_come_to_0_stays_there(self) -> None:
        """The product-limit estimate is 0 once all that are watched have failed; later units change nothing."""
        data = LifeData.right_censored([50.0, 200.0, 300.0], [1, 1, 0], entered=[0.0, 60.0, 60.0])
        assert kaplan_meier(data).survival.tolist() == [0.0, 0.0]
        steps, points = turnbull(data), plotting_positions(data)
        assert (steps.age.tolist(), steps.survival.tolist(), steps.failures.tolist()) == ([50.0], [0.0], [1.0])
        assert (points.age.tolist(), points.fraction.tolist()) == ([50.0], [0.5])


def units(*, most: int, late: bool) -> st.SearchStrategy[LifeData]:
    """A handful of units on a small grid of ages, so that ends coincide often."""

    @st.composite
    def draw_units(draw: st.DrawFn) -> LifeData:
        rows = draw(st.lists(st.tuples(*[st.integers(0, 6)] * 3, st.integers(1, 4)), min_size=1, max_size=most))
        kinds = draw(st.lists(st.sampled_from(["exact", "running", "found"]), min_size=len(rows), max_size=len(rows)))
        lower, upper, entered = [], [], []
        for kind, (age, width, start, _) in zip(kinds, rows, strict=True):
            low = age if kind == "found" else age + 1
            lower.append(low)
            upper.append({"exact": low, "running": np.inf, "found": low + 1 + width}[kind])
            latest = low + width if kind == "found" else low - 1
            entered.append(min(start, latest) if late else 0)
        return LifeData.from_intervals(lower, upper, quantity=[row[3] for row in rows], entered=entered)

    return draw_units()


def survival_after(steps: object, ages: np.ndarray) -> np.ndarray:
    """Survival after each age, NaN inside an interval where it is not known."""
    at = np.searchsorted(steps.age, ages, side="right")
    known = np.append(steps.begin, np.inf)[at] >= ages
    return np.where(known, np.concatenate([[1.0], steps.survival])[at], np.nan)


class TestSecondWay:
    @settings(max_examples=60, deadline=None)
    @given(units(most=8, late=False))
    def test_self_consistency_on_a_grid_comes_to_the_same(self, data: LifeData) -> None:
        steps = turnbull(data)
        grid, survival, value = self_consistent(data, rounds=4_000)
        assert value <= steps.log_likelihood + 1e-9
        assert value == pytest.approx(steps.log_likelihood, abs=5e-3)
        assume(value > steps.log_likelihood - 1e-7)  # else it has not settled, as where a mass goes to 0
        known = survival_after(steps, grid)
        assert survival[np.isfinite(known)] == pytest.approx(known[np.isfinite(known)], abs=5e-3)

    @settings(max_examples=60, deadline=None)
    @given(units(most=8, late=True), st.integers(0, 3))
    def test_late_entry_is_never_beaten_by_self_consistency(self, data: LifeData, watched: int) -> None:
        """Where all that are watched fail early the second way creeps on for ever; units watched to the end stop it."""
        if watched:
            columns = zip((data.lower, data.upper, data.quantity, data.entered), (30, np.inf, watched, 0), strict=True)
            data = LifeData(*(np.append(column, value) for column, value in columns))
        value = self_consistent(data, rounds=3_000)[2]
        assert value <= turnbull(data).log_likelihood + 1e-9
        if watched:
            assert value == pytest.approx(turnbull(data).log_likelihood, abs=5e-3)

    @settings(max_examples=100, deadline=None)
    @given(units(most=40, late=False))
    def test_no_place_on_the_grid_promises_more(self, data: LifeData) -> None:
        steps = turnbull(data)
        tail = float(steps.survival[-1]) if steps.survival.size else 1.0
        assert promise(data, steps.begin, steps.age, steps.mass, tail) < 1e-9
        assert steps.mass.sum() + tail == pytest.approx(1.0, abs=1e-12)


class TestProperties:
    @settings(max_examples=60, deadline=None)
    @given(units(most=20, late=True), st.randoms(use_true_random=False))
    def test_order_and_splitting_of_rows_change_nothing(self, data: LifeData, chance: object) -> None:
        rows = [row for row, count in enumerate(data.quantity.astype(int)) for _ in range(count)]
        chance.shuffle(rows)
        split = LifeData.from_intervals(data.lower[rows], data.upper[rows], entered=data.entered[rows])
        one, other = turnbull(data), turnbull(split)
        for column in ("begin", "age", "mass", "survival", "standard_error", "failures"):
            assert getattr(one, column).tolist() == pytest.approx(getattr(other, column).tolist(), abs=0, nan_ok=True)

    @settings(max_examples=60, deadline=None)
    @given(units(most=20, late=False))
    def test_every_failed_unit_is_somewhere(self, data: LifeData) -> None:
        steps = turnbull(data)
        assert (steps.failures > 0).all()
        assert steps.failures.sum() == pytest.approx(data.quantity[~data.is_running].sum(), rel=1e-9)

    @settings(max_examples=60, deadline=None)
    @given(units(most=30, late=True))
    def test_bounds_hold_the_estimate_and_widen_with_confidence(self, data: LifeData) -> None:
        narrow, wide = turnbull(data, confidence=0.8), turnbull(data, confidence=0.95)
        known = np.isfinite(narrow.lower)
        assert (known == np.isfinite(narrow.standard_error)).all()
        for inner, outer in ((narrow.survival, narrow), (narrow.lower, wide), (narrow.upper, wide)):
            assert (outer.lower[known] <= inner[known]).all()
            assert (outer.upper[known] >= inner[known]).all()

    def test_errors_are_those_of_the_second_differences_of_the_likelihood(self) -> None:
        """Overlapping intervals: the inverse of minus the numerical second derivative, in the masses themselves."""
        lower, upper = [0, 1, 1, 2, 3, 3, 0, 6], [2, 3, 4, 5, 6, np.inf, 1, np.inf]
        quantity = [5, 4, 6, 5, 7, 3, 2, 8]
        steps = turnbull(LifeData.from_intervals(lower, upper, quantity=quantity))
        begin, end = np.append(steps.begin, 6.0), np.append(steps.age, np.inf)
        inside = (np.array(lower)[:, None] <= begin) & (np.array(upper)[:, None] >= end)

        def value(free: np.ndarray) -> float:
            return float(np.array(quantity) @ np.log(inside @ np.append(free, 1.0 - free.sum())))

        size, top = steps.mass.size, steps.mass
        h = 1e-4 * np.eye(size)
        bend = [
            [(value(top + a + b) - value(top + a - b) - value(top - a + b) + value(top - a - b)) / 4e-8 for a in h]
            for b in h
        ]
        covariance = np.linalg.inv(-np.array(bend))
        sums = np.tril(np.ones((size, size)))
        expected = np.sqrt(np.diag(sums @ covariance @ sums.T))
        assert size == 3
        assert steps.standard_error == pytest.approx(expected, rel=1e-4)


class TestNamedOutcomes:
    def test_a_single_record_of_each_kind(self) -> None:
        running = turnbull(LifeData.from_intervals([100.0], [np.inf]))
        assert (running.age.size, running.tail_begin, running.log_likelihood) == (0, 100.0, 0.0)
        left = turnbull(LifeData.from_intervals([0.0], [100.0]))
        assert (left.begin.tolist(), left.age.tolist(), left.survival.tolist()) == ([0.0], [100.0], [0.0])
        assert np.isnan(left.standard_error).all()

    def test_a_unit_found_failed_after_late_entry_failed_after_its_entry(self) -> None:
        data = LifeData.from_intervals([0.0, 10.0], [100.0, np.inf], entered=[50.0, 0.0])
        assert turnbull(data).begin.tolist() == [50.0]

    def test_its_likelihood_is_that_of_the_interval_which_begins_at_the_entry(self) -> None:
        lower, upper, entered = [0.0, 120.0, 80.0, 90.0], [100.0, 120.0, 80.0, np.inf], [50.0, 0.0, 0.0, 0.0]
        late = fit(LifeData.from_intervals(lower, upper, entered=entered), "weibull")
        said = fit(LifeData.from_intervals([50.0, *lower[1:]], upper, entered=entered), "weibull")
        assert late.log_likelihood == said.log_likelihood
        assert late.parameters == said.parameters

    def test_ages_below_0_and_intervals_without_a_beginning_are_in_order(self) -> None:
        lower, upper = np.array([-np.inf, -3.0, -2.0, -1.0, 1.0]), np.array([-4.0, -3.0, 0.0, -1.0, np.inf])
        below, above = (
            turnbull(LifeData.from_intervals(lower, upper)),
            turnbull(LifeData.from_intervals(lower + 9, upper + 9)),
        )
        assert (below.age + 9).tolist() == above.age.tolist()
        assert below.survival.tolist() == above.survival.tolist()
        exact = LifeData.from_intervals([-3.0, -1.0, 2.0], [-3.0, -1.0, np.inf])
        assert kaplan_meier(exact).survival == pytest.approx([2 / 3, 1 / 3], rel=1e-12)
        assert turnbull(exact).survival == pytest.approx([2 / 3, 1 / 3], rel=1e-12)

    def test_ambiguous_masses_are_said_to_be_so(self) -> None:
        """The first unit may have failed before or after the second came under observation, and nobody ran beyond."""
        steps = turnbull(LifeData.from_intervals([100.0, 200.0], [300.0, 400.0], entered=[0.0, 150.0]))
        assert not steps.is_unique
        assert steps.log_likelihood == 0.0

    def test_between_masses_that_can_be_traded_there_is_no_error(self) -> None:
        """The second unit failed before the third came or after that was last seen: only the sum of both is known."""
        lower, upper, entered = [1, 1, 3, 30], [1, 4, np.inf, np.inf], [0, 0, 2, 0]
        steps = turnbull(LifeData.from_intervals(lower, upper, entered=entered))
        assert (steps.begin.tolist(), steps.age.tolist()) == ([1.0, 1.0, 3.0], [1.0, 2.0, 4.0])
        assert not steps.is_unique
        assert np.isfinite(steps.standard_error).tolist() == [True, False, True]

    def test_kaplan_meier_nelson_aalen_and_ranks_refuse_intervals(self) -> None:
        data = LifeData.from_intervals([1.0, 2.0], [3.0, 2.0])
        for refused in (kaplan_meier, nelson_aalen, lambda units: plotting_positions(units, method="median_rank")):
            with pytest.raises(BoundUnavailable, match=r"Turnbull's estimate and its mid-points"):
                refused(data)


class TestPlottingPositions:
    def test_marks_of_intervals_stand_half_way_in_age_and_half_way_down(self) -> None:
        data = units_of("syn07a_interval_equal").life_data()
        points, expected = plotting_positions(data), reference_set("syn07a_interval_equal")["turnbull"]["mass"]
        assert points.age.tolist() == [50, 150, 250, 350, 450, 550, 650, 750]
        after = np.cumsum(expected)[:-1]
        assert points.fraction == pytest.approx(after - np.array(expected)[:-1] / 2, abs=1e-10)
        assert points.failures == pytest.approx([6, 13, 5, 10, 8, 4, 5, 5], rel=1e-9)
        assert np.isnan(points.adjusted_rank).all()

    def test_a_narrowing_interval_tends_to_the_mark_of_a_known_age(self) -> None:
        known = plotting_positions(LifeData.from_intervals([50, 100, 200], [50, 100, np.inf]))
        found = plotting_positions(LifeData.from_intervals([50, 100 - 1e-9, 200], [50, 100, np.inf]))
        assert found.age == pytest.approx(known.age, rel=1e-9)
        assert found.fraction == pytest.approx(known.fraction, rel=1e-12)

    def test_a_known_age_is_its_own_mark_to_the_last_digit(self) -> None:
        ages = np.array([0.1, 1.0 / 3.0, 1e-300, 123456.789])
        assert mark_age(ages, ages).tolist() == ages.tolist()

    def test_the_drawn_step_falls_through_its_mark(self) -> None:
        data = units_of("turbine").life_data()
        steps, points = turnbull(data), plotting_positions(data)
        curve = step_curve(steps, data.last_observation)
        assert curve.x.tolist() == [0.0, *np.repeat(points.age, 2).tolist(), 46.0]
        assert 0.5 * (curve.y[1:-1:2] + curve.y[2:-1:2]) == pytest.approx(1.0 - points.fraction, abs=1e-12)
        assert ((steps.begin <= points.age) & (points.age <= steps.age)).all()
        assert curve.y[[0, -1]] == pytest.approx([1.0, steps.survival[-1]])


class TestMuch:
    @pytest.mark.parametrize("late", [False, True])
    def test_ten_thousand_distinct_intervals_settle(self, *, late: bool) -> None:
        chance = np.random.default_rng(20260301)
        life, width = 1000.0 * chance.weibull(1.5, 16_000), chance.uniform(1.0, 100.0, 16_000)
        lower = np.maximum(life - width * chance.uniform(size=16_000), 0.0)
        entered = np.maximum(chance.uniform(-600.0 if late else -1e9, 600.0 if late else 0.0, 16_000), 0.0)
        seen = np.flatnonzero(entered < lower)[:10_000]  # those that failed before their entry never come in
        data = LifeData.from_intervals(lower[seen], (lower + width)[seen], entered=entered[seen])
        assert data.lower.size == 10_000
        began = time.perf_counter()
        steps = turnbull(data)
        # It takes a tenth to half a second; a minute is a hang on any machine.
        assert time.perf_counter() - began < 60.0
        assert steps.excess < 1e-9
        assert steps.steps < 100
        between = np.interp(np.exp(-1.0), steps.survival[::-1], steps.age[::-1])
        assert between == pytest.approx(1000.0, rel=0.05)  # e^-1 run beyond the Weibull's scale

    def test_quantities_nine_orders_apart_settle(self) -> None:
        chance = np.random.default_rng(20260302)
        lower = 10.0 ** chance.uniform(-6.0, 6.0, 2_000)
        upper = lower * (1.0 + chance.uniform(size=2_000))
        steps = turnbull(LifeData.from_intervals(lower, upper, quantity=10 ** chance.integers(0, 9, 2_000)))
        assert steps.mass.sum() == pytest.approx(1.0, abs=1e-9)
        assert steps.excess < 1e-3

    def test_a_hundred_thousand_known_ages_and_an_interval(self) -> None:
        """The interval spans the second half; its unit is shared out over it, and the rest is the product limit."""
        ages = np.arange(1.0, 100_001.0)
        data = LifeData.from_intervals(np.append(ages, 50_000.0), np.append(ages, 100_000.0))
        steps = turnbull(data)
        first = ages <= 50_000.0
        assert steps.survival[first] == pytest.approx(1.0 - ages[first] / 100_001.0, abs=1e-12)
        assert steps.mass[~first] == pytest.approx(50_001.0 / 100_001.0 / 50_000.0, rel=1e-9)
        assert np.isfinite(steps.standard_error[:-1]).all()
