"""Where a family with a further parameter has no estimate, or one that must be read with care, it says so by name."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import Fit, LifeData, fit
from reliability_app.engine.errors import BoundUnavailable, NoEstimate
from reliability_app.engine.shaped.profile import Peak
from tests.reference.reference_data import units_of


def of(units: str, name: str, *, threshold: bool = False) -> Fit:
    return fit(units_of(units).life_data(), name, threshold=threshold)


def codes(f: Fit) -> set[str]:
    return {caution.code for caution in f.cautions}


# The computed sets say where each likelihood keeps rising (tests/reference/shaped, and the README of their collection).
@pytest.mark.parametrize(
    ("units", "name", "threshold", "code", "words"),
    [
        ("genfan", "inverse_gaussian", False, "mean-runs-up", "the mean grows without end"),
        (
            "imotor",
            "generalized_gamma",
            False,
            "lambda-runs-down",
            "Pareto distribution that starts at the first failure",
        ),
        (
            "syn01_complete_n5",
            "generalized_gamma",
            False,
            "lambda-runs-up",
            "power distribution that ends at the last life",
        ),
        ("aml", "weibull", True, "threshold-at-first-failure", "nears the first failure, where it has no upper limit"),
        (
            "imotor",
            "lognormal",
            True,
            "threshold-at-first-failure",
            "nears the first failure, where it has no upper limit",
        ),
        ("syn01_complete_n5", "lognormal", True, "threshold-runs-down", "the normal family of life itself"),
        ("syn12_two_subpopulations", "lognormal", True, "threshold-runs-down", "the normal family of life itself"),
    ],
)
def test_a_likelihood_that_keeps_rising_names_the_end(
    units: str, name: str, threshold: bool, code: str, words: str
) -> None:
    f = of(units, name, threshold=threshold)
    assert f.outcome.name == "NO_INTERIOR_MAXIMUM"
    (caution,) = f.cautions
    assert (caution.code, caution.severity.name) == (code, "SERIOUS")
    assert words in caution.text
    assert "choose" in caution.text
    with pytest.raises(NoEstimate, match="keeps rising"):
        f.life(0.1)


def test_several_maxima_are_told_and_the_highest_is_taken() -> None:
    """Invented lives with early failures apart from the rest: a threshold below 0, or one at -1,000 or so."""
    lives = [95, 27, 33, 359, 85, 8, 195, 695, 954, 709, 620, 648, 749, 925, 1021]
    f = fit(LifeData.right_censored(lives, np.ones(15)), "lognormal", threshold=True)
    assert "several-maxima" in codes(f)
    (other,) = f.shaped.others
    assert other.value < f.log_likelihood
    # Both are maxima for scipy too: a step in the threshold alone loses, whatever mu and sigma are then.
    for threshold, value in ((f.parameters["threshold"], f.log_likelihood), (_threshold(f, other), other.value)):
        for moved in (1.03 * threshold, 0.97 * threshold):
            logs = np.log(np.array(lives) - moved)
            assert stats.norm(logs.mean(), logs.std()).logpdf(logs).sum() - logs.sum() < value


def _threshold(f: Fit, peak: Peak) -> float:
    return float(np.asarray(f.shaped.sheaf.parts(peak.point[2])[-1][0]))


def test_a_local_maximum_below_an_end_is_told() -> None:
    """syn13_ranks_small: the profile is higher at both ends, by the warning of the computed set."""
    told = codes(of("syn13_ranks_small", "generalized_gamma"))
    assert {"higher-as-lambda-runs-down", "higher-as-lambda-runs-up"} <= told


def test_a_parameter_that_is_hardly_determined_is_told_and_its_bound_is_open() -> None:
    f = of("ovarian", "inverse_gaussian")
    assert "hardly-determined-mean-runs-up" in codes(f)
    assert f.parameter_bounds("mean", side="upper")[1] == math.inf
    low, high = f.parameter_bounds("shape", side="two")
    assert 0 < low < f.parameters["shape"] < high < math.inf


def test_a_bound_that_would_lie_at_the_first_failure_is_refused_in_words() -> None:
    f = of("genfan", "lognormal", threshold=True)
    assert "hardly-determined-threshold-at-first-failure" in codes(f)
    with pytest.raises(
        BoundUnavailable, match="no upper limit: no likelihood-ratio bound can be given; choose the Wald"
    ):
        f.parameter_bounds("threshold", side="upper")
    assert f.parameter_bounds("threshold", side="upper", kind="wald")[1] > f.parameters["threshold"]
    low = f.parameter_bounds("threshold", side="lower")[0]
    assert low < f.parameters["threshold"]


def test_a_threshold_of_minus_infinity_lies_in_the_region_as_the_family_of_life_itself() -> None:
    """At the threshold's far end the lognormal family is the normal one, and the bound of a life goes on to it."""
    units = "syn03_n20_cens60"
    f, normal = of(units, "lognormal", threshold=True), of(units, "normal")
    assert 2 * (f.log_likelihood - normal.log_likelihood) < 2.7
    assert f.parameter_bounds("threshold", side="lower")[0] == -math.inf
    # The normal family's own region at what is left of the fall is part of the larger one.
    fall = 1.6448536269514722**2 - 2 * (f.log_likelihood - normal.log_likelihood)
    share = 0.5 * math.erfc(-math.sqrt(fall / 2))
    within = normal.life_bounds(0.1, side="lower", confidence=share)[0]
    assert f.life_bounds(0.1, side="lower")[0] <= within + 1e-6 * abs(within)


