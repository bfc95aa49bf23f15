"""Likelihood-ratio bounds with a further parameter, against maximisations by scipy of a likelihood by scipy.stats."""

from __future__ import annotations

from functools import cache

import numpy as np
import pytest
from scipy.special import ndtri

from reliability_app.engine import Fit, fit
from reliability_app.engine.errors import BoundUnavailable, UnknownName
from tests.engine.naive_shaped import Naive, climbed
from tests.reference.reference_data import Units, interval_units, units_of

# Invented lives of couplings with a failure-free start, some stopped.
COUPLINGS = interval_units(
    [520, 533, 548, 561, 580, 596, 623, 642, 690, 731, 804, 912, 700, 1000],
    [520, 533, 548, 561, 580, 596, 623, 642, 690, 731, 804, 912, np.inf, np.inf],
    [1, 1, 1, 2, 1, 1, 1, 1, 1, 1, 1, 1, 3, 2],
)
SETS: dict[str, Units] = {name: units_of(name) for name in ("aml", "syn06_ties_quantities", "syn14_left_truncated")}
SETS["inspections"] = units_of("syn07a_interval_equal")
SETS["couplings"] = COUPLINGS
CASES = [
    ("aml", "gamma"),
    ("aml", "inverse_gaussian"),
    ("aml", "birnbaum_saunders"),
    ("aml", "generalized_gamma"),
    ("inspections", "gamma"),
    ("inspections", "inverse_gaussian"),
    ("inspections", "birnbaum_saunders"),
    ("syn06_ties_quantities", "generalized_gamma"),
    ("syn06_ties_quantities", "weibull_threshold"),
    ("syn06_ties_quantities", "lognormal_threshold"),
    ("syn14_left_truncated", "gamma"),
    ("syn14_left_truncated", "birnbaum_saunders"),
    ("inspections", "lognormal_threshold"),
    ("couplings", "gamma"),
    ("couplings", "inverse_gaussian"),
]
# Every family once, late entry and inspections among them: a hazard and a reliability are bounded as a life is.
FAMILIES_ONCE = [
    ("aml", "gamma"),
    ("inspections", "inverse_gaussian"),
    ("syn14_left_truncated", "birnbaum_saunders"),
    ("syn06_ties_quantities", "generalized_gamma"),
    ("syn06_ties_quantities", "weibull_threshold"),
    ("inspections", "lognormal_threshold"),
]
ROOT = float(ndtri(0.95))
SIDES = ("lower", "upper")


@cache
def fitted(units: str, family: str) -> Fit:
    name = family.removesuffix("_threshold")
    return fit(SETS[units].life_data(), name, threshold=name != family)


@cache
def naive(units: str, family: str) -> Naive:
    return Naive(family, SETS[units], fitted(units, family).parameters)


def ages_of(units: str) -> tuple[float, float]:
    data = SETS[units].life_data()
    return 1.4 * data.first_failure, 0.8 * data.last_observation


@pytest.mark.parametrize(("units", "family"), CASES)
def test_the_naive_likelihood_agrees(units: str, family: str) -> None:
    other = naive(units, family)
    assert other.value(other.form, other.scale) == pytest.approx(fitted(units, family).log_likelihood, abs=1e-7)


# Two millionths of a log-likelihood are some millionths of the width of an interval.
ALLOWED = 2e-6


def fallen_to(f: Fit) -> float:
    """What the log-likelihood is at the end of a one-sided 95 % bound."""
    return f.log_likelihood - 0.5 * ROOT**2


@pytest.mark.parametrize("side", ["lower", "upper"])
@pytest.mark.parametrize(("units", "family"), CASES)
def test_at_the_bound_of_a_life_the_likelihood_has_fallen_by_what_is_allowed(
    units: str, family: str, side: str
) -> None:
    f, other = fitted(units, family), naive(units, family)
    for fraction in (0.1, 0.5):
        end = f.life_bounds(fraction, confidence=0.95, side=side)[SIDES.index(side)]
        assert (end < f.life(fraction)) is (side == "lower")
        assert other.highest_with("life", fraction, end) == pytest.approx(fallen_to(f), abs=ALLOWED)


@pytest.mark.parametrize("side", ["lower", "upper"])
@pytest.mark.parametrize(("units", "family"), FAMILIES_ONCE)
def test_at_the_bound_of_a_reliability_it_has(units: str, family: str, side: str) -> None:
    f, other = fitted(units, family), naive(units, family)
    age = ages_of(units)[1]
    end = f.reliability_bounds(age, confidence=0.95, side=side)[SIDES.index(side)]
    assert (end < f.reliability(age)) is (side == "lower")
    assert other.highest_with("reliability", age, end) == pytest.approx(fallen_to(f), abs=ALLOWED)


