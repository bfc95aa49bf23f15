"""What a paste was understood to be can be changed from the strip; it stays one step."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QMenu, QToolButton

TABLE = "Unit\tHours\tOK\nP-1\t1,234\tyes\nP-2\t5,678\tno\n"


def open_menu(rig) -> QMenu:
    (button,) = [
        b for b in rig.grid.strip.findChildren(QToolButton) if b.accessibleName() == "Read the paste differently"
    ]
    rig.qtbot.mouseClick(button, Qt.MouseButton.LeftButton)
    menu = QApplication.activePopupWidget()
    assert isinstance(menu, QMenu)
    return menu


def choose(menu: QMenu, *path: str) -> None:
    for text in path[:-1]:
        menu = entry(menu, text).menu()
    entry(menu, path[-1]).trigger()


def entry(menu: QMenu, start: str):
    found = [action for action in menu.actions() if action.text().replace("&", "").startswith(start)]
    assert found, [action.text() for action in menu.actions()]
    return found[0]


@pytest.mark.parametrize(
    ("mark", "lives"), [("Decimal comma", ["1.234", "5.678"]), ("Decimal point", ["1234", "5678"])]
)
def test_an_ambiguous_comma_is_decided_by_one_choice(rig, mark, lives):
    rig.paste(TABLE)
    assert [row["life"] for row in rig.texts] == ["1,234", "5,678"]
    menu = open_menu(rig)
    choose(menu, "Numbers have a", mark)
    menu.close()
    assert [row["life"] for row in rig.texts] == lives
    assert rig.undo.count() == 1
    rig.undo.undo()
    assert rig.texts == []


def test_choices_add_up(rig):
    rig.paste("a\t5\tx\nb\t6\ty\n")
    menu = open_menu(rig)
    choose(menu, "Column 1", "Cause")
    menu.close()
    menu = open_menu(rig)
    choose(menu, "Column 3", "Note")
    menu.close()
    assert [(row["cause"], row["life"], row["note"]) for row in rig.texts] == [("a", "5", "x"), ("b", "6", "y")]
    assert rig.undo.count() == 1


def test_yes_can_mean_failed_or_running(rig):
    rig.paste(TABLE)
    menu = open_menu(rig)
    choose(menu, "Yes and 1 mean", "failed")
    menu.close()
    assert [row["state"] for row in rig.texts] == ["failed", "running"]
    menu = open_menu(rig)
    choose(menu, "Yes and 1 mean", "running")
    menu.close()
    assert [row["state"] for row in rig.texts] == ["running", "failed"]


def test_a_first_row_taken_for_headings_can_be_made_a_row(rig):
    rig.paste(TABLE)
    menu = open_menu(rig)
    choose(menu, "First row")
    menu.close()
    assert len(rig.texts) == 3
    assert set(rig.texts[0].values()) == {"Unit", "Hours", "running"}


def test_the_menu_shows_what_holds_now(rig):
    rig.paste(TABLE)
    menu = open_menu(rig)
    life = entry(menu, "Column 2 'Hours': Life").menu()
    assert [action.text() for action in life.actions() if action.isChecked()] == ["Life"]
    assert entry(menu, "First row").isChecked()
    menu.close()


def test_after_another_edit_the_paste_can_no_longer_be_read_differently(rig):
    rig.paste(TABLE)
    rig.go(0, "note")
    rig.type("x")
    rig.key(Qt.Key.Key_Return)
    buttons = [
        b for b in rig.grid.strip.findChildren(QToolButton) if b.accessibleName() == "Read the paste differently"
    ]
    assert not buttons[0].isVisible()
