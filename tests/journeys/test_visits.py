"""Coming back: visits recorded, compared, opened again and taken back; the requirement; newer results brought in."""

from __future__ import annotations

import json
from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest
from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QToolButton, QWidget

from reliability_app.session.json_file import load, save
from reliability_app.session.new_results import Happened
from reliability_app.windows.bring_in import BringInDialog
from reliability_app.windows.panels.visits_page import VisitsPage
from tests.journeys.conftest import ANSWER_WITHIN_MS, CONTROL, Desk, Dialogs

# Invented: hours of twelve fans on a rig, at two looks 300 h apart.
FIRST = (
    "Unit\tLife\tState\nF-1\t412\tfailed\nF-2\t530\tfailed\nF-3\t655\tfailed\nF-4\t790\tfailed\nF-5\t880\tfailed\n"
    + "".join(f"F-{number}\t900\trunning\n" for number in range(6, 13))
)
SECOND = (
    "Unit\tLife\tState\nF-1\t412\tfailed\nF-2\t530\tfailed\nF-3\t655\tfailed\nF-4\t790\tfailed\nF-5\t880\tfailed\n"
    "F-6\t1010\tfailed\nF-7\t1105\tfailed\n"
    + "".join(f"F-{number}\t1200\trunning\n" for number in range(8, 13))
    + "F-13\t300\trunning\n"
)
ODD = SECOND.replace("F-1\t412\tfailed", "F-1\t1200\trunning").replace("F-12\t1200", "F-12\t700")


@pytest.fixture
def page(desk: Desk) -> VisitsPage:
    """The Visits page of a session of the first table, in front."""
    desk.paste(FIRST)
    desk.key(Qt.Key.Key_9, CONTROL)
    return desk.window.contents.visits


def settle(desk: Desk) -> None:
    """Wait until nothing is worked out any more."""
    visits = desk.window.visits
    desk.wait_for_answer()
    desk.qtbot.waitUntil(lambda: not any(worker.is_busy for worker in visits.workers), timeout=ANSWER_WITHIN_MS)


def record(desk: Desk, label: str) -> None:
    page = desk.window.contents.visits
    page.label.setFocus()
    desk.type(label)
    count = len(desk.window.session.visits)
    desk.key(Qt.Key.Key_Return)
    desk.qtbot.waitUntil(lambda: len(desk.window.session.visits) == count + 1, timeout=ANSWER_WITHIN_MS)
    settle(desk)


def bring_in(desk: Desk, text: str) -> BringInDialog:
    """Open the dialog by key, and paste into it."""
    QGuiApplication.clipboard().setText(text)
    desk.go(0, "unit")
    desk.key(Qt.Key.Key_B, CONTROL)
    dialog = desk.window.bringing_in.dialog
    assert dialog is not None
    desk.qtbot.waitUntil(lambda: QApplication.activeWindow() is dialog)
    desk.qtbot.keyClick(dialog, Qt.Key.Key_V, CONTROL)
    return dialog


def bring(desk: Desk, text: str) -> None:
    """Bring in a table, with nothing ticked."""
    bring_in(desk, text).take_button.click()
    come_back(desk)


def leave(desk: Desk, dialog: BringInDialog) -> None:
    """Close the dialog without bringing anything in."""
    dialog.reject()
    come_back(desk)


def come_back(desk: Desk) -> None:
    """Wait for the window to be in front again, which the platform without a screen does not see to."""
    desk.window.activateWindow()
    desk.qtbot.waitUntil(lambda: QApplication.activeWindow() is desk.window)


def column(page: VisitsPage, heading: str) -> list[str]:
    table = page.table
    headings = [table.horizontalHeaderItem(at).text() for at in range(table.columnCount())]
    at = next(at for at, text in enumerate(headings) if text == heading)
    return [table.item(row, at).text() for row in range(table.rowCount())]


def click_mark(desk: Desk, page: VisitsPage, at: int) -> None:
    """Click the mark of a visit in the chart."""
    marks = page.chart._drawings[0].marks()[0].item
    x, y = (float(values[at]) for values in marks.getData())
    spot = page.chart.view.mapFromScene(page.chart.view.plotItem.vb.mapViewToScene(QPointF(x, y)))
    desk.qtbot.mouseClick(page.chart.view.viewport(), Qt.MouseButton.LeftButton, pos=spot)


