"""What every family of location and spread must do, whatever its formulas: one suite over all of them.

The judge of densities and tails is scipy.stats; the units are the computed sets of tests/reference and invented ones.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import stats

from reliability_app.engine import FAMILY_NAMES, Fit, LifeData, fit, kaplan_meier
from reliability_app.engine.bounds.exact import has_exact_bounds
from reliability_app.engine.errors import BoundUnavailable, DataError
from reliability_app.engine.families import LOCATION_SCALE_NAMES, family
from tests.reference.published_data import nist_8413
from tests.reference.reference_data import Units, interval_units, units_of

Floats = NDArray[np.float64]
Frozen = stats.distributions.rv_frozen


def generalized_gamma(p: dict[str, float]) -> Frozen:
    """exp(mu + sigma w) with lambda w the log of a gamma life over its mean; lambda 0 is the lognormal."""
    mu, sigma, bend = p["mu"], p["sigma"], p["lambda"]
    if bend == 0.0:
        return stats.lognorm(s=sigma, scale=np.exp(mu))
    with np.errstate(all="ignore"):
        return stats.gengamma(bend**-2.0, bend / sigma, scale=np.exp(mu + 2.0 * np.log(abs(bend)) * sigma / bend))


SCIPY: dict[str, Callable[[dict[str, float]], Frozen]] = {
    "lognormal": lambda p: stats.lognorm(s=p["sigma"], scale=np.exp(p["mu"])),
    "weibull": lambda p: stats.weibull_min(p["shape"], scale=p["scale"]),
    "exponential": lambda p: stats.expon(scale=p["mean"]),
    "loglogistic": lambda p: stats.fisk(p["shape"], scale=p["scale"]),
    "frechet": lambda p: stats.invweibull(p["shape"], scale=p["scale"]),
    "normal": lambda p: stats.norm(p["mu"], p["sigma"]),
    "smallest_extreme_value": lambda p: stats.gumbel_l(p["mu"], p["sigma"]),
    "largest_extreme_value": lambda p: stats.gumbel_r(p["mu"], p["sigma"]),
    "logistic": lambda p: stats.logistic(p["mu"], p["sigma"]),
    "gamma": lambda p: stats.gamma(p["shape"], scale=p["scale"]),
    "generalized_gamma": generalized_gamma,
    "inverse_gaussian": lambda p: stats.invgauss(p["mean"] / p["shape"], scale=p["shape"]),
    "birnbaum_saunders": lambda p: stats.fatiguelife(p["shape"], scale=p["scale"]),
}
# Invented: found failed at the first look, with and without knowing that they ran at age 0, and between looks.
MIXED = interval_units(
    [0, -np.inf, 100, 250, 300, 420, 500, 610, 700, 700],
    [180, 160, 300, 250, 600, 420, np.inf, 610, np.inf, np.inf],
    quantity=[1, 1, 2, 1, 1, 1, 2, 1, 1, 3],
)
SETS: dict[str, Callable[[], Units]] = {
    "complete": lambda: units_of("syn01_complete_n5"),
    "ties": lambda: units_of("syn06_ties_quantities"),
    "removals": lambda: units_of("aml"),
    "stopped": nist_8413,
    "inspections": lambda: units_of("syn07a_interval_equal"),
    "late entry": lambda: units_of("syn14_left_truncated"),
    "mixed": lambda: MIXED,
}
# Invented: hard on the first step of a search, on floating-point range, and on the ends of intervals.
HARD: dict[str, Units] = {
    "one unit running far beyond": interval_units([1, 2, 3, 5, 1e9], [1, 2, 3, 5, np.inf]),
    "twelve orders of magnitude": interval_units(10.0 ** np.arange(-6, 7), [*10.0 ** np.arange(-6, 6), np.inf]),
    "a millionth apart, some found late or from long before": interval_units(
        [1e6 - 1.2, 1e6 - 0.4, 1e6, 1e6 + 0.7, 1e6 + 1.9, 3e5, 0, 1e6 - 0.5, 1e6 + 1],
        [1e6 - 1.2, 1e6 - 0.4, 1e6, 1e6 + 0.7, 1e6 + 1.9, 1e6 + 0.3, 1e6, 9e6, np.inf],
    ),
}
EVERY = pytest.mark.parametrize("name", FAMILY_NAMES)
LOCATION_SCALE = pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
EVERY_SET = pytest.mark.parametrize("units", SETS)
TWINS = {
    "lognormal": "normal",
    "weibull": "smallest_extreme_value",
    "loglogistic": "logistic",
    "frechet": "largest_extreme_value",
}
PLAIN = [name for name in FAMILY_NAMES if not family(name).of_log_life]
FRACTIONS = (0.01, 0.1, 0.5)


@cache
def any_fit(units: str, name: str) -> Fit:
    return fit(SETS[units]().life_data(), name)


def fitted(units: str, name: str) -> Fit:
    """The fit; three parameters may have no interior maximum, which is a named outcome with tests of its own."""
    f = any_fit(units, name)
    if f.outcome.name == "NO_INTERIOR_MAXIMUM" and len(f.parameters) > 2:
        pytest.skip("no interior maximum, and said so")
    return f


def judge(name: str, parameters: dict[str, float]) -> Frozen:
    assert name in SCIPY, f"no scipy distribution for the family {name}: add one here"
    return SCIPY[name](parameters)


def log_likelihood(units: Units, lives: Frozen) -> float:
    """The log-likelihood of the units, from scipy's functions alone; NaN outside the parameter space."""
    lower, upper, entered = units.lower, units.upper, units.entered
    exact, running, late = lower == upper, np.isinf(upper), entered > 0
    between = ~exact & ~running
    term = np.zeros(lower.size)
    with np.errstate(all="ignore"):
        term[exact] = lives.logpdf(lower[exact])
        term[running] = lives.logsf(lower[running])
        term[between] = np.log(lives.cdf(upper[between]) - lives.cdf(lower[between]))
        term[late] -= lives.logsf(entered[late])
        return float(units.quantity @ term)


