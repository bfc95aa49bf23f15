"""What the grid shows of a table: texts, marks of faults, counts, and that Qt is told of every change in order."""

from PySide6.QtCore import QAbstractItemModel, Qt
from PySide6.QtGui import QAccessible, QColor, QPalette
from PySide6.QtTest import QAbstractItemModelTester
from PySide6.QtWidgets import QWidget

from reliability_app.session.document import Session, UnitSet
from reliability_app.session.edits import AddSet, BlockEdit, DeleteRows, InsertRows, PasteRows, RemoveColumn, SortRows
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.units_grid.grid_colours import mixed
from reliability_app.windows.units_grid.grid_model import (
    ACCESSIBLE_DESCRIPTION,
    ACCESSIBLE_TEXT,
    ALIGNMENT,
    BACKGROUND,
    DISPLAY,
    EDIT,
    FAULT,
    FOREGROUND,
    TOOL_TIP,
)
from tests.windows.units_grid.conftest import Rig

Key = Qt.Key
HORIZONTAL, VERTICAL = Qt.Orientation.Horizontal, Qt.Orientation.Vertical


def at(rig: Rig, row: int, column: str, role: int = DISPLAY) -> object:
    return rig.grid.model.data(rig.grid.model.index(row, rig.grid.model.columns.index(column)), role)


def test_a_faulty_cell_is_marked_and_says_why_and_the_rest_of_its_row_is_tinted(rig):
    rig.fill("P-1|n/a||failed", "P-2|5||failed")
    reason = at(rig, 0, "life", FAULT)
    assert isinstance(reason, str)
    assert "'n/a'" in reason
    assert at(rig, 0, "life", TOOL_TIP) == at(rig, 0, "life", ACCESSIBLE_DESCRIPTION) == reason
    assert at(rig, 0, "life", ACCESSIBLE_TEXT) == "n/a, cannot be read"
    fault, rest, fine = (at(rig, row, column, BACKGROUND) for row, column in ((0, "life"), (0, "unit"), (1, "life")))
    assert fault.color() != rest.color()
    assert fine is None
    assert at(rig, 0, "unit", FAULT) is None
    assert rig.grid.model.headerData(0, VERTICAL) == "! 1"
    assert reason in rig.grid.model.headerData(0, VERTICAL, TOOL_TIP)
    assert rig.grid.model.headerData(1, VERTICAL) == "2"


def test_the_mark_of_a_fault_is_drawn_not_only_coloured(rig):
    rig.fill("P-1|900||failed", "P-2|5||failed")
    view = rig.grid.view
    rig.go(2, "unit")
    cell = view.visualRect(rig.grid.model.index(0, 1)).adjusted(1, 1, -1, -1)
    plain = view.viewport().grab(cell).toImage()
    rig.session.sets[0].table.set_block(0, ["state"], [["lost"]])
    rig.session.sets[0].table.set_block(0, ["life"], [["x00"]])
    rig.grid.model.refresh(life_unit="h")
    faulty = view.viewport().grab(cell).toImage()
    left = [faulty.pixelColor(x, y) for x in range(12) for y in range(faulty.height())]
    background = at(rig, 0, "life", BACKGROUND).color()
    assert len({colour.name() for colour in left}) > 1, "no mark beside the tint"
    assert background.name() in {colour.name() for colour in left}
    assert len({plain.pixelColor(x, y).name() for x in range(12) for y in range(plain.height())}) == 1


def test_an_empty_quantity_shows_what_it_counts_as_in_quiet_letters(rig):
    rig.fill("P-1|5||failed|", "P-2|5||failed|2", "P-3|x||failed|")
    assert [at(rig, row, "quantity") for row in range(4)] == ["1", "2", "", ""]
    assert at(rig, 0, "quantity", EDIT) == ""
    assert at(rig, 0, "quantity", FOREGROUND) is not None
    assert at(rig, 1, "quantity", FOREGROUND) is None


def test_numbers_stand_right_and_words_left(rig):
    rig.paste("Unit\tLife\tState\tTemp\tLot\nP-1\t5\tfailed\t80.5\tA\n")
    right = int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
    assert [at(rig, 0, column, ALIGNMENT) == right for column in ("life", "quantity", "Temp")] == [True] * 3
    assert [at(rig, 0, column, ALIGNMENT) == right for column in ("unit", "state", "Lot")] == [False] * 3


def test_headings_carry_the_unit_and_explain_themselves(rig):
    model = rig.grid.model
    headings = [model.headerData(section, HORIZONTAL) for section in range(model.columnCount())]
    assert headings == ["Unit", "Life (h)", "Until (h)", "State", "Qty", "Entered (h)", "Cause", "Note"]
    assert all(model.headerData(section, HORIZONTAL, TOOL_TIP) for section in range(model.columnCount()))


def test_counts_and_reasons_follow_the_table(rig):
    rig.fill("P-1|n/a||failed", "P-2|5|9|found failed", "P-3|7||running|3", "P-4|7|")
    line = rig.grid.counts_line
    assert line.counts_text == "0 failed, 3 running, 1 found failed, 2 unread"
    rig.key(Key.Key_F8)
    assert rig.cell == (3, "state")
    assert line.reason_text.startswith("! Row 4: State is empty")
    rig.key(Key.Key_F8)
    assert rig.cell == (0, "life")
    assert line.reason_text.startswith("! Row 1: Life 'n/a'")
    rig.go(1, "unit")
    assert line.reason_text == "2 rows are kept but left out of the analysis."
    rig.go(0, "unit")
    assert "'n/a'" in line.reason_text, "the reason is told anywhere in its row"
    rig.go(0, "life")
    rig.type("5")
    rig.key(Key.Key_Return)
    rig.go(3, "state")
    rig.type("r")
    rig.key(Key.Key_Return)
    assert line.counts_text == "1 failed, 4 running, 1 found failed, 0 unread"
    assert line.reason_text == ""


