"""Kaplan-Meier and plotting positions of the computed sets: R's survfit, and ranks counted by hand.

Each file tests/reference/<set>.json names its source. The adjusted ranks were checked on syn13_ranks_small by
listing all orderings of the failures that are consistent with the running units.
"""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import kaplan_meier, plotting_positions
from reliability_app.engine.empirical import benard_rank, median_rank
from tests.reference.reference_data import SET_NAMES, figures, reference_set, units_of

WITH_STEPS = [name for name in SET_NAMES if "kaplan_meier" in reference_set(name)]
WITH_RANKS = [name for name in SET_NAMES if "plotting_positions" in reference_set(name)]


def test_the_sets_are_there() -> None:
    assert len(WITH_STEPS) == 15
    assert len(WITH_RANKS) == 12


@pytest.mark.parametrize("confidence", ["90", "95"])
@pytest.mark.parametrize("name", WITH_STEPS)
def test_kaplan_meier_steps_with_greenwood_errors(name: str, confidence: str) -> None:
    """Limits on the log(-log S) scale; where S is 0 neither error nor limits exist."""
    expected = reference_set(name)["kaplan_meier"]
    steps = kaplan_meier(units_of(name).life_data(), confidence=int(confidence) / 100)
    ages = np.array(expected["age"], dtype=float)
    rows = np.searchsorted(steps.age, ages)
    assert np.array_equal(steps.age[rows], ages)
    if "subset" not in expected:
        assert len(steps.age) == len(ages)
    wanted = {"survival": expected["survival"], "standard_error": expected["standard_error"]}
    wanted["lower"], wanted["upper"] = expected[confidence]
    for column, values in wanted.items():
        got = np.asarray(getattr(steps, column))[rows]
        assert got == pytest.approx(figures(values), rel=1e-8, nan_ok=True), column


@pytest.mark.parametrize("name", WITH_RANKS)
def test_adjusted_ranks_and_median_ranks(name: str) -> None:
    expected, data = reference_set(name)["plotting_positions"], units_of(name).life_data()
    for method, column in (("median_rank", "median_rank"), ("benard", "benard")):
        points = plotting_positions(data, method=method)
        assert list(points.age) == expected["age"]
        assert points.adjusted_rank == pytest.approx(expected["adjusted_rank"], rel=1e-8)
        assert points.fraction == pytest.approx(expected[column], rel=1e-8)
    ranks = np.array(expected["adjusted_rank"], dtype=float)
    count = int(units_of(name).quantity.sum())
    assert median_rank(ranks, count) == pytest.approx(expected["median_rank"], rel=1e-8)
    assert benard_rank(ranks, count) == pytest.approx(expected["benard"], rel=1e-8)


@pytest.mark.parametrize("name", WITH_STEPS)
def test_midpoints_of_the_kaplan_meier_steps(name: str) -> None:
    """Half way between the failure probability before and after each step of R's estimate."""
    expected = reference_set(name)["kaplan_meier"]
    if "subset" in expected:
        pytest.skip("the file keeps only some of the steps, so the one before each is not known")
    after = 1 - figures(expected["survival"])
    before = np.concatenate([[0.0], after[:-1]])
    points = plotting_positions(units_of(name).life_data(), method="kaplan_meier_midpoint")
    assert list(points.age) == expected["age"]
    assert points.fraction == pytest.approx((before + after) / 2, rel=1e-8)


@pytest.mark.parametrize("name", ["ifluid", "syn01_complete_n5", "syn05a_single_failure_n1"])
def test_midpoints_of_a_complete_set_are_those_of_its_ranks(name: str) -> None:
    """(i - 0.5)/n."""
    expected = reference_set(name)["plotting_positions"]["midpoint"]
    points = plotting_positions(units_of(name).life_data(), method="kaplan_meier_midpoint")
    assert points.fraction == pytest.approx(expected, rel=1e-8)
