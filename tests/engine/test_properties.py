"""What must hold of every fit and bound whatever the units: scaling, order, nesting, sides, limits of censoring.

The units are drawn by hypothesis (the same ones in every run): failed, running, found failed between two ages or by a
first look, and watched from an age on, with quantities.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import pytest
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from reliability_app.engine import FAMILY_NAMES, Fit, LifeData, fit
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.engine.families import LOCATION_SCALE_NAMES
from tests.engine.naive_likelihood import NaiveFit
from tests.engine.naive_shaped import FORMS, log_likelihood
from tests.reference.reference_data import Units, interval_units

Array = NDArray[np.float64]
SHAPED_NAMES = tuple(name for name in FAMILY_NAMES if name not in LOCATION_SCALE_NAMES)
WITH_THRESHOLD = ("weibull", "lognormal", "exponential", "loglogistic")
ALL_FORMS = [*((name, False) for name in FAMILY_NAMES), *((name, True) for name in WITH_THRESHOLD)]
SLOW_FORMS = [*((name, False) for name in SHAPED_NAMES), *((name, True) for name in WITH_THRESHOLD)]
every_form = pytest.mark.parametrize(("name", "threshold"), ALL_FORMS)
CHECKS = [HealthCheck.too_slow, HealthCheck.data_too_large, HealthCheck.function_scoped_fixture]


def few(examples: int) -> settings:
    """The fixed profile: the same few examples in every run."""
    return settings(
        max_examples=examples,
        derandomize=True,
        deadline=None,
        database=None,
        phases=[Phase.generate],  # a failing sample is told as it is: making it smaller takes minutes
        suppress_health_check=CHECKS,
    )


@dataclass(frozen=True)
class Rows:
    """Columns of a sample."""

    lower: Array
    upper: Array
    quantity: Array
    entered: Array

    def fit(self, name: str, *, threshold: bool = False) -> Fit:
        data = LifeData.from_intervals(self.lower, self.upper, quantity=self.quantity, entered=self.entered)
        return fit(data, name, threshold=threshold)

    def scaled(self, factor: float) -> Rows:
        return Rows(factor * self.lower, factor * self.upper, self.quantity, factor * self.entered)

    def taken(self, rows: Array) -> Rows:
        return Rows(self.lower[rows], self.upper[rows], self.quantity[rows], self.entered[rows])


KINDS = ("failed", "failed", "failed", "running", "between", "first look", "late failed", "late running")


def rows_of(seed: int) -> Rows:
    """Draw 6 to 14 rows of every kind."""
    draw = np.random.default_rng(seed)
    count = int(draw.integers(3, 12))
    units = zip(draw.integers(1, 400, count), draw.choice(KINDS, count), draw.integers(1, 5, count), strict=True)
    columns = []
    for age, kind, quantity in units:
        lower, upper, entered = 10.0 + age, 10.0 + age, 0.0
        if kind.endswith("running"):
            upper = np.inf
        if kind == "between":
            upper = 1.4 * lower
        if kind == "first look":
            lower = 0.0
        if kind.startswith("late"):
            entered = 0.4 * lower
        columns.append((lower, upper, float(quantity), entered))
    # Three plain failures, so that an estimate exists in most families.
    columns += [(100.0, 100.0, 1.0, 0.0), (170.0, 170.0, 1.0, 0.0), (240.0, 240.0, 1.0, 0.0)]
    return Rows(*(np.array(column) for column in zip(*columns, strict=True)))


SAMPLES = st.integers(0, 999_999).map(rows_of)


def ends(f: Fit, kind: str = "likelihood", **how: object) -> tuple[float, float] | None:
    """Two-sided ends of the B10 life, or None where they are refused by name."""
    try:
        return f.life_bounds(0.1, side="two", kind=kind, **how)
    except BoundUnavailable:
        return None


def alike(f: Fit, other: Fit, factor: float = 1.0, *, accuracy: float = 1e-6) -> None:
    """Assert that a fit says the same as another, of lives `factor` times as long."""
    assert f.outcome is other.outcome
    if not f.converged:
        return
    spread = f.life(0.7) - f.life(0.2)
    for fraction in (0.01, 0.1, 0.5, 0.9):
        assert other.life(fraction) == pytest.approx(factor * f.life(fraction), abs=accuracy * factor * spread)
    exact = float(f.data.quantity[f.data.is_failed].sum())
    assert other.log_likelihood == pytest.approx(f.log_likelihood - exact * np.log(factor), abs=1e-7)
    for kind in ("wald", "likelihood"):
        one, two = ends(f, kind), ends(other, kind)
        assert (one is None) == (two is None)
        if one is not None:
            gaps = [abs(end - f.life(0.1)) for end in one if np.isfinite(end)]
            room = factor * max([spread, *gaps])
            assert np.isfinite(one).tolist() == np.isfinite(two).tolist()
            for mine, others in zip(one, two, strict=True):
                if np.isfinite(mine):
                    assert others == pytest.approx(factor * mine, abs=10 * accuracy * room)


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
@few(4)
@given(rows=SAMPLES, factor=st.sampled_from([3.7e-5, 0.2, 60.0, 8.1e7]))
def test_lives_times_a_factor_give_readings_and_bounds_times_that_factor(name: str, rows: Rows, factor: float) -> None:
    alike(rows.fit(name), rows.scaled(factor).fit(name), factor)


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
@few(4)
@given(rows=SAMPLES, seed=st.integers(0, 99))
def test_order_and_splitting_of_rows_change_nothing(name: str, rows: Rows, seed: int) -> None:
    alike(rows.fit(name), split_and_shuffled(rows, seed).fit(name))


def split_and_shuffled(rows: Rows, seed: int) -> Rows:
    """Each unit in a row of its own, in another order."""
    places = np.repeat(np.arange(rows.lower.size), rows.quantity.astype(int))
    alone = rows.taken(np.random.default_rng(seed).permutation(places))
    return replace(alone, quantity=np.ones(places.size))


@pytest.mark.parametrize(("name", "threshold"), SLOW_FORMS)
@few(1)
@given(rows=SAMPLES, seed=st.integers(0, 99))
def test_the_same_holds_with_a_further_parameter(name: str, threshold: bool, rows: Rows, seed: int) -> None:
    f = rows.fit(name, threshold=threshold)
    alike(f, split_and_shuffled(rows.scaled(60.0), seed).fit(name, threshold=threshold), 60.0, accuracy=1e-5)


@every_form
@few(2)
@given(rows=SAMPLES)
def test_bounds_nest_enclose_the_estimate_and_rise_with_the_fraction(name: str, threshold: bool, rows: Rows) -> None:
    f = rows.fit(name, threshold=threshold)
    if not f.converged:
        return
    fractions = np.array([0.02, 0.2, 0.8])
    lives = f.life(fractions)
    assert np.all(np.diff(lives) > 0)
    kind = "likelihood" if name in LOCATION_SCALE_NAMES and not threshold else "wald"
    lower_before, upper_before = lives, lives
    for confidence in (0.6, 0.99):
        try:
            lower, upper = f.life_bounds(fractions, confidence=confidence, side="two", kind=kind)
        except BoundUnavailable:
            return
        assert np.all(lower < lower_before)
        assert np.all(upper > upper_before)
        if kind == "likelihood":
            assert np.all(np.diff(lower) > 0)
            assert np.all(np.diff(upper) > 0)
        lower_before, upper_before = lower, upper


# Of families without a threshold test_family_contract asks it, of every reading.
@pytest.mark.parametrize("name", WITH_THRESHOLD)
@few(1)
@given(rows=SAMPLES)
def test_a_one_sided_bound_is_the_end_of_a_two_sided_one_with_twice_the_tail(name: str, rows: Rows) -> None:
    f = rows.fit(name, threshold=True)
    if not f.converged or ends(f, confidence=0.9) is None:
        return
    lower, upper = ends(f, confidence=0.9)
    assert f.life_bounds(0.1, confidence=0.95, side="lower", kind="likelihood") == (pytest.approx(lower), None)
    assert f.life_bounds(0.1, confidence=0.95, side="upper", kind="likelihood") == (None, pytest.approx(upper))


# Invented; every family has an estimate for it.
MIXED = interval_units(
    [95, 60, 210, 150, 0, 120, 180, 250, 330],
    [95, 100, 210, 150, 70, 120, 180, 250, np.inf],
    [1, 2, 1, 2, 1, 1, 2, 1, 3],
)


def as_rows(units: Units) -> Rows:
    return Rows(*(np.asarray(column, float) for column in (units.lower, units.upper, units.quantity, units.entered)))


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_no_point_of_a_thousand_has_a_higher_likelihood(name: str) -> None:
    f = as_rows(MIXED).fit(name)
    naive, draw = NaiveFit(MIXED, name), np.random.default_rng(5)
    (mu, sigma), error = (f.estimate.mu, f.estimate.sigma), np.sqrt(np.diag(f.covariance))
    assert naive.log_likelihood(mu, np.log(sigma)) == pytest.approx(f.log_likelihood, abs=1e-9)
    for reach in 10.0 ** draw.uniform(-5, 1.5, 1000):
        moved = mu + reach * error[0] * draw.normal()
        log_sigma = np.log(sigma) + (reach * error[1] * draw.normal() if error.size > 1 else 0.0)
        assert naive.log_likelihood(moved, log_sigma) <= f.log_likelihood + 1e-10


@pytest.mark.parametrize("name", ["gamma", "inverse_gaussian", "birnbaum_saunders"])
def test_no_point_of_a_thousand_has_a_higher_likelihood_with_a_shape(name: str) -> None:
    f = as_rows(MIXED).fit(name)
    p, draw = f.parameters, np.random.default_rng(6)
    scale = p["mean"] if name == "inverse_gaussian" else p["scale"]
    shape = np.log(p["shape"] / p["mean"] if name == "inverse_gaussian" else p["shape"])
    best = log_likelihood(MIXED, FORMS[name](np.array([shape]))(scale, 0.0))
    assert best == pytest.approx(f.log_likelihood, abs=1e-8)
    for reach in 10.0 ** draw.uniform(-5, 1, 1000):
        form = np.array([shape + 0.3 * reach * draw.normal()])
        lives = FORMS[name](form)(scale * np.exp(0.2 * reach * draw.normal()), 0.0)
        assert log_likelihood(MIXED, lives) <= f.log_likelihood + 1e-9


@every_form
def test_entering_at_age_zero_changes_nothing(name: str, threshold: bool) -> None:
    rows = as_rows(MIXED)
    without = fit(LifeData.from_intervals(rows.lower, rows.upper, quantity=rows.quantity), name, threshold=threshold)
    with_zero = rows.fit(name, threshold=threshold)
    assert without.outcome is with_zero.outcome
    assert without.parameters == with_zero.parameters
    assert without.log_likelihood == with_zero.log_likelihood


# At 1e12 families without a threshold are in test_family_contract.
LATE_ENDS = [*((*form, 1e60) for form in ALL_FORMS), *((name, True, 1e12) for name in WITH_THRESHOLD)]


@pytest.mark.parametrize(("name", "threshold", "end"), LATE_ENDS)
def test_a_unit_found_failed_ever_later_tends_to_one_still_running(name: str, threshold: bool, end: float) -> None:
    rows = as_rows(MIXED)
    last = replace(rows, upper=np.where(rows.upper == 250, np.inf, rows.upper))
    looked = replace(rows, lower=np.where(rows.upper == 250, 250.0, rows.lower), upper=rows.upper.copy())
    looked.upper[looked.lower == 250] = end
    running, found = last.fit(name, threshold=threshold), looked.fit(name, threshold=threshold)
    assert found.outcome is running.outcome
    if found.converged:
        assert found.log_likelihood == pytest.approx(running.log_likelihood, abs=1e-6)
        assert found.life(0.1) == pytest.approx(running.life(0.1), rel=1e-6)