def answer_strip(desk: Desk, begins: str) -> None:
    strip = desk.window.contents.grid.strip
    desk.qtbot.waitUntil(lambda: any(b.text().startswith(begins) and b.isVisible() for b in buttons_of(strip)))
    next(button for button in buttons_of(strip) if button.text().startswith(begins) and button.isVisible()).click()


def buttons_of(widget: QWidget) -> list[QToolButton]:
    return widget.findChildren(QToolButton)


def state(desk: Desk) -> list[dict[str, str]]:
    table = desk.window.session.sets[0].table
    return [table.row(row) for row in range(table.row_count)]


def test_a_visit_is_recorded_labelled_deleted_and_each_step_undone(desk: Desk, page: VisitsPage) -> None:
    assert column(page, "Visit") == ["Today"]
    record(desk, "week 2")
    assert column(page, "Visit") == ["week 2", "Today"]
    assert column(page, "Running") == ["7", "7"]
    assert page.label.text() == ""
    click_mark(desk, page, 0)
    assert page.table.current_place == 0
    page.table.setFocus()
    desk.key(Qt.Key.Key_F2)
    desk.type("week 3")
    desk.key(Qt.Key.Key_Return)
    desk.qtbot.waitUntil(lambda: desk.window.session.visits[0].label == "week 3")
    page.table.go_to(0)
    page.table.setFocus()
    desk.key(Qt.Key.Key_Delete)
    assert desk.window.session.visits == []
    assert column(page, "Visit") == ["Today"]
    desk.window.undo.undo()
    assert column(page, "Visit") == ["week 3", "Today"]
    desk.window.undo.undo()
    desk.window.undo.undo()
    assert desk.window.session.visits == []


def test_what_changed_and_what_was_foretold_is_said_between_visits(desk: Desk, page: VisitsPage) -> None:
    record(desk, "week 2")
    bring(desk, SECOND)
    settle(desk)
    between = page.between
    assert between.pair == (0, None)
    assert "2 newly failed, 5 still running and older, 1 new" in between.changed.text()
    said = between.foretold.text()
    assert said.startswith("Of the 7 units then running")
    assert "2 failed: in agreement." in said
    assert "Mid-p" in said
    units = [between.unit_table.item(row, 0).text() for row in range(between.unit_table.rowCount())]
    assert units == [f"F-{number}" for number in range(6, 13)]
    changed = [between.change_table.item(row, 0).text() for row in range(between.change_table.rowCount())]
    assert changed == [*(f"F-{number}" for number in range(6, 14))]
    # The same beside the visit before in the table, and in the picture.
    assert column(page, "Foretold, found")[1].endswith(", 2")
    figure = page.figure()
    assert figure is not None
    assert any("2 failed: in agreement." in line for line in figure.foot)
    # What is said belongs to the units as they stand: another edit, and it is worked out anew.
    desk.go(7, "state")
    desk.type("failed")
    desk.key(Qt.Key.Key_Return)
    settle(desk)
    assert "3 failed" in between.foretold.text()


def test_a_comparison_can_be_stopped_and_stays_away(desk: Desk, page: VisitsPage, monkeypatch) -> None:
    record(desk, "week 2")
    begun: list[int] = []

    def slow(*_: object, proceed: Callable[[], None]) -> None:
        while True:
            begun.append(1)
            proceed()

    monkeypatch.setattr("reliability_app.session.visit_agreement.Agreements.between", slow)
    bring(desk, SECOND)
    desk.qtbot.waitUntil(lambda: bool(begun), timeout=ANSWER_WITHIN_MS)
    page.tabs.setCurrentIndex(1)
    assert page.between.stop_button.isVisible()
    page.between.stop_button.click()
    settle(desk)
    assert page.between.foretold.text() == ""
    assert not page.between.stop_button.isVisible()