def test_the_button_goes_to_the_next_unread_row(rig):
    rig.fill("P-1|5||failed", "P-2|x||failed")
    (button,) = [b for b in rig.grid.findChildren(QWidget) if b.accessibleName() == "Show the next unread row"]
    assert button.isVisible()
    rig.qtbot.mouseClick(button, Qt.MouseButton.LeftButton)
    assert rig.cell == (1, "life")
    assert rig.grid.view.hasFocus()


def test_qt_is_told_of_every_change_in_order(rig):
    model: QAbstractItemModel = rig.grid.model
    tester = QAbstractItemModelTester(model, QAbstractItemModelTester.FailureReportingMode.Warning)
    told = {"rows": 1, "columns": 8}

    def tell(what: str, count: int) -> None:
        told[what] += count

    model.rowsInserted.connect(lambda _, first, last: tell("rows", last - first + 1))
    model.rowsRemoved.connect(lambda _, first, last: tell("rows", first - last - 1))
    model.columnsInserted.connect(lambda _, first, last: tell("columns", last - first + 1))
    model.columnsRemoved.connect(lambda _, first, last: tell("columns", first - last - 1))
    model.modelReset.connect(lambda: told.update(rows=model.rowCount(), columns=model.columnCount()))
    counts = []
    for edit in (
        PasteRows(0, [{"life": "5", "Lot": "A"}, {"life": "6", "state": "failed", "Rig": "1"}], ("Lot", "Rig")),
        BlockEdit(0, 5, ("life", "state"), [["1", "failed"]]),
        InsertRows(0, 1, 3),
        SortRows(0, "life"),
        DeleteRows(0, [0, 2]),
        RemoveColumn(0, "Lot"),
        RemoveColumn(0, "Rig"),
    ):
        rig.undo.push_edit(rig.session, edit)
        counts.append((model.rowCount(), model.columnCount()))
        assert (told["rows"], told["columns"]) == counts[-1]
    assert counts == [(3, 10), (7, 10), (10, 10), (10, 10), (8, 10), (8, 9), (8, 8)]
    while rig.undo.canUndo():
        rig.undo.undo()
    assert (model.rowCount(), model.columnCount()) == (1, 8)
    while rig.undo.canRedo():
        rig.undo.redo()
    assert (model.rowCount(), model.columnCount()) == (8, 8)
    assert tester.model() is model


def test_selection_and_scroll_stay_where_they_are_when_the_table_changes(rig):
    rig.fill(*(f"P-{n}|{n + 1}||failed" for n in range(200)))
    rig.select(100, "life", 102, "state")
    top = rig.grid.view.verticalScrollBar().value()
    assert top > 0
    rig.undo.push_edit(rig.session, BlockEdit(0, 0, ("life",), [["7"]]))
    rig.undo.push_edit(rig.session, BlockEdit(0, 250, ("life",), [["7"]]))
    (block,) = rig.grid.view.selected_ranges()
    assert (block.top, block.bottom) == (100, 102)
    assert rig.grid.view.verticalScrollBar().value() == top


def test_another_set_is_shown_with_its_own_rows_and_edits_go_there(rig):
    other = UnitSet("B", UnitTable.from_rows([{"unit": "B-1", "life": "5", "state": "failed"}]))
    rig.undo.push_edit(rig.session, AddSet(1, other))
    rig.grid.show_set(rig.session, 1)
    assert at(rig, 0, "unit") == "B-1"
    rig.go(0, "life")
    rig.type("9")
    rig.key(Key.Key_Return)
    assert other.table.text(0, "life") == "9"
    assert rig.table.row_count == 0
    rig.undo.undo()
    rig.undo.undo()
    assert rig.grid.model.table is rig.table


def test_another_session_is_shown_whole(rig):
    other = Session(life_unit="km", sets=[UnitSet("A", UnitTable.from_rows([{"life": "5", "state": "failed"}]))])
    rig.session.replace_with(other)
    assert at(rig, 0, "life") == "5"
    assert rig.grid.model.headerData(1, HORIZONTAL) == "Life (km)"


def test_everything_that_takes_the_focus_has_a_name(rig):
    rig.paste("812\n1500\nx\n")
    places = [rig.grid, *rig.grid.findChildren(QWidget)]
    nameless = [
        place
        for place in places
        if place.focusPolicy() != Qt.FocusPolicy.NoFocus
        and place.isVisible()
        and not QAccessible.queryAccessibleInterface(place).text(QAccessible.Text.Name)
        and place is not rig.grid
    ]
    assert nameless == []
    rig.go(0, "life")
    rig.type("1")
    (line,) = [child for child in rig.grid.view.viewport().children() if child.inherits("QLineEdit")]
    assert line.accessibleName() == "Life, row 1"
    rig.key(Key.Key_Escape)


def test_colours_follow_the_palette(rig, qapp):
    rig.fill("P-1|n/a||failed")
    light = at(rig, 0, "life", BACKGROUND).color()
    before = qapp.palette()
    dark = QPalette(before)
    for role, colour in ((QPalette.ColorRole.Base, "#1d1f21"), (QPalette.ColorRole.Text, "#e8e8e8")):
        dark.setColor(role, QColor(colour))
    try:
        qapp.setPalette(dark)
        qapp.processEvents()
        colour = at(rig, 0, "life", BACKGROUND).color()
        assert colour.lightness() < 100 < light.lightness()
        assert rig.grid.view.palette().color(QPalette.ColorRole.Highlight) == mixed(
            QColor("#1d1f21"), dark.color(QPalette.ColorRole.Highlight), 0.3
        )
    finally:
        qapp.setPalette(before)
