"""Text found and replaced in the units; columns hidden, shown, added, renamed and removed."""

from PySide6.QtCore import Qt, QTimer
from PySide6.QtWidgets import QApplication

from reliability_app.windows.units_grid.column_commands import ColumnNameDialog
from tests.windows.units_grid.conftest import CONTROL, SHIFT

Key = Qt.Key

FOUR = (
    "P-10|812||failed|1||Seal|first",
    "P-2|1500||running|3|||",
    "P-1|n/a||failed|||seal leaks|",
    "X|8||failed||||SEAL",
)


def find(rig, text):
    rig.key(Key.Key_F, CONTROL)
    rig.type(text)
    rig.key(Key.Key_Return)


def name_column(text, *, agree=True):
    """Answer the dialog for a column's name, which the next step opens."""

    def act():
        dialog = QApplication.activeModalWidget()
        assert isinstance(dialog, ColumnNameDialog)
        dialog.name.setText(text)
        seen.append((dialog.trouble.text(), dialog._agree.isEnabled()))
        dialog.accept() if agree else dialog.reject()

    seen = []
    QTimer.singleShot(0, act)
    return seen


def test_find_goes_round_all_columns_without_regard_to_case(rig):
    rig.fill(*FOUR)
    rig.go(1, "unit")
    find(rig, "seal")
    strip = rig.grid.find_strip
    places = [(rig.cell, strip.count_text)]
    for _ in range(3):
        rig.key(Key.Key_Return)
        places.append((rig.cell, strip.count_text))
    assert places == [
        ((2, "cause"), "2 of 3"),
        ((3, "note"), "3 of 3"),
        ((0, "cause"), "1 of 3"),
        ((2, "cause"), "2 of 3"),
    ]
    rig.key(Key.Key_Return, SHIFT)
    assert rig.cell == (0, "cause")
    rig.key(Key.Key_Escape)
    assert not strip.isVisible()
    assert rig.grid.view.hasFocus()
    rig.key(Key.Key_F3)
    assert rig.cell == (2, "cause")
    rig.key(Key.Key_F3, SHIFT)
    assert rig.cell == (0, "cause")


def test_find_goes_along_a_row_before_it_goes_down(rig):
    rig.fill("8|8||failed|8", "x|1||failed|1")
    rig.go(1, "note")
    find(rig, "8")
    places = [rig.cell]
    for _ in range(3):
        rig.key(Key.Key_Return)
        places.append(rig.cell)
    assert places == [(0, "unit"), (0, "life"), (0, "quantity"), (0, "unit")]


def test_what_is_not_there_is_said_and_nothing_moves(rig):
    rig.fill(*FOUR)
    rig.go(1, "life")
    find(rig, "(.*")
    assert rig.grid.find_strip.count_text == "not found"
    assert rig.cell == (1, "life")


def test_the_count_follows_an_edit_and_undo(rig):
    rig.fill(*FOUR)
    find(rig, "seal")
    rig.go(0, "cause")
    rig.grid.view.setFocus()
    rig.key(Key.Key_Delete)
    assert rig.grid.find_strip.count_text == "2 cells"
    rig.undo.undo()
    assert rig.grid.find_strip.count_text == "1 of 3"


def test_replace_all_is_one_step_and_leaves_cells_between_alone(rig):
    rig.fill(*FOUR)
    before = rig.texts
    find(rig, "seal")
    rig.grid.find_strip.replacement.setText(r"O-ring \1")
    rig.grid.find_strip.replace_all_asked.emit()
    assert [row.get("cause", row.get("note")) for row in rig.texts] == [
        r"O-ring \1",
        None,
        r"O-ring \1 leaks",
        r"O-ring \1",
    ]
    assert rig.grid.find_strip.count_text == "3 cells replaced"
    assert rig.undo.count() == 1
    rig.undo.undo()
    assert rig.texts == before


def test_replace_takes_the_cell_shown_and_goes_on(rig):
    rig.fill(*FOUR)
    rig.go(0, "unit")
    rig.key(Key.Key_H, CONTROL)
    rig.type("seal")
    rig.key(Key.Key_Return)
    rig.grid.find_strip.replacement.setText("gland")
    rig.grid.find_strip.replace_asked.emit()
    assert rig.table.text(0, "cause") == "gland"
    assert rig.table.text(2, "cause") == "seal leaks"
    assert rig.cell == (2, "cause")


