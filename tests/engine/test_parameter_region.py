"""The likelihood region in customary parameters: on the likelihood it claims, and with the bounds as its extremes."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import chi2, lognorm, norm, weibull_min

from reliability_app.engine import LifeData, fit
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.parameter_region import joint_root, parameter_outline

FAILED = np.array([812.0, 1230.0, 1410.0, 1640.0, 1640.0, 1890.0, 2010.0, 2400.0, 2900.0])  # invented
RUNNING = np.array([1500.0, 1500.0, 1500.0, 2150.0])


def data() -> LifeData:
    lower = np.concatenate([FAILED, RUNNING])
    return LifeData.from_intervals(lower, np.concatenate([FAILED, np.full(RUNNING.size, np.inf)]))


def log_likelihood(name: str, first: float, second: float) -> float:
    """By scipy, which shares nothing with the engine."""
    law = lognorm(second, scale=np.exp(first)) if name == "lognormal" else weibull_min(first, scale=second)
    return float(law.logpdf(FAILED).sum() + law.logsf(RUNNING).sum())


@pytest.mark.parametrize("name", ["lognormal", "weibull"])
def test_the_joint_outline_lies_where_two_degrees_of_freedom_put_it(name: str) -> None:
    found = fit(data(), name)
    outline = parameter_outline(found, joint_root(0.95))
    assert outline.is_closed
    below = found.log_likelihood - np.array(
        [log_likelihood(name, *pair) for pair in zip(outline.first, outline.second, strict=True)]
    )
    # Between the rays the outline is interpolated.
    np.testing.assert_allclose(2.0 * below, chi2.ppf(0.95, 2), rtol=2e-4)


@pytest.mark.parametrize("name", ["lognormal", "weibull", "normal", "gamma", "birnbaum_saunders", "inverse_gaussian"])
def test_the_extremes_of_the_cut_are_the_likelihood_ratio_bounds(name: str) -> None:
    found = fit(data(), name)
    outline = parameter_outline(found, float(norm.ppf(0.975)))
    for parameter, values in zip(outline.names, (outline.first, outline.second), strict=True):
        lower, upper = found.parameter_bounds(parameter, confidence=0.95, side="two", kind="likelihood")
        assert (values.min(), values.max()) == pytest.approx((lower, upper), rel=1.5e-3)


def test_a_region_that_runs_on_is_said_to_be_open() -> None:
    # Units seen once, some already failed (invented): a spread without end makes each a coin's toss, hardly worse.
    lower, upper = np.array([0.0, 0.0, 200.0, 400.0]), np.array([500.0, 300.0, np.inf, np.inf])
    outline = parameter_outline(fit(LifeData.from_intervals(lower, upper), "lognormal"), joint_root(0.95))
    assert not outline.is_closed
    assert np.isnan(outline.first).any()
    assert np.isfinite(outline.first).any()


def test_families_without_two_parameters_say_why_they_have_no_region() -> None:
    with pytest.raises(BoundUnavailable, match="one parameter"):
        parameter_outline(fit(data(), "exponential"), 2.0)
    with pytest.raises(BoundUnavailable, match="3 parameters"):
        parameter_outline(fit(data(), "generalized_gamma"), 2.0)
    with pytest.raises(BoundUnavailable, match="maximum of the likelihood"):
        parameter_outline(fit(data(), "weibull", method="median-rank regression of age"), 2.0)
