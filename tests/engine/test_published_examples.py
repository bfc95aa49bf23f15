"""Published worked examples: NIST/SEMATECH e-Handbook, textbooks, and manuals, each with its source.

tests/reference/published.json holds data and figures, the source of each, and whether the figures were read
in a text or come from memory. A test here holds the engine to the figures as printed, to the last printed
digit; test_published_recomputed.py holds it to a 40-digit computation of the same examples.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest

from reliability_app.engine import Fit, fit
from tests.reference import published_data as examples
from tests.reference.reference_data import interval_units, published, right_censored_units


def log_error(f: Fit, name: str) -> float:
    """Standard error of the logarithm of a parameter."""
    return f.standard_errors[name] / f.parameters[name]


def likelihood_limits(f: Fit, fraction: float) -> tuple[float | None, float | None]:
    return f.life_bounds(fraction, confidence=0.95, side="two", kind="likelihood")


def printed(value: float, decimals: int) -> Any:
    """A figure as printed: right to half a unit of its last decimal."""
    return pytest.approx(value, abs=0.5000001 * 10.0**-decimals)


def test_nist_weibull_fit_of_a_stopped_test() -> None:
    """NIST/SEMATECH e-Handbook, 8.4.1.3; the page prints the log-likelihood without its minus sign."""
    expected, data = published("nist-8.4.1.3-weibull-mle")["expected"], examples.nist_8413().life_data()
    f = fit(data, "weibull")
    assert f.parameters["shape"] == printed(expected["beta"], 4)
    assert f.parameters["scale"] == printed(expected["eta"], 3)
    assert f.log_likelihood == printed(expected["loglik"], 3)
    assert -2 * f.log_likelihood + 4 == printed(expected["AIC_weibull"], 2)
    assert -2 * fit(data, "lognormal").log_likelihood + 4 == printed(expected["AIC_lognormal"], 2)
    assert f.mean_life() == printed(expected["mean"], 3)


def test_locomotive_controls() -> None:
    """Nelson (1982); estimates quoted in scipy's test-suite; 37 failures of 96."""
    item = published("locomotive-controls-lognormal")
    f = fit(examples.locomotive_controls().life_data(), "lognormal")
    assert f.parameters["mu"] == printed(item["expected"]["mu"], 4)
    assert f.parameters["sigma"] == printed(item["expected"]["sigma"], 4)
    # Nelson's own pair in base 10, from memory.
    assert f.parameters["mu"] / math.log(10) == printed(2.2223, 4)
    assert f.parameters["sigma"] / math.log(10) == printed(0.3064, 4)


def test_ball_bearings() -> None:
    """Lieblein and Zelen, 23 bearings: shape and rate in the R package conf; the rest from memory."""
    expected = published("ball-bearings-weibull")["expected"]
    f = fit(examples.ball_bearings().life_data(), "weibull")
    assert f.parameters["shape"] == printed(expected["kappa_shape"], 1)
    assert 1 / f.parameters["scale"] == printed(expected["lambda_rate"], 4)
    assert f.parameters["shape"] == printed(expected["shape_memory"], 4)
    assert f.parameters["scale"] == printed(expected["scale_memory"], 2)
    assert f.log_likelihood == printed(expected["loglik_memory"], 3)


def test_bearing_cages() -> None:
    """Meeker and Escobar (1998), Example 8.16, from memory; two computations give 2094.28 for 2093."""
    expected = published("bearing-cage-weibull-B10-LR")["expected"]
    f = fit(examples.bearing_cages().life_data(), "weibull")
    assert f.parameters["shape"] == printed(expected["beta"], 3)
    assert f.parameters["scale"] == printed(expected["eta"], 0)
    assert f.life(0.10) == printed(expected["B10"], 0)
    assert likelihood_limits(f, 0.10) == pytest.approx(expected["B10_LR95"], rel=1e-3)
    assert likelihood_limits(f, 0.10)[1] == printed(expected["B10_LR95"][1], 0)


def test_exponential_right_censored() -> None:
    """scipy's test-suite (an R run): theta = total time / failures, error theta/sqrt(failures)."""
    item = published("scipy-expon-rc")
    units = examples.failed_and_running(item["data"]["exact"], item["data"]["right"])
    f = fit(units.life_data(), "exponential")
    assert f.parameters["mean"] == pytest.approx(item["expected"]["scale"], rel=1e-12)
    assert f.standard_errors["mean"] == pytest.approx(item["expected"]["se"], abs=3e-6)
    assert f.standard_errors["mean"] == pytest.approx(19.85 / math.sqrt(10), rel=1e-8)


def test_weibull_complete_sample_of_a_help_page() -> None:
    """Help page of eweibull in the R package EnvStats, 20 generated lives."""
    expected = published("envstats-weibull-gamma-complete")["expected"]
    f = fit(examples.generated_weibull_lives().life_data(), "weibull")
    assert f.parameters["shape"] == printed(expected["weibull_shape"], 6)
    assert f.parameters["scale"] == printed(expected["weibull_scale"], 6)


