"""The engine's likelihood-ratio and Wald bounds against a naive likelihood that shares no formula with it.

Small sets: complete, time-censored, with removals, with quantities, with intervals, with late entry.
"""

from __future__ import annotations

from functools import cache

import pytest

from reliability_app.engine import Fit, fit
from tests.engine.naive_likelihood import (
    STANDARD,
    NaiveFit,
    Reading,
    hazard_reading,
    life_reading,
    parameter_reading,
    reliability_reading,
)
from tests.reference.published_data import nist_8413
from tests.reference.reference_data import Units, reference_set, units_of

SETS = (
    "syn01_complete_n5",
    "syn03_n20_cens60",
    "syn06_ties_quantities",
    "syn07a_interval_equal",
    "syn13_ranks_small",
    "syn14_left_truncated",
    "nist",
)
# The naive computation is slow: every set for the three usual families, one of each kind for the others.
USUAL = ("lognormal", "weibull", "exponential")
ONE_OF_EACH = ("syn03_n20_cens60", "syn07a_interval_equal", "syn14_left_truncated")
CASES = [(name, family) for name in SETS for family in STANDARD if family in USUAL or name in ONE_OF_EACH]
FRACTIONS = (0.001, 0.05, 0.25, 0.80)
BOUND = 1e-7  # relative; the naive computation reproduces R's limits to 1e-11


def units(name: str) -> Units:
    # NIST/SEMATECH e-Handbook, 8.4.1.3
    return nist_8413() if name == "nist" else units_of(name)


def ages(name: str) -> tuple[float, ...]:
    """Before the first failure, amid them, and beyond the last."""
    lives = units(name).lower
    seen = lives[lives > 0]
    return float(0.5 * seen.min()), float(seen.mean()), float(1.5 * seen.max())


@cache
def naive(name: str, family: str) -> NaiveFit:
    return NaiveFit(units(name), family)


@cache
def fitted(name: str, family: str) -> Fit:
    return fit(units(name).life_data(), family)


def assert_same_bounds(
    got: tuple[float | None, float | None], name: str, family: str, reading: Reading, kind: str = "likelihood"
) -> None:
    independent = naive(name, family)
    bounds = independent.likelihood_bounds if kind == "likelihood" else independent.wald_bounds
    low, high = bounds(reading, 0.95, "two")
    # A life itself may lie anywhere about 0: there the bound is held to a part of its width.
    near = BOUND * (high - low) if reading.shown is float else 0.0
    assert got == pytest.approx((low, high), rel=BOUND, abs=near)


@pytest.mark.parametrize("family", ["lognormal", "weibull", "exponential", "loglogistic"])
def test_the_naive_likelihood_itself_agrees_with_r(family: str) -> None:
    """Its limits of a life against those computed in R, so that it may serve as a judge."""
    limits = reference_set("syn03_n20_cens60")["likelihood_limits"][family]
    judge = naive("syn03_n20_cens60", family)
    reading, key = (
        (parameter_reading("mean"), "mean") if family == "exponential" else (life_reading(family, 0.1), "B10")
    )
    assert judge.likelihood_bounds(reading, 0.95, "two") == pytest.approx(limits[key]["95"], rel=1e-10)
    assert judge.likelihood_bounds(reading, 0.90, "two") == pytest.approx(limits[key]["90"], rel=1e-10)


@pytest.mark.parametrize(("name", "family"), CASES)
def test_lives(name: str, family: str) -> None:
    f = fitted(name, family)
    for fraction in FRACTIONS:
        got = f.life_bounds(fraction, confidence=0.95, side="two", kind="likelihood")
        assert_same_bounds(got, name, family, life_reading(family, fraction))


@pytest.mark.parametrize(("name", "family"), CASES)
def test_reliabilities(name: str, family: str) -> None:
    f = fitted(name, family)
    for age in ages(name):
        got = f.reliability_bounds(age, confidence=0.95, side="two", kind="likelihood")
        assert_same_bounds(got, name, family, reliability_reading(family, age))


@pytest.mark.parametrize(("name", "family"), CASES)
def test_hazards(name: str, family: str) -> None:
    f = fitted(name, family)
    for age in ages(name):
        got = f.hazard_bounds(age, confidence=0.95, side="two", kind="likelihood")
        assert_same_bounds(got, name, family, hazard_reading(family, age))


@pytest.mark.parametrize(("name", "family"), CASES)
def test_wald_bounds_of_hazards_by_a_numeric_delta_method(name: str, family: str) -> None:
    """On ln h; gradient and information matrix by differences."""
    f = fitted(name, family)
    for age in ages(name):
        got = f.hazard_bounds(age, confidence=0.95, side="two", kind="wald")
        reading = hazard_reading(family, age)
        expected = naive(name, family).wald_bounds(reading, 0.95, "two")
        assert got == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize(("name", "family"), CASES)
def test_parameters(name: str, family: str) -> None:
    f = fitted(name, family)
    for parameter in f.parameters:
        got = f.parameter_bounds(parameter, confidence=0.95, side="two", kind="likelihood")
        assert_same_bounds(got, name, family, parameter_reading(parameter))


@pytest.mark.parametrize("side", ["lower", "upper"])
@pytest.mark.parametrize("family", ["lognormal", "weibull", "exponential"])
def test_one_sided_bounds_hold_their_confidence_in_one_tail(family: str, side: str) -> None:
    name = "syn13_ranks_small"
    f, judge, age = fitted(name, family), naive(name, family), 400.0
    end = 0 if side == "lower" else 1
    asked = {"confidence": 0.9, "side": side, "kind": "likelihood"}
    for got, reading in (
        (f.life_bounds(0.10, **asked), life_reading(family, 0.10)),
        (f.reliability_bounds(age, **asked), reliability_reading(family, age)),
        (f.hazard_bounds(age, **asked), hazard_reading(family, age)),
    ):
        assert got[1 - end] is None
        assert got[end] == pytest.approx(judge.likelihood_bounds(reading, 0.9, side)[end], rel=BOUND)
