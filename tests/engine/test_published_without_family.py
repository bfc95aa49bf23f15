"""Published Kaplan-Meier estimates, median ranks, adjusted ranks and exact factors, each with its source."""

from __future__ import annotations

import math

import numpy as np
import pytest

from reliability_app.engine import LifeData, fit, kaplan_meier, plotting_positions
from reliability_app.engine.empirical import benard_rank, median_rank
from tests.reference.reference_data import published, right_censored_units


def complete(lives: list[float]) -> LifeData:
    return right_censored_units(lives, np.ones(len(lives))).life_data()


def test_kaplan_meier_of_the_nist_handbook() -> None:
    """NIST/SEMATECH e-Handbook, 8.2.1.5; Greenwood's errors recomputed."""
    item = published("nist-8.2.1.5-km")
    columns = item["data"]
    life = [*columns["failures"], *columns["withdrawn"], 200]
    flags = [1] * len(columns["failures"]) + [0] * (len(columns["withdrawn"]) + 1)
    quantity = [1] * (len(life) - 1) + [columns["censored_at_200"]]
    steps = kaplan_meier(right_censored_units(life, flags, quantity).life_data())
    assert list(steps.age) == columns["failures"]
    at_risk = np.array(item["expected"]["at_risk"])
    assert steps.survival == pytest.approx(np.cumprod((at_risk - 1) / at_risk), rel=1e-12)
    assert steps.survival == pytest.approx(item["recomputed"]["R"], abs=1e-10)
    assert steps.standard_error == pytest.approx(item["recomputed"]["greenwood_se"], abs=1e-8)


def test_kaplan_meier_of_remission_times() -> None:
    """NAG Library manual, routine g12aa: estimate and Greenwood's standard deviation, three decimals."""
    item = published("nag-g12aa-km")
    columns = item["data"]
    steps = kaplan_meier(right_censored_units(columns["time"], columns["status"]).life_data())
    assert list(steps.age) == item["expected"]["time"]
    assert steps.survival == pytest.approx(item["expected"]["S"], abs=5e-4)
    assert steps.standard_error == pytest.approx(item["expected"]["sd"], abs=5e-4)
    assert steps.survival == pytest.approx(item["recomputed"]["S"], abs=5e-7)
    assert steps.standard_error == pytest.approx(item["recomputed"]["sd"], abs=5e-7)


@pytest.mark.parametrize("group", ["maintained", "nonmaintained"])
def test_kaplan_meier_of_leukaemia_patients(group: str) -> None:
    """Miller (1981), as printed by R survival's test doaml."""
    item = published("aml-km-log-limits")
    columns = item["data"][group]
    steps = kaplan_meier(right_censored_units(columns["time"], columns["status"]).life_data())
    survival, error = (np.array(item["expected"][f"{group}_{name}"]) for name in ("S", "se"))
    assert steps.survival == pytest.approx(survival, abs=5e-4)
    assert steps.standard_error[: error.size] == pytest.approx(error, abs=5e-5)


def test_benard_positions_of_the_nist_handbook() -> None:
    """NIST/SEMATECH e-Handbook, 8.2.2.1: 100(i - 0.3)/(n + 0.4); the table is from memory and truncates."""
    item = published("nist-8.2.2.1-plot-positions")
    columns = item["data"]
    life, running = columns["times"], columns["n"] - len(columns["times"])
    data = right_censored_units([*life, 500], [*([1] * len(life)), 0], [*([1] * len(life)), running]).life_data()
    points = plotting_positions(data, method="benard")
    assert list(points.age) == life
    assert points.adjusted_rank == pytest.approx(columns["i"], rel=1e-12)
    assert 100 * points.fraction == pytest.approx(item["expected"]["percent"], abs=0.05)
    assert 100 * points.fraction == pytest.approx(item["recomputed"]["percent"], abs=5.001e-4)


@pytest.mark.parametrize("units", [5, 10])
def test_exact_median_ranks(units: int) -> None:
    """Johnson (1964), median rank tables, from memory: percent to two decimals."""
    item = published("median-ranks-exact")
    orders = np.arange(1, units + 1)
    ranks = np.array([median_rank(order, units) for order in orders])
    assert 100 * ranks == pytest.approx(item["expected"][f"n{units}"], abs=5e-3)
    points = plotting_positions(complete([float(order) for order in orders]), method="median_rank")
    assert points.fraction == pytest.approx(ranks, rel=1e-14)


def test_benard_ranks() -> None:
    item = published("median-ranks-exact")
    ranks = [100 * float(benard_rank(order, 10)) for order in range(1, 11)]
    assert ranks == pytest.approx(item["recomputed"]["benard_n10"], abs=5e-3)


def test_first_median_rank_has_a_closed_form() -> None:
    """The median of beta(1, n) is 1 - 2^(-1/n)."""
    for units in (1, 2, 7, 50, 1000):
        assert median_rank(1, units) == pytest.approx(1 - 2 ** (-1 / units), rel=1e-12)


