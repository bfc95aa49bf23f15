"""What a paste was understood to be can be changed from the strip; it stays one step."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QCheckBox, QComboBox, QLineEdit, QToolButton

TABLE = "Unit\tHours\tOK\nP-1\t1,234\tyes\nP-2\t5,678\tno\n"
DATES = "Unit\tStart\tEnd\tState\nP-1\t03/04/2025\t05/06/2025\tfailed\nP-2\t04/05/2025\t\trunning\n"


def button(rig, name: str) -> QToolButton:
    (found,) = [b for b in rig.grid.strip.findChildren(QToolButton) if b.accessibleName() == name]
    return found


def press(rig, label: str) -> None:
    """Press an answer to what the strip asks."""
    (found,) = [b for b in rig.grid.strip.findChildren(QToolButton) if b.isVisible() and b.text() == label]
    rig.qtbot.mouseClick(found, Qt.MouseButton.LeftButton)


def unfold(rig) -> None:
    change = button(rig, "Read the table differently")
    if not change.isChecked():
        rig.qtbot.mouseClick(change, Qt.MouseButton.LeftButton)


def box(rig, name: str) -> QComboBox:
    unfold(rig)
    (found,) = [
        b for b in rig.grid.strip.findChildren(QComboBox) if b.accessibleName().startswith(name) and b.isVisible()
    ]
    return found


def choose(rig, name: str, text: str) -> None:
    """Choose with the keyboard, as the list of a box is gone through."""
    chosen = box(rig, name)
    chosen.setFocus()
    place = next(place for place in range(chosen.count()) if chosen.itemText(place).startswith(text))
    chosen.setCurrentIndex(place)
    chosen.activated.emit(place)


@pytest.mark.parametrize(
    ("mark", "lives"), [("Decimal comma", ["1.234", "5.678"]), ("Decimal point", ["1234", "5678"])]
)
def test_an_ambiguous_comma_is_decided_by_one_choice(rig, mark, lives):
    rig.paste(TABLE)
    assert [row["life"] for row in rig.texts] == ["1,234", "5,678"]
    choose(rig, "Numbers", mark)
    assert [row["life"] for row in rig.texts] == lives
    assert rig.undo.count() == 1
    rig.undo.undo()
    assert rig.texts == []


def test_what_the_table_does_not_tell_is_asked_and_answered_by_one_press(rig):
    rig.paste(TABLE)
    assert "Life '1,234': which number is it?" in rig.grid.strip.question
    press(rig, "1.234")
    assert [row["life"] for row in rig.texts] == ["1.234", "5.678"]
    assert rig.grid.strip.question == ""
    assert rig.undo.count() == 1


def test_points_before_three_digits_are_asked_about_and_answered_by_one_press(rig):
    rig.paste("Unit\tHours\tOK\nP-1\t1.250\tno\nP-2\t1.500\tyes\n")
    assert "Life '1.250': which number is it?" in rig.grid.strip.question
    assert "'1.250' was read as 1.25 but may mean 1250" in rig.grid.strip.notes
    press(rig, "1250")
    assert [row["life"] for row in rig.texts] == ["1250", "1500"]
    assert "1.250" not in rig.grid.strip.question
    assert rig.undo.count() == 1


def test_the_order_of_day_and_month_is_asked(rig):
    rig.paste(DATES)
    assert rig.grid.counts_line.counts_text == "0 failed, 0 running, 2 unread"
    press(rig, "Day first")
    assert [row["life"] for row in rig.texts] == ["63", "32"]
    assert [row["Start"] for row in rig.texts] == ["03/04/2025", "04/05/2025"]
    choose(rig, "Dates", "Month first")
    assert [row["life"] for row in rig.texts] == ["63", "31"]
    choose(rig, "Lives in", "Hours")
    assert [row["life"] for row in rig.texts] == ["1512", "744"]
    assert rig.session.life_unit == "h"
    assert rig.undo.count() == 1


def test_the_date_of_the_data_is_typed(rig):
    rig.paste(DATES.replace("05/06", "13/06"))
    unfold(rig)
    (line,) = rig.grid.strip.findChildren(QLineEdit, "Date of the data")
    assert line.text() == "2025-06-13"
    line.setFocus()
    line.selectAll()
    rig.type("nonsense")
    rig.key(Qt.Key.Key_Return)
    assert line.text() == "2025-06-13"
    line.selectAll()
    rig.type("2025-07-04")
    rig.key(Qt.Key.Key_Return)
    assert [row["life"] for row in rig.texts] == ["71", "61"]


def test_an_unknown_word_for_a_state_is_given_its_meaning(rig):
    rig.paste("Unit\tLife\tState\nP-1\t5\tlimbo\nP-2\t7\tnirvana\nP-3\t9\tfailed\n")
    assert "State 'limbo': what does it mean?" in rig.grid.strip.question
    press(rig, "Failed")
    assert "State 'nirvana': what does it mean?" in rig.grid.strip.question
    choose(rig, "'nirvana' means", "Running")
    assert [row["state"] for row in rig.texts] == ["failed", "running", "failed"]
    assert rig.grid.strip.question == ""
    choose(rig, "'limbo' means", "Found failed")
    assert rig.texts[0]["state"] == "found failed"
    assert rig.undo.count() == 1


def test_choices_add_up(rig):
    rig.paste("a\t5\tx\nb\t6\ty\n")
    choose(rig, "Column 1", "Cause")
    choose(rig, "Column 3", "Note")
    assert [(row["cause"], row["life"], row["note"]) for row in rig.texts] == [("a", "5", "x"), ("b", "6", "y")]
    assert rig.undo.count() == 1


def test_yes_can_mean_failed_or_running(rig):
    rig.paste(TABLE)
    choose(rig, "Yes and 1 mean", "Failed")
    assert [row["state"] for row in rig.texts] == ["failed", "running"]
    choose(rig, "Yes and 1 mean", "Running")
    assert [row["state"] for row in rig.texts] == ["running", "failed"]


def test_a_first_row_taken_for_headings_can_be_made_a_row(rig):
    rig.paste(TABLE)
    unfold(rig)
    rig.grid.strip.findChild(QCheckBox).setFocus()
    rig.key(Qt.Key.Key_Space)
    assert len(rig.texts) == 3
    assert set(rig.texts[0].values()) == {"Unit", "Hours", "running"}
    assert rig.grid.window().focusWidget().objectName() == "headings"


def test_the_panel_shows_what_holds_now_and_keeps_the_focus(rig):
    rig.paste(TABLE)
    assert box(rig, "Column 2 'Hours'").currentText() == "Life"
    assert rig.grid.strip.findChild(QCheckBox).isChecked()
    choose(rig, "Column 1", "Note")
    assert box(rig, "Column 1").currentText() == "Note"
    assert box(rig, "Column 1").hasFocus()


def test_a_column_made_ones_own_leaves_no_empty_column_behind(rig):
    rig.paste(TABLE)
    choose(rig, "Column 3", "Kept beside")
    assert rig.table.extra_columns == ("OK",)
    choose(rig, "Column 3", "State")
    assert rig.table.extra_columns == ()


def test_after_another_edit_the_paste_can_no_longer_be_read_differently(rig):
    rig.paste(TABLE)
    rig.go(0, "note")
    rig.type("x")
    rig.key(Qt.Key.Key_Return)
    assert not button(rig, "Read the table differently").isVisible()
    assert rig.grid.strip.question == ""


def test_after_a_change_elsewhere_it_can_and_both_are_steps(rig):
    from reliability_app.session.edits import ChangeTitle

    rig.paste(TABLE)
    rig.undo.push_edit(rig.session, ChangeTitle("", "x"))
    press(rig, "1234")
    assert [row["life"] for row in rig.texts] == ["1234", "5678"]
    assert rig.undo.count() == 3
    choose(rig, "Numbers", "Decimal comma")
    assert [row["life"] for row in rig.texts] == ["1.234", "5.678"]
    assert rig.undo.count() == 3
    rig.undo.undo()
    assert [row["life"] for row in rig.texts] == ["1,234", "5,678"]
    assert rig.grid.strip.question
    rig.undo.redo()
    assert [row["life"] for row in rig.texts] == ["1.234", "5.678"]
    assert rig.grid.strip.question == ""
    rig.undo.undo()
    rig.undo.undo()
    rig.undo.undo()
    assert rig.texts == []


def test_rows_pasted_below_others_are_read_differently_where_they_stand(rig):
    from reliability_app.session.edits import ChangeTitle

    rig.fill("A|5||failed", "B|6||failed")
    rig.go(2, "unit")
    rig.paste(TABLE)
    rig.undo.push_edit(rig.session, ChangeTitle("", "x"))
    press(rig, "1.234")
    assert [row["unit"] for row in rig.texts] == ["A", "B", "P-1", "P-2"]
    assert [row["life"] for row in rig.texts] == ["5", "6", "1.234", "5.678"]
    rig.undo.undo()
    assert [row["life"] for row in rig.texts] == ["5", "6", "1,234", "5,678"]


def test_a_table_that_gives_no_rows_can_still_be_read_differently(rig):
    rig.paste("Unit\tLife\tState\n")
    assert "headings but no rows" in rig.grid.strip.sentence
    unfold(rig)
    rig.grid.strip.findChild(QCheckBox).setFocus()
    rig.key(Qt.Key.Key_Space)
    assert len(rig.texts) == 1


def test_everything_in_the_strip_has_a_name_and_is_reached_by_tab(rig):
    rig.paste(DATES)
    unfold(rig)
    reached = set()
    button(rig, "Show or hide what was odd about the table").setFocus()
    for _ in range(20):
        focused = rig.grid.window().focusWidget()
        if not rig.grid.strip.isAncestorOf(focused):
            break
        reached.add(focused.accessibleName() or getattr(focused, "text", str)())
        rig.key(Qt.Key.Key_Tab)
    assert {"Read the table differently", "Undo paste", "Column 1 'Unit'", "Dates", "Lives in"} <= reached
    assert "" not in reached
