"""Typing into the grid and moving in it, by real keys, as in a spreadsheet."""

import pytest
from PySide6.QtCore import QPoint, Qt
from PySide6.QtWidgets import QApplication, QLineEdit

from reliability_app.session.edits import BlockEdit
from tests.windows.units_grid.conftest import CONTROL, SHIFT

Key = Qt.Key


def test_a_unit_is_entered_with_tab_and_enter_and_the_next_row_begins_where_it_began(rig):
    rig.type("P-01")
    rig.key(Key.Key_Tab)
    rig.type("812")
    rig.key(Key.Key_Tab)
    rig.key(Key.Key_Tab)
    rig.type("broken")
    rig.key(Key.Key_Return)
    assert rig.texts == [{"unit": "P-01", "life": "812", "state": "failed"}]
    assert rig.cell == (1, "unit")
    assert rig.grid.model.rowCount() == 2
    assert rig.undo.count() == 3
    assert rig.grid.counts_line.counts_text == "1 failed, 0 running, 0 unread"


def test_typing_replaces_the_text_and_escape_keeps_it(rig):
    rig.fill("P-01|812||failed")
    rig.go(0, "life")
    rig.type("9")
    rig.key(Key.Key_Escape)
    assert rig.table.text(0, "life") == "812"
    rig.type("90")
    rig.key(Key.Key_Return)
    assert rig.table.text(0, "life") == "90"
    assert rig.cell == (1, "life")


def test_f2_edits_within_the_text(rig):
    rig.fill("P-01|812||failed")
    rig.go(0, "life")
    rig.key(Key.Key_F2)
    rig.key(Key.Key_Left)
    rig.type("5")
    rig.key(Key.Key_Return)
    assert rig.table.text(0, "life") == "8152"


def test_a_double_click_edits_within_the_text(rig):
    rig.fill("P-01|812||failed")
    spot = rig.grid.view.visualRect(rig.grid.model.index(0, 1)).center()
    rig.qtbot.mouseClick(rig.grid.view.viewport(), Qt.MouseButton.LeftButton, pos=spot)
    rig.qtbot.mouseDClick(rig.grid.view.viewport(), Qt.MouseButton.LeftButton, pos=spot)
    line = QApplication.focusWidget()
    assert isinstance(line, QLineEdit)
    assert not line.hasSelectedText()
    rig.type("0")
    rig.key(Key.Key_Return)
    assert rig.table.text(0, "life") == "8120"


def test_arrows_finish_an_entry_that_was_typed_over(rig):
    rig.fill("P-01|812||failed", "P-02|900||running")
    rig.go(0, "life")
    rig.type("7")
    rig.key(Key.Key_Down)
    assert rig.table.text(0, "life") == "7"
    assert rig.cell == (1, "life")
    rig.type("8")
    rig.key(Key.Key_Left)
    assert rig.table.text(1, "life") == "8"
    assert rig.cell == (1, "unit")


def test_shift_reverses_enter_and_tab(rig):
    rig.fill("a|1||failed", "b|2||failed")
    rig.go(1, "life")
    rig.key(Key.Key_Return, SHIFT)
    assert rig.cell == (0, "life")
    rig.key(Key.Key_Tab)
    rig.key(Key.Key_Backtab, SHIFT)
    rig.key(Key.Key_Backtab, SHIFT)
    assert rig.cell == (0, "unit")
    rig.type("x")
    rig.key(Key.Key_Return, SHIFT)
    assert rig.cell == (0, "unit")
    assert rig.table.text(0, "unit") == "x"


def test_enter_goes_round_a_selected_block_down_its_columns_and_tab_along_its_rows(rig):
    rig.fill("a|1||failed", "b|2||failed")
    rig.select(0, "unit", 1, "life")
    seen = []
    for _ in range(4):
        rig.key(Key.Key_Return)
        seen.append(rig.cell)
    assert seen == [(1, "unit"), (0, "life"), (1, "life"), (0, "unit")]
    rig.key(Key.Key_Tab)
    assert rig.cell == (0, "life")
    rig.type("5")
    rig.key(Key.Key_Tab)
    assert rig.cell == (1, "unit")
    assert rig.table.text(0, "life") == "5"
    assert len(rig.grid.view.selected_ranges()[0].rows) == 2


def test_control_arrows_jump_to_the_edge_of_what_is_filled_and_shift_selects_on_the_way(rig):
    rig.fill("a|1", "b|", "c|3", "d|4")
    rig.go(0, "unit")
    rig.key(Key.Key_Down, CONTROL)
    assert rig.cell == (3, "unit")
    rig.go(0, "life")
    rig.key(Key.Key_Down, CONTROL)
    assert rig.cell == (2, "life")
    rig.key(Key.Key_Up, CONTROL | SHIFT)
    rig.key(Key.Key_Left, CONTROL | SHIFT)
    block = rig.grid.view.selected_ranges()
    assert [(part.top, part.left, part.bottom, part.right) for part in block] == [(0, 0, 2, 1)]


def test_shift_space_selects_whole_rows(rig):
    rig.fill("a|1", "b|2", "c|3")
    rig.select(0, "life", 1, "life")
    rig.key(Key.Key_Space, SHIFT)
    (block,) = rig.grid.view.selected_ranges()
    assert (block.top, block.bottom, block.left, block.right) == (0, 1, 0, 7)


def test_control_tab_leaves_the_grid(rig):
    rig.fill("a|x||failed")
    rig.key(Key.Key_Tab, CONTROL)
    assert not rig.grid.view.hasFocus()
    assert rig.grid.isAncestorOf(QApplication.focusWidget())


