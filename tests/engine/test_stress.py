"""Units at the edge of what numbers can hold: a right answer, held against scipy.stats, or a named outcome; no hang."""

from __future__ import annotations

import time

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import stats

from reliability_app.engine import FAMILY_NAMES, Fit, LifeData, Outcome, fit
from reliability_app.engine.families import LOCATION_SCALE_NAMES

Array = NDArray[np.float64]
WITH_THRESHOLD = ("weibull", "lognormal", "exponential", "loglogistic")
ALL_FORMS = [*((name, False) for name in FAMILY_NAMES), *((name, True) for name in WITH_THRESHOLD)]
every_form = pytest.mark.parametrize(("name", "threshold"), ALL_FORMS)


def judge(name: str, p: dict[str, float]) -> object:
    """The fitted distribution by scipy.stats."""
    location = p.get("threshold", 0.0)
    if name in ("lognormal", "normal", "logistic", "smallest_extreme_value", "largest_extreme_value"):
        if name == "lognormal":
            return stats.lognorm(p["sigma"], loc=location, scale=np.exp(p["mu"]))
        plain = {"normal": stats.norm, "logistic": stats.logistic, "smallest_extreme_value": stats.gumbel_l}
        return plain.get(name, stats.gumbel_r)(p["mu"], p["sigma"])
    if name == "exponential":
        return stats.expon(loc=location, scale=p["mean"])
    if name == "inverse_gaussian":
        return stats.invgauss(p["mean"] / p["shape"], scale=p["shape"])
    by_shape = {
        "weibull": stats.weibull_min,
        "loglogistic": stats.fisk,
        "frechet": stats.invweibull,
        "gamma": stats.gamma,
        "birnbaum_saunders": stats.fatiguelife,
    }
    return by_shape[name](p["shape"], loc=location, scale=p["scale"])


def log_likelihood(data: LifeData, lives: object) -> float:
    """By scipy.stats; an interval by its smaller tail."""
    exact, running, found = data.is_failed, data.is_running, data.is_found_failed
    term = np.zeros(data.lower.size)
    with np.errstate(all="ignore"):
        term[exact], term[running] = lives.logpdf(data.lower[exact]), lives.logsf(data.lower[running])
        low, high = data.lower[found], data.upper[found]
        is_left = lives.cdf(high) < 0.5
        large = np.where(is_left, lives.logcdf(high), lives.logsf(low))
        small = np.where(is_left, lives.logcdf(low), lives.logsf(high))
        term[found] = large + np.log1p(-np.exp(small - large))
    return float(data.quantity @ term)


def holds_up(f: Fit, data: LifeData, name: str, *, points: int = 60) -> None:
    """Assert a named outcome, or a maximum: the likelihood by scipy agrees, and is not higher at points around."""
    if not f.converged:
        assert f.outcome in (Outcome.NO_INTERIOR_MAXIMUM, Outcome.NOT_CONVERGED, Outcome.FAILURES_AT_ONE_AGE)
        assert f.cautions[0].text.endswith(".")
        return
    if name == "generalized_gamma":  # scipy's stands in other parameters, held against elsewhere
        assert np.isfinite(f.log_likelihood)
        return
    value = log_likelihood(data, judge(name, f.parameters))
    assert f.log_likelihood == pytest.approx(value, rel=1e-7, abs=1e-6)
    draw = np.random.default_rng(3)
    for reach in 10.0 ** draw.uniform(-4, -0.5, points):
        moved = {
            key: at + reach * (f.parameters.get("sigma", 1.0)) * draw.normal() if key == "mu"
            else at if key == "threshold" else at * np.exp(reach * draw.normal())
            for key, at in f.parameters.items()
        }  # fmt: skip
        assert log_likelihood(data, judge(name, moved)) <= value + 1e-9 * max(1.0, abs(value))


def in_time(data: LifeData, name: str, *, threshold: bool = False, most: float = 20.0) -> Fit:
    """Fit, and see that it ends (a loaded machine is no fault of it)."""
    begun = time.process_time()
    f = fit(data, name, threshold=threshold)
    assert time.process_time() - begun < most
    return f


DRAW = np.random.default_rng(11)
ORDERS = 10.0 ** np.linspace(-6, 6, 25)
EVERY_OTHER = np.where(np.arange(25) % 2, ORDERS, np.inf)
# Invented.
HARD = {
    "twelve orders of magnitude, half running": (ORDERS, EVERY_OTHER, None),
    "all at one age and one outlives it": ([7.0] * 20 + [9.0], [7.0] * 20 + [np.inf], None),
    "one failure among 100,000": ([100.0, 500.0], [100.0, np.inf], [1, 99_999]),
    "a shape of 50": (200 * DRAW.weibull(50, 40),) * 2 + (None,),
    "a shape of 5000": (200 * DRAW.weibull(5000, 40),) * 2 + (None,),
    "a thousand million of each": ([100.0, 200, 300, 400], [100, 200, 300, np.inf], [1e9] * 4),
    "a look after 1e40 h": ([100.0, 200, 50, 300], [100, 200, 1e40, 300], None),
    "a look after 1e300 h": ([100.0, 200, 50, 300], [100, 200, 1e300, 300], None),
    "looks only, one after 1e40 h": ([50.0, 80, 20, 70, 90], [100, 1e40, 60, 110, 200], None),
}


