"""The way that refits one sample at a time judges as the batch does, so that it can serve families without a batch."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import LifeData, fit
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.fitted_scores import log_tails, logs_of_tails, normal_score
from reliability_app.engine.goodness import (
    anderson_darling,
    goodness_of,
    plot_correlation,
    simulated_one_by_one,
)
from reliability_app.engine.goodness_one_by_one import NORMAL, data_like, scored_steps

# Invented lives.
LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711])
SHAPES = {
    "complete": LifeData.right_censored(LIVES, np.ones(10)),
    "stopped": LifeData.right_censored(np.minimum(LIVES, 1200.0), LIVES <= 1200.0),
    "staggered": LifeData.right_censored(LIVES, [1, 0, 1, 1, 0, 1, 0, 1, 1, 0]),
    "tied": LifeData.right_censored([100, 100, 150, 150, 200, 260], [1, 0, 1, 1, 0, 1], quantity=[2, 3, 1, 1, 4, 2]),
}


@pytest.mark.parametrize("name", ["lognormal", "weibull", "exponential", "normal"])
@pytest.mark.parametrize("shape", SHAPES)
def test_scores_give_the_same_anderson_darling(name: str, shape: str) -> None:
    found = fit(SHAPES[shape], name)
    here = float(anderson_darling(scored_steps(found), NORMAL, np.zeros(1), np.ones(1))[0])
    assert here == pytest.approx(goodness_of(found, repeats=9).anderson_darling.statistic, rel=1e-9)


@pytest.mark.parametrize("name", ["lognormal", "normal"])
@pytest.mark.parametrize("shape", SHAPES)
def test_scores_of_a_normal_give_the_same_correlation(name: str, shape: str) -> None:
    found = fit(SHAPES[shape], name)
    here = float(plot_correlation(scored_steps(found), NORMAL)[0])
    assert here == pytest.approx(goodness_of(found, repeats=9).correlation.statistic, rel=1e-9)


@pytest.mark.parametrize("name", ["weibull", "normal"])
@pytest.mark.parametrize("shape", ["complete", "stopped", "staggered"])
def test_its_p_values_are_those_of_the_batch(name: str, shape: str) -> None:
    found = fit(SHAPES[shape], name)
    batch = goodness_of(found).anderson_darling
    distances, _ = simulated_one_by_one(found, repeats=400)
    p_value = float(np.mean(distances >= batch.statistic))
    # Four standard errors of a share of 400, and of one of 1,000.
    error = np.sqrt(batch.p_value * (1 - batch.p_value))
    assert p_value == pytest.approx(batch.p_value, abs=4 * error * np.hypot(0.05, 0.0316))


def test_samples_are_drawn_under_the_plan_of_the_data() -> None:
    found = fit(SHAPES["stopped"], "weibull")
    tests = list(data_like(found, repeats=300, seed=3, proceed=None))
    assert all(test.unit_count == 10 for test in tests)
    assert all((test.lower[test.is_running] == pytest.approx(1200.0)) for test in tests)
    # Where the test stopped at a fixed age, each sample has as many failures as the data.
    assert {test.failed_count for test in tests} == {SHAPES["stopped"].failed_count}
    earliest = np.mean([test.lower.min() <= 612.0 for test in tests])
    share = found.failure_probability(612.0) / found.failure_probability(1200.0)
    expected = 1 - (1 - share) ** SHAPES["stopped"].failed_count
    assert earliest == pytest.approx(expected, abs=4 * np.sqrt(expected * (1 - expected) / 300))


def test_the_seed_decides_it_and_work_no_longer_wanted_ends() -> None:
    found = fit(SHAPES["stopped"], "weibull")
    first, again, other = (simulated_one_by_one(found, repeats=9, seed=seed)[0] for seed in (1, 1, 2))
    assert (first == again).all()
    assert (first != other).all()

    class Unwanted(Exception):
        pass

    def proceed() -> None:
        raise Unwanted

    with pytest.raises(Unwanted):
        simulated_one_by_one(found, proceed=proceed)


def test_a_plan_under_which_nothing_can_be_fitted_is_named() -> None:
    rare = LifeData.right_censored([100, 200, 200], [1, 0, 0], quantity=[1, 1, 100])
    with pytest.raises(BoundUnavailable, match="Hardly any"):
        simulated_one_by_one(fit(rare, "exponential"), repeats=50)


def test_tails_known_as_shares_give_the_scores_of_tails_known_as_logarithms() -> None:
    found = fit(SHAPES["complete"], "weibull")
    ages = np.array([1.0, 300, 900, 1500, 2200])
    shares = logs_of_tails(np.asarray(found.failure_probability(ages)), np.asarray(found.reliability(ages)))
    assert normal_score(*shares) == pytest.approx(normal_score(*log_tails(found, ages)), rel=1e-9)


def test_ages_outside_the_line_have_infinite_scores() -> None:
    found = fit(SHAPES["complete"], "weibull")
    assert normal_score(*log_tails(found, np.array([0.0, np.inf]))).tolist() == [-np.inf, np.inf]
