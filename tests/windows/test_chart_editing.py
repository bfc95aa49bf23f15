"""On a chart the other line of the reading can be dragged too, marks know their rows, and titles find their room."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QPoint, QRectF, Qt

from reliability_app.session.further_pictures import FurtherPicture
from reliability_app.windows.charts.curve_page import HazardPage, SurvivalPage
from reliability_app.windows.charts.further_pages import CumulativeHazardPage, DensityPage
from reliability_app.windows.charts.paper_page import PaperPage
from reliability_app.windows.charts.residuals_page import ResidualsPage
from reliability_app.windows.charts.typed_range import RangeRefused, read_range
from tests.windows.chart_pictures import PUMPS, SECOND_LOT, analysis
from tests.windows.test_chart_reading import BETWEEN_MOVES, heard


@pytest.fixture
def shown(qtbot):
    """Give a page of a kind, shown with these sets, as a window."""

    def show(kind, *analyses, size=(760, 520)):
        page = kind()
        qtbot.addWidget(page)
        page.resize(*size)
        further = tuple(FurtherPicture(one) for one in analyses)
        page.show_pictures([one.picture for one in analyses], current=0, life_unit="h", further=further)
        with qtbot.waitExposed(page):
            page.show()
        return page

    return show


def drag(qtbot, page, start: QPoint, by: QPoint) -> None:
    viewport = page.view.viewport()
    for spot in (start + QPoint(1, 0), start):
        qtbot.mouseMove(viewport, spot)
        qtbot.wait(BETWEEN_MOVES)
    qtbot.mousePress(viewport, Qt.MouseButton.LeftButton, pos=start)
    for share in (0.3, 0.6, 1.0):
        qtbot.wait(BETWEEN_MOVES)
        qtbot.mouseMove(viewport, start + by * share)
    qtbot.wait(BETWEEN_MOVES)
    qtbot.mouseRelease(viewport, Qt.MouseButton.LeftButton, pos=start + by)


@pytest.mark.parametrize(
    ("kind", "offset", "by"),
    [
        (PaperPage, QPoint(0, 60), QPoint(50, 0)),  # the drop line, to a later age
        (SurvivalPage, QPoint(-150, 0), QPoint(0, 50)),  # the line to the reliability, down
        (CumulativeHazardPage, QPoint(-150, 0), QPoint(0, -50)),  # the line to the cumulative hazard, up
    ],
)
def test_the_other_line_of_the_reading_is_dragged_too(qtbot, shown, kind, offset, by):
    page = shown(kind, analysis(PUMPS, side="upper"))  # no bracket end lies in the way
    said = heard(page)
    before = page.view.plotItem.vb.viewRange()
    drag(qtbot, page, page.view.mapFromScene(page.reading_line.spot()) + offset, by)
    assert said["chosen"] == said["dragged"][-1:]
    assert said["chosen"][0] > 12.0
    assert page.view.plotItem.vb.viewRange() == before


@pytest.mark.parametrize("kind", [HazardPage, DensityPage])
def test_a_height_that_belongs_to_several_ages_is_no_grip(qtbot, shown, kind):
    page = shown(kind, analysis(PUMPS, side="upper"))
    said = heard(page)
    drag(qtbot, page, page.view.mapFromScene(page.reading_line.spot()) + QPoint(-60, 0), QPoint(0, -40))
    assert said["dragged"] == []


def test_marks_of_several_sets_give_the_rows_of_the_set_in_front_first(shown):
    page = shown(PaperPage, analysis(PUMPS), analysis(SECOND_LOT, name="Design B", colour=1))
    told = []
    page.rows_picked.connect(lambda *what: told.append(what))
    (left, right), (low, high) = page.view.plotItem.vb.viewRange()
    page.view.framed.emit(QRectF(left, low, right - left, high - low), False)
    assert told == [(0, tuple(sorted(range(10), key=lambda row: (PUMPS[row][1] == "running", row))), False)]
    page.view.framed.emit(QRectF(np.log(400.0), low, np.log(450.0) - np.log(400.0), high - low), True)
    assert told[1:] == [(1, (0,), True)]


def test_rings_leave_with_the_selection_and_stand_with_marks_on_the_edge(shown):
    page = shown(PaperPage, analysis(PUMPS))
    page.highlight(0, [0, 3])
    assert page._picked.count == 2
    ((marks, rings),) = page._picked._edge_rings
    assert rings.pos() == marks.item.pos()
    page.view.zoom(2.0)
    assert rings.pos() == marks.item.pos()
    page.highlight(0, [])
    assert page._picked.count == 0


def test_open_marks_are_units_not_seen_to_fail(shown):
    page = shown(ResidualsPage, analysis(PUMPS))
    drawing = page._drawings[0]
    assert len(drawing.drawn.item.data) == sum(count for _, state, count in PUMPS if state == "running")
    assert len(drawing.known.item.data) == sum(count for _, state, count in PUMPS if state == "failed")
    said = drawing.drawn.item.opts["tip"](0, 0, drawing.drawn.item.data[0]["data"])
    assert said.startswith("P-04: residual")
    assert "drawn at random" in said


def test_a_title_too_long_for_its_axis_stands_in_two_lines(shown):
    long, short = (
        shown(CumulativeHazardPage, analysis(PUMPS)),
        shown(CumulativeHazardPage, analysis(PUMPS), size=(760, 230)),
    )
    assert "<br>" not in long._upright.labelString()
    assert "<br>" in short._upright.labelString()
    assert short._upright.labelText == long._upright.labelText


def test_a_typed_range_is_read_in_the_words_of_the_axis(shown):
    page = shown(PaperPage, analysis(PUMPS))
    axis = page._upright
    low, high = read_range(axis, ["5 %", "90"], (-10.0, 10.0))
    assert [axis.text_of(low), axis.text_of(high)] == ["5", "90"]
    with pytest.raises(RangeRefused, match="out of what this chart can show"):
        read_range(axis, ["5", "90"], (-1.0, 10.0))
    with pytest.raises(RangeRefused, match="soon"):
        read_range(axis, ["soon", "90"], (-10.0, 10.0))
    with pytest.raises(RangeRefused, match="no place"):
        read_range(page._age_axis, ["-5", "90"], (0.0, 10.0))
