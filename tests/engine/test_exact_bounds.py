"""Exact bounds by chi-square, non-central t and conditionally on the ancillaries, each against another reckoning."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import integrate, special, stats

from reliability_app.engine import Fit, LifeData, fit
from reliability_app.engine.bounds.conditional import ConditionalBounds
from reliability_app.engine.bounds.exact import ExactWay, exact_way
from reliability_app.engine.bounds.non_central_t import non_central_t_end
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.families import LOCATION_SCALE_NAMES
from reliability_app.engine.life_measures import LifeMeasure, ScoreMeasure, SlopeMeasure

Floats = NDArray[np.float64]

# Invented lives.
LIVES = np.array([112.0, 205.0, 241.0, 266.0, 330.0, 358.0, 401.0, 470.0, 522.0, 610.0])


def stopped_at(failures: int, lives: Floats = LIVES) -> LifeData:
    """A test that stopped at a failure: the units still running are as old as it."""
    end = np.sort(lives)[failures - 1]
    return LifeData.right_censored(np.minimum(lives, end), lives <= end)


def lower(found: Fit, fraction: float = 0.1, confidence: float = 0.95) -> float:
    """The exact lower bound of a life."""
    end = found.life_bounds(fraction, confidence=confidence, kind="exact")[0]
    assert isinstance(end, float)
    return end


@pytest.mark.parametrize("count", [2, 3, 10, 60])
@pytest.mark.parametrize("tail", [0.05, 1e-4])
@pytest.mark.parametrize("sign", [-1.0, 1.0])
def test_conditional_bounds_of_complete_normal_data_are_those_of_the_non_central_t(
    sign: float, tail: float, count: int
) -> None:
    logs = np.random.default_rng(count).normal(5.0, 0.6, count)
    estimate = fit(LifeData.right_censored(np.exp(logs), np.ones(count)), "lognormal").bounder.estimate
    conditional = ConditionalBounds(estimate)
    lives = LifeMeasure(stats.norm.ppf([0.001, 0.01, 0.1, 0.5, 0.9]))
    by_t = non_central_t_end(estimate, lives, tail, sign)
    assert conditional.life_end(lives, tail, sign) == pytest.approx(by_t, rel=1e-7)
    scores = ScoreMeasure(np.array([-4.0, -1.0, 0.0, 2.0]))
    by_t = non_central_t_end(estimate, scores, tail, sign)
    assert conditional.score_end(scores, tail, sign) == pytest.approx(by_t, rel=1e-7)
    by_chi_square = non_central_t_end(estimate, SlopeMeasure(), tail, sign)
    assert conditional.slope_end(tail, sign) == pytest.approx(by_chi_square, abs=1e-7)


def lawless_weibull(data: LifeData, fraction: float, life: float) -> float:
    """P(life at `fraction` >= life) by Lawless's single integral over the shape (1978; from memory).

    Given the shape, the sum of (t/scale)^shape is a gamma variable of r, so that only the shape is integrated over.
    """
    logs = np.log(data.lower)
    centre = logs.mean()
    failed, r = logs[data.is_failed] - centre, float(data.is_failed.sum())
    z, y = np.log(-np.log1p(-fraction)), np.log(life) - centre

    def weight(shape: float) -> float:
        log_sum = special.logsumexp(shape * (logs - centre))
        return float(np.exp((r - 2.0) * np.log(shape) + shape * failed.sum() - r * log_sum + r * np.log(r)))

    def inside(shape: float) -> float:
        log_sum = special.logsumexp(shape * (logs - centre))
        return weight(shape) * float(special.gammainc(r, np.exp(min(700.0, z - shape * y + log_sum))))

    top = 40.0
    whole, part = (integrate.quad(f, 0.0, top, epsabs=0, epsrel=1e-11, limit=400)[0] for f in (weight, inside))
    return float(part / whole)


@pytest.mark.parametrize("data", [stopped_at(10), stopped_at(4), stopped_at(2), stopped_at(3, LIVES[:3])])
@pytest.mark.parametrize("fraction", [0.01, 0.1, 0.5])
def test_weibull_bounds_agree_with_the_single_integral_of_lawless(data: LifeData, fraction: float) -> None:
    found = fit(data, "weibull")
    low, high = found.life_bounds(fraction, confidence=0.9, side="two", kind="exact")
    assert lawless_weibull(data, fraction, low) == pytest.approx(0.95, abs=1e-7)
    assert lawless_weibull(data, fraction, high) == pytest.approx(0.05, abs=1e-7)
    share = found.reliability_bounds(low, confidence=0.95, kind="exact")[0]
    assert share == pytest.approx(1.0 - fraction, rel=1e-7)


@pytest.mark.parametrize("name", ["loglogistic", "frechet", "logistic", "largest_extreme_value", "normal"])
def test_bounds_leave_out_their_tail_of_the_density_1_over_sigma(name: str) -> None:
    """Brute force in mu and ln sigma with the densities of scipy: lives before the bound, and beyond it."""
    data = stopped_at(6)
    found = fit(data, name)
    bound = lower(found, 0.05)
    line = np.log if found.family.of_log_life else np.asarray
    x, end = line(data.lower[data.is_failed]), float(line(data.lower.max()))
    judge = {"loglogistic": stats.logistic, "frechet": stats.gumbel_r, "largest_extreme_value": stats.gumbel_r}
    judge |= {"logistic": stats.logistic, "normal": stats.norm}
    standard, running = judge[name], int(data.is_running.sum())
    sigma, mu = found.bounder.estimate.sigma, found.bounder.estimate.mu
    places, weights = np.polynomial.legendre.leggauss(160)

    def over_mu(spread: float, low: Floats, high: Floats) -> Floats:
        at = 0.5 * (low + high) + 0.5 * (high - low) * places
        log = standard.logpdf((x[:, None] - at) / spread).sum(axis=0) - x.size * np.log(spread)
        return 0.5 * (high - low) * weights @ np.exp(log + running * standard.logsf((end - at) / spread))

    before = beyond = 0.0
    for place, weight in zip(places, weights, strict=True):
        spread = sigma * np.exp(2.5 * place + 0.8)
        edge = float(line(np.array(bound))) - spread * standard.ppf(0.05)
        before += weight * over_mu(spread, min(mu, edge) - 20.0 * spread, edge)
        beyond += weight * over_mu(spread, edge, max(mu, edge) + 20.0 * spread)
    assert before / (before + beyond) == pytest.approx(0.05, abs=2e-6)


def test_a_test_stopped_at_a_failure_is_told_from_one_stopped_at_an_age() -> None:
    later = LifeData.right_censored([*LIVES[:4], 300.0, 300.0], [1, 1, 1, 1, 0, 0])
    assert fit(stopped_at(4), "weibull").life_question(0.1).bound_used("automatic") == "exact"
    assert fit(later, "weibull").life_question(0.1).bound_used("automatic") == "calibrated"
    with pytest.raises(BoundUnavailable, match="complete data"):
        fit(later, "weibull").life_bounds(0.1, kind="exact")


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_exact_bounds_nest_with_confidence_and_scale_with_the_lives(name: str) -> None:
    found, scaled = fit(stopped_at(7), name), fit(stopped_at(7, 1e5 * LIVES), name)
    ends = [lower(found, confidence=confidence) for confidence in (0.99, 0.95, 0.9, 0.6)]
    assert (np.diff(ends) > 0).all()
    assert lower(scaled) == pytest.approx(1e5 * lower(found), rel=1e-7)
    both = found.life_bounds(0.1, confidence=0.9, side="two", kind="exact")
    assert both[0] == pytest.approx(lower(found), rel=1e-9)
    fractions = np.array([0.01, 0.05, 0.1, 0.3, 0.6])
    assert (np.diff(found.life_bounds(fractions, kind="exact")[0]) > 0).all()


def test_conditional_parameter_bounds_are_those_of_the_spread_and_the_location() -> None:
    found = fit(stopped_at(6), "weibull")
    shape = found.parameter_bounds("shape", side="two", kind="exact")
    scale = found.parameter_bounds("scale", side="two", kind="exact")
    assert shape[0] < found.parameters["shape"] < shape[1]
    # The scale is the life by which 1 - 1/e have failed.
    assert scale == pytest.approx(found.life_bounds(-np.expm1(-1.0), side="two", kind="exact"), rel=1e-8)


def test_there_is_no_conditional_bound_of_a_hazard() -> None:
    found = fit(stopped_at(6), "weibull")
    assert found.hazard_question(900.0).bound_used("automatic") == "calibrated"
    with pytest.raises(BoundUnavailable, match="lives, reliabilities and parameters"):
        found.hazard_bounds(200.0, kind="exact")


def test_more_records_than_the_quadrature_is_for_have_no_exact_bound() -> None:
    many = LifeData.right_censored(np.linspace(1.0, 2.0, 301), np.ones(301))
    assert exact_way(many, fit(many, "weibull").family) is None
    assert exact_way(many, fit(many, "normal").family) is ExactWay.NON_CENTRAL_T


def test_exponential_bounds_are_chi_square_on_twice_the_failures() -> None:
    """NIST/SEMATECH e-Handbook 8.4.5.1: 2 T / chi-square on 2 r degrees of freedom, for a test stopped at a failure."""
    data = stopped_at(4)
    found, total = fit(data, "exponential"), float(data.lower.sum())
    low, high = found.parameter_bounds("mean", confidence=0.9, side="two", kind="exact")
    assert low == pytest.approx(2 * total / stats.chi2.ppf(0.95, 8), rel=1e-10)
    assert high == pytest.approx(2 * total / stats.chi2.ppf(0.05, 8), rel=1e-10)
    asked = {"confidence": 0.95, "kind": "exact"}
    assert found.life_bounds(0.1, **asked)[0] == pytest.approx(-low * np.log(0.9), rel=1e-10)
    assert found.reliability_bounds(90.0, **asked)[0] == pytest.approx(np.exp(-90.0 / low), rel=1e-10)
    assert found.hazard_bounds(90.0, side="upper", **asked)[1] == pytest.approx(1.0 / low, rel=1e-10)
    assert found.hazard_question(900.0).bound_used("automatic") == "exact"


def test_upper_factor_of_the_mean_from_two_failures() -> None:
    """NIST/SEMATECH e-Handbook 8.4.5.1, from memory: with 2 failures the upper factor of a 90 % interval is 5.6281."""
    found = fit(stopped_at(2), "exponential")
    high = found.parameter_bounds("mean", confidence=0.9, side="two", kind="exact")[1]
    assert high / found.parameters["mean"] == pytest.approx(5.6281, abs=5e-5)


def test_late_entry_counts_from_entry_in_the_exponential_family() -> None:
    late = LifeData.right_censored(LIVES + 50.0, np.ones(10), entered=np.full(10, 50.0))
    early = LifeData.right_censored(LIVES, np.ones(10))
    assert lower(fit(late, "exponential")) == pytest.approx(lower(fit(early, "exponential")), rel=1e-9)


def test_a_fixed_time_has_no_exact_exponential_bound() -> None:
    """The customary 2 r + 2 degrees of freedom are on the safe side there, not exact."""
    data = LifeData.right_censored([*LIVES[:4], 300.0], [1, 1, 1, 1, 0])
    with pytest.raises(BoundUnavailable):
        fit(data, "exponential").life_bounds(0.1, kind="exact")


def test_a_whole_band_of_exact_bounds_lies_on_the_bounds_of_its_places() -> None:
    found = fit(stopped_at(6), "weibull")
    ages = np.geomspace(60.0, 900.0, 100)
    band = found.bounder.band_end(found.score_measure(ages), "exact", 0.05, 1.0)
    single = found.bounder.end(found.score_measure(ages[[5, 40, 80]]), "exact", 0.05, 1.0)
    assert band[[5, 40, 80]] == pytest.approx(single, abs=0.01)


@pytest.mark.parametrize("age", [1e6, 1e9, 1e15])
def test_far_outside_two_lives_a_score_is_as_uncertain_as_the_spread(age: float) -> None:
    """There the library's non-central t ends or jumps; (n - 1) s^2 / sigma^2 is chi-square on 1 degree of freedom."""
    found = fit(LifeData.right_censored([900.0, 1000.0], [1, 1]), "normal")
    away = (age - 950.0) / np.sqrt(5000.0)
    for tail, sign, level in ((0.05, -1.0, 0.05), (0.05, 1.0, 0.95)):
        end = found.bounder.exact.end(found.score_measure(age), tail, sign)[0]
        assert end / away == pytest.approx(np.sqrt(stats.chi2.ppf(level, 1)), rel=1e-4)
    assert found.reliability_bounds(age, side="two", kind="exact") == (0.0, 0.0)
