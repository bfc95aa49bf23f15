"""The list of all cells that cannot be read: it names them, leads to them, and follows the table."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QListView, QToolButton

from reliability_app.windows.units_grid.faults_list import MOST_ROWS
from tests.windows.units_grid.conftest import SHIFT


def open_list(rig) -> QListView:
    (button,) = [
        b for b in rig.grid.counts_line.findChildren(QToolButton) if b.accessibleName() == "List all unread cells"
    ]
    rig.qtbot.mouseClick(button, Qt.MouseButton.LeftButton)
    (entries,) = rig.grid.faults.findChildren(QListView)
    return entries


def test_every_unread_cell_is_listed_with_row_text_and_reason(rig):
    rig.paste("Unit\tLife\tState\tQty\nP-1\tn/a\tfailed\t1\nP-2\t5\tfailed\t1\nP-3\t\tlimbo\t2.5\n")
    open_list(rig)
    assert rig.grid.faults.head == "4 cells to correct"
    assert [text.split(":")[0] for text in rig.grid.faults.texts] == ["Row 1", "Row 3", "Row 3", "Row 3"]
    assert "Life 'n/a' is not a number" in rig.grid.faults.texts[0]
    assert "State 'limbo' is not known" in rig.grid.faults.texts[2]


def test_choosing_an_entry_goes_to_its_cell_and_return_goes_on_there(rig):
    rig.fill("A|x||failed", "B|5||failed", "C|7||limbo")
    entries = open_list(rig)
    assert entries.hasFocus()
    assert rig.cell == (0, "life")
    rig.key(Qt.Key.Key_Down)
    assert rig.cell == (2, "state")
    assert "State 'limbo'" in rig.grid.counts_line.reason_text
    rig.key(Qt.Key.Key_Return)
    assert rig.grid.view.hasFocus()


def test_the_list_follows_the_table_and_goes_with_the_last_fault(rig):
    rig.fill("A|x||failed", "C|7||limbo")
    open_list(rig)
    rig.go(0, "life")
    rig.grid.view.setFocus()
    rig.type("5")
    rig.key(Qt.Key.Key_Return)
    assert [text.split(":")[0] for text in rig.grid.faults.texts] == ["Row 2"]
    rig.go(1, "state")
    rig.type("failed")
    rig.key(Qt.Key.Key_Return)
    assert not rig.grid.faults.isVisible()
    rig.undo.undo()
    assert not rig.grid.faults.isVisible()
    assert not any(b.isChecked() for b in rig.grid.counts_line.findChildren(QToolButton))


def test_escape_closes_the_list(rig):
    rig.fill("A|x||failed")
    open_list(rig)
    rig.key(Qt.Key.Key_Escape)
    assert not rig.grid.faults.isVisible()
    assert rig.grid.view.hasFocus()


def test_the_list_is_opened_by_key_and_only_where_there_is_something_to_list(rig):
    rig.fill("A|5||failed")
    rig.key(Qt.Key.Key_F8, SHIFT)
    assert not rig.grid.faults.isVisible()
    rig.fill("A|5||failed", "B|x||failed")
    rig.grid.view.setFocus()
    rig.key(Qt.Key.Key_F8, SHIFT)
    assert rig.grid.faults.isVisible()
    assert rig.cell == (1, "life")


def test_a_very_long_list_says_how_much_it_leaves_out(rig):
    rig.fill(*(f"U{n}|x||failed" for n in range(MOST_ROWS + 5)))
    open_list(rig)
    assert len(rig.grid.faults.texts) == MOST_ROWS
    assert "5 further rows not listed" in rig.grid.faults.head
