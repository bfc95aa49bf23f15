"""Fits and bounds of the computed sets: R's survival package and, independently, scipy.

Each file tests/reference/<set>.json names its source and holds units and figures; the two computations agree
to 3e-11 in the log-likelihood.
"""

from __future__ import annotations

import math
from functools import cache
from typing import Any

import numpy as np
import pytest
from scipy.special import ndtri

from reliability_app.engine import Fit, fit
from reliability_app.engine.errors import BoundUnavailable, NoEstimate
from tests.reference.reference_data import SET_NAMES, reference_set, units_of

# mu and sigma of ln life, Wald limits on ln of a life; or of life itself, Wald limits on the life. Both: on z of a
# reliability.
LOG_LIFE = ("lognormal", "weibull", "exponential", "loglogistic")
LIFE_ITSELF = ("normal", "smallest_extreme_value", "logistic")
CONFIDENCES = ("90", "95")


def _cases(exists: bool) -> list[tuple[str, str]]:
    return [
        (name, family)
        for name in SET_NAMES
        for family, figures in reference_set(name)["fits"].items()
        if family in (*LOG_LIFE, *LIFE_ITSELF) and figures.get("exists", True) is exists
    ]


FITTED, UNFITTED = _cases(exists=True), _cases(exists=False)


def reference_fit(name: str, family: str) -> dict[str, Any]:
    figures: dict[str, Any] = reference_set(name)["fits"][family]
    return figures


@cache
def fitted(name: str, family: str) -> Fit:
    return fit(units_of(name).life_data(), family)


def customary(family: str, mu: float, sigma: float) -> dict[str, float]:
    """The customary parameters that belong to mu and sigma."""
    if family in ("weibull", "loglogistic"):
        return {"shape": 1 / sigma, "scale": math.exp(mu)}
    if family == "exponential":
        return {"mean": math.exp(mu)}
    return {"mu": mu, "sigma": sigma}


def log_errors(family: str, covariance: list[list[float]]) -> dict[str, float]:
    """Standard errors of ln of each customary parameter (of mu itself for mu)."""
    of_mu, of_log_sigma = math.sqrt(covariance[0][0]), math.sqrt(covariance[-1][-1])
    if family in ("weibull", "loglogistic"):
        return {"shape": of_log_sigma, "scale": of_mu}
    return {"mean": of_mu} if family == "exponential" else {"mu": of_mu, "sigma": of_log_sigma}


def test_the_sets_are_there() -> None:
    assert len(SET_NAMES) == 18
    assert len(FITTED) == 116
    assert len(UNFITTED) == 6


@pytest.mark.parametrize(("name", "family"), FITTED)
def test_estimates_and_log_likelihood(name: str, family: str) -> None:
    f, expected = fitted(name, family), reference_fit(name, family)
    assert f.converged
    wanted = customary(family, expected["mu"], expected["sigma"])
    assert list(f.parameters) == list(wanted)
    for parameter, value in wanted.items():
        assert f.parameters[parameter] == pytest.approx(value, rel=1e-6), parameter
    assert f.log_likelihood == pytest.approx(expected["log_likelihood"], abs=1e-8)
    mean = wanted["mean"] if family == "exponential" else expected["mean_life"]
    assert f.mean_life() == pytest.approx(math.inf if mean is None else mean, rel=1e-6)


@pytest.mark.parametrize(("name", "family"), FITTED)
def test_akaike_criterion_with_small_sample_correction(name: str, family: str) -> None:
    """AICc = -2 ln L + 2k + 2k(k + 1)/(n - k - 1), n units (Hurvich and Tsai 1989, from memory)."""
    units, count = units_of(name).quantity.sum(), 1 if family == "exponential" else 2
    if units - count - 1 <= 0:
        pytest.skip("AICc does not exist for so few units")
    expected = -2 * reference_fit(name, family)["log_likelihood"] + 2 * count
    expected += 2 * count * (count + 1) / (units - count - 1)
    assert fitted(name, family).aicc == pytest.approx(expected, abs=1e-7)


