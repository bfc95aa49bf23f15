"""Simulating the plan of a set says how often each kind of bound would have held."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import LifeData, fit
from reliability_app.engine.coverage import coverage_of_life
from reliability_app.engine.errors import BoundUnavailable

# Invented lives of pumps on a rig.
LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711])


def test_few_complete_lives_show_that_wald_promises_too_much_and_calibration_keeps_it() -> None:
    found = fit(LifeData.right_censored(LIVES, np.ones(LIVES.size)), "weibull")
    wald, likelihood, calibrated = coverage_of_life(found, 0.10, tests=300, inner_tests=400)
    assert [entry.kind for entry in (wald, likelihood, calibrated)] == ["wald", "likelihood", "calibrated"]
    # ENGINE's own study of 3,000 samples of ten complete lives: Wald .84 to .86, likelihood ratio .90, calibrated .948.
    assert wald.held == pytest.approx(0.85, abs=4 * wald.standard_error)
    assert likelihood.held == pytest.approx(0.90, abs=4 * likelihood.standard_error)
    assert calibrated.held == pytest.approx(0.95, abs=4 * calibrated.standard_error)


def test_the_same_seed_gives_the_same_shares() -> None:
    data = LifeData.right_censored(np.minimum(LIVES, 1200), LIVES <= 1200)
    found = fit(data, "lognormal")
    first, second = (coverage_of_life(found, 0.10, tests=40, inner_tests=200) for _ in range(2))
    assert first == second


def test_each_plan_can_be_simulated() -> None:
    staggered = LifeData.right_censored([100, 150, 200, 260, 300, 340, 420, 500], [1, 0, 1, 1, 0, 1, 1, 0])
    for family in ("weibull", "exponential"):
        shares = coverage_of_life(fit(staggered, family), 0.10, side="upper", tests=30, inner_tests=200)
        assert all(0.6 <= entry.held <= 1.0 for entry in shares)
        assert {entry.tests for entry in shares} == {30}


def test_a_plan_in_which_hardly_any_unit_fails_is_refused() -> None:
    data = LifeData.right_censored([100.0, 101.0, 102.0], [1, 1, 0], quantity=[1, 1, 3])
    rare = LifeData.right_censored([5.0, 5000.0], [1, 0])
    assert coverage_of_life(fit(data, "weibull"), 0.10, tests=20, inner_tests=100)[0].tests >= 5
    with pytest.raises(BoundUnavailable, match="hardly any test"):
        coverage_of_life(fit(rare, "exponential"), 0.10, tests=200, inner_tests=100)
