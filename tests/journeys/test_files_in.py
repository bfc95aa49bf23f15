"""Tables from files and the clipboard through the real window: sheets, dates, what was understood and its changes."""

from __future__ import annotations

from datetime import datetime

import pytest
from PySide6.QtCore import QMimeData, QPointF, Qt, QUrl
from PySide6.QtGui import QDragEnterEvent, QDropEvent
from PySide6.QtWidgets import QApplication, QComboBox, QListView, QToolButton

from tests.journeys.conftest import Desk, Dialogs
from tests.session.spreadsheet_samples import write_ods, write_xls, write_xlsx

RIG_A = [["Unit", "Life (h)", "State"], ["A-1", 812.125, "failed"], ["A-2", 1230, "failed"], ["A-3", 1500, "n.z."]]
RIG_B = [
    ["Unit", "Installed", "Failed on"],
    ["B-1", datetime(2024, 1, 1), datetime(2024, 3, 1)],
    ["B-2", datetime(2024, 1, 11), datetime(2024, 6, 30)],
    ["B-3", datetime(2024, 2, 1), None],
]


def texts(desk: Desk, place: int = 0) -> list[dict[str, str]]:
    return desk.window.session.sets[place].table.rows()


def wait_for_reading(desk: Desk, unit: str) -> None:
    """Wait for the first answer; the bound of a set from a file is simulated, which a journey need not wait for."""
    desk.qtbot.waitUntil(lambda: desk.sentence.startswith("B10 life") and f" {unit}" in desk.sentence, timeout=20_000)


def press(desk: Desk, label: str) -> None:
    strip = desk.window.contents.grid.strip
    (button,) = [b for b in strip.findChildren(QToolButton) if b.isVisible() and b.text() == label]
    desk.qtbot.keyClick(button, Qt.Key.Key_Space)


def choose_sheet(desk: Desk, name: str) -> None:
    """Go up or down the box of sheets by key."""
    (box,) = [
        b
        for b in desk.window.contents.grid.strip.findChildren(QComboBox)
        if b.isVisible() and b.accessibleName() == "Sheet of the file"
    ]
    desk.qtbot.keyClick(box, Qt.Key.Key_Down if box.findText(name) > box.currentIndex() else Qt.Key.Key_Up)
    assert desk.window.contents.grid.strip.sentence.startswith(f"Sheet '{name}'")


def test_a_workbook_of_two_sheets_is_opened_read_and_read_differently(desk: Desk) -> None:
    path = write_xlsx(desk.folder / "rigs.xlsx", {"Rig A": RIG_A, "Rig B": RIG_B})
    Dialogs.choose_file(path)
    desk.key(Qt.Key.Key_O, Qt.KeyboardModifier.ControlModifier)
    strip = desk.window.contents.grid.strip
    assert strip.sentence.startswith("Sheet 'Rig A': 3 rows; unit in column 1, life in column 2")
    assert desk.counts == "2 failed, 0 running, 1 unread"
    assert desk.message == ""
    assert "State 'n.z.': what does it mean?" in strip.question
    press(desk, "Running")
    assert desk.counts == "2 failed, 1 running, 0 unread"
    wait_for_reading(desk, "h")
    assert desk.window.undo.count() == 1

    choose_sheet(desk, "Rig B")
    assert [row["life"] for row in texts(desk)] == ["60", "171", "150"]
    assert [row["state"] for row in texts(desk)] == ["failed", "failed", "running"]
    assert texts(desk)[0]["Failed on"] == "2024-03-01"
    assert desk.window.session.life_unit == "days"
    wait_for_reading(desk, "days")
    assert desk.window.contents.set_bar.life_unit.currentText() == "days"
    assert desk.window.undo.count() == 1

    desk.window.undo.undo()
    assert [row["life"] for row in texts(desk)] == ["812.125", "1230", "1500"]
    assert desk.window.session.life_unit == "h"
    assert strip.sentence.startswith("Sheet 'Rig A'")
    assert desk.window.undo.isClean()
    choose_sheet(desk, "Rig B")
    assert len(texts(desk)) == 3


@pytest.mark.parametrize("write", [write_ods, write_xls])
def test_a_spreadsheet_file_is_dropped_onto_the_window(desk: Desk, write) -> None:
    rows = [["Unit", "Life (h)", "State"], ["A-1", 812.125, "failed"], ["A-2", 1230, "failed"], ["A-3", 1500, "ok"]]
    mime = QMimeData()
    mime.setUrls([QUrl.fromLocalFile(str(write(desk.folder / f"rig.{write.__name__[6:]}", {"Rig": rows})))])
    keys = Qt.KeyboardModifier.NoModifier
    action, button = Qt.DropAction.CopyAction, Qt.MouseButton.LeftButton
    enter = QDragEnterEvent(QPointF(300, 300).toPoint(), action, mime, button, keys)
    QApplication.sendEvent(desk.window, enter)
    assert enter.isAccepted()
    QApplication.sendEvent(desk.window, QDropEvent(QPointF(300, 300), action, mime, button, keys))
    desk.qtbot.waitUntil(lambda: len(texts(desk)) == 3)
    assert texts(desk)[0] == {"unit": "A-1", "life": "812.125", "state": "failed"}
    assert desk.counts == "2 failed, 1 running, 0 unread"
    wait_for_reading(desk, "h")


