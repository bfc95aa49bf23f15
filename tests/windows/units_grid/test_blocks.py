"""Blocks of cells: copied, cut, cleared, filled, rows in and out, sorted; each one step of the undo stack."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QContextMenuEvent, QGuiApplication

from tests.windows.units_grid.conftest import CONTROL, SHIFT

Key = Qt.Key

THREE = ("P-10|812||failed|1|||first", "P-2|1500||running|3|||", "P-1|n/a||failed||||")


def clipboard():
    return QGuiApplication.clipboard().mimeData()


def test_a_block_is_copied_as_tab_separated_text_and_as_a_table(rig):
    rig.fill(*THREE)
    rig.select(0, "unit", 1, "state")
    rig.key(Key.Key_C, CONTROL)
    assert clipboard().text() == "P-10\t812\t\tfailed\nP-2\t1500\t\trunning\n"
    assert "<tr><td>P-10</td><td>812</td><td></td><td>failed</td></tr>" in clipboard().html()
    assert rig.undo.count() == 0


def test_copying_everything_leaves_the_empty_row_out(rig):
    rig.fill(*THREE)
    rig.key(Key.Key_A, CONTROL)
    rig.key(Key.Key_C, CONTROL)
    lines = clipboard().text().splitlines()
    assert len(lines) == 3
    assert lines[0] == "P-10\t812\t\tfailed\t1\t\t\tfirst"


def test_a_selection_in_pieces_is_copied_with_gaps(rig):
    rig.fill(*THREE)
    rig.go(0, "unit")
    view = rig.grid.view
    for row, section in ((1, 1), (2, 0)):
        rig.qtbot.mouseClick(
            view.viewport(),
            Qt.MouseButton.LeftButton,
            CONTROL,
            pos=view.visualRect(rig.grid.model.index(row, section)).center(),
        )
    rig.key(Key.Key_C, CONTROL)
    assert clipboard().text() == "P-10\t\n\t1500\nP-1\t\n"


def test_rows_selected_in_pieces_are_copied_as_whole_rows(rig):
    rig.fill(*THREE)
    header = rig.grid.view.verticalHeader()
    for row, modifiers in ((0, Qt.KeyboardModifier.NoModifier), (2, CONTROL)):
        spot = header.viewport().rect().center()
        spot.setY(header.sectionViewportPosition(row) + 5)
        rig.qtbot.mouseClick(header.viewport(), Qt.MouseButton.LeftButton, modifiers, pos=spot)
    rig.key(Key.Key_C, CONTROL)
    assert clipboard().text() == "P-10\t812\t\tfailed\t1\t\t\tfirst\nP-1\tn/a\t\tfailed\t\t\t\t\n"


def test_a_cell_with_tab_or_markup_survives_copy_and_paste(rig):
    rig.fill('a|1||failed|1|||5 < 6 & "x"')
    rig.select(0, "note", 0, "note")
    rig.key(Key.Key_C, CONTROL)
    assert "5 &lt; 6 &amp; &quot;x&quot;" in clipboard().html()
    rig.go(1, "note")
    rig.key(Key.Key_V, CONTROL)
    assert rig.table.text(1, "note") == '5 < 6 & "x"'


def test_copy_with_headings_makes_a_table_that_reads_back_as_one(rig):
    rig.fill(*THREE)
    before = rig.texts
    rig.key(Key.Key_A, CONTROL)
    rig.key(Key.Key_T, CONTROL | SHIFT)
    assert clipboard().text().splitlines()[0] == "Unit\tLife (h)\tUntil (h)\tState\tQty\tEntered (h)\tCause\tNote"
    rig.key(Key.Key_V, CONTROL)
    assert rig.texts == before
    assert rig.undo.undoText() == "paste of 3 rows over all rows"


def test_cut_moves_a_block(rig):
    rig.fill(*THREE)
    rig.select(0, "life", 1, "life")
    rig.key(Key.Key_X, CONTROL)
    assert [rig.table.text(row, "life") for row in range(3)] == ["", "", "n/a"]
    assert rig.undo.undoText() == "cut in Life"
    rig.go(1, "life")
    rig.key(Key.Key_V, CONTROL)
    assert [rig.table.text(row, "life") for row in range(3)] == ["", "812", "1500"]
    rig.undo.undo()
    rig.undo.undo()
    assert [rig.table.text(row, "life") for row in range(3)] == ["812", "1500", "n/a"]


def test_delete_clears_cells_as_one_step_and_nothing_where_all_is_empty(rig):
    rig.fill(*THREE)
    before = rig.texts
    rig.key(Key.Key_A, CONTROL)
    rig.key(Key.Key_Delete)
    assert rig.texts == [{}, {}, {}]
    assert rig.undo.count() == 1
    rig.key(Key.Key_Delete)
    assert rig.undo.count() == 1
    rig.undo.undo()
    assert rig.texts == before


def test_clearing_a_selection_in_pieces_is_one_step(rig):
    rig.fill(*THREE)
    before = rig.texts
    rig.go(0, "unit")
    view = rig.grid.view
    spot = view.visualRect(rig.grid.model.index(2, 1)).center()
    rig.qtbot.mouseClick(view.viewport(), Qt.MouseButton.LeftButton, CONTROL, pos=spot)
    rig.key(Key.Key_Delete)
    assert (rig.table.text(0, "unit"), rig.table.text(2, "life"), rig.table.text(1, "unit")) == ("", "", "P-2")
    assert rig.undo.count() == 1
    rig.undo.undo()
    assert rig.texts == before


def test_fill_down_takes_the_top_row_of_the_block_or_the_row_above(rig):
    rig.fill(*THREE)
    rig.select(0, "life", 2, "state")
    rig.key(Key.Key_D, CONTROL)
    assert [(rig.table.text(row, "life"), rig.table.text(row, "state")) for row in range(3)] == [("812", "failed")] * 3
    rig.go(3, "state")
    rig.key(Key.Key_D, CONTROL)
    assert rig.table.text(3, "state") == "failed"
    rig.undo.undo()
    rig.undo.undo()
    assert rig.table.row_count == 3
    assert rig.table.text(1, "life") == "1500"


def test_fill_down_over_everything_does_not_make_the_table_longer(rig):
    rig.fill(*THREE)
    rig.key(Key.Key_A, CONTROL)
    rig.key(Key.Key_D, CONTROL)
    assert rig.table.row_count == 3
    assert rig.table.row(2) == rig.table.row(0)


def test_fill_down_in_the_first_row_does_nothing(rig):
    rig.fill(*THREE)
    rig.go(0, "life")
    rig.key(Key.Key_D, CONTROL)
    assert rig.undo.count() == 0


def test_rows_are_inserted_above_as_many_as_are_selected_and_deleted_again(rig):
    rig.fill(*THREE)
    before = rig.texts
    rig.select(1, "unit", 2, "life")
    rig.key(Key.Key_I, CONTROL | SHIFT)
    assert rig.texts == [before[0], {}, {}, *before[1:]]
    assert rig.cell == (1, "unit")
    rig.key(Key.Key_Delete, CONTROL)
    assert rig.texts == before
    rig.undo.undo()
    rig.undo.undo()
    assert rig.texts == before
    assert rig.undo.redoText() == "insertion of 2 rows"


def test_deleting_rows_leaves_the_empty_row_and_keeps_the_column(rig):
    rig.fill(*THREE)
    before = rig.texts
    rig.go(3, "life")
    rig.key(Key.Key_Delete, CONTROL)
    assert rig.undo.count() == 0
    rig.select(1, "state", 3, "state")
    rig.key(Key.Key_Delete, CONTROL)
    assert rig.texts == before[:1]
    assert rig.cell == (1, "state")
    rig.undo.undo()
    assert rig.texts == before


def test_sorting_by_the_heading_menu_is_one_step(rig):
    rig.fill(*THREE)
    before = rig.texts
    section = rig.grid.model.columns.index("unit")
    ascending = rig.grid.column_menu(section).actions()[0]
    ascending.trigger()
    assert [row["unit"] for row in rig.texts] == ["P-1", "P-2", "P-10"]
    assert rig.undo.undoText() == "sorting by Unit"
    rig.undo.undo()
    assert rig.texts == before


def test_sorting_by_the_action_takes_the_current_column(rig):
    rig.fill(*THREE)
    rig.go(0, "life")
    rig.grid.actions_by_name.sort_down.trigger()
    assert [row["life"] for row in rig.texts] == ["n/a", "1500", "812"]


def test_a_users_own_column_can_be_removed_by_its_heading_menu(rig):
    rig.paste("Unit\tLife\tState\tLot\nP-1\t5\tfailed\tA\nP-2\t6\tfailed\tB\n")
    assert rig.grid.model.columns[-1] == "Lot"
    menu = rig.grid.column_menu(len(rig.grid.model.columns) - 1)
    menu.actions()[-1].trigger()
    assert "Lot" not in rig.grid.model.columns
    assert rig.grid.model.columnCount() == 8
    rig.undo.undo()
    assert [row["Lot"] for row in rig.texts] == ["A", "B"]
    assert rig.grid.model.columnCount() == 9


def test_the_menu_key_opens_the_menu_of_the_cells(rig, qapp):
    rig.fill(*THREE)
    places = []
    rig.grid.view.menu_asked.connect(places.append)
    spot = rig.grid.view.viewport().rect().center()
    event = QContextMenuEvent(QContextMenuEvent.Reason.Keyboard, spot, rig.grid.view.viewport().mapToGlobal(spot))
    qapp.sendEvent(rig.grid.view.viewport(), event)
    assert len(places) == 1
    menu = qapp.activePopupWidget()
    texts = [action.text().replace("&", "") for action in menu.actions() if action.text()]
    assert texts[:5] == ["Cut", "Copy", "Copy with headings", "Paste", "Clear cells"]
    menu.close()


def test_a_shortcut_during_an_entry_keeps_what_was_typed(rig):
    rig.fill(*THREE)
    rig.go(1, "life")
    rig.type("77")
    rig.grid.actions_by_name.insert_rows.trigger()
    assert [row.get("life") for row in rig.texts] == ["812", None, "77", "n/a"]


def test_no_two_actions_share_a_key(rig):
    keys = [key.toString() for action in rig.grid.actions_for_menu() for key in action.shortcuts()]
    keys += [key.toString() for action in rig.undo.make_actions(rig.grid) for key in action.shortcuts()]
    assert len(keys) == len(set(keys))
    assert {"Ctrl+X", "Ctrl+C", "Ctrl+V", "Del", "Ctrl+D", "Ctrl+A", "Ctrl+Z", "Ctrl+Y", "Ctrl+Shift+Z"} <= set(keys)


@pytest.mark.parametrize("name", ["cut", "copy", "clear", "fill_down", "delete_rows", "sort_up", "next_unread"])
def test_every_action_is_harmless_in_an_empty_grid(rig, name):
    getattr(rig.grid.actions_by_name, name).trigger()
    assert rig.undo.count() == 0
    assert rig.table.row_count == 0
