"""Goodness of fit where units are inspected at common looks, and p-values where they came late."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import stats

from reliability_app.engine import LifeData, fit
from reliability_app.engine.goodness import goodness_of, statistics_of
from reliability_app.engine.goodness_at_looks import common_looks
from reliability_app.engine.goodness_one_by_one import scored_looks
from reliability_app.engine.life_scale import LOG_LIFE
from tests.reference.reference_data import units_of

# Invented: 4, 9, 12, 8 units found failed at four looks; of the others 3 left at the second, 5 at the last.
INSPECTED = LifeData.from_intervals(
    [0, 100, 200, 300, 200, 400], [100, 200, 300, 400, np.inf, np.inf], quantity=[4, 9, 12, 8, 3, 5]
)
LOOKS = np.array([100.0, 200, 300, 400])


def test_the_statistics_are_the_sums_over_the_looks() -> None:
    found = fit(INSPECTED, "lognormal")
    # Life table by hand: 41 units, of which 4 fail at the first look, and so on.
    left = np.cumprod(1 - np.array([4 / 41, 9 / 37, 12 / 25, 8 / 13]))
    share = stats.norm.cdf((np.log(LOOKS) - found.parameters["mu"]) / found.parameters["sigma"])
    parts = (1 - left - share) ** 2 * np.diff(share, prepend=0.0) / (share * (1 - share))
    goodness = goodness_of(found, repeats=99)
    assert goodness.anderson_darling.statistic == pytest.approx(41 * parts.sum(), rel=1e-9)
    weights, x, z = np.array([4, 9, 12, 8]), np.log(LOOKS), stats.norm.ppf(1 - left)
    covariance = np.cov(x, z, aweights=weights)
    straight = covariance[0, 1] / np.sqrt(covariance[0, 0] * covariance[1, 1])
    assert goodness.correlation.statistic == pytest.approx(straight, rel=1e-9)
    assert 0 < goodness.anderson_darling.p_value <= 1
    assert goodness.repeats == 99


def test_scores_of_a_fit_give_the_same_statistics() -> None:
    found = fit(INSPECTED, "lognormal")
    looks = common_looks(INSPECTED, LOG_LIFE)
    distance, straightness = scored_looks(found, looks)
    assert (distance[0], straightness[0]) == pytest.approx(statistics_of(found, looks), rel=1e-9)


def test_p_values_are_uniform_when_the_family_is_right() -> None:
    generator, p_values = np.random.default_rng(4), []
    ends = np.concatenate([[0.0], LOOKS, [np.inf]])
    for _ in range(120):
        place = np.searchsorted(ends, 250 * generator.weibull(2.0, 40))
        found = fit(LifeData.from_intervals(ends[place - 1], ends[place]), "weibull")
        p_values.append(goodness_of(found, repeats=59).anderson_darling.p_value)
    # In lumps, but fine ones: four standard errors of the shares.
    for level in (0.1, 0.3, 0.5):
        error = np.sqrt(level * (1 - level) / 120)
        assert np.mean(np.array(p_values) <= level) == pytest.approx(level, abs=4 * error)


def test_a_family_with_a_further_parameter_is_judged_by_the_same_looks() -> None:
    goodness = goodness_of(fit(INSPECTED, "gamma"), repeats=5)
    assert goodness.anderson_darling.p_value is not None
    assert goodness.repeats > 0


def test_a_wrong_family_is_found_out() -> None:
    ages = np.arange(100.0, 1100.0, 100.0)
    found = fit(LifeData.from_intervals(ages, ages + 100, quantity=[1, 2, 60, 70, 80, 70, 60, 2, 1, 1]), "exponential")
    assert goodness_of(found, repeats=199).anderson_darling.p_value < 0.01


def test_units_without_common_looks_are_refused_by_name() -> None:
    differing = LifeData.from_intervals([100, 150, 180, 220, 300], [200, 250, 280, 300, np.inf])
    goodness = goodness_of(fit(differing, "weibull"))
    assert (goodness.anderson_darling, goodness.correlation, goodness.repeats) == (None, None, 0)
    assert "one schedule of inspections" in goodness.reason


def test_late_entry_has_p_values() -> None:
    goodness = goodness_of(fit(units_of("syn14_left_truncated").life_data(), "weibull"), repeats=99)
    assert 0 < goodness.anderson_darling.p_value <= 1
    assert 0 < goodness.correlation.p_value <= 1
    assert (goodness.repeats, goodness.reason) == (99, "")