def test_what_is_worked_out_of_another_set_is_never_shown(desk: Desk, page: VisitsPage) -> None:
    record(desk, "week 2")
    bring(desk, SECOND)
    # Another set comes to the front while the first one's comparison is under way.
    assert desk.window.visits.comparer.is_busy or page.between.foretold.text()
    desk.window.contents.set_bar.commands.add_action.trigger()
    settle(desk)
    desk.go(0, "unit")
    desk.paste(FIRST.replace("F-", "G-"))
    settle(desk)
    assert page.set_name == desk.window.session.sets[1].name
    assert page.between.foretold.text() == ""
    assert page.between.unit_table.rowCount() == 0
    assert column(page, "Visit") == ["Today"]
    desk.window.show_set(0)
    settle(desk)
    assert "2 failed: in agreement." in page.between.foretold.text()


def test_an_old_visit_stands_read_only_beside_today(desk: Desk, page: VisitsPage) -> None:
    record(desk, "week 2")
    then = desk.sentence
    bring(desk, SECOND)
    settle(desk)
    page.table.go_to(0)
    page.table.setFocus()
    desk.key(Qt.Key.Key_Return)
    view = page.visit_view
    assert view.units.isVisible()
    assert "as of week 2 (" in view.heading.text()
    assert then in view.statement.text().replace("\u00a0", " ")
    assert view.model.rowCount() == 12
    assert not view.model.flags(view.model.index(0, 0)) & Qt.ItemFlag.ItemIsEditable
    assert desk.counts.startswith("7 failed, 6 running")  # today, on the left page
    view.units.selectAll()
    view.copy_cells()
    assert QGuiApplication.clipboard().text().startswith("Unit\tLife\tState\nF-1\t412\tfailed\n")


@pytest.mark.usefixtures("page")
def test_nothing_changes_before_bring_in_and_one_undo_takes_it_back(desk: Desk) -> None:
    before = state(desk)
    dialog = bring_in(desk, ODD)
    model = dialog.model
    asked = [one.happened for one in model.units if one.is_asked_about]
    assert asked == [Happened.RUNS_AGAIN, Happened.YOUNGER]
    assert "1 went from failed back to running" in dialog.sentence.text()
    assert dialog.note.text().startswith("2 units that are asked about")
    assert state(desk) == before
    # One of the two is right; the other stays as it was.
    tick = model.index(1, 0)
    assert model.setData(tick, Qt.CheckState.Checked.value, Qt.ItemDataRole.CheckStateRole)
    assert dialog.take_button.text() == "Bring in 8 rows"
    dialog.take_button.click()
    desk.wait_for_answer()
    rows = {row["unit"]: row for row in state(desk)}
    assert rows["F-1"] == {"unit": "F-1", "life": "412", "state": "failed"}
    assert rows["F-12"]["life"] == "700"
    assert rows["F-6"] == {"unit": "F-6", "life": "1010", "state": "failed"}
    assert len(rows) == 13
    desk.window.undo.undo()
    assert state(desk) == before


