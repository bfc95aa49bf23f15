"""Likelihood-ratio tests between nested families have the reference they claim."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import LifeData, fit
from reliability_app.engine.errors import BoundUnavailable, NoEstimate
from reliability_app.engine.nested_families import (
    NESTINGS,
    chi_square_tail,
    nested_test,
    nested_tests,
    simulated_p_value,
)
from tests.reference.published_data import nist_8413

NIST = nist_8413().life_data()


def test_weibull_against_exponential_on_the_published_example() -> None:
    test = nested_test(fit(NIST, "exponential"), fit(NIST, "weibull"))
    # Handbook 8.4.1.3: Weibull log-likelihood -75.135; the exponential's is r ln(r/T) - r with 10 failures in 7771 h.
    exponential = 10 * np.log(10 / 7771) - 10
    assert test.statistic == pytest.approx(2 * (-75.134618 - exponential), abs=1e-5)
    assert test.degrees == 1
    assert test.p_value == pytest.approx(stats.chi2.sf(test.statistic, 1), rel=1e-12)


@pytest.mark.parametrize("statistic", [0.3, 3.841459, 12.0])
@pytest.mark.parametrize("degrees", [1, 2, 3])
def test_the_tail_is_that_of_chi_square(statistic: float, degrees: int) -> None:
    assert chi_square_tail(statistic, degrees) == pytest.approx(stats.chi2.sf(statistic, degrees), rel=1e-12)


def test_at_an_edge_half_of_the_probability_sits_at_zero() -> None:
    low, high = fit(NIST, "exponential"), fit(NIST, "weibull")
    inside, edge = nested_test(low, high), nested_test(low, high, at_edge=True)
    assert edge.p_value == pytest.approx(0.5 * inside.p_value, rel=1e-12)
    assert chi_square_tail(0.0, 0) == chi_square_tail(0.0, 1) == 1.0
    assert chi_square_tail(1e-12, 0) == 0.0


def test_the_chi_square_reference_is_simulated_in_a_large_sample() -> None:
    lives = np.random.default_rng(41).exponential(1000.0, 400)
    data = LifeData.right_censored(lives, np.ones(400))
    low, high = fit(data, "exponential"), fit(data, "weibull")
    simulated = simulated_p_value(low, high, repeats=2000)
    # The standard error of a share of 2,000 is 0.011 at the most.
    assert simulated == pytest.approx(nested_test(low, high).p_value, abs=0.035)


def test_the_simulated_p_value_is_uniform_when_the_exponential_is_right() -> None:
    generator, p_values = np.random.default_rng(42), []
    for _ in range(250):
        lives = generator.exponential(1000.0, 15)
        data = LifeData.right_censored(np.minimum(lives, 1200.0), lives <= 1200.0)
        p_values.append(simulated_p_value(fit(data, "exponential"), fit(data, "weibull"), repeats=199))
    assert stats.kstest(p_values, "uniform").pvalue > 0.001


def test_wear_out_is_told_from_a_constant_hazard() -> None:
    lives = np.random.default_rng(43).weibull(3.0, 30)
    data = LifeData.right_censored(lives, np.ones(30))
    low, high = fit(data, "exponential"), fit(data, "weibull")
    assert nested_test(low, high).p_value < 1e-4
    assert simulated_p_value(low, high) == pytest.approx(1 / 1001)


def test_all_nested_pairs_among_the_fits_at_hand_are_tested() -> None:
    fits = {name: fit(NIST, name) for name in ("lognormal", "weibull", "exponential")}
    assert [(t.nesting.narrow, t.nesting.wide) for t in nested_tests(fits)] == [("exponential", "weibull")]
    # A wider family joins by its name alone; here the Weibull stands in for it, with a third parameter's name.
    weibull = fits["weibull"].family
    wide = replace(weibull, name="generalized_gamma", rules={**weibull.rules, "third": weibull.rules["shape"]})
    with_wide = {**fits, "generalized_gamma": replace(fits["weibull"], family=wide)}
    tests = {(t.nesting.narrow, t.nesting.wide): t for t in nested_tests(with_wide)}
    assert set(tests) == {(n.narrow, n.wide) for n in NESTINGS if n.narrow in with_wide and n.wide in with_wide}
    assert tests["exponential", "generalized_gamma"].degrees == 2
    assert tests["weibull", "generalized_gamma"].degrees == 1
    assert tests["weibull", "generalized_gamma"].statistic == 0.0


def test_a_fit_that_does_not_exist_cannot_be_tested() -> None:
    one_age = LifeData.right_censored([100, 100, 80], [1, 1, 0])
    with pytest.raises(NoEstimate, match="Weibull has no fit"):
        nested_test(fit(one_age, "exponential"), fit(one_age, "weibull"))
    assert nested_tests({name: fit(one_age, name) for name in ("exponential", "weibull")}) == ()


def test_a_pair_that_cannot_be_simulated_is_refused() -> None:
    with pytest.raises(BoundUnavailable, match="chi-square"):
        simulated_p_value(fit(NIST, "exponential"), fit(NIST, "lognormal"))


def test_families_in_the_wrong_order_are_refused() -> None:
    with pytest.raises(ValueError, match="Exponential is not wider than Weibull"):
        nested_test(fit(NIST, "weibull"), fit(NIST, "exponential"))