@pytest.mark.parametrize("case", HARD)
@every_form
def test_hard_units_give_a_maximum_or_a_named_outcome(name: str, threshold: bool, case: str) -> None:
    lower, upper, quantity = HARD[case]
    data = LifeData.from_intervals(lower, upper, quantity=quantity)
    holds_up(in_time(data, name, threshold=threshold), data, name)


@pytest.mark.parametrize("name", [*LOCATION_SCALE_NAMES, "gamma", "inverse_gaussian", "birnbaum_saunders"])
def test_a_look_after_ages_says_as_little_as_a_unit_still_running(name: str) -> None:
    running = fit(LifeData.from_intervals([100, 200, 50, 300], [100, 200, np.inf, 300]), name)
    for end in (1e40, 1e300):
        looked = fit(LifeData.from_intervals([100, 200, 50, 300], [100, 200, end, 300]), name)
        assert looked.life(0.1) == pytest.approx(running.life(0.1), rel=1e-9)
        bounds, wanted = (one.life_bounds(0.1, side="two", kind="likelihood") for one in (looked, running))
        assert bounds == pytest.approx(wanted, rel=1e-6)


def test_a_threshold_is_not_misled_by_a_look_after_ages() -> None:
    f = fit(LifeData.from_intervals([100, 200, 50, 300], [100, 200, 1e40, 300]), "exponential", threshold=True)
    # At the first failure, where the mean is the time beyond it over the failures: (0 + 100 + 200)/3.
    assert f.parameters == pytest.approx({"mean": 100.0, "threshold": 100.0})


@pytest.mark.parametrize("name", ["lognormal", "weibull", "loglogistic", "frechet"])
def test_a_shape_of_a_twentieth_is_recovered_over_some_hundred_orders_of_magnitude(name: str) -> None:
    sigma = 20.0
    standard = {"lognormal": stats.norm, "weibull": stats.gumbel_l, "loglogistic": stats.logistic}
    z = standard.get(name, stats.gumbel_r).ppf((np.arange(400) + 0.5) / 400)
    data = LifeData.right_censored(np.exp(3.0 + sigma * z), np.ones(400))
    f = in_time(data, name)
    found = f.parameters.get("sigma") or 1.0 / f.parameters["shape"]
    assert found == pytest.approx(sigma, rel=0.02)
    holds_up(f, data, name)


@pytest.mark.parametrize("unit", [1e-312, 1e-300, 1e300])
@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_lives_in_an_absurd_unit_of_age_are_those_in_hours(name: str, unit: float) -> None:
    life, failed = np.array([812.0, 1230, 1410, 1500, 1640, 2900]), [1, 1, 1, 0, 1, 1]
    absurd = life * unit  # so small ones have lost digits, which the plain ones below must share
    plain = fit(LifeData.right_censored(absurd / unit, failed), name)
    found = fit(LifeData.right_censored(absurd, failed), name)
    assert found.converged
    assert found.life(0.1) / unit == pytest.approx(plain.life(0.1), rel=1e-6)
    bounds, wanted = (one.life_bounds(0.1, side="two", kind="likelihood") for one in (found, plain))
    assert np.array(bounds) / unit == pytest.approx(wanted, rel=1e-5)


@every_form
def test_failures_that_differ_by_rounding_only_stand_at_one_age(name: str, threshold: bool) -> None:
    ages = [5.0, np.nextafter(5.0, 6.0), 5.0 * (1 + 1e-13)]
    f = fit(LifeData.from_intervals([*ages, 3.0], [*ages, np.inf]), name, threshold=threshold)
    if name == "exponential" and not threshold:
        assert f.parameters["mean"] == pytest.approx(6.0)
    else:
        assert f.outcome is Outcome.FAILURES_AT_ONE_AGE


@pytest.mark.parametrize(
    ("name", "threshold"),
    [("lognormal", False), ("weibull", False), ("exponential", False), ("birnbaum_saunders", False), ("weibull", True)],
)
def test_a_hundred_thousand_rows_with_one_failure_end_in_time(name: str, threshold: bool) -> None:
    life = np.random.default_rng(1).exponential(500.0, 100_000) + 1.0
    failed = np.zeros(life.size, dtype=bool)
    failed[50] = True
    data = LifeData.right_censored(life, failed)
    f = in_time(data, name, threshold=threshold)
    if not f.converged:
        assert f.cautions[0].severity.name == "SERIOUS"
    elif name == "exponential" and not threshold:
        assert f.parameters["mean"] == pytest.approx(life.sum())
    else:
        holds_up(f, data, name, points=5)


@pytest.mark.parametrize("name", ["lognormal", "weibull"])
def test_a_million_rows_are_fitted_as_their_half_million_pairs(name: str) -> None:
    draw = np.random.default_rng(2)
    life = 400.0 + 60.0 * draw.gumbel(size=500_000)
    life, failed = np.maximum(life, 1.0), draw.random(life.size) < 0.5
    doubled = in_time(LifeData.right_censored(np.repeat(life, 2), np.repeat(failed, 2)), name)
    paired = fit(LifeData.right_censored(life, failed, quantity=np.full(life.size, 2.0)), name)
    assert doubled.converged
    assert doubled.life(0.1) == pytest.approx(paired.life(0.1), rel=1e-9)
    assert doubled.log_likelihood == pytest.approx(paired.log_likelihood, rel=1e-11)
    bounds, wanted = (one.life_bounds(0.1, side="two", kind="wald") for one in (doubled, paired))
    assert bounds == pytest.approx(wanted, rel=1e-9)
