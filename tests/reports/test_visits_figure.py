"""The picture of the Visits page: dates in round steps, brackets as recorded, counts that keep apart."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta

import numpy as np
import pytest

from reliability_app.reports.date_ticks import date_ticks, day_of, day_text
from reliability_app.reports.figure import Line, Marks, Note
from reliability_app.reports.shown import Shown
from reliability_app.reports.visits_figure import (
    VisitSeries,
    counted,
    placed,
    visits_figure,
    visits_range,
    with_room,
)
from reliability_app.session.document import Basis, LifeAsk
from reliability_app.session.picture import Reading
from reliability_app.session.requirement import Requirement
from reliability_app.session.unit_table import Counts
from reliability_app.session.visit_history import HistoryPoint

START = datetime(2026, 1, 5, 12, tzinfo=UTC)


def point(place: int | None, days: float, estimate: float | None, lower: float | None) -> HistoryPoint:
    reading = None if estimate is None else Reading(LifeAsk(10.0), estimate, lower, None, Basis())
    at = START + timedelta(days=days)
    return HistoryPoint(place, "visit", at, Counts(3, 6, 1, 0), Basis(), reading)


@pytest.fixture
def series() -> list[VisitSeries]:
    points = (
        point(0, 0, 700.0, 500.0),
        point(1, 14, None, None),
        point(2, 28, 650.0, None),
        point(None, 28.5, 640, 480),
    )
    return [VisitSeries("A", 0, points)]


@pytest.mark.parametrize(
    ("days", "labels"),
    [
        (2, ["01-05 12:00", "01-06 00:00", "01-06 12:00", "01-07 00:00", "01-07 12:00"]),
        (28, ["2026-01-12", "2026-01-19", "2026-01-26", "2026-02-02"]),  # Mondays
        (120, ["2026-02", "2026-03", "2026-04", "2026-05"]),
        (1400, ["2027", "2028", "2029"]),
    ],
)
def test_ticks_are_whole_hours_weeks_months_or_years(days: int, labels: list[str]) -> None:
    low = float(datetime(2026, 1, 5).toordinal()) + 0.5
    ticks = date_ticks(low, low + days, 5)
    assert [tick.label for tick in ticks] == labels
    assert all(low <= tick.position <= low + days for tick in ticks)
    assert len(ticks) <= 5


def test_a_day_is_the_same_both_ways_and_no_range_asks_too_much() -> None:
    at = datetime(2026, 3, 2, 23, 59).astimezone()
    assert day_text(day_of(at)) == "2026-03-02"
    assert day_of(at + timedelta(days=1)) - day_of(at) == pytest.approx(1.0, abs=1 / 24 + 1e-9)  # a clock may change
    assert len(date_ticks(-1e12, 1e12, 5)) <= 11
    assert date_ticks(10.0, 10.0, 5) == []


def test_brackets_run_from_bound_to_estimate_and_are_left_out_where_there_is_none(series: list[VisitSeries]) -> None:
    where = placed(series, 28.0)[0]
    x, y = where.brackets(0.1)
    assert x.size == 2 * 4  # a stem and a cap at the first visit and today; the third has an estimate alone
    assert y[:2].tolist() == [500.0, 700.0]
    assert y[2:4].tolist() == [500.0, 500.0]
    assert x[3] - x[2] == pytest.approx(0.2)
    assert np.isnan(where.estimate[1])
    whole = visits_range(series, 300.0)
    assert whole.low < 300.0
    assert whole.high > 700.0


def test_several_sets_stand_side_by_side_at_one_visit(series: list[VisitSeries]) -> None:
    first, second = placed([*series, VisitSeries("B", 1, series[0].points)], 28.0)
    assert (second.at > first.at).all()


def test_the_picture_has_marks_counts_and_the_requirement(series: list[VisitSeries]) -> None:
    requirement = Requirement(LifeAsk(10.0), 600.0, 0.9)
    figure = visits_figure(series, Shown((), life_unit="h"), LifeAsk(10.0), requirement=requirement, told=("Said.",))
    then, now = (part for part in figure.parts if isinstance(part, Marks))
    assert (then.filled, then.y.tolist()) == (True, [700.0, 650.0])
    assert (now.filled, now.y.tolist()) == (False, [640.0])
    notes = [part.text for part in figure.parts if isinstance(part, Note)]
    assert notes == ["required: 600 h", "4/10", "4/10", "4/10"]  # today's and not that of half a day before
    assert any(isinstance(part, Line) and part.y.tolist() == [600.0, 600.0] for part in figure.parts)
    assert "Said." in figure.foot
    assert figure.upright.title == "B10 life (h)"
    other = visits_figure(series, Shown((), life_unit="h"), LifeAsk(5.0), requirement=requirement)
    assert not any(isinstance(part, Note) and part.text.startswith("required") for part in other.parts)


def test_counts_keep_apart_the_latest_first(series: list[VisitSeries]) -> None:
    assert counted(Counts(3, 6, 1, 2)) == "4/10"
    assert [one.place for one in with_room(series[0].points, 3.0)] == [None, 1, 0]
