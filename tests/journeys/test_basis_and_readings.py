"""The basis and every kind of reading through the real window: threshold, method, held shape, kinds, simulated plan."""

from __future__ import annotations

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication

from reliability_app.session.document import ConditionalReliabilityAsk, MeanLifeAsk, ModeAsk, ResidualLifeAsk
from reliability_app.session.edits import ChangeAsks
from reliability_app.windows.panels import plan_line
from tests.journeys.conftest import CONTROL, Desk
from tests.journeys.test_main_job import TABBED

RUNNING = "life\tstate\tqty\n1000\trunning\t5\n1500\trunning\t3\n"


def rests_on(desk: Desk) -> str:
    return desk.window.contents.reading.rests_on.text()


def undo(desk: Desk) -> None:
    desk.key(Qt.Key.Key_Z, CONTROL)
    desk.wait_for_answer()


def choose(desk: Desk, box: object, data: str) -> None:
    """Choose an entry as the keyboard does: focus, then down or up to it."""
    box.setFocus()
    while box.currentData() != data:
        before = box.currentIndex()
        desk.qtbot.keyClick(box, Qt.Key.Key_Down if box.findData(data) > before else Qt.Key.Key_Up)
        assert box.currentIndex() != before
    desk.wait_for_answer()


def test_a_shape_is_held_changed_and_released(desk: Desk) -> None:
    desk.paste(RUNNING)
    basis = desk.window.contents.basis
    assert not basis.shape.isVisible()
    desk.choose_family("Weibull")
    assert "No unit has failed" in desk.sentence
    choose(desk, basis.shape, "held")
    # By hand: ((5·1000² + 3·1500²) ln 0.9 / ln 0.05)^½ = 642.8, rounded down.
    assert desk.sentence == (
        "No unit failed. With 95 % confidence the B10 life is at least 642 h, if the Weibull shape is 2."
    )
    assert basis.held_shape.hasFocus()
    basis.held_shape.selectAll()
    desk.type("3,5")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.sentence.endswith("if the Weibull shape is 3.5.")
    assert "shape held at 3.5" in rests_on(desk)
    basis.held_shape.selectAll()
    desk.type("-1")
    desk.key(Qt.Key.Key_Return)
    assert "positive number" in basis.trouble.text()
    assert basis.held_shape.text() == "3.5"
    undo(desk)
    assert desk.sentence.endswith("if the Weibull shape is 2.")
    undo(desk)
    assert "No unit has failed" in desk.sentence
    assert not basis.held_shape.isVisible()


def test_a_threshold_is_ticked_and_what_does_not_go_with_it_is_taken_back(desk: Desk) -> None:
    desk.paste(TABBED)
    desk.choose_family("Weibull")
    basis = desk.window.contents.basis
    choose(desk, basis.fit, "median-rank regression of age")
    assert "median-rank regression of age" in rests_on(desk)
    assert "No bound can be given" in desk.sentence
    basis.threshold.setFocus()
    desk.key(Qt.Key.Key_Space)
    desk.wait_for_answer()
    assert rests_on(desk).startswith("(Weibull with threshold, maximum likelihood")
    assert "threshold" in desk.window.contents.reading.parameters.text()
    undo(desk)
    assert "median-rank regression of age" in rests_on(desk)
    desk.choose_family("Gamma")
    assert not basis.threshold.isVisible()
    assert basis.fit.count() == 1
    assert rests_on(desk).startswith("(Gamma, maximum likelihood")


def kinds(desk: Desk) -> dict[str, object]:
    menu = desk.window.contents.reading.kinds_button.menu()
    menu.aboutToShow.emit()
    return {action.text(): action for action in menu.actions()}


def test_a_kind_from_the_menu_is_completed_by_typing_its_number(desk: Desk) -> None:
    desk.paste(TABBED)
    reading = desk.window.contents.reading
    kinds(desk)["Mean residual life at an age"].trigger()
    assert reading.new_ask.hasFocus()
    assert reading.new_ask.selectedText() == "250"
    desk.type("300")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.window.session.asks[-1] == ResidualLifeAsk(300.0)
    kinds(desk)["Mode of the lives"].trigger()
    desk.wait_for_answer()
    assert desk.window.session.asks[-1] == ModeAsk()
    reading.table.setFocus()
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.sentence.startswith("Mode of the lives: ")
    # The mark on the paper stands at the mode.
    mode = desk.window.analysis.main.estimate
    assert desk.window.contents.paper.reading_line.mark.age_text == f"{mode:.0f} h"


