"""Marks and steps of units found failed or entered late stand where the estimate without a family puts them."""

from __future__ import annotations

import numpy as np
import pytest

from reliability_app.engine import turnbull_maximum
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.document import Basis, LifeAsk, Session, UnitSet
from reliability_app.session.unit_table import UnitTable

# Invented: six pumps looked at every 200 h, one that failed under watch, two that run on.
LOOKED_AT = [
    {"unit": "P-1", "life": "<200"},
    {"unit": "P-2", "life": "200-400", "quantity": "2"},
    {"unit": "P-3", "life": "450", "state": "failed"},
    {"unit": "P-4", "life": "400-800"},
    {"unit": "P-5", "life": "600-800", "quantity": "2"},
    {"unit": "P-6", "life": "800+", "quantity": "2"},
]


def analysed(rows: list[dict[str, str]]) -> SetAnalysis:
    session = Session(sets=[UnitSet("A", UnitTable.from_rows(rows), Basis(bound="likelihood"))], asks=(LifeAsk(10),))
    return analyse(Question.about(session, 0))


def test_marks_stand_half_way_through_their_intervals_and_know_their_rows_and_units() -> None:
    picture = analysed(LOOKED_AT).picture
    assert picture.point_begin.tolist() == [0, 200, 450, 600]
    assert picture.point_end.tolist() == [200, 400, 450, 800]
    assert picture.point_age.tolist() == [100, 300, 450, 700]
    # P-4 failed between 400 h and 800 h: with P-3 at 450 h or with P-5.
    assert picture.point_rows == ((0,), (1,), (2, 3), (3, 4))
    assert picture.point_names == (("P-1",), ("P-2",), ("P-3", "P-4"), ("P-4", "P-5"))
    # By hand: of 9 units 1, 2 and 4 failed by 200, 400 and 800 h in intervals of their own; P-4 is shared 1 : 2.
    assert picture.point_fraction == pytest.approx(np.array([0.5, 2.0, 3.0 + 2 / 3, 5.0 + 2 / 3]) / 9, abs=1e-10)
    assert picture.point_quantity.tolist() == [1, 2, 1, 3]
    assert picture.point_is_shared.tolist() == [False, False, True, True]


def test_steps_fall_inside_the_intervals_only_and_through_their_marks() -> None:
    picture = analysed(LOOKED_AT).picture
    steps = picture.steps
    assert steps is not None
    assert steps.x.tolist() == [0, 100, 100, 300, 300, 450, 450, 700, 700, 800]
    falls = np.flatnonzero(np.diff(steps.y) < 0)
    assert (np.diff(steps.x)[falls] == 0).all()
    middle = 0.5 * (steps.y[falls] + steps.y[falls + 1])
    assert middle == pytest.approx(1.0 - picture.point_fraction, abs=1e-12)
    assert steps.y[-1] == pytest.approx(2 / 9, abs=1e-10)


def test_no_caution_stands_beside_found_failed_units_that_are_drawn() -> None:
    assert "points-not-drawn" not in {caution.code for caution in analysed(LOOKED_AT).cautions}


def test_late_entry_is_drawn_by_the_product_limit_of_those_watched() -> None:
    rows = [
        {"life": "100", "state": "failed"},
        {"life": "200", "state": "failed", "entered": "150"},
        {"life": "250", "state": "running"},
        {"life": "300", "state": "failed", "entered": "220"},
        {"life": "400", "state": "running", "entered": "220"},
    ]
    picture = analysed(rows).picture
    # By hand: 2 units watched at 100 h, 2 at 200 h (one had entered), 2 at 300 h.
    after = np.array([1 / 2, 1 / 4, 1 / 8])
    assert picture.point_age.tolist() == [100, 200, 300]
    assert picture.point_fraction == pytest.approx(1.0 - np.array([3 / 2, 3 / 4, 3 / 8]) / 2, abs=1e-12)
    assert picture.steps is not None
    assert picture.steps.y[2::2] == pytest.approx(after, abs=1e-12)


def test_failures_after_all_watched_had_failed_are_said_to_be_missing() -> None:
    rows = [
        {"life": "50", "state": "failed"},
        {"life": "200", "state": "failed", "entered": "60", "quantity": "2"},
        {"life": "150-250", "entered": "60"},
        {"life": "300", "state": "running", "entered": "60"},
    ]
    analysis = analysed(rows)
    assert analysis.picture.point_age.tolist() == [50]
    (caution,) = (caution for caution in analysis.cautions if caution.code == "points-not-drawn")
    assert caution.text.startswith("3 failed units have no mark on the paper: all units watched")


def test_an_estimate_that_does_not_settle_is_said_and_nothing_is_drawn(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(turnbull_maximum, "_MOST_STEPS", 1)
    analysis = analysed(LOOKED_AT)
    (caution,) = (caution for caution in analysis.cautions if caution.code == "points-not-drawn")
    assert "did not settle in 1 steps" in caution.text
    assert analysis.picture.point_age.size == 0
    assert analysis.picture.steps is None
    assert analysis.main is not None