@pytest.mark.usefixtures("page")
def test_newer_results_come_from_a_spreadsheet_and_can_be_left(desk: Desk, tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    for line in SECOND.splitlines():
        book.active.append([int(cell) if cell.isdigit() else cell for cell in line.split("\t")])
    book.save(tmp_path / "newer.xlsx")
    before = state(desk)
    dialog = bring_in(desk, "")
    assert "copy the newer table first" in dialog.sentence.text()
    assert not dialog.take_button.isEnabled()
    Dialogs.choose_file(tmp_path / "newer.xlsx")
    dialog.file_button.click()
    assert "2 newly failed" in dialog.sentence.text()
    leave(desk, dialog)
    assert state(desk) == before
    dialog = bring_in(desk, FIRST)
    assert not dialog.take_button.isEnabled()
    assert "Nothing in it is new" in dialog.sentence.text()
    leave(desk, dialog)
    dialog = bring_in(desk, SECOND.replace("Life", "Life (min)"))
    assert "lives in min, the session in h" in dialog.sentence.text()
    assert not dialog.take_button.isEnabled()
    leave(desk, dialog)


@pytest.mark.usefixtures("page")
def test_a_pasted_newer_table_is_not_appended_but_offered_as_newer_results(desk: Desk) -> None:
    before = state(desk)
    desk.go(12, "unit")
    desk.paste(SECOND)
    assert state(desk) == before
    assert desk.window.contents.grid.strip.question.startswith("12 of its 13 units are in the table already")
    answer_strip(desk, "Bring in as newer results")
    dialog = desk.window.bringing_in.dialog
    assert dialog is not None
    assert dialog.take_button.text() == "Bring in 8 rows"
    leave(desk, dialog)
    # Or they are further units of the same names after all.
    desk.go(12, "unit")
    desk.paste(SECOND)
    answer_strip(desk, "Add as further rows")
    desk.wait_for_answer()
    assert len(state(desk)) == 25
    desk.window.undo.undo()
    assert state(desk) == before
    # Other units are pasted as ever.
    desk.go(12, "unit")
    desk.paste(SECOND.replace("F-", "G-"))
    assert len(state(desk)) == 25


def test_the_requirement_is_set_judged_adjusted_and_its_changes_logged(desk: Desk, page: VisitsPage) -> None:
    panel = page.requirement
    panel.at_least.setText("nonsense")
    panel.set_requirement()
    assert "At least" in panel.trouble.text()
    panel.at_least.setText("100")
    panel.confidence.setText("90")
    panel.set_button.click()
    settle(desk)
    assert "with 90 % confidence: met." in panel.verdict.text()
    assert "No visit has judged it yet." in panel.verdict.text()
    record(desk, "week 2")
    assert column(page, "Requirement") == ["met (look 1)", "met (look 1)"]
    bring(desk, SECOND)
    settle(desk)
    assert column(page, "Requirement") == ["met (look 1)", "met (look 2)"]
    assert "repeated looks weaken" in panel.verdict.text()
    panel.adjusted.click()
    settle(desk)
    assert "With 98.333333 % confidence" in panel.verdict.text()  # 1 - 0.1 / (2 * 3)
    assert "repeated looks weaken" not in panel.verdict.text()
    panel.at_least.setText("800")
    panel.set_button.click()
    settle(desk)
    assert not column(page, "Requirement")[1].startswith("met")
    assert "changed, after 1 look, from" in panel.log.toPlainText()
    panel.withdraw_button.click()
    assert desk.window.session.requirement is None
    assert "withdrawn" in panel.log.toPlainText()
    desk.window.undo.undo()
    held = desk.window.session.requirement
    assert held is not None
    assert held.requirement.at_least == 800.0


def test_a_visit_is_offered_after_saving_and_saved_with_one_click(desk: Desk, tmp_path: Path) -> None:
    offer = desk.window.contents.visit_offer
    desk.paste(FIRST)
    path = tmp_path / "fans.json"
    desk.window.files._save_to(path)
    assert offer.isVisible()
    offer.label.setText("week 2")
    offer.take_button.click()
    desk.qtbot.waitUntil(lambda: bool(desk.window.session.visits), timeout=ANSWER_WITHIN_MS)
    assert [visit.label for visit in load(path).visits] == ["week 2"]
    assert desk.window.undo.isClean()
    assert offer.isHidden()
    # Nothing has changed since: nothing is offered.
    desk.window.files.save()
    assert offer.isHidden()
    desk.go(5, "state")
    desk.type("failed")
    desk.key(Qt.Key.Key_Return)
    desk.key(Qt.Key.Key_S, CONTROL)
    assert "the units of Set 1" in offer.text.text()
    offer.close_button.click()
    assert offer.isHidden()
    desk.window.files.save()
    assert offer.isHidden()  # it was declined


@pytest.mark.usefixtures("page")
def test_a_visit_that_comes_out_otherwise_now_is_told_of_and_kept(desk: Desk, tmp_path: Path) -> None:
    record(desk, "week 2")
    path = tmp_path / "fans.json"
    save(desk.window.session, path)
    content = json.loads(path.read_text("utf-8"))
    recorded = content["visits"][0]["sets"][0]
    recorded["engine"] = "0.0.9"
    recorded["readings"][0]["estimate"] *= 1.25
    path.write_text(json.dumps(content), "utf-8")
    desk.window.undo.setClean()
    assert desk.window.files.open(path)
    desk.qtbot.waitUntil(lambda: "computed by version 0.0.9" in desk.message, timeout=ANSWER_WITHIN_MS)
    assert "The visits stay as they were recorded." in desk.message
    assert desk.window.session.visits[0].record.sets[0].readings[0].estimate == recorded["readings"][0]["estimate"]
    assert not desk.window.isWindowModified()