@pytest.mark.parametrize("mode", ["S", "W", "pooled"])
def test_device_g_each_failure_mode_with_the_other_censored(mode: str) -> None:
    """Meeker and Escobar (1998), ch. 15, from memory: mu and sigma of ln life."""
    expected = published("device-G-competing-modes")["expected"][mode]
    f = fit(examples.device_g(mode).life_data(), "weibull")
    sigma = 1 / f.parameters["shape"]
    assert math.log(f.parameters["scale"]) == printed(expected["mu"], 2)
    assert sigma == printed(expected["sigma"], 2)
    assert log_error(f, "scale") == pytest.approx(expected["se"], abs=5e-3)
    assert sigma * log_error(f, "shape") == pytest.approx(expected["se_sigma"], abs=5e-3)
    assert f.log_likelihood == printed(expected["loglik"], 2)


@pytest.mark.parametrize("temperature", ["40", "60", "80"])
def test_device_a_lognormal_at_each_temperature(temperature: str) -> None:
    """Meeker and Escobar (1998), ch. 19, log-likelihoods from memory."""
    expected = published("device-A-arrhenius-lognormal")["expected"]["per_cell_loglik"]
    f = fit(examples.device_a(temperature).life_data(), "lognormal")
    assert f.log_likelihood == printed(expected[temperature], 2)


@pytest.mark.parametrize("family", ["weibull", "exponential", "lognormal", "loglogistic"])
def test_log_likelihood_without_covariate(family: str) -> None:
    """The loglik0 column of R survival's own test testreg: six units, printed to one decimal."""
    expected = published("r-testreg-four-distributions")["expected"][family]["loglik0"]
    assert fit(examples.six_units().life_data(), family).log_likelihood == printed(expected, 1)


def test_log_likelihood_is_of_the_life_itself() -> None:
    """R survival's test r_resid: on the scale of ln life it is larger by the sum of ln life over failures."""
    item = published("r-ovarian-sev-regression")
    life, status = (np.array([row[column] for row in item["data"]["rows"]]) for column in (0, 1))
    f = fit(right_censored_units(life, status).life_data(), "weibull")
    on_log_scale = f.log_likelihood + float(np.log(life[status == 1]).sum())
    assert on_log_scale == printed(item["expected"]["loglik0_logscale"], 1)
    assert on_log_scale == printed(item["recomputed"]["loglik0_logscale"], 5)


def test_motorettes_without_the_stress() -> None:
    """Schmee and Hahn (1979), R survival's test r_resid: log-likelihood of the fit without temperature."""
    item = published("motorettes-weibull-linear")
    f = fit(examples.motorettes().life_data(), "weibull")
    assert f.log_likelihood == printed(item["expected"]["loglik0"], 1)
    assert f.log_likelihood == printed(item["recomputed"]["loglik0"], 5)


def test_cracks_found_at_inspections() -> None:
    """Nelson (1982), R survival's test r_sas; its column of standard errors is wrong and not used."""
    expected = published("r-cracks-weibull-interval")["expected"]
    f = fit(examples.cracks().life_data(), "weibull")
    assert math.log(f.parameters["scale"]) == printed(expected["mu"], 3)
    assert -math.log(f.parameters["shape"]) == printed(expected["log_sigma"], 4)
    assert 1 / f.parameters["shape"] == printed(expected["sigma"], 3)
    assert log_error(f, "scale") == printed(expected["se_mu"], 4)
    assert log_error(f, "shape") == printed(expected["se_log_sigma"], 4)
    assert f.log_likelihood == printed(expected["loglik"], 1)
    for percent, life in expected["quantiles"].items():
        assert f.life(int(percent) / 100) == printed(life, 5), percent


@pytest.mark.parametrize("sample", ["n10220", "n2000", "n200", "n20"])
def test_grouped_exponential_times(sample: str) -> None:
    """Meeker and Escobar (1998), ch. 7, from memory (Berkson 1966)."""
    expected = published("alpha-particle-exponential-grouped")["expected"][sample]
    f = fit(examples.alpha_particles(sample).life_data(), "exponential")
    assert f.parameters["mean"] == printed(expected["theta"], 1)
    assert f.standard_errors["mean"] == pytest.approx(expected["se"], rel=5e-4)
    for kind, key in (("likelihood", "LR95"), ("wald", "wald95")):
        if key in expected:
            got = f.parameter_bounds("mean", confidence=0.95, side="two", kind=kind)
            assert got == tuple(printed(end, 0) for end in expected[key])


def test_manganese_left_censored_lognormal() -> None:
    """USEPA 2009 Unified Guidance, Example 15-1, with profile limits of mu by the R package EnvStats."""
    expected = published("epa-15-1-manganese-left-censored")["expected"]
    f = fit(examples.manganese().life_data(), "lognormal")
    assert f.parameters["mu"] == printed(expected["mu"], 6)
    assert f.parameters["sigma"] == printed(expected["sigma"], 6)
    got = f.parameter_bounds("mu", confidence=0.95, side="two", kind="likelihood")
    assert got == tuple(printed(end, 6) for end in expected["mu_LR95"])