@pytest.mark.parametrize("side", ["lower", "upper"])
@pytest.mark.parametrize(("units", "family"), FAMILIES_ONCE)
def test_at_the_bound_of_a_hazard_it_has(units: str, family: str, side: str) -> None:
    f, other = fitted(units, family), naive(units, family)
    age = ages_of(units)[0]
    end = f.hazard_bounds(age, confidence=0.95, side=side)[SIDES.index(side)]
    assert (end < f.hazard(age)) is (side == "lower")
    assert other.highest_with("hazard", age, end) == pytest.approx(fallen_to(f), abs=ALLOWED)


@pytest.mark.parametrize(("units", "family"), CASES)
def test_at_the_bound_of_a_parameter_it_has(units: str, family: str) -> None:
    f, other = fitted(units, family), naive(units, family)
    for name, value in f.parameters.items():
        for place, side in enumerate(SIDES):
            end = f.parameter_bounds(name, confidence=0.95, side=side)[place]
            assert (end < value) is (side == "lower")
            profile = profile_at(other, name, end)
            assert profile == pytest.approx(fallen_to(f), abs=ALLOWED), (name, side)


def profile_at(other: Naive, name: str, value: float) -> float:
    """The highest log-likelihood with a parameter at a value."""
    if name == "threshold":
        return other.highest_at_form(1, np.log(other.first - value))
    if name == "lambda":
        return other.highest_at_form(1, value)
    if name == "shape" and other.family == "inverse_gaussian":
        # Neither the form nor the scale of its own: the mean is shape/form.
        return climbed(lambda form: -other.value(form, value / np.exp(form[0])), other.form)
    if name in ("shape", "sigma"):
        return other.highest_at_form(0, np.log(value))
    return other.highest_at_scale(np.exp(value) if name == "mu" else value)


ASKED = [("aml", "gamma"), ("aml", "generalized_gamma"), ("inspections", "lognormal_threshold")]


@pytest.mark.parametrize("kind", ["wald", "likelihood"])
@pytest.mark.parametrize(("units", "family"), ASKED)
def test_bounds_nest_and_a_one_sided_bound_is_an_end_of_the_two_sided(units: str, family: str, kind: str) -> None:
    f, age = fitted(units, family), ages_of(units)[0]
    for bounds, asked in (
        (f.life_bounds, 0.1),
        (f.reliability_bounds, age),
        (f.hazard_bounds, age),
        *((f.parameter_bounds, name) for name in f.parameters),
    ):
        low, high = bounds(asked, confidence=0.90, side="two", kind=kind)
        lowest, highest = bounds(asked, confidence=0.98, side="two", kind=kind)
        assert lowest < low < high < highest
        assert bounds(asked, confidence=0.95, side="lower", kind=kind) == (pytest.approx(low, rel=1e-9), None)
        assert bounds(asked, confidence=0.95, side="upper", kind=kind) == (None, pytest.approx(high, rel=1e-9))


@pytest.mark.parametrize(("units", "family"), ASKED)
def test_bounds_of_a_life_and_of_the_reliability_at_it_invert_each_other(units: str, family: str) -> None:
    f = fitted(units, family)
    for side, end in (("lower", 0), ("upper", 1)):
        for fraction in (0.05, 0.4):
            age = f.life_bounds(fraction, side=side)[end]
            assert f.reliability_bounds(age, side=side)[end] == pytest.approx(1 - fraction, rel=1e-6)


@pytest.mark.parametrize(("units", "family"), ASKED)
def test_automatic_is_the_likelihood_ratio_and_other_kinds_are_refused_by_name(units: str, family: str) -> None:
    f = fitted(units, family)
    assert f.life_question(0.1).bound_used("automatic") == "likelihood"
    assert f.hazard_question(900.0).bound_used("automatic") == "likelihood"
    assert f.life_bounds(0.1, kind="automatic") == f.life_bounds(0.1, kind="likelihood")
    for kind in ("exact", "calibrated"):
        for bounds, asked in ((f.life_bounds, 0.1), (f.reliability_bounds, 50.0), (f.parameter_bounds, "threshold")):
            if asked in ("threshold",) and asked not in f.parameters:
                continue
            with pytest.raises(BoundUnavailable, match=f"{kind!r} are not known for the {f.family.title} family"):
                bounds(asked, kind=kind)
    with pytest.raises(UnknownName):
        f.life_bounds(0.1, kind="bootstrap")
    with pytest.raises(UnknownName, match="no parameter called 'beta'"):
        f.parameter_bounds("beta")
