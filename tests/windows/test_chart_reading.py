"""The reading on the charts is moved by mouse and key, and follows what the engine says."""

from __future__ import annotations

import numpy as np
import pytest
from PySide6.QtCore import QPoint, Qt

from reliability_app.session.document import HazardAsk, LifeAsk, ReliabilityAsk
from reliability_app.windows.charts.curve_page import HazardPage, SurvivalPage
from reliability_app.windows.charts.paper_page import PaperPage
from tests.windows.chart_pictures import NONE_FAILED, PUMPS, analysis, picture

BETWEEN_MOVES = 15  # ms: pyqtgraph passes over mouse moves that follow each other within 10


@pytest.fixture
def shown(qtbot):
    """Give a page of a kind, shown with these pictures, as a window."""

    def show(kind, *pictures):
        page = kind()
        qtbot.addWidget(page)
        page.resize(760, 520)
        page.show_pictures(pictures, current=0, life_unit="h")
        with qtbot.waitExposed(page):
            page.show()
        return page

    return show


def heard(page):
    """Collect what the page says of its reading."""
    said = {"dragged": [], "chosen": [], "age dragged": [], "age chosen": []}
    page.percent_dragged.connect(said["dragged"].append)
    page.percent_chosen.connect(said["chosen"].append)
    page.age_dragged.connect(said["age dragged"].append)
    page.age_chosen.connect(said["age chosen"].append)
    return said


def drag(qtbot, page, by: QPoint, steps: int = 6) -> None:
    """Take the reading line with the left button, move it and let it go."""
    viewport = page.view.viewport()
    start = page.view.mapFromScene(page.reading_line.grip())
    qtbot.mouseMove(viewport, start)
    qtbot.wait(BETWEEN_MOVES)
    qtbot.mousePress(viewport, Qt.MouseButton.LeftButton, pos=start)
    for step in range(1, steps + 1):
        qtbot.wait(BETWEEN_MOVES)
        qtbot.mouseMove(viewport, start + QPoint(by.x() * step // steps, by.y() * step // steps))
    qtbot.wait(BETWEEN_MOVES)
    qtbot.mouseRelease(viewport, Qt.MouseButton.LeftButton, pos=start + by)


class TestDragging:
    def test_the_level_line_on_paper_is_dragged_to_a_round_percent(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS))
        said = heard(page)
        before = page.view.plotItem.vb.viewRange()
        drag(qtbot, page, QPoint(0, -60))
        assert len(said["dragged"]) >= 3
        assert said["dragged"] == sorted(said["dragged"])
        assert said["chosen"] == said["dragged"][-1:]
        chosen = said["chosen"][0]
        assert chosen > 15.0
        assert chosen == round(chosen)
        assert said["age dragged"] == []
        assert page.view.plotItem.vb.viewRange() == before, "dragging the line must not pan the view"

    def test_the_line_stands_where_the_mouse_let_go(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS))
        start = page.view.mapFromScene(page.reading_line.grip())
        drag(qtbot, page, QPoint(0, -60))
        moved = page.view.mapFromScene(page.reading_line.grip()).y() - start.y()
        assert moved == pytest.approx(-60, abs=4)  # a whole percent is up to some pixels away

    def test_ahead_of_the_engine_the_mark_runs_along_the_drawn_fit(self, qtbot, shown):
        done = analysis(PUMPS, side="two")
        page = shown(PaperPage, done.picture)
        drag(qtbot, page, QPoint(0, 50))
        percent = 100.0 * float(page._probability.from_scale(page.reading_line.mark.value))
        exact = done.fit.life(percent / 100.0)
        assert np.exp(page.reading_line.mark.age) == pytest.approx(exact, rel=1e-9)
        bounds = done.fit.life_bounds(percent / 100.0, confidence=0.95, side="two", kind="likelihood")
        drawn = [float(np.exp(end)) for end, _, _ in page.reading_line.mark.ends]
        assert drawn == pytest.approx(bounds, rel=2e-3)  # read off a band drawn through 160 points

    def test_a_new_picture_at_every_move_is_taken_as_the_answer(self, qtbot, shown):
        done = analysis(PUMPS)
        page = shown(PaperPage, done.picture)

        def answer(percent):
            page.show_pictures([done.with_main_ask(LifeAsk(percent)).picture], current=0, life_unit="h")

        page.percent_dragged.connect(answer)
        said = heard(page)
        drag(qtbot, page, QPoint(0, -80))
        exact = done.fit.life(said["chosen"][0] / 100.0)
        assert page.reading_line.mark.age == pytest.approx(np.log(exact), abs=1e-12)
        assert f"B{said['chosen'][0]:g} life" in page.view.accessibleDescription()

    @pytest.mark.parametrize("kind", [HazardPage, SurvivalPage])
    def test_the_upright_line_of_the_curves_is_dragged_along_the_ages(self, qtbot, shown, kind):
        done = analysis(PUMPS)
        page = shown(kind, done.picture)
        said = heard(page)
        drag(qtbot, page, QPoint(70, 0))
        assert said["dragged"] == sorted(said["dragged"])
        assert said["chosen"] == said["dragged"][-1:]
        assert said["age chosen"] == said["age dragged"][-1:]
        assert said["chosen"][0] > 10.0
        assert said["age chosen"][0] == pytest.approx(done.fit.life(said["chosen"][0] / 100.0), rel=1e-9)

    def test_without_an_estimate_there_is_no_line(self, shown):
        page = shown(PaperPage, picture(NONE_FAILED))
        assert not page.reading_line.isVisible()
        assert page.reading_line.grip() is None

    def test_a_click_without_a_move_chooses_nothing(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS))
        said = heard(page)
        place = page.view.mapFromScene(page.reading_line.grip())
        qtbot.mouseClick(page.view.viewport(), Qt.MouseButton.LeftButton, pos=place)
        assert said == {"dragged": [], "chosen": [], "age dragged": [], "age chosen": []}