def ends(f: Fit, ask: str, confidence: float, kind: str, *, side: str = "two") -> list[tuple[float, float, float]]:
    """Estimate, lower and upper bound of each reading of a kind."""
    how = {"confidence": confidence, "kind": kind, "side": side}
    ages = np.asarray(f.life(np.array(FRACTIONS)))
    if ask == "life":
        return [(f.life(p), *f.life_bounds(p, **how)) for p in FRACTIONS]
    if ask == "reliability":
        return [(f.reliability(age), *f.reliability_bounds(age, **how)) for age in ages]
    if ask == "hazard":
        return [(f.hazard(age), *f.hazard_bounds(age, **how)) for age in ages]
    return [(value, *f.parameter_bounds(name, **how)) for name, value in f.parameters.items()]


ASKS = ("life", "reliability", "hazard", "parameter")


def stopped(end: float = 1200.0) -> LifeData:
    # Invented lives of pumps on a rig.
    lives = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711])
    return LifeData.right_censored(np.minimum(lives, end), lives <= end)


PLANS = {
    "complete": stopped(9000.0),
    "fixed time": stopped(1200.0),
    "fixed number": stopped(1010.0),
    "staggered": LifeData.right_censored(stopped(9000.0).lower, [1, 1, 0, 1, 1, 0, 1, 1, 0, 1]),
}


@EVERY
@EVERY_SET
def test_the_fit_converges_and_scipy_gives_it_the_same_log_likelihood(units: str, name: str) -> None:
    f = fitted(units, name)
    assert f.converged
    assert f.log_likelihood == pytest.approx(log_likelihood(SETS[units](), judge(name, f.parameters)), abs=1e-8)


@EVERY
@EVERY_SET
def test_no_random_point_has_a_higher_log_likelihood(units: str, name: str) -> None:
    f, draw = fitted(units, name), np.random.default_rng(20)
    errors = f.standard_errors
    for size in np.geomspace(1e-4, 4.0, 60):
        point = {key: value + size * errors[key] * draw.normal() for key, value in f.parameters.items()}
        beside = log_likelihood(SETS[units](), judge(name, point))
        assert np.isnan(beside) or beside <= f.log_likelihood + 1e-9