@pytest.mark.parametrize(("name", "family"), FITTED)
def test_covariance_and_standard_errors(name: str, family: str) -> None:
    f, covariance = fitted(name, family), reference_fit(name, family)["covariance"]
    expected = np.array(covariance)
    got = np.asarray(f.covariance)
    assert got.shape == expected.shape
    deviations = np.sqrt(np.diag(expected))
    # Relative to the product of the two standard errors: a covariance may be zero.
    assert (got - expected) / np.outer(deviations, deviations) == pytest.approx(0, abs=1e-6)
    for parameter, error in log_errors(family, covariance).items():
        size = 1.0 if parameter == "mu" else f.parameters[parameter]
        assert f.standard_errors[parameter] == pytest.approx(error * size, rel=1e-6)


@pytest.mark.parametrize(("name", "family"), FITTED)
def test_lives_and_reliabilities(name: str, family: str) -> None:
    f, expected = fitted(name, family), reference_fit(name, family)
    for fraction, life in zip(expected["life"]["fraction"], expected["life"]["estimate"], strict=True):
        assert f.life(fraction) == pytest.approx(life, rel=1e-6)
    reliability = expected["reliability"]
    for age, value in zip(reliability["age"], reliability["estimate"], strict=True):
        assert f.reliability(age) == pytest.approx(value, rel=1e-6)


@pytest.mark.parametrize("confidence", CONFIDENCES)
@pytest.mark.parametrize(("name", "family"), FITTED)
def test_wald_bounds_of_lives(name: str, family: str, confidence: str) -> None:
    f, life = fitted(name, family), reference_fit(name, family)["life"]
    two_sided, one_tail = int(confidence) / 100, 0.5 + int(confidence) / 200
    for fraction, low, high in zip(life["fraction"], *life["wald"][confidence], strict=True):
        # A life itself may come out anywhere about 0: there it is held to a millionth of the width.
        near = 0.0 if family in LOG_LIFE else 1e-6 * (high - low)
        got = f.life_bounds(fraction, confidence=two_sided, side="two", kind="wald")
        assert got == pytest.approx((low, high), rel=1e-6, abs=near)
        # A one-sided bound at 95 % is the end of a two-sided interval at 90 %.
        lower = f.life_bounds(fraction, confidence=one_tail, side="lower", kind="wald")
        upper = f.life_bounds(fraction, confidence=one_tail, side="upper", kind="wald")
        assert lower == (pytest.approx(low, rel=1e-6, abs=near), None)
        assert upper == (None, pytest.approx(high, rel=1e-6, abs=near))


@pytest.mark.parametrize("confidence", CONFIDENCES)
@pytest.mark.parametrize(("name", "family"), FITTED)
def test_wald_bounds_of_reliabilities(name: str, family: str, confidence: str) -> None:
    f, reliability = fitted(name, family), reference_fit(name, family)["reliability"]
    two_sided, one_tail = int(confidence) / 100, 0.5 + int(confidence) / 200
    for age, low, high in zip(reliability["age"], *reliability["wald"][confidence], strict=True):
        got = f.reliability_bounds(age, confidence=two_sided, side="two", kind="wald")
        assert got == pytest.approx((low, high), rel=1e-6)
        lower = f.reliability_bounds(age, confidence=one_tail, side="lower", kind="wald")
        upper = f.reliability_bounds(age, confidence=one_tail, side="upper", kind="wald")
        assert lower == (pytest.approx(low, rel=1e-6), None)
        assert upper == (None, pytest.approx(high, rel=1e-6))


@pytest.mark.parametrize("confidence", CONFIDENCES)
@pytest.mark.parametrize(("name", "family"), FITTED)
def test_wald_bounds_of_parameters(name: str, family: str, confidence: str) -> None:
    """On ln of the parameter, mu as it is; from R's covariance of (mu, ln sigma)."""
    f, expected = fitted(name, family), reference_fit(name, family)
    two_sided = int(confidence) / 100
    errors = log_errors(family, expected["covariance"])
    reach = float(ndtri(0.5 + two_sided / 2))
    for parameter, value in customary(family, expected["mu"], expected["sigma"]).items():
        span = reach * errors[parameter]
        ends = (value - span, value + span)
        if parameter != "mu":
            ends = (value * math.exp(-span), value * math.exp(span))
        got = f.parameter_bounds(parameter, confidence=two_sided, side="two", kind="wald")
        assert got == pytest.approx(ends, rel=1e-6)


