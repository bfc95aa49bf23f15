"""Fits with a further parameter through the session: readings with bounds, curves with bands, outcomes in words."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import Fit, fit
from reliability_app.session.analysis import Question, analyse
from reliability_app.session.document import Basis, HazardAsk, LifeAsk, ReliabilityAsk, Session, UnitSet
from reliability_app.session.drawing_up import draw_curves
from reliability_app.session.taking_readings import take_reading
from reliability_app.session.unit_table import UnitTable
from tests.reference.reference_data import units_of

CASES = [
    ("aml", "gamma", False),
    ("aml", "generalized_gamma", False),
    ("aml", "inverse_gaussian", False),
    ("syn07a_interval_equal", "birnbaum_saunders", False),
    ("syn06_ties_quantities", "weibull", True),
    ("syn06_ties_quantities", "lognormal", True),
]
TWO_SIDED = Basis(side="two", bound="automatic", confidence=0.9)


def fitted(units: str, name: str, threshold: bool) -> Fit:
    return fit(units_of(units).life_data(), name, threshold=threshold)


@pytest.mark.parametrize(("units", "name", "threshold"), CASES)
def test_readings_have_likelihood_ratio_bounds(units: str, name: str, threshold: bool) -> None:
    f = fitted(units, name, threshold)
    middle = float(f.life(0.5))
    for ask in (LifeAsk(10.0), ReliabilityAsk(middle), HazardAsk(middle)):
        reading = take_reading(f, ask, TWO_SIDED, "h")
        assert reading.bound_used == "likelihood"
        assert reading.lower < reading.estimate < reading.upper


@pytest.mark.parametrize("kind", ["automatic", "wald"])
@pytest.mark.parametrize(("units", "name", "threshold"), CASES)
def test_curves_have_bands(units: str, name: str, threshold: bool, kind: str) -> None:
    f = fitted(units, name, threshold)
    curves = draw_curves(f, TWO_SIDED, kind=kind)
    seen = (curves.failure.x > f.data.first_failure) & (curves.failure.x < f.data.last_observation)
    for curve in (curves.failure, curves.survival, curves.hazard):
        assert np.all(np.isfinite(curve.y))
        assert np.all(np.isfinite(curve.lower[seen]) & np.isfinite(curve.upper[seen]))
        assert np.all((curve.lower <= curve.y + 1e-12)[seen] & (curve.y <= curve.upper + 1e-12)[seen])
    assert curves.failure.y + curves.survival.y == pytest.approx(np.ones_like(curves.failure.y), abs=1e-12)


@pytest.mark.parametrize(("units", "name", "threshold"), CASES)
def test_a_band_meets_the_bound_of_the_reading(units: str, name: str, threshold: bool) -> None:
    """To the accuracy of a picture: a band is joined between some of its places."""
    f = fitted(units, name, threshold)
    curve = draw_curves(f, TWO_SIDED, kind="automatic").failure
    for age in np.asarray(f.life(np.array([0.2, 0.6]))):
        low, high = f.reliability_bounds(float(age), side="two", confidence=0.9)
        band = [float(np.interp(np.log(age), np.log(curve.x), edge)) for edge in (curve.lower, curve.upper)]
        assert band == pytest.approx([1 - high, 1 - low], abs=0.02)


def test_a_set_without_a_maximum_keeps_its_points_and_says_why() -> None:
    lives = units_of("syn01_complete_n5").lower
    rows = [{"life": str(life), "state": "failed"} for life in lives]
    chosen = UnitSet("Seals", UnitTable.from_rows(rows), Basis(family="generalized_gamma"))
    analysis = analyse(Question.about(Session(sets=[chosen]), 0))
    assert analysis.fit is not None
    assert not analysis.fit.converged
    assert analysis.main is None
    assert analysis.picture.failure is None
    assert analysis.picture.point_age.size == 5
    assert any(c.code.startswith("lambda-runs") and "No estimate exists" in c.text for c in analysis.cautions)


def test_kinds_of_bound_that_these_families_do_not_have_are_a_caution() -> None:
    f = fitted("aml", "gamma", False)
    reading = take_reading(f, LifeAsk(10.0), Basis(bound="calibrated"), "h")
    assert (reading.lower, reading.upper) == (None, None)
    assert any(c.code == "bound-unavailable" and "not known for the Gamma family" in c.text for c in reading.cautions)