@LOCATION_SCALE
@pytest.mark.parametrize("case", HARD)
def test_hard_units_reach_the_maximum_too(case: str, name: str) -> None:
    units, draw = HARD[case], np.random.default_rng(21)
    f = fit(units.life_data(), name)
    assert f.converged
    assert f.log_likelihood == pytest.approx(log_likelihood(units, judge(name, f.parameters)), abs=1e-6)
    for size in np.geomspace(1e-3, 4.0, 100):
        point = {key: value + size * f.standard_errors[key] * draw.normal() for key, value in f.parameters.items()}
        beside = log_likelihood(units, judge(name, point))
        assert np.isnan(beside) or beside <= f.log_likelihood + 1e-6


@EVERY
def test_readings_agree_with_scipy(name: str) -> None:
    f = fitted("removals", name)
    lives, ages = judge(name, f.parameters), np.array([0.5, 9.0, 30.0, 80.0, 200.0])
    fractions = np.array([1e-6, 0.01, 0.5, 0.999])
    assert f.life(fractions) == pytest.approx(lives.ppf(fractions), rel=1e-10)
    assert f.reliability(ages) == pytest.approx(lives.sf(ages), rel=1e-10)
    assert f.failure_probability(ages) == pytest.approx(lives.cdf(ages), rel=1e-10)
    assert f.density(ages) == pytest.approx(lives.pdf(ages), rel=1e-10)
    assert f.hazard(ages) == pytest.approx(lives.pdf(ages) / lives.sf(ages), rel=1e-10)
    assert f.conditional_reliability(200.0, given=80.0) == pytest.approx(lives.sf(200.0) / lives.sf(80.0), rel=1e-10)
    mean = float(lives.mean())
    assert f.mean_life() == pytest.approx(mean if np.isfinite(mean) else np.inf, rel=1e-10)


# Each reading with one of the two hardest kinds of units; test_properties mixes them in samples of its own.
@EVERY
@pytest.mark.parametrize("kind", ["wald", "likelihood"])
@pytest.mark.parametrize(
    ("units", "ask"),
    [("late entry", "life"), ("inspections", "reliability"), ("late entry", "hazard"), ("inspections", "parameter")],
)
def test_bounds_hold_the_estimate_and_nest(units: str, kind: str, ask: str, name: str) -> None:
    f = fitted(units, name)
    both = zip(ends(f, ask, 0.80, kind), ends(f, ask, 0.95, kind), strict=True)
    for (estimate, low, high), (_, lowest, highest) in both:
        assert low < estimate < high
        # An end that is open at one confidence is open at a higher one.
        assert lowest < low or lowest == low == 0
        assert high < highest or high == highest == np.inf


@EVERY
@pytest.mark.parametrize("ask", ASKS)
@pytest.mark.parametrize("kind", ["wald", "likelihood"])
def test_a_one_sided_bound_is_an_end_of_the_two_sided_at_twice_the_tail(kind: str, ask: str, name: str) -> None:
    f = fitted("stopped", name)
    both = ends(f, ask, 0.90, kind)
    lower, upper = (ends(f, ask, 0.95, kind, side=side) for side in ("lower", "upper"))
    for (_, low, high), (_, alone, _), (_, _, top) in zip(both, lower, upper, strict=True):
        assert (alone, top) == pytest.approx((low, high), rel=1e-12)


@EVERY
@pytest.mark.parametrize("units", ["stopped", "inspections", "mixed"])
def test_likelihood_bounds_of_a_life_and_of_the_reliability_at_it_invert_each_other(units: str, name: str) -> None:
    f = fitted(units, name)
    how = {"confidence": 0.95, "kind": "likelihood"}
    for fraction in FRACTIONS:
        for side, end in (("lower", 0), ("upper", 1)):
            age = f.life_bounds(fraction, side=side, **how)[end]
            if age is not None and age > 0:
                assert f.reliability_bounds(age, side=side, **how)[end] == pytest.approx(1 - fraction, rel=1e-7)


@EVERY
@pytest.mark.parametrize("units", ["complete", "stopped", "mixed"])
def test_lives_rise_with_the_fraction_and_so_do_their_bounds(units: str, name: str) -> None:
    f, fractions = fitted(units, name), np.linspace(0.001, 0.999, 30 if name in LOCATION_SCALE_NAMES else 12)
    lower, upper = f.life_bounds(fractions, confidence=0.9, side="two", kind="likelihood")
    lives = np.asarray(f.life(fractions))
    assert np.all(np.diff(lives) > 0)
    for edge in (lower, upper):
        finite = edge[np.isfinite(edge)]
        assert np.all(np.diff(finite) > -1e-9 * np.abs(finite[1:]))
    assert np.all((lower < lives) & (lives < upper))