def exponential(lives: list[float], failed: list[int]) -> Fit:
    return fit(LifeData.right_censored(lives, failed), "exponential", threshold=True)


def test_the_exponential_threshold_lies_at_the_first_failure() -> None:
    """Threshold the first failure, mean the time beyond it over the failures (Lawless 2003, ch. 4; from memory)."""
    lives, failed = [310.0, 150.0, 480.0, 205.0, 700.0, 900.0], [1, 1, 1, 1, 0, 0]
    f = exponential(lives, failed)
    beyond = sum(lives) - 6 * 150.0
    assert f.converged
    assert f.parameters == {"mean": pytest.approx(beyond / 4, rel=1e-9), "threshold": 150.0}
    assert f.log_likelihood == pytest.approx(-4 * math.log(beyond / 4) - 4, abs=1e-9)
    assert f.life(0.5) == pytest.approx(150 + beyond / 4 * math.log(2), rel=1e-9)
    assert f.mean_life() == pytest.approx(150 + beyond / 4, rel=1e-9)
    assert f.reliability(149.0) == 1.0
    assert f.hazard(149.0) == 0.0
    assert f.hazard(400.0) == pytest.approx(4 / beyond, rel=1e-9)
    assert f.density(149.0) == 0.0


def test_at_the_edge_no_error_and_no_bound_is_given() -> None:
    f = exponential([310.0, 150.0, 480.0, 205.0, 700.0], [1, 1, 1, 1, 0])
    assert "threshold-at-first-failure" in codes(f)
    assert f.covariance is None
    assert set(f.standard_errors.values()) == {None}
    for kind in ("wald", "likelihood", "automatic"):
        with pytest.raises(BoundUnavailable, match="at the first failure itself"):
            f.life_bounds(0.1, kind=kind)


def test_a_reading_below_the_threshold_is_certain() -> None:
    f = of("syn06_ties_quantities", "weibull", threshold=True)
    age = 0.9 * f.parameters["threshold"]
    assert f.reliability(age) == 1.0
    assert f.failure_probability(age) == 0.0
    assert f.hazard(age) == 0.0
    assert f.density(age) == 0.0
    low, high = f.reliability_bounds(age, side="two")
    assert 0.9 < low < 1.0
    assert high == 1.0
    with pytest.raises(BoundUnavailable, match="no unit can fail so early"):
        f.reliability_bounds(age, kind="wald")
