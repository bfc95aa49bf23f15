"""A Weibull shape given by the user, and what units show that have run without any failure."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import LifeData, Outcome, fit
from reliability_app.engine.errors import BoundUnavailable, DataError, MethodUnavailable, NoEstimate

# Invented lives.
LIVES = np.array([112.0, 205.0, 241.0, 266.0, 330.0, 358.0, 401.0, 470.0])


def unfailed(ages: list[float], quantity: list[int] | None = None, entered: list[float] | None = None) -> LifeData:
    """Units still running."""
    return LifeData.right_censored(ages, np.zeros(len(ages)), quantity=quantity, entered=entered)


def component_a() -> LifeData:
    """Meeker and Escobar (1998), section 8.6, from memory: 64 units without a failure."""
    hours = [500.0, 1000.0, 1500.0, 2000.0, 2500.0, 3000.0, 3500.0, 4000.0]
    return unfailed(hours, [10, 12, 8, 9, 7, 9, 6, 3])


def test_zero_failure_bound_of_component_a() -> None:
    """The text gives 10 250 h for the scale; B10 follows from it."""
    found = fit(component_a(), "weibull", shape=2.0)
    assert found.outcome is Outcome.NO_FAILURE
    assert not found.converged
    assert found.has_zero_failure_bound
    assert found.parameter_bounds("scale")[0] == pytest.approx(10_250.1771, abs=5e-5)
    assert found.life_bounds(0.1)[0] == pytest.approx(3_327.1342, abs=5e-5)


@pytest.mark.parametrize("shape", [0.7, 1.0, 3.3])
def test_zero_failure_reliability_is_the_success_run(shape: float) -> None:
    """USEPA 2009 Unified Guidance, Example 17-4: 24 units without a failure, 0.8826538 at their age with 95 %."""
    found = fit(unfailed([700.0], [24]), "weibull", shape=shape)
    assert found.reliability_bounds(700.0)[0] == pytest.approx(0.8826538, abs=5e-8)
    # Common practice: 22 units without a failure show a reliability of 90 % with 90 % confidence.
    enough = fit(unfailed([700.0], [22]), "weibull", shape=shape).reliability_bounds(700.0, confidence=0.9)[0]
    assert enough == pytest.approx(0.1 ** (1 / 22), rel=1e-12)
    assert enough > 0.9


@pytest.mark.parametrize(("confidence", "factor"), [(0.6, 0.916), (0.75, 1.39), (0.8, 1.61), (0.9, 2.30), (0.95, 3.00)])
def test_zero_failure_test_length_of_the_exponential_family(confidence: float, factor: float) -> None:
    """NIST/SEMATECH e-Handbook 8.3.1.1, table of test lengths over the mean to be shown, row r = 0, from memory."""
    found = fit(unfailed([30.0, 70.0]), "exponential")
    mean = found.parameter_bounds("mean", confidence=confidence)[0]
    assert 100.0 / mean == pytest.approx(factor, abs=5e-3)
    assert found.hazard_bounds(10.0, side="upper", confidence=confidence)[1] == pytest.approx(1.0 / mean, rel=1e-12)


def test_late_entry_counts_only_what_was_watched() -> None:
    data, shape = unfailed([900.0, 400.0], [2, 3], [300.0, 0.0]), 1.8
    watched = 2 * (900.0**shape - 300.0**shape) + 3 * 400.0**shape
    scale = fit(data, "weibull", shape=shape).parameter_bounds("scale", confidence=0.9)[0]
    assert scale == pytest.approx((2 * watched / stats.chi2.ppf(0.9, 2)) ** (1 / shape), rel=1e-10)


def test_zero_failures_leave_the_other_side_open_and_give_no_estimate() -> None:
    found = fit(component_a(), "weibull", shape=2.0)
    low, high = found.life_bounds(0.1, side="two", confidence=0.9)
    assert (low, high) == (found.life_bounds(0.1)[0], np.inf)
    assert found.reliability_bounds(100.0, side="upper") == (None, 1.0)
    assert found.life_question(0.1).bound_used("automatic") == "exact"
    for question in (lambda: found.life(0.1), lambda: found.reliability(5.0), lambda: found.hazard(5.0)):
        with pytest.raises(NoEstimate, match="No unit has failed"):
            question()
    assert found.parameters == {"shape": 2.0, "scale": None}
    assert [caution.code for caution in found.cautions] == ["no-failure", "shape-assumed"]
    assert not fit(component_a(), "weibull").has_zero_failure_bound


@pytest.mark.parametrize("shape", [0.05, 2.5, 50.0])
def test_a_given_shape_is_the_exponential_family_of_powers(shape: float) -> None:
    """Maximum likelihood scale (sum t^shape / r)^(1/shape), and bounds by chi-square, in closed form."""
    data = LifeData.right_censored(np.minimum(LIVES, 330.0), LIVES <= 330.0)
    found, powers = fit(data, "weibull", shape=shape), float((data.lower**shape).sum())
    assert found.given_shape == shape
    assert found.parameters["scale"] == pytest.approx((powers / 5) ** (1 / shape), rel=1e-10)
    judge = stats.weibull_min(shape, scale=found.parameters["scale"])
    expected = judge.logpdf(LIVES[:5]).sum() + judge.logsf(330.0) * 3
    assert found.log_likelihood == pytest.approx(expected, rel=1e-12)
    assert found.standard_errors["shape"] is None
    assert found.standard_errors["scale"] == pytest.approx(found.parameters["scale"] / shape / np.sqrt(5), rel=1e-9)
    scale = (2 * powers / stats.chi2.ppf(0.95, 10)) ** (1 / shape)
    assert found.parameter_bounds("scale", kind="exact")[0] == pytest.approx(scale, rel=1e-10)
    b10 = scale * (-np.log(0.9)) ** (1 / shape)
    assert found.life_bounds(0.1, kind="automatic")[0] == pytest.approx(b10, rel=1e-10)
    assert "shape-assumed" in [caution.code for caution in found.cautions]
    # One parameter: 8 units.
    assert found.aicc == pytest.approx(-2 * found.log_likelihood + 2 * 8 / 6, rel=1e-12)


def test_the_shape_1_is_the_exponential_family() -> None:
    data = LifeData.from_intervals([100.0, 50.0, 0.0, 300.0], [200.0, 50.0, 80.0, np.inf], quantity=[2, 1, 3, 4])
    found, twin = fit(data, "weibull", shape=1.0), fit(data, "exponential")
    assert found.log_likelihood == pytest.approx(twin.log_likelihood, rel=1e-12)
    for kind in ("wald", "likelihood"):
        asked = {"side": "two", "kind": kind}
        assert found.life_bounds(0.1, **asked) == pytest.approx(twin.life_bounds(0.1, **asked), rel=1e-9)
    with pytest.raises(BoundUnavailable):
        found.life_bounds(0.1, kind="exact")


def test_likelihood_bounds_with_a_given_shape_solve_the_equation_of_the_scale() -> None:
    data = LifeData.right_censored([*LIVES, 600.0], [1] * 8 + [0])
    found = fit(data, "weibull", shape=1.7)
    low = found.parameter_bounds("scale", confidence=0.95)[0]
    powers = float((data.lower**1.7).sum())

    def log_likelihood(scale: float) -> float:
        return -8 * 1.7 * np.log(scale) - powers / scale**1.7

    drop = 2 * (log_likelihood(found.parameters["scale"]) - log_likelihood(low))
    assert drop == pytest.approx(stats.norm.ppf(0.95) ** 2, rel=1e-8)


def test_zero_failure_bounds_of_further_readings_are_those_at_the_bound_of_the_scale() -> None:
    found = fit(component_a(), "weibull", shape=2.0)
    scale = found.parameter_bounds("scale")[0]
    judge = stats.weibull_min(2.0, scale=scale)
    assert found.mean_life_bounds()[0] == pytest.approx(judge.mean(), rel=1e-9)
    assert found.mode_bounds()[0] == pytest.approx(scale / np.sqrt(2.0), rel=1e-9)
    left = judge.expect(lambda t: t - 3000.0, lb=3000.0) / judge.sf(3000.0)
    assert found.mean_residual_life_bounds(3000.0)[0] == pytest.approx(left, rel=1e-7)
    share = judge.sf(4000.0) / judge.sf(3000.0)
    assert found.conditional_reliability_bounds(4000.0, given=3000.0)[0] == pytest.approx(share, rel=1e-9)
    assert found.age_at_hazard_bounds(1e-4)[0] == pytest.approx(1e-4 * scale**2 / 2.0, rel=1e-9)
    assert found.mean_life_bounds(side="upper") == (None, np.inf)
    with pytest.raises(NoEstimate):
        found.mean_life()


def test_a_shape_is_given_to_a_plain_weibull_only_and_within_reason() -> None:
    data = LifeData.right_censored(LIVES, np.ones(8))
    with pytest.raises(MethodUnavailable, match="Lognormal"):
        fit(data, "lognormal", shape=2.0)
    with pytest.raises(MethodUnavailable, match="with threshold"):
        fit(data, "weibull", shape=2.0, threshold=True)
    with pytest.raises(MethodUnavailable, match="only the scale"):
        fit(data, "weibull", shape=2.0, method="median-rank regression of age")
    for shape in (0.0, -1.0, np.nan, 1e6):
        with pytest.raises(DataError, match="shape"):
            fit(data, "weibull", shape=shape)
    with pytest.raises(BoundUnavailable, match="given and not estimated"):
        fit(data, "weibull", shape=2.0).parameter_bounds("shape")
