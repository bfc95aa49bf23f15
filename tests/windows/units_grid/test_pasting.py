"""Pasting what spreadsheets and text give: understood as a table or cell by cell, one step, nothing dropped."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QToolButton

from tests.windows.units_grid.conftest import CONTROL

Key = Qt.Key

TABLE = "Unit\tHours\tStatus\r\nP-01\t812\tbroken\r\nP-02\t1500\tok\r\nP-03\tn/a\tbroken\r\n"
# In the form in which LibreOffice Calc 7 puts cells on the clipboard: the text rounded as displayed, `sdval` in full.
SPREADSHEET_HTML = (
    '<html><body><table cellspacing="0" border="0"><tr><td>Unit</td><td>Life</td><td>State</td></tr>'
    '<tr><td>P-01</td><td sdval="812.375" sdnum="1033;">812.4</td><td>failed</td></tr>'
    '<tr><td>P-02</td><td sdval="1500.25" sdnum="1033;">1500.3</td><td>running</td></tr></table></body></html>'
)
SPREADSHEET_TEXT = "Unit\tLife\tState\nP-01\t812.4\tfailed\nP-02\t1500.3\trunning\n"


def strip_button(rig, name):
    (button,) = [b for b in rig.grid.strip.findChildren(QToolButton) if b.accessibleName() == name]
    return button


def test_a_table_with_headings_is_understood_and_the_strip_says_so(rig):
    rig.paste(TABLE)
    assert rig.texts == [
        {"unit": "P-01", "life": "812", "state": "failed"},
        {"unit": "P-02", "life": "1500", "state": "running"},
        {"unit": "P-03", "life": "n/a", "state": "failed"},
    ]
    assert rig.undo.count() == 1
    assert rig.undo.undoText() == "paste of 3 rows"
    assert rig.grid.strip.isVisible()
    assert "'ok' as running" in rig.grid.strip.sentence
    assert "1 row cannot be read" in rig.grid.strip.sentence
    assert rig.grid.counts_line.counts_text == "1 failed, 1 running, 1 unread"
    assert rig.cell == (0, "unit")


def test_a_spreadsheets_html_gives_the_digits_its_text_has_lost(rig):
    rig.paste(SPREADSHEET_TEXT, SPREADSHEET_HTML)
    assert [row["life"] for row in rig.texts] == ["812.375", "1500.25"]


def test_the_strip_takes_the_paste_back_and_goes(rig):
    rig.paste(TABLE)
    rig.qtbot.mouseClick(strip_button(rig, "Undo paste"), Qt.MouseButton.LeftButton)
    assert rig.texts == []
    assert not rig.grid.strip.isVisible()
    assert rig.undo.canRedo()


def test_undo_by_key_puts_the_strip_away_too(rig):
    rig.paste(TABLE)
    rig.undo.undo()
    assert not rig.grid.strip.isVisible()


def test_after_another_edit_the_strip_no_longer_offers_to_undo_the_paste(rig):
    rig.paste(TABLE)
    rig.go(0, "life")
    rig.type("9")
    rig.key(Key.Key_Return)
    assert rig.grid.strip.isVisible()
    assert not strip_button(rig, "Undo paste").isVisible()


def test_the_strip_can_be_closed(rig):
    rig.paste(TABLE)
    rig.qtbot.mouseClick(strip_button(rig, "Close this line"), Qt.MouseButton.LeftButton)
    assert not rig.grid.strip.isVisible()
    assert len(rig.texts) == 3


def test_notes_unfold_below_the_strip(rig):
    rig.paste("812\n1500\n")
    button = strip_button(rig, "Show or hide what was odd about the table")
    assert button.text() == "1 note"
    rig.qtbot.mouseClick(button, Qt.MouseButton.LeftButton)
    assert "no state column" in rig.grid.strip.notes
    assert rig.grid.strip.shows_notes


def test_lives_alone_pasted_into_an_empty_grid_become_lives(rig):
    rig.paste("812\n1500+\n")
    assert rig.texts == [{"life": "812", "state": "failed"}, {"life": "1500", "state": "running"}]


def test_the_unit_of_the_lives_is_taken_from_the_first_table_and_comes_back_with_undo(rig):
    rig.paste("Unit\tCycles\tState\nP-1\t5000\tfailed\nP-2\t6000\trunning\n")
    assert rig.session.life_unit == "cycles"
    assert rig.grid.model.headerData(1, Qt.Orientation.Horizontal) == "Life (cycles)"
    rig.undo.undo()
    assert rig.session.life_unit == "h"
    assert rig.grid.model.headerData(1, Qt.Orientation.Horizontal) == "Life (h)"


def test_a_table_in_another_unit_is_not_taken_over_in_silence(rig):
    rig.fill("P-0|1||failed")
    rig.go(1, "unit")
    rig.paste("Unit\tCycles\tState\nP-1\t5000\tfailed\nP-2\t6000\trunning\n")
    assert rig.session.life_unit == "h"
    assert "cycles" in rig.grid.strip.notes


def test_a_table_with_headings_is_appended_to_the_rows_there_are(rig):
    rig.fill("P-0|1||failed")
    rig.go(0, "life")
    rig.paste(TABLE)
    assert [row["unit"] for row in rig.texts] == ["P-0", "P-01", "P-02", "P-03"]
    assert rig.cell == (1, "unit")


def test_a_table_pasted_over_everything_replaces_it(rig):
    rig.fill("P-0|1||failed")
    rig.key(Key.Key_A, CONTROL)
    rig.paste(TABLE)
    assert [row["unit"] for row in rig.texts] == ["P-01", "P-02", "P-03"]
    rig.undo.undo()
    assert [row["unit"] for row in rig.texts] == ["P-0"]


def test_rows_without_headings_at_the_end_go_where_they_belong(rig):
    rig.fill("P-0|1||failed")
    rig.go(1, "unit")
    rig.paste("P-01\t812\tbroken\nP-02\t1500\tok\n")
    assert rig.texts[1:] == [
        {"unit": "P-01", "life": "812", "state": "failed"},
        {"unit": "P-02", "life": "1500", "state": "running"},
    ]


def test_rows_without_headings_over_existing_ones_go_where_they_belong(rig):
    rig.fill("P-0|1||failed", "P-1|2||failed", "P-2|3||failed")
    rig.go(1, "unit")
    rig.paste("P-01\t812\tbroken\nP-02\t1500\tok\n")
    assert rig.texts == [
        {"unit": "P-0", "life": "1", "state": "failed"},
        {"unit": "P-01", "life": "812", "state": "failed"},
        {"unit": "P-02", "life": "1500", "state": "running"},
    ]
    assert "rows 2 to 3" in rig.grid.strip.sentence


def test_a_column_of_numbers_goes_cell_by_cell_from_the_current_cell(rig):
    rig.fill("P-0|1||failed", "P-1|2||failed", "P-2|3||failed")
    rig.go(1, "life")
    rig.paste("53,2\n1.401,40\n812\n")
    assert [rig.table.text(row, "life") for row in range(4)] == ["1", "53.2", "1401.40", "812"]
    assert rig.undo.undoText() == "paste in Life"
    (block,) = rig.grid.view.selected_ranges()
    assert (block.top, block.bottom, block.left, block.right) == (1, 3, 1, 1)


def test_one_cell_fills_the_selected_block(rig):
    rig.fill("P-0|1||failed", "P-1|2||failed", "P-2|3||failed")
    rig.select(0, "state", 2, "state")
    rig.paste("ok")
    assert [rig.table.text(row, "state") for row in range(3)] == ["running"] * 3
    assert rig.undo.count() == 1


def test_one_cell_pasted_leaves_no_strip_unless_it_cannot_be_read(rig):
    rig.fill("P-0|1||failed")
    rig.go(0, "life")
    rig.paste("5")
    assert not rig.grid.strip.isVisible()
    rig.paste("abc")
    assert rig.grid.strip.isVisible()
    assert "1 row cannot be read" in rig.grid.strip.sentence


def test_a_block_copied_here_is_pasted_cell_by_cell_even_at_the_end(rig):
    rig.fill("P-0|1||failed|2", "P-1|2||running|3")
    rig.select(0, "unit", 1, "quantity")
    rig.key(Key.Key_C, CONTROL)
    rig.go(2, "unit")
    rig.key(Key.Key_V, CONTROL)
    assert rig.texts[2:] == rig.texts[:2]


def test_a_block_too_wide_for_the_place_says_what_did_not_fit(rig):
    rig.fill("P-0|1||failed|2|||n", "P-1|2||running|3|||n")
    rig.select(0, "quantity", 1, "note")
    rig.key(Key.Key_C, CONTROL)
    rig.go(0, "cause")
    rig.key(Key.Key_V, CONTROL)
    assert "2 columns of the block did not fit" in rig.grid.strip.notes


def test_an_empty_clipboard_says_so_and_changes_nothing(rig):
    rig.paste("")
    assert rig.undo.count() == 0
    assert "no rows" in rig.grid.strip.sentence


def test_hostile_text_is_kept_as_typed(rig):
    rig.fill("P-0|1||failed")
    rig.go(1, "unit")
    rig.paste("P\t-5\t0\n<b>x</b>\tnan\t=1+1\n")
    assert rig.table.row_count == 3
    held = " ".join(text for row in rig.texts[1:] for text in row.values())
    assert all(text in held for text in ("<b>x</b>", "nan", "=1+1", "-5"))
    assert rig.table.counts().unread == 2


def test_markup_in_a_heading_is_shown_as_text(rig):
    rig.paste("Unit\tLife\tState\t<u>Lot</u>\nP-1\t5\tfailed\tA\n")
    assert "&lt;u&gt;Lot&lt;/u&gt;" in rig.grid.strip.sentence


def test_a_users_own_columns_come_along_and_stay_in_place(rig):
    rig.paste("Unit\tLife\tState\tLot\nP-1\t5\tfailed\tA\nP-2\t6\tfailed\tB\n")
    width = rig.grid.view.columnWidth(8)
    rig.grid.view.setColumnWidth(8, width + 33)
    rig.undo.undo()
    assert rig.grid.model.columnCount() == 8
    rig.undo.redo()
    assert [row["Lot"] for row in rig.texts] == ["A", "B"]
    assert rig.grid.view.columnWidth(8) == width + 33


def test_ten_thousand_rows_are_one_step(rig):
    lines = "\n".join(f"P-{n}\t{n + 1}\t{'ok' if n % 3 else 'failed'}" for n in range(10_000))
    rig.paste("Unit\tLife\tState\n" + lines)
    assert rig.undo.count() == 1
    assert rig.grid.model.rowCount() == 10_001
    assert rig.grid.counts_line.counts_text == "3334 failed, 6666 running, 0 unread"
    rig.undo.undo()
    assert rig.grid.model.rowCount() == 1