TURNED = {"lower": "upper", "upper": "lower", "two": "two"}


def inverted(ends: tuple[float | None, float | None]) -> tuple[float | None, float | None]:
    """Bounds of sigma from those of the shape, 1/sigma."""
    low, high = (None if end is None else 1.0 / end for end in reversed(ends))
    return low, high


@pytest.mark.parametrize("confidence", CONFIDENCES)
@pytest.mark.parametrize(("name", "family"), [case for case in FITTED if case[1] in LOG_LIFE])
def test_likelihood_limits(name: str, family: str, confidence: str) -> None:
    f, limits = fitted(name, family), reference_set(name)["likelihood_limits"][family]
    asked = {"B10": 0.10, "B50": 0.50}
    parameters = {"characteristic_life": "scale"}
    two_sided, one_tail = int(confidence) / 100, 0.5 + int(confidence) / 200
    for reading, figures in limits.items():
        low, high = figures[confidence]

        def bounds(share: float, side: str, reading: str = reading) -> tuple[float | None, float | None]:
            if reading in asked:
                return f.life_bounds(asked[reading], confidence=share, side=side, kind="likelihood")
            parameter = parameters.get(reading, reading)
            if family == "loglogistic" and parameter == "sigma":
                return inverted(f.parameter_bounds("shape", confidence=share, side=TURNED[side], kind="likelihood"))
            return f.parameter_bounds(parameter, confidence=share, side=side, kind="likelihood")

        got = bounds(two_sided, "two")
        wanted = (0.0 if low is None else low, math.inf if high is None else high)
        assert got == pytest.approx(wanted, rel=1e-8), reading
        assert bounds(one_tail, "lower") == (pytest.approx(wanted[0], rel=1e-8), None)
        assert bounds(one_tail, "upper") == (None, pytest.approx(wanted[1], rel=1e-8))


EXACT_LOGNORMAL = [name for name in SET_NAMES if "lognormal" in reference_set(name).get("exact_bounds", {})]


@pytest.mark.parametrize("name", EXACT_LOGNORMAL)
def test_exact_bounds_of_complete_lognormal_lives(name: str) -> None:
    """exp(mean - k s) with k from the non-central t; R's qnct and a separate integration agree on k."""
    f, figures = fitted(name, "lognormal"), reference_set(name)["exact_bounds"]["lognormal"]
    columns = (figures[key] for key in ("fraction", "confidence", "lower", "upper"))
    for fraction, confidence, low, high in zip(*columns, strict=True):
        lower = f.life_bounds(fraction, confidence=confidence, side="lower", kind="exact")
        upper = f.life_bounds(fraction, confidence=confidence, side="upper", kind="exact")
        both = f.life_bounds(fraction, confidence=2 * confidence - 1, side="two", kind="exact")
        assert lower == (pytest.approx(low, rel=1e-8), None)
        assert upper == (None, pytest.approx(high, rel=1e-8))
        assert both == pytest.approx((low, high), rel=1e-8)


def test_the_exact_sets_are_there() -> None:
    assert EXACT_LOGNORMAL == ["ifluid", "syn01_complete_n5"]


@pytest.mark.parametrize("name", ["aml", "syn03_n20_cens60", "syn07a_interval_equal", "syn14_left_truncated"])
def test_exact_lognormal_bound_is_refused_unless_complete(name: str) -> None:
    with pytest.raises(BoundUnavailable):
        fitted(name, "lognormal").life_bounds(0.10, confidence=0.95, side="lower", kind="exact")


@pytest.mark.parametrize(("name", "family"), UNFITTED)
def test_where_no_estimate_exists_the_outcome_says_so(name: str, family: str) -> None:
    f = fitted(name, family)
    assert not f.converged
    assert f.outcome.name != "ESTIMATED"
    assert f.parameters
    assert all(value is None for value in f.parameters.values())
    for question in (
        lambda: f.life(0.10),
        lambda: f.reliability(100.0),
        lambda: f.hazard(100.0),
        lambda: f.life_bounds(0.10, confidence=0.95, side="lower", kind="likelihood"),
        lambda: f.reliability_bounds(100.0, confidence=0.95, side="lower", kind="wald"),
    ):
        with pytest.raises(NoEstimate):
            question()