def carried(units: Units, *, times: float, plus: float = 0.0) -> LifeData:
    """The same units with their ages multiplied and moved."""
    lower, upper = (times * ages + plus for ages in (units.lower, units.upper))
    entered = np.where(units.entered > 0, times * units.entered + plus, 0.0)
    return LifeData.from_intervals(lower, upper, quantity=units.quantity, entered=entered)


def assert_carried(name: str, units: str, *, times: float, plus: float = 0.0) -> None:
    here, there = fitted(units, name), fit(carried(SETS[units](), times=times, plus=plus), name)
    failed = SETS[units]().lower == SETS[units]().upper
    moved = here.log_likelihood - SETS[units]().quantity[failed].sum() * np.log(times)
    assert there.log_likelihood == pytest.approx(moved, abs=1e-7)
    for fraction in FRACTIONS:
        mine = np.array([here.life(fraction), *here.life_bounds(fraction, side="two", kind="likelihood")])
        theirs = np.array([there.life(fraction), *there.life_bounds(fraction, side="two", kind="likelihood")])
        # Held to a part of the width, because a life may come out near 0.
        assert theirs == pytest.approx(times * mine + plus, abs=1e-7 * times * np.ptp(mine), rel=1e-9)
        age = float(mine[0])
        assert there.hazard(times * age + plus) == pytest.approx(here.hazard(age) / times, rel=1e-6)


# Of families with a further parameter test_shaped_contract asks it.
@LOCATION_SCALE
@pytest.mark.parametrize(("units", "times"), [("inspections", 1e-6), ("late entry", 1e6)])
def test_everything_scales_with_the_lives(units: str, times: float, name: str) -> None:
    assert_carried(name, units, times=times)


@pytest.mark.parametrize("name", PLAIN)
@pytest.mark.parametrize(("units", "plus"), [("removals", 1000.0), ("removals", -40.0), ("complete", -5000.0)])
def test_families_of_life_itself_move_with_the_lives(units: str, plus: float, name: str) -> None:
    assert_carried(name, units, times=2.5, plus=plus)


# Calibrated bounds are slow: every plan and every family once. Automatic ones are of a kind that is here already.
TWINNED = [(plan, kind, *pair) for plan in PLANS for kind in ("wald", "likelihood", "exact") for pair in TWINS.items()]
TWINNED += [(plan, "calibrated", *pair) for plan, pair in zip(PLANS, TWINS.items(), strict=True)]


@pytest.mark.parametrize(("plan", "kind", "of_ln_life", "of_life"), TWINNED)
def test_a_family_of_ln_life_is_its_twin_of_the_logarithms(plan: str, kind: str, of_ln_life: str, of_life: str) -> None:
    data = PLANS[plan]
    logs = LifeData.right_censored(np.log(data.lower / 1000.0), data.is_failed)  # some of them below 0
    lives, twin = fit(data, of_ln_life), fit(logs, of_life)
    if kind == "exact" and not has_exact_bounds(data, lives.family):
        for f in (lives, twin):
            with pytest.raises(BoundUnavailable):
                f.life_bounds(0.1, kind=kind)
        return
    for chosen in (kind, "automatic"):
        assert twin.life_question(0.1).bound_used(chosen) == lives.life_question(0.1).bound_used(chosen)
    here = np.log(np.array(lives.life_bounds(0.1, side="two", kind=kind)) / 1000.0)
    assert twin.life_bounds(0.1, side="two", kind=kind) == pytest.approx(here, abs=1e-7)
    share = lives.reliability_bounds(800.0, side="two", kind=kind)
    assert twin.reliability_bounds(np.log(0.8), side="two", kind=kind) == pytest.approx(share, rel=1e-6)
    moved = 800.0 * np.array(lives.hazard_bounds(800.0, side="two", kind="wald"))
    assert twin.hazard_bounds(np.log(0.8), side="two", kind="wald") == pytest.approx(moved, rel=1e-7)