def test_hidden_columns_are_passed_over_by_the_keys_and_keep_their_cells(rig):
    rig.fill(*FOUR)
    rig.grid.shown_columns.set_hidden({"until", "state"})
    rig.go(0, "life")
    rig.key(Key.Key_Tab)
    assert rig.cell == (0, "quantity")
    rig.key(Key.Key_Left)
    assert rig.cell == (0, "life")
    rig.key(Key.Key_Right, CONTROL)
    assert rig.cell == (0, "quantity")
    assert rig.table.text(0, "state") == "failed"
    assert rig.table.counts().failed == 2


def test_the_current_cell_is_never_in_a_hidden_column(rig):
    rig.fill(*FOUR)
    rig.go(1, "life")
    rig.key(Key.Key_K, CONTROL | SHIFT)
    assert rig.grid.shown_columns.hidden == {"life"}
    assert rig.cell != (1, "life")
    assert rig.cell[0] == 1


def test_at_least_one_column_stays_shown(rig):
    rig.key(Key.Key_A, CONTROL)
    rig.grid.actions_by_name.hide_columns.trigger()
    assert rig.grid.shown_columns.hidden == frozenset()
    rig.grid.shown_columns.set_hidden(rig.grid.model.columns)
    assert rig.grid.shown_columns.hidden == frozenset()


def test_a_fault_and_a_match_bring_their_hidden_column_back(rig):
    rig.fill(*FOUR)
    rig.grid.shown_columns.set_hidden({"life", "note"})
    rig.grid.actions_by_name.next_unread.trigger()
    assert rig.cell == (2, "life")
    assert rig.grid.shown_columns.hidden == {"note"}
    find(rig, "first")
    assert rig.cell == (0, "note")
    assert rig.grid.shown_columns.hidden == frozenset()


def test_the_heading_menu_lists_what_is_hidden(rig):
    rig.grid.shown_columns.set_hidden({"until"})
    menu = rig.grid.column_menu(0)
    again = next(action.menu() for action in menu.actions() if action.menu() is not None)
    assert [action.text() for action in again.actions()] == ["Until (h)"]
    again.actions()[0].trigger()
    assert not rig.grid.view.isColumnHidden(2)


def test_a_column_is_added_renamed_and_removed_each_as_one_step(rig):
    rig.fill(*FOUR)
    rig.go(1, "life")
    name_column("Lot")
    rig.grid.actions_by_name.add_column.trigger()
    assert rig.cell == (1, "Lot")
    rig.grid.model.setData(rig.grid.view.currentIndex(), "A7")
    name_column("Batch")
    rig.grid.actions_by_name.rename_column.trigger()
    assert rig.table.text(1, "Batch") == "A7"
    assert rig.cell == (1, "Batch")
    assert rig.undo.undoText() == "renaming of column Lot"
    rig.grid.actions_by_name.remove_column.trigger()
    assert rig.table.extra_columns == ()
    for _ in range(4):
        rig.undo.undo()
    assert rig.table.extra_columns == ()
    for _ in range(3):
        rig.undo.redo()
    assert rig.table.text(1, "Batch") == "A7"


def test_a_name_that_is_taken_is_refused_while_it_is_typed(rig):
    seen = name_column("life", agree=False)
    rig.grid.actions_by_name.add_column.trigger()
    assert seen == [("There is a column 'life' already: choose another name.", False)]
    assert rig.undo.count() == 0


def test_built_in_columns_are_neither_renamed_nor_removed(rig):
    rig.fill(*FOUR)
    rig.go(0, "life")
    assert not rig.grid.actions_by_name.rename_column.isEnabled()
    assert not rig.grid.actions_by_name.remove_column.isEnabled()
    rig.grid.columns.remove()
    rig.grid.columns.rename()
    assert rig.undo.count() == 0


def test_ctrl_space_selects_the_column_and_shift_space_the_row(rig):
    rig.fill(*FOUR)
    rig.go(1, "life")
    rig.key(Key.Key_Space, CONTROL)
    (part,) = rig.grid.view.selected_ranges()
    assert (part.top, part.left, part.bottom, part.right) == (0, 1, 4, 1)
    rig.go(1, "life")
    rig.key(Key.Key_Space, SHIFT)
    (part,) = rig.grid.view.selected_ranges()
    assert (part.top, part.left, part.bottom, part.right) == (1, 0, 1, 7)
