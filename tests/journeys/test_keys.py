"""Everything can be reached by keyboard, and no two things answer to one key."""

from __future__ import annotations

from collections import defaultdict
from itertools import combinations

from PySide6.QtCore import Qt
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QLabel, QLineEdit, QMenu, QTabBar, QWidget

from tests.journeys.conftest import Desk


def window_wide_actions(desk: Desk) -> list[QAction]:
    return [
        action for menu in desk.window.menuBar().findChildren(QMenu) for action in menu.actions() if action.shortcuts()
    ]


def test_no_two_actions_share_a_key(desk: Desk) -> None:
    used: dict[str, set[str]] = defaultdict(set)
    for action in window_wide_actions(desk):
        for key in action.shortcuts():
            used[key.toString(QKeySequence.SequenceFormat.PortableText)].add(action.text())
    assert used
    assert {key: texts for key, texts in used.items() if len(texts) > 1} == {}


def test_no_key_means_two_things_where_it_is_pressed(desk: Desk) -> None:
    """Actions that work only in a widget may share a key, unless one is within the other or works everywhere."""
    owners: dict[str, list[QAction]] = defaultdict(list)
    for action in desk.window.findChildren(QAction):
        for key in {key.toString(QKeySequence.SequenceFormat.PortableText) for key in action.shortcuts()}:
            owners[key].append(action)
    clashes = {
        key: [action.text() for action in actions]
        for key, actions in owners.items()
        for one, other in combinations(actions, 2)
        if one is not other and _meet(one, other)
    }
    assert len(owners) > 60
    assert clashes == {}


def _meet(one: QAction, other: QAction) -> bool:
    """Whether both could answer to a key: in the same window, or in widgets of which one holds the other."""
    local = (Qt.ShortcutContext.WidgetShortcut, Qt.ShortcutContext.WidgetWithChildrenShortcut)
    if one.shortcutContext() not in local or other.shortcutContext() not in local:
        return True
    first, second = one.parent(), other.parent()
    if not isinstance(first, QWidget) or not isinstance(second, QWidget):
        return False
    return first is second or first.isAncestorOf(second) or second.isAncestorOf(first)


def test_no_two_entries_of_a_menu_share_a_letter(desk: Desk) -> None:
    shared = {}
    for menu in desk.window.menuBar().findChildren(QMenu):
        letters = [QKeySequence.mnemonic(action.text()).toString() for action in menu.actions()]
        double = [letter for letter in letters if letter and letters.count(letter) > 1]
        if double:
            shared[menu.title()] = double
    assert shared == {}


def test_no_two_things_share_a_mnemonic(desk: Desk) -> None:
    texts = [action.text() for action in desk.window.menuBar().actions()]
    texts += [label.text() for label in desk.window.findChildren(QLabel) if label.buddy() is not None]
    texts += [bar.tabText(place) for bar in desk.window.findChildren(QTabBar) for place in range(bar.count())]
    mnemonics = [QKeySequence.mnemonic(text).toString() for text in texts]
    letters = [letter for letter in mnemonics if letter]
    assert len(letters) >= 10
    assert sorted(letters) == sorted(set(letters))


def test_everything_that_takes_the_focus_has_a_name(desk: Desk) -> None:
    nameless = [
        widget
        for widget in desk.window.findChildren(QWidget)
        if widget.focusPolicy() & Qt.FocusPolicy.TabFocus
        and widget.isVisible()
        and not (widget.accessibleName() or getattr(widget, "text", lambda: "")())
        and not isinstance(widget, QLineEdit | QTabBar)
    ]
    assert nameless == []


def test_every_edit_in_a_line_has_a_name(desk: Desk) -> None:
    lines = [line for line in desk.window.findChildren(QLineEdit) if line.isVisible()]
    named = [line for line in lines if line.accessibleName() or line.parentWidget().accessibleName()]
    assert len(lines) >= 3
    assert named == lines