def test_a_mean_life_is_listed_and_never_the_headline(desk: Desk) -> None:
    desk.paste(TABBED)
    reading = desk.window.contents.reading
    kinds(desk)["Mean life"].trigger()
    desk.wait_for_answer()
    assert desk.window.session.asks[-1] == MeanLifeAsk()
    reading.table.setFocus()
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.sentence.startswith("B10 life")
    assert "few units may reach it" in reading.new_ask_trouble.text()


def test_a_main_reading_that_does_not_exist_says_why(desk: Desk) -> None:
    desk.paste(TABBED)
    asks = desk.window.session.asks
    # No such ask can be typed; a file written by hand can hold it.
    desk.window.push_edit(ChangeAsks(asks, (ConditionalReliabilityAsk(100.0, 200.0), *asks)))
    desk.wait_for_answer()
    assert desk.sentence.startswith("Reliability at 100 h, given 200 h: A conditional reliability needs an age of")


@pytest.fixture
def few_tests(monkeypatch: pytest.MonkeyPatch) -> None:
    """Simulate 12 tests with small calibrations in the place of 400: the road is the same, and shorter."""
    monkeypatch.setattr("reliability_app.engine.coverage.coverage_of_life.__kwdefaults__", SMALL)


SMALL = {"confidence": 0.95, "side": "lower", "tests": 12, "inner_tests": 100, "seed": 7, "proceed": None}


@pytest.mark.usefixtures("few_tests")
def test_a_plan_is_simulated_and_goes_out_of_date(desk: Desk) -> None:
    desk.paste(TABBED)
    plan = desk.window.contents.reading.plan
    assert not plan.isVisible()
    plan.button.click()
    assert plan.label.text().startswith("Simulating this plan: test 0")
    assert not plan.button.isEnabled()
    desk.qtbot.waitUntil(lambda: not desk.window.simulator.is_busy, timeout=60_000)
    assert plan.label.text().startswith("Of 12 simulated tests like this one")
    assert "of the calibrated lower bounds of the B10 life held" in plan.label.text()
    desk.window.contents.reading.copy_button.click()
    assert "Of 12 simulated tests" in QGuiApplication.clipboard().text()
    desk.choose_family("Weibull")
    assert plan.label.text().startswith("Out of date, because the units or the basis have changed since: Of 12")
    desk.window.contents.reading.copy_button.click()
    assert "Of 12 simulated tests" not in QGuiApplication.clipboard().text()
    undo(desk)
    assert plan.label.text().startswith("Of 12 simulated tests")


def test_a_simulation_can_be_stopped_and_stops_when_the_units_change(desk: Desk) -> None:
    desk.paste(TABBED)
    plan = desk.window.contents.reading.plan
    plan.button.click()
    plan.stop_button.click()
    assert not plan.isVisible()
    assert not desk.window.simulator.is_busy
    plan.button.click()
    assert plan.is_simulating
    desk.choose_family("Weibull")
    assert not plan.is_simulating
    assert not desk.window.simulator.is_busy
    assert not plan.isVisible()


def test_the_tests_counted_are_those_of_the_engine(desk: Desk) -> None:
    desk.paste(TABBED)
    plan = desk.window.contents.reading.plan
    plan.button.click()
    assert plan.label.text().endswith(f"of about {plan_line.TESTS}")
    plan.stop_button.click()


def test_a_simulation_that_fails_through_a_fault_is_told(desk: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    def fails(*_: object, **__: object) -> None:
        raise ZeroDivisionError("planted")

    monkeypatch.setattr("reliability_app.windows.background.simulate_plan", fails)
    desk.paste(TABBED)
    plan = desk.window.contents.reading.plan
    plan.button.click()
    desk.qtbot.waitUntil(lambda: not desk.window.simulator.is_busy, timeout=60_000)
    assert "The simulation failed (ZeroDivisionError: planted)" in desk.message
    assert not plan.isVisible()
    assert plan.button.isEnabled()
