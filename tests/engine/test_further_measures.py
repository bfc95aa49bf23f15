"""Further readings as functions of (a, b): derivatives against differences, and the curves on which they stay."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest
from numpy.typing import NDArray

from reliability_app.engine.bounds.constrained import curve_of
from reliability_app.engine.concave_integrals import residual_mean
from reliability_app.engine.crossings import crossed_first, first_reached
from reliability_app.engine.families import LOCATION_SCALE_NAMES, family
from reliability_app.engine.families.log_gamma import LogGamma
from reliability_app.engine.further_measures import (
    ConditionalMeasure,
    FurtherMeasure,
    HazardAgeMeasure,
    MeanMeasure,
    ModeMeasure,
    ResidualMeasure,
)
from reliability_app.engine.likelihood import Terms
from reliability_app.engine.line import Line
from reliability_app.engine.shaped.age_lines import AgeLine
from reliability_app.engine.shaped.further_shaped import line_of
from tests.engine.test_further_readings import fitted

Array = NDArray[np.float64]
LOG_LIFE_NAMES = ("weibull", "lognormal", "loglogistic", "frechet")


def measures_of(name: str) -> list[FurtherMeasure]:
    standard = family(name).standard
    line = Line(6.0, 0.4) if name in LOG_LIFE_NAMES or name == "exponential" else Line(5.0, 0.0)
    y = np.array([-0.7, 0.4])
    found: list[FurtherMeasure] = [
        ConditionalMeasure(np.array([0.9, 0.5]), np.array([-0.3, -np.inf]), standard),
        ConditionalMeasure(np.array([-0.2]), np.array([-0.3]), standard),
        ResidualMeasure(y, line, standard),
        HazardAgeMeasure(np.array([-1.5]), float(line.slope), standard),
    ]
    return [*found, MeanMeasure(line, standard), ModeMeasure(line, standard)] if line.slope else found


def differences(terms: Callable[[Array, Array], Terms], a: float, b: float) -> list[Array]:
    """d_a, d_b, d_aa, d_ab, d_bb by central differences of the values and of the first derivatives."""
    step = 1e-5

    def at(da: float, db: float) -> Terms:
        return terms(np.array([a + da]), np.array([b + db]))

    def of(column: str, da: float, db: float) -> Array:
        return (getattr(at(da, db), column) - getattr(at(-da, -db), column)) / (2 * step)

    return [
        of("value", step, 0),
        of("value", 0, step),
        of("d_a", step, 0),
        of("d_a", 0, step),
        of("d_b", 0, step),
    ]


@pytest.mark.parametrize("name", LOCATION_SCALE_NAMES)
def test_derivatives_of_every_measure_agree_with_differences(name: str) -> None:
    for measure in measures_of(name):
        a, b = 0.3, 1.4
        got = measure.terms(np.array([a]), np.array([b]))
        assert np.isfinite(got.value).all()
        wanted = differences(measure.terms, a, b)
        for column, expected in zip(got.columns()[1:], wanted, strict=True):
            assert np.broadcast_to(column, expected.shape) == pytest.approx(expected, rel=2e-6, abs=2e-6)


@pytest.mark.parametrize(
    ("name", "threshold"),
    [("gamma", False), ("generalized_gamma", False), ("birnbaum_saunders", False), ("lognormal", True)],
)
def test_derivatives_of_readings_with_a_further_parameter(name: str, threshold: bool) -> None:
    f = fitted(name, threshold)
    line: AgeLine = line_of(f.shaped.sheaf)
    a, b, kappa = f.shaped.point.tolist()
    at_kappa, age, rate = np.array([kappa]), np.array([700.0]), np.array([float(f.hazard(650.0))])
    readings: list[Callable[[Array, Array], Terms]] = [
        lambda a, b: line.residual(age, a, b, at_kappa),
        lambda a, b: line.mean(a, b, at_kappa),
        lambda a, b: line.mode(a, b, at_kappa),
        lambda a, b: line.hazard_age(rate, a, b, at_kappa),
    ]
    for reading in readings:
        got, wanted = reading(np.array([a]), np.array([b])), differences(reading, a, b)
        for place, (column, expected) in enumerate(zip(got.columns()[1:], wanted, strict=True)):
            if name == "birnbaum_saunders" and place in (0, 2, 3):
                continue  # a is 0 there
            assert column == pytest.approx(expected, rel=2e-5, abs=2e-6)


@pytest.mark.parametrize("name", ["weibull", "lognormal", "frechet", "logistic"])
def test_a_curve_keeps_the_value_and_knows_its_derivatives(name: str) -> None:
    for measure in measures_of(name):
        single = measure.at(np.array([0]))
        value = float(single.terms(np.array([0.3]), np.array([1.4])).value[0])
        curve = curve_of(single, value)
        u = curve.start(0.3, 1.4) + np.array([0.0, 0.11, 0.4])
        at, step = curve.points(u), 1e-5
        assert single.terms(at.a, at.b).value == pytest.approx(np.full(3, value), abs=1e-7)
        assert (at.a[0], at.b[0]) == pytest.approx((0.3, 1.4), abs=1e-6)
        for first, second, column in ((at.a_first, at.a_second, "a"), (at.b_first, at.b_second, "b")):
            up, down = curve.points(u + step), curve.points(u - step)
            assert first == pytest.approx((getattr(up, column) - getattr(down, column)) / (2 * step), abs=1e-5)
            bend = getattr(up, f"{column}_first") - getattr(down, f"{column}_first")
            assert second == pytest.approx(bend / (2 * step), rel=1e-3, abs=1e-4)


def test_the_same_question_put_in_scores_has_the_same_answer() -> None:
    a, b = 0.3, 1.4
    own = np.zeros(1), np.ones(1)
    for measure in measures_of("lognormal"):
        here, there = measure.terms(np.array([a]), np.array([b])), measure.in_scores(a, b).terms(*own)
        if isinstance(measure, HazardAgeMeasure):
            assert there.value == pytest.approx(a + b * here.value, rel=1e-12)
        else:
            assert there.value == pytest.approx(here.value, rel=1e-12)


def test_residual_means_of_the_logistic_distribution_in_both_tails() -> None:
    """ln((1 + e^-z)) (1 + e^z), by integration of 1/(1 + e^z)."""
    z = np.array([-700.0, -30.0, -2.0, 0.0, 3.0, 35.0])
    wanted = np.log(np.log1p(np.exp(-np.maximum(z, -30.0))) - np.minimum(z + 30.0, 0.0)) + np.logaddexp(0.0, z)
    assert residual_mean(family("logistic").standard, z, np.zeros(6)).value == pytest.approx(wanted, abs=1e-9)


def test_a_tail_just_light_enough_has_a_mean_and_one_just_too_heavy_none() -> None:
    standard, z = family("frechet").standard, np.zeros(2)
    light, heavy = residual_mean(standard, z, np.array([1.0 - 1e-6, 1.0 + 1e-6])).value.tolist()
    assert light == pytest.approx(np.log(1e6 / (1 - np.exp(-1))), abs=1e-3)
    assert heavy == np.inf


@pytest.mark.parametrize("lam", [-2.0, -1.0, -0.5, 0.0, 0.5, 1.0])
def test_log_hazards_are_concave_where_a_first_crossing_is_sought(lam: float) -> None:
    """What `first_reached` rests on: 0 is the normal, 1 and -1 the extreme value distributions."""
    z = np.linspace(-8.0, 8.0, 400)
    z = z[
        (LogGamma(np.array([lam])).cdf(z[None])[0] > 1e-12) & (LogGamma(np.array([lam])).survival(z[None])[0] > 1e-12)
    ]
    assert (LogGamma(np.array([lam])).log_hazard(z[None]).second[0] <= 1e-6).all()


def test_a_first_crossing_is_found_from_the_left() -> None:
    def hump(z: Array) -> tuple[Array, Array]:
        return -((z - 2.0) ** 2), -2.0 * (z - 2.0)

    assert first_reached(hump, np.array([-4.0, -1e-12, 1e-9, -1e8])) == pytest.approx([0.0, 2.0, np.inf, 2.0 - 1e4])
    assert first_reached(lambda z: (-z, 0.0 * z - 1.0), np.array([3.0])) == -np.inf
    grid = np.linspace(-3.0, 9.0, 60)[:, None] * np.ones(4)
    level = np.array([-4.0, -0.01, 1e-9, -26.0])
    assert crossed_first(hump, level, grid) == pytest.approx([0.0, 1.9, np.inf, -np.inf])