def test_pasted_dates_are_asked_about_once_and_give_a_reading(desk: Desk) -> None:
    desk.paste(
        "Unit;Start;End;Result\nP-1;03/04/2024;05/06/2024;broken\nP-2;03/04/2024;07/08/2024;broken\n"
        "P-3;04/05/2024;09/10/2024;broken\nP-4;04/05/2024;;ok\n"
    )
    assert desk.counts == "0 failed, 0 running, 4 unread"
    assert "which comes first?" in desk.window.contents.grid.strip.question
    press(desk, "Day first")
    assert [row["life"] for row in texts(desk)] == ["63", "126", "158", "158"]
    assert desk.counts == "3 failed, 1 running, 0 unread"
    wait_for_reading(desk, "days")
    assert "running until 2024-10-09" in desk.window.contents.grid.strip.notes
    desk.window.undo.undo()
    assert texts(desk) == []


def test_a_table_joins_a_session_in_its_unit_and_is_shown(desk: Desk) -> None:
    desk.paste("Unit\tLife (h)\tState\nP-1\t812\tfailed\nP-2\t900\tfailed\n")
    desk.window.files.add_sets(write_xlsx(desk.folder / "rig.xlsx", {"Rig": RIG_B}))
    assert desk.window.shown_set == 1
    assert [row["life"] for row in texts(desk, 1)] == ["1440", "4104", "3600"]
    assert "life in hours from the dates" in desk.window.contents.grid.strip.sentence
    desk.window.files.add_sets(
        write_xlsx(desk.folder / "km.xlsx", {"Rig": [["Unit", "Life (km)"], ["K-1", 5], ["K-2", 6]]})
    )
    assert "lives in km, this session in h" in desk.message


def test_a_file_that_cannot_be_opened_leaves_everything_as_it_was(desk: Desk) -> None:
    desk.paste("Unit\tLife (h)\tState\nP-1\t812\tfailed\n")
    desk.window.undo.setClean()
    broken = desk.folder / "broken.xlsx"
    broken.write_bytes(b"PK\x03\x04 and no more")
    assert not desk.window.files.open(broken)
    assert "broken.xlsx is broken, or no spreadsheet file" in desk.message
    assert [row["life"] for row in texts(desk)] == ["812"]


def test_a_large_file_is_read_while_the_window_goes_on_painting(desk: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    from reliability_app.windows import file_commands, waiting

    waited: list[bool] = []
    wait_for = waiting.wait_for

    def noted(act):
        waited.append(True)
        return wait_for(act)

    monkeypatch.setattr(file_commands, "wait_for", noted)
    path = desk.folder / "long.csv"
    path.write_text("Unit,Life,State\n" + "".join(f"P-{n},{n + 1},failed\n" for n in range(15_000)), encoding="utf-8")
    assert desk.window.files.open(path)
    assert waited
    assert len(texts(desk)) == 15_000
    # Trouble met in the other thread is told like any other.
    path.write_bytes(b"\x00" * 300_000)
    desk.window.undo.setClean()
    assert not desk.window.files.open(path)
    assert "is not text" in desk.message


def test_the_list_of_unread_cells_leads_to_each_of_them(desk: Desk) -> None:
    desk.paste(
        "Unit\tLife (h)\tState\nP-1\t812\tfailed\nP-2\tn/a\tfailed\nP-3\t900\tfailed\nP-4\t5\tlimbo-like remark\n"
    )
    grid = desk.window.contents.grid
    (button,) = [b for b in grid.counts_line.findChildren(QToolButton) if b.text() == "List"]
    desk.qtbot.mouseClick(button, Qt.MouseButton.LeftButton)
    assert len(grid.faults.texts) == 2
    (entries,) = grid.faults.findChildren(QListView)
    assert entries.hasFocus()
    desk.key(Qt.Key.Key_Return)
    assert grid.view.hasFocus()
    desk.type("1100")
    desk.key(Qt.Key.Key_Return)
    desk.wait_for_answer()
    assert desk.counts == "3 failed, 0 running, 1 unread"
    assert len(grid.faults.texts) == 1
