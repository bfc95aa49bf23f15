"""Quantile residuals are the normal scores of failures, lie inside what is known of the others, and are normal."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import LifeData, fit
from reliability_app.engine.residuals import quantile_residuals, surprising_units
from tests.reference.published_data import nist_8413
from tests.reference.reference_data import units_of

# Invented lives.
LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711])


@pytest.mark.parametrize("name", ["lognormal", "weibull", "exponential", "normal", "logistic"])
def test_of_complete_data_they_are_the_normal_scores_of_the_fit(name: str) -> None:
    found = fit(LifeData.right_censored(LIVES, np.ones(10)), name)
    residuals = quantile_residuals(found)
    plain = stats.norm.ppf(np.asarray(found.failure_probability(LIVES)))
    assert residuals.value == pytest.approx(plain, rel=1e-9)
    assert (residuals.lower == residuals.value).all()
    assert (residuals.upper == residuals.value).all()


def test_of_a_lognormal_fit_they_are_the_standardised_logarithms() -> None:
    found = fit(LifeData.right_censored(LIVES, np.ones(10)), "lognormal")
    logs = np.log(LIVES)
    assert quantile_residuals(found).value == pytest.approx((logs - logs.mean()) / logs.std(), rel=1e-9)


def test_of_a_normal_fit_they_are_the_standardised_lives_wherever_these_begin() -> None:
    lower, upper = [-30.0, 10, 40, 70, -np.inf, 90], [-30.0, 10, 40, 70, 0, np.inf]
    found = fit(LifeData.from_intervals(lower, upper), "normal")
    mu, sigma = found.parameters["mu"], found.parameters["sigma"]
    residuals = quantile_residuals(found)
    assert residuals.value[:4] == pytest.approx((np.array(lower[:4]) - mu) / sigma, rel=1e-9)
    assert residuals.upper[4] == pytest.approx(-mu / sigma, rel=1e-9)
    assert (residuals.lower[4], residuals.upper[5]) == (-np.inf, np.inf)


def test_each_unit_lies_where_it_is_known_to_lie() -> None:
    lower, upper = np.array([0.0, 100, 200, 300, 250]), np.array([90.0, 100, 260, np.inf, np.inf])
    found = fit(LifeData.from_intervals(lower, upper, quantity=[1, 2, 1, 3, 1]), "weibull")
    residuals = quantile_residuals(found)
    assert residuals.record.tolist() == [0, 1, 1, 2, 3, 3, 3, 4]
    with np.errstate(divide="ignore"):
        low = stats.norm.ppf([0.0 if age == 0 else found.failure_probability(age) for age in lower])
        high = stats.norm.ppf([1.0 if np.isinf(age) else found.failure_probability(age) for age in upper])
    assert residuals.lower == pytest.approx(low[residuals.record], rel=1e-8)
    assert residuals.upper == pytest.approx(high[residuals.record], rel=1e-8)
    inside = residuals.record != 1
    assert (residuals.lower[inside] < residuals.value[inside]).all()
    assert (residuals.value[inside] < residuals.upper[inside]).all()
    assert len(set(residuals.value[4:7])) == 3


def test_the_seed_decides_the_draws_and_leaves_the_failures_alone() -> None:
    found = fit(nist_8413().life_data(), "weibull")
    here, again, other = (quantile_residuals(found, seed=seed).value for seed in (1, 1, 2))
    assert (here == again).all()
    assert (here[:10] == other[:10]).all()
    assert (here[10:] != other[10:]).all()


@pytest.mark.parametrize("kind", ["running", "found failed", "first look", "late entry"])
def test_they_are_a_normal_sample_when_the_family_is_right(kind: str) -> None:
    generator = np.random.default_rng(31)
    lives = generator.weibull(2.0, 4000) * 1000
    looks = generator.uniform(200, 2000, 4000)
    match kind:
        case "running":
            data = LifeData.right_censored(np.minimum(lives, looks), lives <= looks)
        case "found failed":
            step = np.floor(lives / 300) * 300
            data = LifeData.from_intervals(step, step + 300)
        case "first look":
            data = LifeData.from_intervals(np.where(lives < looks, 0.0, lives), np.where(lives < looks, looks, lives))
        case _:
            entered = generator.uniform(0, 1200, 4000)
            came = lives > entered
            data = LifeData.right_censored(lives[came], np.ones(came.sum()), entered=entered[came])
    values = quantile_residuals(fit(data, "weibull")).value
    # Estimated parameters only make the scores agree better; 1.95 is the upper 0.1 % of sqrt(n) times Kolmogorov's D.
    assert np.sqrt(values.size) * stats.kstest(values, "norm").statistic < 1.95


def test_far_tails_keep_finite_scores() -> None:
    lower = np.array([1e-6, 100, 110, 120, 130, 5000])
    data = LifeData.from_intervals(lower, [1e-6, 100, 110, 120, np.inf, np.inf])
    steep = fit(LifeData.right_censored([100, 110, 120, 130], [1, 1, 1, 1]), "weibull")
    far = quantile_residuals(type(steep)(data, steep.family, steep.outcome, steep.estimate))
    assert np.isfinite(far.value).all()
    assert far.value[0] < -15
    # Forty times the characteristic life at a shape above ten: -ln S is beyond 40^10, the score beyond its root.
    assert far.value[-1] > 40**5


class TestSurprisingUnits:
    def test_a_unit_far_out_is_named(self) -> None:
        lives = np.exp(7 + 0.2 * stats.norm.ppf((np.arange(1, 41) - 0.5) / 40))
        early = LifeData.right_censored([*lives, 150.0], np.ones(41))
        assert surprising_units(quantile_residuals(fit(early, "lognormal"))).tolist() == [40]
        assert surprising_units(quantile_residuals(fit(early, "lognormal")), level=1e-12).size == 0

    def test_a_unit_that_only_ran_short_is_not_surprising(self) -> None:
        lives = np.exp(7 + 0.2 * stats.norm.ppf((np.arange(1, 41) - 0.5) / 40))
        removed = LifeData.right_censored([*lives, 1.0], [*np.ones(40), 0])
        assert surprising_units(quantile_residuals(fit(removed, "lognormal"))).size == 0

    def test_a_right_family_has_one_at_the_chosen_rate(self) -> None:
        generator = np.random.default_rng(32)
        named = 0
        for _ in range(400):
            lives = np.exp(generator.normal(size=100))
            named += (
                surprising_units(
                    quantile_residuals(fit(LifeData.right_censored(lives, np.ones(100)), "lognormal"))
                ).size
                > 0
            )
        # Five in a hundred promised; estimated parameters draw the scores in, so that fewer are named.
        assert 0.01 < named / 400 < 0.05 + 3 * np.sqrt(0.05 * 0.95 / 400)


def test_reference_set_with_late_entry_is_judged_from_the_age_of_entry() -> None:
    data = units_of("syn14_left_truncated").life_data()
    found = fit(data, "weibull")
    residuals = quantile_residuals(found)
    start = np.ones(data.lower.size)
    late = data.entered > 0
    start[late] = found.reliability(data.entered[late])
    given = 1 - np.asarray(found.reliability(data.lower)) / start
    assert residuals.lower == pytest.approx(stats.norm.ppf(given)[residuals.record], rel=1e-6, abs=1e-9)