def test_a_cell_typed_anew_with_the_same_text_is_no_step(rig):
    rig.fill("P-01|812||failed")
    rig.go(0, "life")
    rig.type("812")
    rig.key(Key.Key_Return)
    assert rig.undo.count() == 0


@pytest.mark.parametrize(
    ("typed", "stored"),
    [("r", "running"), ("f", "failed"), ("fo", "found failed"), ("survived", "running"), ("1", "failed")],
)
def test_the_state_is_completed_to_our_own_word_and_synonyms_can_be_typed(rig, typed, stored):
    rig.go(0, "state")
    rig.type(typed)
    rig.key(Key.Key_Return)
    assert rig.table.text(0, "state") == stored
    assert rig.cell == (1, "state")


def test_f2_on_a_state_drops_down_the_three_words(rig):
    rig.fill("P-01|812||failed")
    rig.go(0, "state")
    rig.key(Key.Key_F2)
    popup = QApplication.activePopupWidget()
    assert popup is not None
    model = popup.model()
    assert [model.index(row, 0).data() for row in range(model.rowCount())] == ["failed", "running", "found failed"]
    rig.key(Key.Key_Down)
    rig.key(Key.Key_Return)
    assert rig.table.text(0, "state") == "running"
    assert rig.grid.view.hasFocus()


def test_a_textbook_plus_in_the_life_cell_sets_the_state(rig):
    rig.go(0, "life")
    rig.type("1500+")
    rig.key(Key.Key_Return)
    assert rig.texts == [{"life": "1500", "state": "running"}]


def test_an_unknown_state_stays_as_typed_and_says_why(rig):
    rig.fill("P-01|812")
    rig.go(0, "state")
    rig.type("lost")
    rig.key(Key.Key_Up)
    assert rig.table.text(0, "state") == "lost"
    assert "'lost'" in rig.grid.counts_line.reason_text


def test_undo_and_redo_show_where_they_happened(rig):
    rig.fill("a|1||failed", "b|2||failed")
    rig.go(1, "life")
    rig.type("22")
    rig.key(Key.Key_Return)
    rig.go(0, "unit")
    rig.undo.undo()
    assert rig.table.text(1, "life") == "2"
    assert rig.cell == (1, "life")
    rig.go(0, "unit")
    rig.undo.redo()
    assert rig.table.text(1, "life") == "22"
    assert rig.cell == (1, "life")


def test_the_row_selected_is_told_and_minus_one_for_the_empty_row(rig):
    rig.fill("a|1||failed", "b|2||failed")
    told = []
    rig.grid.row_selected.connect(told.append)
    rig.go(1, "life")
    rig.go(1, "unit")
    rig.go(2, "unit")
    assert told == [1, -1]


def test_a_long_note_is_edited_over_the_cells_beside_it(rig):
    rig.fill("|1||failed")
    rig.go(0, "unit")
    rig.type("a very long name of a unit")
    rig.key(Key.Key_Return)
    rig.go(0, "unit")
    rig.key(Key.Key_F2)
    line = QApplication.focusWidget()
    assert line.width() > rig.grid.view.columnWidth(0)
    assert line.mapTo(rig.grid.view.viewport(), QPoint(0, 0)).x() == rig.grid.view.columnViewportPosition(0)
    rig.key(Key.Key_Escape)


@pytest.mark.parametrize(("typed", "stored"), [("lost", "lost"), ("survived", "running"), ("ru", "running"), ("", "")])
def test_a_word_typed_while_the_list_is_down_is_what_counts(rig, typed, stored):
    rig.fill("P-01|812||failed")
    rig.go(0, "state")
    rig.key(Key.Key_F2)
    rig.key(Key.Key_A, CONTROL)
    rig.key(Key.Key_Backspace)
    rig.type(typed)
    rig.key(Key.Key_Return)
    assert rig.table.text(0, "state") == stored


def test_an_entry_under_way_is_taken_over_on_request(rig):
    rig.go(0, "life")
    rig.type("812")
    assert rig.texts == []
    rig.grid.finish_entry()
    assert rig.texts == [{"life": "812"}]
    rig.grid.finish_entry()
    assert rig.undo.count() == 1


def test_a_change_elsewhere_leaves_an_entry_under_way_alone(rig):
    rig.fill("a|1||failed")
    rig.go(0, "life")
    rig.type("77")
    rig.undo.push_edit(rig.session, BlockEdit(0, 0, ("life",), [["5"]]))
    rig.type("7")
    rig.key(Key.Key_Return)
    assert rig.table.text(0, "life") == "777"


def test_signs_in_the_life_column_fill_until_and_state(rig):
    for text in ("200-400", "<200", ">1500", "1500+"):
        rig.go(rig.table.row_count, "life")
        rig.type(text)
        rig.key(Key.Key_Return)
    assert rig.texts == [
        {"life": "200", "until": "400", "state": "found failed"},
        {"life": "0", "until": "200", "state": "found failed"},
        {"life": "1500", "state": "running"},
        {"life": "1500", "state": "running"},
    ]
    assert rig.grid.counts_line.counts_text == "0 failed, 2 running, 2 found failed, 0 unread"


def test_until_and_entered_are_typed_in_columns_of_their_own(rig):
    for column, text in (("life", "200"), ("until", "400"), ("entered", "50")):
        rig.go(0, column)
        rig.type(text)
        rig.key(Key.Key_Return)
    data = rig.table.life_data()
    assert (data.lower[0], data.upper[0], data.entered[0]) == (200, 400, 50)
