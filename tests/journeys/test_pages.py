"""The pages of the window as a user goes through them: readings, picked units, ranges, candidates."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QPoint, QPointF, Qt
from PySide6.QtWidgets import QApplication

from reliability_app.session.document import LifeAsk, ReliabilityAsk
from reliability_app.windows.charts.chart import Chart
from reliability_app.windows.charts.chart_page import ChartPage
from reliability_app.windows.panels.candidates_page import CandidatesPage
from tests.journeys.conftest import ANSWER_WITHIN_MS, CONTROL, Desk
from tests.journeys.test_pictures import UNITS

SHIFT, NONE = Qt.KeyboardModifier.ShiftModifier, Qt.KeyboardModifier.NoModifier
LEFT = Qt.MouseButton.LeftButton
BETWEEN_MOVES = 15  # ms: pyqtgraph passes over mouse moves that follow each other within 10


def bring(desk: Desk, title: str) -> Chart:
    tabs = desk.window.contents.tabs
    names = [tabs.tabText(place).replace("&", "") for place in range(tabs.count())]
    tabs.setCurrentIndex(names.index(title))
    page = tabs.currentWidget()
    page.setFocus()
    desk.qtbot.wait(20)  # until it is laid out
    return page


def spot_of(page: Chart, x: float, y: float) -> QPoint:
    return page.view.mapFromScene(page.view.plotItem.vb.mapViewToScene(QPointF(x, y)))


def drag(desk: Desk, page: Chart, start: QPoint, stop: QPoint, held: Qt.KeyboardModifier = NONE) -> None:
    port = page.view.viewport()
    for spot in (start + QPoint(1, 0), start):
        desk.qtbot.mouseMove(port, spot)
        desk.qtbot.wait(BETWEEN_MOVES)
    desk.qtbot.mousePress(port, LEFT, held, start)
    for share in (0.3, 0.6, 1.0):
        desk.qtbot.wait(BETWEEN_MOVES)
        desk.qtbot.mouseMove(port, start + (stop - start) * share)
    desk.qtbot.wait(BETWEEN_MOVES)
    desk.qtbot.mouseRelease(port, LEFT, held, stop)


def selected(desk: Desk) -> tuple[int, ...]:
    return desk.window.page_wiring.picked.rows()


def wait_for_candidates(desk: Desk) -> CandidatesPage:
    page = desk.window.contents.candidates
    desk.qtbot.waitUntil(lambda: page.table is not None, timeout=ANSWER_WITHIN_MS)
    return page


def test_the_same_reading_is_marked_on_every_page_over_age(desk: Desk) -> None:
    desk.paste(UNITS)
    life = desk.life()
    for place, page in enumerate(desk.window.contents.pages, 1):
        desk.key(getattr(Qt.Key, f"Key_{place}"), CONTROL)
        mark = page.reading_line.mark
        assert mark is not None, page.name
        assert float(page.scale.from_scale(mark.age)) == pytest.approx(life)
        assert mark.lower is not None, page.name


def test_a_page_behind_is_drawn_when_it_comes_to_the_front(desk: Desk) -> None:
    desk.paste(UNITS)
    density = desk.window.contents.density
    assert density.current is None
    bring(desk, "Density")
    x, y = density._drawings[0].fit.line.getData()
    assert np.trapezoid(y, x) == pytest.approx(1.0, abs=0.01)
    lower, upper = (
        edge.getData()[1] for edge in (density._drawings[0].fit.low_edge, density._drawings[0].fit.high_edge)
    )
    assert (lower <= y).all()
    assert (y <= upper).all()


def test_a_percent_or_an_age_is_typed_on_the_chart(desk: Desk) -> None:
    desk.paste(UNITS)
    page = bring(desk, "Survival")
    desk.key(Qt.Key.Key_Return)
    desk.type("20 %")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.sentence.startswith("B20 life")
    assert desk.window.session.asks[0] == LifeAsk(20.0)
    desk.key(Qt.Key.Key_Return)
    desk.type("1500 h")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.window.session.asks[0] == ReliabilityAsk(1500.0)
    assert isinstance(page, ChartPage)
    assert page.reading_line.mark.along == "value"
    # What cannot be read is said in place, and changes nothing.
    desk.key(Qt.Key.Key_Return)
    desk.type("soon")
    desk.key(Qt.Key.Key_Return)
    assert "cannot be read" in page.editor.reason.text()
    desk.key(Qt.Key.Key_Escape)
    assert page.editor.isHidden()
    assert desk.window.session.asks[0] == ReliabilityAsk(1500.0)


def test_the_range_of_an_axis_is_typed_after_a_double_click(desk: Desk) -> None:
    desk.paste(UNITS)
    page = bring(desk, "Paper")
    axis = page.view.area_of("level").center()
    desk.qtbot.mouseClick(page.view.viewport(), LEFT, NONE, axis)
    desk.qtbot.mouseDClick(page.view.viewport(), LEFT, NONE, axis)
    assert page.editor.isVisible()
    desk.type("2000")
    desk.key(Qt.Key.Key_Tab)
    desk.type("500")
    desk.key(Qt.Key.Key_Return)
    assert "must rise" in page.editor.reason.text()
    page.editor.lines[0].setFocus()
    page.editor.lines[0].selectAll()
    desk.type("100")
    desk.key(Qt.Key.Key_Return)
    assert page.editor.isHidden()
    np.testing.assert_allclose(page.view.plotItem.vb.viewRange()[0], np.log([100.0, 500.0]))
    desk.key(Qt.Key.Key_Home)
    assert page.view.plotItem.vb.viewRange()[0][1] > np.log(2000.0)
    page.edit_range("upright")
    desk.type("5 %")
    desk.key(Qt.Key.Key_Tab)
    desk.type("100")
    desk.key(Qt.Key.Key_Return)
    assert "no place on this axis" in page.editor.reason.text()


def test_rows_selected_in_the_grid_are_ringed_on_the_pages(desk: Desk) -> None:
    desk.paste(UNITS)
    desk.window.page_wiring.picked.select([0, 3], joins=False)  # failed at 812, running at 1500
    for title, rings in (("Paper", 2), ("Survival", 1), ("Residuals", 2), ("Hazard", 0)):
        page = bring(desk, title)
        desk.qtbot.waitUntil(lambda page=page, rings=rings: page._picked.count == rings)
    paper = bring(desk, "Paper")
    assert paper._picked.rings.getData()[0].tolist() == pytest.approx([np.log(812.0)])


def test_a_click_on_a_mark_and_a_frame_select_rows(desk: Desk) -> None:
    desk.paste(UNITS)
    page = bring(desk, "Paper")
    x, y = page._drawings[0].points.item.getData()
    spots = [spot_of(page, float(a), float(b)) for a, b in zip(x, y, strict=True)]
    desk.qtbot.mouseClick(page.view.viewport(), LEFT, NONE, spots[-1])
    assert selected(desk) == (6,)
    desk.qtbot.mouseClick(page.view.viewport(), LEFT, CONTROL, spots[-2])
    assert selected(desk) == (5, 6)
    before = page.view.plotItem.vb.viewRange()
    drag(desk, page, spots[1] + QPoint(-12, 12), spots[2] + QPoint(12, -12), SHIFT)
    assert selected(desk) == (1, 2)
    assert page.view.plotItem.vb.viewRange() == before


def test_an_end_of_the_bracket_is_dragged_to_the_age_it_is_to_bound(desk: Desk) -> None:
    desk.paste(UNITS)
    page = bring(desk, "Cumulative hazard")
    mark = page.reading_line.mark
    start = spot_of(page, mark.lower, mark.value)
    drag(desk, page, start, start + QPoint(40, 0))
    desk.wait_for_answer()
    wanted = page.view.plotItem.vb.mapSceneToView(page.view.mapToScene(start + QPoint(40, 0))).x()
    asked = desk.window.session.asks[0]
    assert isinstance(asked, LifeAsk)
    assert asked.percent > 10.0
    # The bound is read off the band while it is dragged, and is exact afterwards.
    assert desk.window.analysis.main.lower == pytest.approx(wanted, rel=0.02)


def test_a_candidate_becomes_the_basis_in_one_step(desk: Desk) -> None:
    desk.paste(UNITS)
    bring(desk, "Candidates")
    page = wait_for_candidates(desk)
    assert "fit alike" in page.sentence.text()
    names = [one.name for one in page.table.candidates]
    page.view.selectRow(names.index("weibull"))
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.window.session.sets[0].basis.family == "weibull"
    assert page.table is not None
    assert desk.sentence.startswith("B10 life")
    desk.key(Qt.Key.Key_Z, CONTROL)
    desk.wait_for_answer()
    assert desk.window.session.sets[0].basis.family == "lognormal"


def test_p_values_come_one_by_one_and_can_be_stopped(desk: Desk) -> None:
    desk.paste(UNITS)
    bring(desk, "Candidates")
    page = wait_for_candidates(desk)
    page.simulate_button.click()
    assert page.stop_button.isVisible()
    assert "family 1 of" in page.progress.text()
    desk.qtbot.waitUntil(lambda: page.table.tested >= 2, timeout=ANSWER_WITHIN_MS)
    page.stop_button.click()
    assert not page.stop_button.isVisible()
    assert not desk.window.page_wiring.comparer.is_busy
    tested = [one for one in page.table.candidates if one.goodness is not None]
    assert len(tested) == page.table.tested
    assert page.table.cells(0)[4] != ""


def test_candidates_of_other_units_are_never_shown_as_these(desk: Desk) -> None:
    desk.paste(UNITS)
    bring(desk, "Candidates")
    page = wait_for_candidates(desk)
    old = page.table
    bring(desk, "Paper")
    desk.go(0, "life")
    desk.type("700")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert page.table is None
    assert page._model.is_stale
    assert "earlier units" in page.sentence.text()
    assert not page.choose_button.isEnabled()
    assert page.figure() is None
    bring(desk, "Candidates")
    new = wait_for_candidates(desk).table
    assert new is not old
    assert not page._model.is_stale
    assert new.candidates[0].log_likelihood != old.candidates[0].log_likelihood


def test_a_comparison_that_fails_is_said_and_not_tried_again_by_itself(
    desk: Desk, monkeypatch: pytest.MonkeyPatch
) -> None:
    tried = []

    def fail(_analysis: object) -> None:
        tried.append(1)
        raise ArithmeticError("planted")

    monkeypatch.setattr("reliability_app.windows.comparing.compare_quickly", fail)
    desk.paste(UNITS)
    bring(desk, "Candidates")
    desk.qtbot.waitUntil(lambda: "planted" in desk.message, timeout=ANSWER_WITHIN_MS)
    desk.qtbot.wait(50)
    assert tried == [1]
    assert desk.window.contents.candidates.table is None


def test_candidates_are_thin_lines_on_the_paper_on_demand(desk: Desk) -> None:
    desk.paste(UNITS)
    paper = bring(desk, "Paper")
    assert paper._legend.names == ()
    paper.candidates_action.trigger()
    desk.qtbot.waitUntil(lambda: len(paper._candidate_curves) == 4, timeout=ANSWER_WITHIN_MS)
    titles = [line.title for line in paper._candidates]
    assert paper._legend.names == ("Set 1", *titles)
    assert "Lognormal" not in titles
    figure = paper.figure()
    assert [entry.name for entry in figure.legend] == ["Set 1", *titles]
    assert [entry.has_mark for entry in figure.legend] == [True, *[False] * 4]
    # With the units they change, and with the tick they go.
    desk.go(0, "life")
    desk.type("700")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    wait_for_candidates(desk)
    assert len(paper._candidate_curves) == 4
    paper.candidates_action.trigger()
    assert paper._candidate_curves == []


def test_the_likelihood_page_says_how_many_degrees_of_freedom(desk: Desk) -> None:
    desk.paste(UNITS)
    page = bring(desk, "Likelihood")
    assert page._level.labelText == "mu (of ln life in h)"
    assert "2 degrees of freedom" in page.caption.text()
    drawing = page._drawings[0]
    joint, cut = (curve.getData()[0] for curve in (drawing.joint, drawing.cut))
    assert joint.min() < cut.min() < drawing.peak.item.getData()[0][0] < cut.max() < joint.max()
    desk.choose_family("Exponential")
    assert "one parameter" in page._note.text()
    assert QApplication.activeModalWidget() is None
