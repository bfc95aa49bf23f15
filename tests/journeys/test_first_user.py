"""What a first user stumbled over stays mended."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import pytest
from PySide6.QtCore import Qt, QTimer
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QMessageBox

from reliability_app.application import ask_about_recovery
from reliability_app.session.document import HazardAsk
from reliability_app.session.edits import ChangeBasis
from tests.journeys.conftest import CONTROL, Desk
from tests.journeys.test_main_job import TABBED


def test_units_found_failed_still_show_fit_and_reading(desk: Desk) -> None:
    desk.paste(
        "life\tuntil\tstate\n0\t200\tfound failed\n300\t\tfailed\n420\t\tfailed\n500\t\trunning\n700\t\tfailed\n"
    )
    assert desk.sentence.startswith("B10 life")
    for page in desk.window.contents.pages:
        desk.window.contents.tabs.setCurrentWidget(page)
        assert page.reading_line.mark is not None
        assert page.view.isVisibleTo(page)


def test_a_confidence_that_cannot_be_used_is_refused_in_words(desk: Desk) -> None:
    basis = desk.window.contents.basis
    basis.confidence.setFocus()
    basis.confidence.lineEdit().selectAll()
    desk.type("150")
    desk.key(Qt.Key.Key_Return)
    assert "cannot be used" in basis.trouble.text()
    assert desk.window.session.sets[0].basis.confidence == 0.95


@pytest.mark.parametrize(("typed", "level"), [("90", 0.90), ("0.99", 0.99), ("99,5", 0.995)])
def test_a_confidence_is_understood_and_undone_from_where_it_was_typed(desk: Desk, typed: str, level: float) -> None:
    basis = desk.window.contents.basis
    basis.confidence.setFocus()
    basis.confidence.lineEdit().selectAll()
    desk.type(typed)
    desk.key(Qt.Key.Key_Return)
    assert desk.window.session.sets[0].basis.confidence == pytest.approx(level)
    desk.key(Qt.Key.Key_Z, CONTROL)
    assert desk.window.session.sets[0].basis.confidence == 0.95


def test_a_hazard_can_be_the_main_reading(desk: Desk) -> None:
    desk.paste(TABBED)
    reading = desk.window.contents.reading
    reading.new_ask.setFocus()
    desk.type("hazard 300 h")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    reading.table.setFocus()
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert isinstance(desk.window.session.asks[0], HazardAsk)
    assert desk.sentence.startswith("Hazard rate at 300 h")


def test_a_bare_number_is_asked_about(desk: Desk) -> None:
    desk.paste(TABBED)
    reading = desk.window.contents.reading
    reading.new_ask.setFocus()
    desk.type("10")
    desk.key(Qt.Key.Key_Return)
    assert "percent or an age" in reading.new_ask_trouble.text()


def test_the_copied_readings_carry_set_side_and_cautions(desk: Desk) -> None:
    desk.paste(TABBED)
    desk.window.contents.reading.table.copy_all()
    rows = [line.split("\t") for line in QGuiApplication.clipboard().text().split("\n")]
    assert rows[0][:2] == ["Set", "Reading"]
    assert rows[1][1] == "B10 life (h)"
    assert rows[1][6] == "lower"
    assert rows[-1][0] == "Caution"


def test_a_failed_analysis_leaves_no_number_standing(desk: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    desk.paste(TABBED)

    def broken(*_: object, **__: object) -> None:
        raise ZeroDivisionError("planted")

    monkeypatch.setattr("reliability_app.windows.background.analyse", broken)
    desk.go(0, "life")
    desk.type("60")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert "the analysis failed" in desk.sentence
    assert "planted" in desk.message
    assert desk.window.contents.paper.current is None


@pytest.mark.parametrize(("press", "answer"), [("Escape", "later"), ("Open", "open"), ("Delete", "delete")])
def test_escape_never_deletes_recovered_work(desk: Desk, press: str, answer: str) -> None:
    def act() -> None:
        box = QApplication.activeModalWidget()
        assert isinstance(box, QMessageBox)
        if press == "Escape":
            desk.qtbot.keyClick(box, Qt.Key.Key_Escape)
        else:
            next(button for button in box.buttons() if press in button.text()).click()

    QTimer.singleShot(200, act)
    assert ask_about_recovery(desk.window, Path("rig.json"), "2026-01-01 10:00") == answer


def test_a_calibrated_bound_comes_after_a_provisional_one(desk: Desk) -> None:
    shown: list[tuple[bool, str]] = []
    window = desk.window
    window.answer_shown.connect(lambda: shown.append((window.analysis.is_provisional, desk.sentence)))
    desk.paste(TABBED)
    shown.clear()
    bound = window.contents.basis.bound
    bound.setFocus()
    bound.setCurrentIndex(bound.findData("automatic"))
    bound.activated.emit(bound.currentIndex())
    desk.wait_for_answer()
    assert [provisional for provisional, _ in shown] == [True, False]
    assert shown[0][1] != shown[1][1]
    assert "calibrated likelihood ratio bound (automatic)" in window.contents.reading.rests_on.text()
    assert window.contents.reading.stop_button.isHidden()


def test_a_calibration_can_be_stopped_and_its_late_answer_is_dropped(desk: Desk) -> None:
    desk.paste(TABBED)
    panel = desk.window.contents.reading
    basis = desk.window.session.sets[0].basis
    desk.window.push_edit(ChangeBasis(0, basis, replace(basis, bound="calibrated")))
    desk.qtbot.waitUntil(lambda: panel.stop_button.isVisible(), timeout=30_000)
    panel.stop_button.click()
    desk.qtbot.wait(300)
    assert not desk.window.analyst.is_busy
    assert desk.window.analysis.is_provisional
    assert "provisional" in panel.rests_on.text()
