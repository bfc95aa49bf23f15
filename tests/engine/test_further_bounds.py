"""Bounds of conditional reliability, mean residual life, mean, mode and age at a hazard, of every kind that applies.

Judges: likelihoods by scipy.stats (`naive_likelihood`, `naive_shaped`) maximised anew at the bound; chi-square and
Student's t; and each kind against what it must agree with.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy import optimize, stats
from scipy.special import ndtri

from reliability_app.engine import Fit, LifeData, fit
from reliability_app.engine.bounds.constrained import curve_of
from reliability_app.engine.errors import BoundUnavailable, BoundWithoutEnd
from reliability_app.engine.fit_cautions import cautions_of_bound
from reliability_app.engine.further_measures import MeanMeasure, ModeMeasure
from reliability_app.engine.line import Line
from reliability_app.engine.question import Ends, Question
from tests.engine.naive_likelihood import STANDARD, NaiveFit
from tests.engine.naive_shaped import FORMS, Naive, climbed
from tests.reference.reference_data import Units, right_censored_units, units_of

# Invented.
LIVES = np.array([612.0, 701, 744, 850, 913, 1010, 1105, 1290, 1530, 1711, 640, 2200, 980])
UNITS = right_censored_units(np.minimum(LIVES, 1600).tolist(), (LIVES <= 1600).tolist())
LATE = units_of("syn14_left_truncated")
ROOT = float(ndtri(0.95))
# NIST/SEMATECH e-Handbook 8.4.1.3: 20 units stopped at 500 h.
HANDBOOK = LifeData.right_censored(
    [54.0, 187, 216, 240, 244, 335, 361, 373, 375, 386, *[500] * 10], [*[1] * 10, *[0] * 10]
)
Floats = NDArray[np.float64]


def reliability_of(family: str, mu: float, sigma: float, age: Floats | float) -> Floats:
    line = np.asarray(age) if family == "normal" else np.log(age)
    return STANDARD[family].sf((line - mu) / sigma)


def residual(family: str, mu: float, sigma: float, age: float) -> float:
    x, weight = np.polynomial.legendre.leggauss(60)
    ends = age * np.geomspace(1.0, 1e4, 30)
    half = np.diff(ends) / 2
    ages = (ends[:-1] + half)[:, None] + half[:, None] * x
    values = reliability_of(family, mu, sigma, ages)
    return float(((values @ weight) * half).sum() / reliability_of(family, mu, sigma, age))


READINGS: dict[str, Callable[[str, float, float], float]] = {
    "conditional": lambda family, mu, sigma: float(
        reliability_of(family, mu, sigma, 1500.0) / reliability_of(family, mu, sigma, 900.0)
    ),
    "residual": lambda family, mu, sigma: residual(family, mu, sigma, 900.0),
    "mean": lambda family, mu, sigma: {
        "weibull": lambda: math.exp(mu) * math.gamma(1 + sigma),
        "lognormal": lambda: math.exp(mu + sigma**2 / 2),
        "loglogistic": lambda: math.exp(mu) * math.pi * sigma / math.sin(math.pi * sigma),
        "normal": lambda: mu,
    }[family](),
    "mode": lambda family, mu, sigma: {
        "weibull": lambda: math.exp(mu) * max(1 - sigma, 0.0) ** sigma,
        "lognormal": lambda: math.exp(mu - sigma**2),
        "loglogistic": lambda: math.exp(mu) * ((1 - sigma) / (1 + sigma)) ** sigma,
        "normal": lambda: mu,
    }[family](),
}


def bounds_of(f: Fit, reading: str, **how: str | float) -> Ends:
    match reading:
        case "conditional":
            return f.conditional_reliability_bounds(1500.0, given=900.0, **how)
        case "residual":
            return f.mean_residual_life_bounds(900.0, **how)
        case "mean":
            return f.mean_life_bounds(**how)
        case _:
            return f.mode_bounds(**how)


def highest(naive: NaiveFit, reading: str, value: float) -> float:
    """The highest log-likelihood among fits with this value of the reading, over sigma with mu solved for."""
    centre, start = naive.maximum
    width = math.exp(start)

    def at(log_sigma: float) -> float:
        def gap(mu: float) -> float:
            return READINGS[reading](naive.family, mu, math.exp(log_sigma)) - value

        try:
            mu = optimize.brentq(gap, centre - 4 * width, centre + 4 * width, xtol=1e-12)
        except ValueError:
            return 1e6
        return -naive.log_likelihood(float(mu), log_sigma)

    found = optimize.minimize_scalar(at, bounds=(start - 0.9, start + 0.9), method="bounded", options={"xatol": 1e-7})
    return -float(found.fun)


@pytest.mark.parametrize(
    ("units", "family", "reading"),
    [
        (UNITS, "weibull", "conditional"),
        (UNITS, "weibull", "residual"),
        (UNITS, "weibull", "mean"),
        (UNITS, "loglogistic", "mean"),
        (UNITS, "loglogistic", "mode"),
        (UNITS, "lognormal", "mode"),
        (UNITS, "normal", "conditional"),
        (UNITS, "normal", "mean"),
        (LATE, "weibull", "mean"),
        (LATE, "lognormal", "conditional"),
        (LATE, "lognormal", "mode"),
    ],
)
def test_at_a_likelihood_bound_the_profile_has_fallen_by_what_is_allowed(
    units: Units, family: str, reading: str
) -> None:
    f, naive = fit(units.life_data(), family), NaiveFit(units, family)
    lower, upper = bounds_of(f, reading, confidence=0.90, side="two", kind="likelihood")
    assert lower < READINGS[reading](family, naive.maximum[0], math.exp(naive.maximum[1])) < upper
    for end in (lower, upper):
        assert highest(naive, reading, end) == pytest.approx(naive.largest - ROOT**2 / 2, abs=2e-6)


@pytest.mark.parametrize("reading", ["conditional", "residual", "mean", "mode"])
def test_a_wald_bound_follows_from_the_covariance_of_the_parameters(reading: str) -> None:
    f = fit(UNITS.life_data(), "weibull")
    scale = (lambda r: math.log(-math.log(r))) if reading == "conditional" else math.log
    mu, log_sigma = math.log(f.parameters["scale"]), -math.log(f.parameters["shape"])
    step = 1e-5

    def value(at_mu: float, at_log_sigma: float) -> float:
        return scale(READINGS[reading]("weibull", at_mu, math.exp(at_log_sigma)))

    slope = np.array(
        [
            (value(mu + step, log_sigma) - value(mu - step, log_sigma)) / (2 * step),
            (value(mu, log_sigma + step) - value(mu, log_sigma - step)) / (2 * step),
        ]
    )
    error = math.sqrt(slope @ f.covariance @ slope)
    ends = bounds_of(f, reading, confidence=0.90, side="two", kind="wald")
    wanted = sorted(value(mu, log_sigma) + way * ROOT * error for way in (-1, 1))
    assert sorted(scale(end) for end in ends) == pytest.approx(wanted, abs=1e-6)


def test_every_reading_of_the_exponential_family_follows_from_its_mean() -> None:
    f = fit(LifeData.right_censored(LIVES, np.ones(13)), "exponential")
    wanted = {"exact": 2 * LIVES.sum() / stats.chi2.ppf([0.95, 0.05], 26)}
    for kind in ("exact", "likelihood", "wald", "calibrated"):
        ends = np.array(f.parameter_bounds("mean", confidence=0.90, side="two", kind=kind))
        assert ends == pytest.approx(wanted.get(kind, ends), rel=1e-9)
        how = {"confidence": 0.90, "side": "two", "kind": kind}
        assert f.mean_life_bounds(**how) == pytest.approx(ends, rel=1e-9)
        assert f.mean_residual_life_bounds(5000.0, **how) == pytest.approx(ends, rel=1e-9)
        assert bounds_of(f, "conditional", **how) == pytest.approx(np.exp(-600 / ends), rel=1e-9)
    assert f.mode_bounds(side="two") == (0.0, 0.0)
    assert f.age_at_hazard_bounds(1e-9, side="two") == (0.0, 0.0)
    assert f.age_at_hazard_bounds(1.0, side="two") == (math.inf, math.inf)


def test_mean_and_mode_of_complete_normal_data_have_students_bounds() -> None:
    f = fit(LifeData.right_censored(LIVES, np.ones(13)), "normal")
    reach = stats.t.ppf(0.95, 12) * LIVES.std(ddof=1) / math.sqrt(13)
    wanted = (LIVES.mean() - reach, LIVES.mean() + reach)
    for kind in ("exact", "automatic"):
        assert f.mean_life_bounds(confidence=0.90, side="two", kind=kind) == pytest.approx(wanted, rel=1e-8)
        assert f.mode_bounds(confidence=0.90, side="two", kind=kind) == pytest.approx(wanted, rel=1e-8)


def test_no_exact_bound_of_a_mean_of_ln_life_is_known_and_automatic_calibrates_it() -> None:
    f = fit(LifeData.right_censored(LIVES, np.ones(13)), "lognormal")
    with pytest.raises(BoundUnavailable):
        f.mean_life_bounds(kind="exact")
    assert f.mean_life_bounds(kind="automatic") == f.mean_life_bounds(kind="calibrated")


def test_the_mean_of_lives_that_are_positive_is_bounded_by_0() -> None:
    lives = [1.0, 2.0, 3.0, 4.0, 300.0]
    assert fit(LifeData.right_censored(lives, np.ones(5)), "normal").mean_life_bounds(kind="wald")[0] == 0.0
    below = fit(LifeData.right_censored([-5.0, *lives], np.ones(6)), "normal")
    assert below.mean_life_bounds(kind="wald")[0] < 0.0


@pytest.mark.parametrize("family", ["weibull", "lognormal", "logistic"])
def test_an_age_at_a_hazard_is_where_the_bound_of_the_hazard_reaches_the_rate(family: str) -> None:
    f = fit(UNITS.life_data(), family)
    rate = float(f.hazard(600.0))
    lower, upper = f.age_at_hazard_bounds(rate, side="two", kind="likelihood")
    assert f.hazard_bounds(lower, side="two", kind="likelihood")[1] == pytest.approx(rate, rel=1e-6)
    if family == "weibull":
        assert f.hazard_bounds(upper, side="two", kind="likelihood")[0] == pytest.approx(rate, rel=1e-6)
    single = f.age_at_hazard_bounds(rate, kind="calibrated")[0]
    assert f.hazard_bounds(single, side="upper", kind="calibrated")[1] == pytest.approx(rate, rel=5e-3)


def test_a_first_crossing_that_may_never_come_has_no_upper_end() -> None:
    f = fit(UNITS.life_data(), "lognormal")
    rate = 0.98 * float(np.max(f.hazard(np.linspace(100, 5000, 2000))))
    lower, upper = f.age_at_hazard_bounds(rate, side="two", kind="likelihood")
    assert 0 < lower < f.age_at_hazard(rate) < upper == math.inf
    assert f.age_at_hazard_bounds(rate, side="upper", kind="calibrated")[1] == math.inf
    with pytest.raises(BoundUnavailable, match="Wald"):
        f.age_at_hazard_bounds(10.0, kind="wald")
    late = fit(LATE.life_data(), "lognormal")
    with pytest.raises(BoundUnavailable, match="rise to this rate and fall again"):
        late.age_at_hazard_bounds(float(late.hazard(300.0)), side="upper", kind="likelihood")


@pytest.mark.parametrize("family", ["weibull", "loglogistic"])
def test_a_calibrated_conditional_reliability_from_an_age_all_reach_is_that_of_the_reliability(family: str) -> None:
    f = fit(UNITS.life_data(), family)
    wanted = f.reliability_bounds(900.0, kind="calibrated")[0]
    assert f.conditional_reliability_bounds(900.0, given=1.0, kind="calibrated")[0] == pytest.approx(wanted, rel=1e-4)


def test_what_no_unit_has_begun_has_the_exact_bounds_of_the_reliability() -> None:
    f = fit(LifeData.right_censored(LIVES, np.ones(13)), "lognormal")
    wanted = f.reliability_bounds([700.0, 900.0], kind="exact")[0]
    assert f.conditional_reliability_bounds([700.0, 900.0], given=0.0, kind="exact")[0] == pytest.approx(wanted)
    assert f.conditional_reliability_bounds(900.0, given=900.0, side="two") == (1.0, 1.0)


def test_calibrated_bounds_lie_further_out_than_likelihood_bounds_of_few_units() -> None:
    f = fit(UNITS.life_data(), "weibull")
    for reading in ("conditional", "residual"):
        upper, high = (bounds_of(f, reading, side="upper", kind=kind)[1] for kind in ("calibrated", "likelihood"))
        assert high < upper < 1.6 * high


def test_a_mean_that_the_units_leave_open_has_an_infinite_upper_bound() -> None:
    f = fit(LifeData.right_censored([20.0, 35.0, 80.0, 300.0, 400.0], [1, 1, 1, 1, 0]), "frechet")
    for kind in ("likelihood", "calibrated"):
        lower, upper = f.mean_life_bounds(side="two", kind=kind)
        assert 0 < lower < math.inf
        assert upper == math.inf
    heavy = fit(LifeData.right_censored([1.0, 9.0, 20.0, 70.0, 300.0, 5000.0], np.ones(6)), "loglogistic")
    assert heavy.mean_life() == math.inf
    assert 0 < heavy.mean_life_bounds(kind="likelihood", confidence=0.99)[0] < math.inf
    with pytest.raises(BoundUnavailable, match="infinite"):
        heavy.mean_life_bounds(kind="wald")


def test_the_mode_of_few_weibull_units_is_calibrated_though_many_simulated_tests_have_none() -> None:
    """With sigma-hat at 1 or above a simulated test has mode 0, and its constrained maximum lies close to sigma 1."""
    lives = [210.0, 250, 390, 610, 740, 905, 1000, 1000, 1000, 1000, 1000, 1000]
    f = fit(LifeData.right_censored(lives, [1] * 6 + [0] * 6), "weibull")
    lower, upper = f.mode_bounds(side="two", confidence=0.9, kind="calibrated")
    low, high = f.mode_bounds(side="two", confidence=0.9, kind="likelihood")
    assert 0.0 <= lower < f.mode() < upper
    assert lower <= low
    assert upper == pytest.approx(high, rel=0.5)


@pytest.mark.parametrize(("family", "reading"), [("weibull", "mode"), ("loglogistic", "mode"), ("loglogistic", "mean")])
def test_a_curve_runs_on_to_the_limit_of_sigma(family: str, reading: str) -> None:
    """On the curve of a value the formula holds ever nearer to sigma 1, and the table keeps to it."""
    standard = fit(UNITS.life_data(), family).family.standard
    measure = (ModeMeasure if reading == "mode" else MeanMeasure)(Line(math.log(0.4), 0.4), standard)
    curve = curve_of(measure, 0.3)
    u = np.array([-17.3, -9.1, -3.2, 0.11, 2.4])
    at, exact = curve.points(u), curve.exact.points(u)
    sigma = 0.4 / at.b
    assert (sigma < 1.0).all()
    for a, s, away in zip(at.a, sigma, np.exp(u) / at.b, strict=True):
        mu = -a * s
        value = {
            ("weibull", "mode"): lambda: s * math.log(away),  # noqa: B023 - called at once
            ("loglogistic", "mode"): lambda: s * math.log(away / (1 + s)),  # noqa: B023
            ("loglogistic", "mean"): lambda: math.log(math.pi * s / math.sin(math.pi * away)),  # noqa: B023
        }[family, reading]()
        assert mu + value == pytest.approx(0.3, abs=1e-6)
    for found, wanted in zip(at, exact, strict=True):
        assert found == pytest.approx(wanted, rel=1e-6, abs=1e-6)


def test_the_lowest_mode_with_a_threshold_is_the_lowest_threshold_of_a_falling_density() -> None:
    """NIST/SEMATECH e-Handbook 8.4.1.3; with shape 1 the log-likelihood is -r ln(mean of life - threshold) - r."""
    f = fit(HANDBOOK, "weibull", threshold=True)
    life, r = np.repeat(f.data.lower, f.data.quantity.astype(int)), f.data.failed_count

    def fallen(threshold: float) -> float:
        return -r * math.log((life - threshold).sum() / r) - r - (f.log_likelihood - ROOT**2 / 2)

    wanted = optimize.brentq(fallen, -500.0, 50.0, xtol=1e-12)
    assert f.mode_bounds()[0] == pytest.approx(wanted, rel=1e-9)
    # An age at which the hazard is reached as well: with a shape below 1 it is infinite at the threshold.
    assert f.age_at_hazard_bounds(0.002)[0] == pytest.approx(wanted, rel=1e-9)


def test_the_mode_of_an_exponential_life_with_a_threshold_is_the_first_failure() -> None:
    f = fit(HANDBOOK, "exponential", threshold=True)
    assert f.mode() == f.data.first_failure


def test_automatic_takes_the_likelihood_ratio_where_nothing_can_be_simulated_and_says_why() -> None:
    # Invented: four units, each watched for its last hour only.
    late = LifeData.right_censored([100, 110, 120, 130], [1, 1, 1, 1], entered=[99, 109, 119, 129])
    f = fit(late, "lognormal")
    bound = f.life_question(0.1).bounds(kind="automatic")
    assert (bound.kind, bound.ends(0.1)) == ("likelihood", f.life_bounds(0.1, kind="likelihood"))
    assert f.life_bounds(0.1, kind="automatic") == f.life_bounds(0.1, kind="likelihood")
    (caution,) = (caution for caution in cautions_of_bound(bound, late, "B10 life") if caution.code == "not-calibrated")
    assert "could not be fitted" in caution.text
    assert "choose" not in caution.text
    with pytest.raises(BoundUnavailable, match="could not be fitted"):
        f.life_bounds(0.1, kind="calibrated")


def test_a_calibration_without_an_end_is_an_answer_that_nothing_stands_in_for() -> None:
    def end(kind: str, *_: float) -> Floats:
        raise BoundWithoutEnd(kind)

    question = Question(lambda: np.zeros(1), end, np.exp, lambda _: ("calibrated", "likelihood"))
    with pytest.raises(BoundWithoutEnd, match="calibrated"):
        question.bounds()


def test_a_reading_that_is_0_or_infinite_for_all_that_the_units_allow_is_its_own_bound() -> None:
    spread = fit(LifeData.right_censored(10.0 ** np.arange(-2, 8), np.ones(10)), "frechet")
    assert spread.mean_life_bounds(side="two", kind="likelihood") == (math.inf, math.inf)
    with pytest.raises(BoundUnavailable, match="entered late no bound"):
        fit(LATE.life_data(), "frechet").age_at_hazard_bounds(10.0, kind="likelihood")
    falling = fit(LifeData.right_censored(10.0 ** np.arange(-2, 8), np.ones(10)), "weibull")
    assert falling.mode_bounds(side="two", kind="likelihood") == (0.0, 0.0)
    assert falling.age_at_hazard_bounds(1e-3, side="two", kind="likelihood") == (0.0, 0.0)


@pytest.mark.parametrize(
    ("units", "family"),
    [("aml", "gamma"), ("aml", "birnbaum_saunders"), ("syn06_ties_quantities", "lognormal_threshold")],
)
@pytest.mark.parametrize("reading", ["mean", "conditional"])
def test_likelihood_bounds_with_a_further_parameter(units: str, family: str, reading: str) -> None:
    name = family.removesuffix("_threshold")
    f = fit(units_of(units).life_data(), name, threshold=name != family)
    naive = Naive(family, units_of(units), f.parameters)
    given, age = 1.4 * f.data.first_failure, 0.8 * f.data.last_observation
    bounds = (
        f.mean_life_bounds
        if reading == "mean"
        else lambda **how: f.conditional_reliability_bounds(age, given=given, **how)
    )
    for place, end in enumerate(bounds(confidence=0.90, side="two", kind="likelihood")):

        def loss(form: np.ndarray, end: float = float(end)) -> float:
            threshold = naive._threshold(form)
            unscaled = FORMS[family](form)(1.0, 0.0)
            if reading == "mean":
                scale = (end - threshold) / float(unscaled.mean())
            else:

                def gap(log_scale: float) -> float:
                    at = (np.array([age, given]) - threshold) / math.exp(log_scale)
                    return float(np.diff(unscaled.logsf(at[::-1]))[0]) - math.log(end)

                around = math.log(naive.scale)
                if gap(around - 3) * gap(around + 3) > 0:
                    return 1e30
                scale = math.exp(optimize.brentq(gap, around - 3, around + 3, xtol=1e-13))
            return min(1e30, -naive.value(form, scale)) if scale > 0 else 1e30

        reached = climbed(loss, naive.form)
        assert reached == pytest.approx(f.log_likelihood - ROOT**2 / 2, abs=2e-6), place