class TestKeys:
    @pytest.mark.parametrize(
        ("modifier", "key", "expected"),
        [
            (Qt.KeyboardModifier.AltModifier, Qt.Key.Key_Up, 20.0),
            (Qt.KeyboardModifier.AltModifier, Qt.Key.Key_Down, 5.0),
            (Qt.KeyboardModifier.ShiftModifier, Qt.Key.Key_Up, 11.0),
            (Qt.KeyboardModifier.ShiftModifier, Qt.Key.Key_Down, 9.9),
            (Qt.KeyboardModifier.AltModifier, Qt.Key.Key_Right, 20.0),
        ],
    )
    def test_alt_moves_to_the_next_round_percent_and_shift_by_a_small_step(self, qtbot, shown, modifier, key, expected):
        page = shown(PaperPage, picture(PUMPS))
        said = heard(page)
        qtbot.keyClick(page.view, key, modifier)
        assert said["dragged"] == [expected]
        assert said["chosen"] == [expected]

    def test_a_key_that_is_held_chooses_once(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS))
        said = heard(page)
        for _ in range(3):
            qtbot.keyPress(page.view, Qt.Key.Key_Up, Qt.KeyboardModifier.AltModifier)
        qtbot.keyRelease(page.view, Qt.Key.Key_Up, Qt.KeyboardModifier.AltModifier)
        assert said["dragged"] == [20.0, 30.0, 40.0]
        assert said["chosen"] == [40.0]

    def test_the_reading_stays_inside_the_scale(self, qtbot, shown):
        page = shown(PaperPage, picture(PUMPS, ask=LifeAsk(1e-6)))
        said = heard(page)
        qtbot.keyClick(page.view, Qt.Key.Key_Down, Qt.KeyboardModifier.AltModifier)
        assert said["dragged"] == []


class TestMarks:
    """What the mark says is what the reading says."""

    @pytest.mark.parametrize(("side", "has"), [("lower", (1, 0)), ("upper", (0, 1)), ("two", (1, 1))])
    def test_the_bracket_has_the_ends_of_the_bound(self, shown, side, has):
        done = analysis(PUMPS, side=side)
        page = shown(PaperPage, done.picture)
        mark, reading = page.reading_line.mark, done.picture.reading
        assert (mark.lower is not None, mark.upper is not None) == tuple(map(bool, has))
        for end, bound in ((mark.lower, reading.lower), (mark.upper, reading.upper)):
            if bound is not None:
                assert np.exp(end) == pytest.approx(bound, rel=1e-12)
        assert mark.value_text == "10 %"
        assert mark.age_text.endswith(" h")

    def test_a_life_stands_at_the_same_age_on_every_page(self, shown):
        done = analysis(PUMPS)
        estimate = done.picture.reading.estimate
        hazard, survival = shown(HazardPage, done.picture), shown(SurvivalPage, done.picture)
        assert hazard.reading_line.mark.age == pytest.approx(estimate)
        assert hazard.reading_line.mark.value == pytest.approx(done.fit.hazard(estimate), rel=2e-3)
        assert survival.reading_line.mark.age == pytest.approx(estimate)
        assert survival.reading_line.mark.value == pytest.approx(90.0)
        assert survival.reading_line.mark.value_text == "90 %"

    def test_a_reliability_brings_an_upright_bracket(self, shown):
        done = analysis(PUMPS, ask=ReliabilityAsk(1000.0), side="two")
        reading = done.picture.reading
        paper, survival = shown(PaperPage, done.picture), shown(SurvivalPage, done.picture)
        mark = survival.reading_line.mark
        assert (mark.along, mark.age) == ("value", 1000.0)
        assert (mark.lower, mark.upper) == pytest.approx((100 * reading.lower, 100 * reading.upper))
        on_paper = paper.reading_line.mark
        failed = paper._probability.from_scale([on_paper.lower, on_paper.upper])
        assert failed == pytest.approx([1 - reading.upper, 1 - reading.lower])

    def test_a_hazard_brings_its_own_bound_to_its_own_page(self, shown):
        done = analysis(PUMPS, ask=HazardAsk(1500.0), side="two", family="weibull")
        reading = done.picture.reading
        mark = shown(HazardPage, done.picture).reading_line.mark
        assert (mark.age, mark.value) == (1500.0, reading.estimate)
        assert (mark.lower, mark.upper) == (reading.lower, reading.upper)
        on_paper = shown(PaperPage, done.picture).reading_line.mark
        assert list(on_paper.ends) == []
        assert on_paper.value_text == ""