def test_kaplan_meier_goes_below_age_zero() -> None:
    data = LifeData.right_censored([-2.0, -1.0, 0.5, 3.0], [1, 0, 1, 1])
    assert kaplan_meier(data).at_risk.tolist() == [4, 2, 1]
    assert kaplan_meier(data).survival == pytest.approx([0.75, 0.375, 0.0])


@EVERY
def test_order_and_splitting_of_records_change_nothing(name: str) -> None:
    units, f = SETS["ties"](), fitted("ties", name)
    count = units.quantity.astype(int)
    shuffled = np.random.default_rng(3).permutation(int(count.sum()))
    lower, upper = (np.repeat(ages, count)[shuffled] for ages in (units.lower, units.upper))
    split = fit(LifeData.from_intervals(lower, upper), name)
    assert split.log_likelihood == pytest.approx(f.log_likelihood, abs=1e-10)
    assert list(split.parameters.values()) == pytest.approx(list(f.parameters.values()), rel=1e-8)


@EVERY
def test_a_very_wide_interval_tends_to_a_unit_still_running(name: str) -> None:
    units = SETS["removals"]()
    wide = fit(LifeData.from_intervals(units.lower, np.minimum(units.upper, 1e12)), name)
    assert wide.log_likelihood == pytest.approx(fitted("removals", name).log_likelihood, abs=1e-8)
    assert wide.life(0.1) == pytest.approx(fitted("removals", name).life(0.1), rel=1e-7)


@cache
def calibrated_life(name: str) -> float:
    return fit(stopped(), name).life_bounds(0.1, confidence=0.9, kind="calibrated")[0]


@LOCATION_SCALE
@pytest.mark.parametrize("ask", ["life", "hazard"])
def test_calibrated_bounds_hold_the_estimate(ask: str, name: str) -> None:
    f, how = fit(stopped(), name), {"confidence": 0.9, "kind": "calibrated"}
    if ask == "life":
        assert calibrated_life(name) < f.life(0.1) < f.life_bounds(0.1, side="upper", **how)[1]
        return
    lower, upper = (f.hazard_bounds(900.0, side=side, **how)[end] for end, side in enumerate(("lower", "upper")))
    assert lower < f.hazard(900.0) < upper


@LOCATION_SCALE
def test_calibrated_bounds_scale_with_the_lives(name: str) -> None:
    data = stopped()
    smaller = fit(LifeData.right_censored(data.lower / 100, data.is_failed), name)
    there = smaller.life_bounds(0.1, confidence=0.9, kind="calibrated")[0]
    assert there == pytest.approx(calibrated_life(name) / 100, rel=1e-6)


@EVERY
def test_without_a_failure_or_with_all_at_one_age_no_number_is_given(name: str) -> None:
    none = fit(LifeData.right_censored([100.0, 200.0], [0, 0]), name)
    assert none.outcome.name == "NO_FAILURE"
    assert not none.converged
    at_one_age = fit(LifeData.right_censored([100.0, 100.0, 80.0], [1, 1, 0]), name)
    if name != "exponential":
        assert at_one_age.outcome.name == "FAILURES_AT_ONE_AGE"


@EVERY
def test_ages_of_zero_and_below_are_for_families_of_life_itself(name: str) -> None:
    data = LifeData.right_censored([-3.0, 0.0, 2.0, 5.0], [1, 1, 1, 0])
    if name in PLAIN:
        f = fit(data, name)
        assert f.life(0.01) < -3.0
        assert 0 < f.reliability(-3.0) < 1
        return
    with pytest.raises(DataError, match="Record 1, 2: the life is not above 0"):
        fit(data, name)
    with pytest.raises(DataError, match="positive"):
        fitted("removals", name).reliability(-1.0)


@EVERY
def test_failed_after_age_zero_and_failed_at_any_age_differ_for_life_itself_only(name: str) -> None:
    running = [60.0, 100.0, 150.0, 300.0]
    lower, upper = np.array([0.0, 90.0, *running]), np.array([80.0, 130.0, *([np.inf] * 4)])
    after_zero = fit(LifeData.from_intervals(lower, upper), name)
    at_any_age = fit(LifeData.from_intervals(np.where(lower == 0, -np.inf, lower), upper), name)
    assert (after_zero.log_likelihood == at_any_age.log_likelihood) is (name not in PLAIN)