def test_exact_left_right_and_interval_censored_values_together() -> None:
    """NAG Library manual, routine g07bb, a normal sample: taken as ln life it is a lognormal one."""
    item = published("nag-g07bb-normal-mixed")
    data = {key: np.array(values) for key, values in item["data"].items()}
    interval = data["interval"]
    lower = np.exp([*data["exact"], *data["right"], *interval[:, 0]])
    upper = np.exp([*data["exact"], *([np.inf] * len(data["right"])), *interval[:, 1]])
    lower = np.append(lower, np.zeros(len(data["left"])))
    f = fit(interval_units(lower, np.append(upper, np.exp(data["left"]))).life_data(), "lognormal")
    covariance = np.asarray(f.covariance)
    correlation = covariance[0, 1] / math.sqrt(covariance[0, 0] * covariance[1, 1])
    on_log_scale = f.log_likelihood + float(data["exact"].sum())
    assert correlation == printed(item["expected"]["corr"], 3)
    for figures, decimals in ((item["expected"], 4), (item["recomputed"], 6)):
        assert f.parameters["mu"] == printed(figures["mean"], decimals)
        assert f.parameters["sigma"] == printed(figures["sd"], decimals)
        assert f.standard_errors["mu"] == printed(figures["se_mean"], decimals)
        assert f.standard_errors["sigma"] == printed(figures["se_sd"], decimals)
        assert on_log_scale == printed(figures["loglik"], decimals)


def test_the_same_values_as_a_normal_sample() -> None:
    """NAG Library manual, routine g07bb, as it stands there: a value known to lie below another has no lower end."""
    item = published("nag-g07bb-normal-mixed")
    data = {key: np.array(values) for key, values in item["data"].items()}
    interval = data["interval"]
    lower = np.concatenate([data["exact"], data["right"], interval[:, 0], np.full(len(data["left"]), -np.inf)])
    upper = np.concatenate([data["exact"], np.full(len(data["right"]), np.inf), interval[:, 1], data["left"]])
    f = fit(interval_units(lower, upper).life_data(), "normal")
    covariance = np.asarray(f.covariance)
    correlation = covariance[0, 1] / math.sqrt(covariance[0, 0] * covariance[1, 1])
    assert correlation == printed(item["expected"]["corr"], 3)
    for figures, decimals in ((item["expected"], 4), (item["recomputed"], 6)):
        assert f.parameters["mu"] == printed(figures["mean"], decimals)
        assert f.parameters["sigma"] == printed(figures["sd"], decimals)
        assert f.standard_errors["mu"] == printed(figures["se_mean"], decimals)
        assert f.standard_errors["sigma"] == printed(figures["se_sd"], decimals)
        assert f.log_likelihood == printed(figures["loglik"], decimals)
    assert f.mean_life() == f.parameters["mu"]


@pytest.mark.parametrize(("family", "sign"), [("largest_extreme_value", 1.0), ("smallest_extreme_value", -1.0)])
def test_extreme_value_sample_and_its_mirror_image(family: str, sign: float) -> None:
    """scipy's test-suite (an R fitdistcens run), and 12 digits from an own search with mpmath.

    Two values above 10, one between 0 and 1; negated, two below -10 of which nothing else is known.
    """
    item = published("scipy-gumbel-sev")
    data = item["data"]["largest_ev"]
    ends = [(x, x) for x in data["exact"]] + [(x, np.inf) for x in data["right"]] + [tuple(data["interval"][0])]
    lower, upper = np.sort(sign * np.array(ends, dtype=float), axis=1).T
    f = fit(interval_units(lower, upper).life_data(), family)
    expected = sign * item["expected"]["loc"], item["expected"]["scale"]
    assert (f.parameters["mu"], f.parameters["sigma"]) == pytest.approx(expected, abs=5e-6)
    assert (f.parameters["mu"], f.parameters["sigma"]) == pytest.approx((sign * 4.48785194265, 4.84363999644), rel=1e-9)
    assert f.mean_life() == pytest.approx(sign * (4.48785194265 + np.euler_gamma * 4.84363999644), rel=1e-9)


def test_extreme_value_sample_mirrored_into_weibull_lives() -> None:
    """scipy's test-suite (an R fitdistcens run): -x is smallest extreme value, so exp(-x) is Weibull.

    The printed figures come from a search that stopped early; 12 digits are from an own one with mpmath.
    """
    item = published("scipy-gumbel-sev")
    data = item["data"]["largest_ev"]
    exact = np.exp(-np.array(data["exact"], dtype=float))
    below = np.exp(-np.array(data["right"], dtype=float))  # a value above 10 is a life below exp(-10)
    between = np.exp(-np.array(data["interval"], dtype=float))
    lower = np.concatenate([exact, np.zeros_like(below), between[:, 1]])
    f = fit(interval_units(lower, np.concatenate([exact, below, between[:, 0]])).life_data(), "weibull")
    mu, sigma = math.log(f.parameters["scale"]), 1 / f.parameters["shape"]
    assert (mu, sigma) == pytest.approx((item["expected"]["sev_loc"], item["expected"]["scale"]), abs=5e-6)
    assert (mu, sigma) == pytest.approx((-4.48785194265, 4.84363999644), rel=1e-9)