def test_johnson_adjusted_ranks() -> None:
    """Abernethy, The New Weibull Handbook, from memory: 5 failures among 8, three suspensions."""
    item = published("johnson-adjusted-ranks")
    data = right_censored_units(item["data"]["time"], item["data"]["status"]).life_data()
    points = plotting_positions(data, method="benard")
    assert points.adjusted_rank == pytest.approx(item["expected"]["adjusted_rank"], abs=1e-3)
    assert points.adjusted_rank == pytest.approx(item["recomputed"]["adjusted_rank"], rel=1e-12)
    assert 100 * points.fraction == pytest.approx(item["recomputed"]["benard_percent"], abs=5.001e-3)
    exact = plotting_positions(data, method="median_rank")
    assert 100 * exact.fraction == pytest.approx(item["recomputed"]["exact_beta_percent"], abs=5.001e-3)


def lives_with_mean_0_and_deviation_1(count: int) -> LifeData:
    """Complete lives whose logarithms have mean 0 and standard deviation (n - 1) 1."""
    logs = np.linspace(-1.0, 1.0, count)
    return complete(list(np.exp(logs / logs.std(ddof=1))))


def lower_factor(count: int, fraction: float, confidence: float) -> float:
    """k of the exact lower bound exp(mean - k s) for the life by which `fraction` has failed."""
    f = fit(lives_with_mean_0_and_deviation_1(count), "lognormal")
    lower, upper = f.life_bounds(fraction, confidence=confidence, side="lower", kind="exact")
    assert lower is not None
    assert upper is None
    return -math.log(lower)


@pytest.mark.parametrize(("column", "confidence"), [("gamma90", 0.90), ("gamma95", 0.95)])
def test_exact_factors_of_lower_bounds_on_b10(column: str, confidence: float) -> None:
    """Odeh and Owen (1980), Hahn and Meeker (1991), from memory: k(n, 0.90, confidence)."""
    item = published("k-table-B10")
    got = [lower_factor(count, 0.10, confidence) for count in item["data"]["n"]]
    assert got == pytest.approx(item["expected"][column], abs=1e-3)
    assert got == pytest.approx(item["recomputed"][column], abs=5.001e-5)


def test_exact_factors_of_a_help_page() -> None:
    """Help page of tolIntNormK in the R package EnvStats; the second is USEPA 2009, Example 17-3."""
    item = published("envstats-k-one-sided")
    for case, k in zip(item["data"]["cases"], item["expected"]["k"], strict=True):
        assert lower_factor(case["n"], 1 - case["p"], case["gamma"]) == pytest.approx(k, abs=5.01e-7)


def test_exact_factor_of_the_nist_handbook() -> None:
    """NIST/SEMATECH e-Handbook, 7.2.6.3: n = 43, 90 % coverage with 99 % confidence."""
    item = published("nist-7.2.6.3-k-factors")
    k = lower_factor(item["data"]["n"], 1 - item["data"]["p"], item["data"]["gamma"])
    assert k == pytest.approx(item["expected"]["k1_exact"], abs=5e-4)
    assert k == pytest.approx(item["recomputed"]["k1_exact"], abs=5e-9)


def test_exact_limit_of_an_upper_percentile_and_its_reciprocal_twin() -> None:
    """USEPA 2009 Unified Guidance, Example 17-3: upper 95 % limit of the 95th percentile of eight values.

    For the reciprocals the lower limit of the 5th percentile is the reciprocal of that.
    """
    item = published("epa-17-3-lognormal-quantile-limit")
    values, expected = item["data"]["values"], item["expected"]
    f = fit(complete(values), "lognormal")
    assert f.parameters["mu"] == pytest.approx(expected["meanlog"], abs=1e-7)
    assert f.parameters["sigma"] * math.sqrt(8 / 7) == pytest.approx(expected["sdlog"], abs=1e-7)
    asked = {"confidence": 0.95, "kind": "exact"}
    assert f.life_bounds(0.95, side="upper", **asked) == (None, pytest.approx(expected["upper95"], abs=5e-5))
    recomputed = item["recomputed"]["upper95"]
    assert f.life_bounds(0.95, side="upper", **asked) == (None, pytest.approx(recomputed, abs=5e-8))
    twin = fit(complete([1 / value for value in values]), "lognormal")
    assert twin.life_bounds(0.05, side="lower", **asked) == (pytest.approx(1 / recomputed, rel=1e-9), None)


@pytest.mark.parametrize(
    "lives", [[246.4, 304.4], [100, 110], [100, 150], [100, 110, 120], [246, 300, 304], [10, 1e4, 3]]
)
def test_exact_reliability_bounds_invert_exact_life_bounds_far_from_the_data_too(lives: list[float]) -> None:
    # Invented lives of two or three units, for which the library's distribution function gives up in places.
    found = fit(LifeData.right_censored(lives, np.ones(len(lives))), "lognormal")
    for fraction in (0.001, 0.1, 0.5, 0.9):
        life = found.life_bounds(fraction, confidence=0.95, kind="exact")[0]
        share = found.reliability_bounds(life, confidence=0.95, kind="exact")[0]
        assert share == pytest.approx(1.0 - fraction, rel=1e-6)
    ages = np.geomspace(min(lives) / 1e4, max(lives) * 1e4, 60)
    lower, upper = found.reliability_bounds(ages, side="two", kind="exact")
    assert (np.diff(lower) <= 1e-12).all()
    assert (lower <= upper).all()
