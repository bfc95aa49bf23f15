"""Everything can be reached by keyboard, and no two things answer to one key."""

from __future__ import annotations

from collections import defaultdict

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


def test_no_two_things_share_a_mnemonic(desk: Desk) -> None:
    texts = [action.text() for action in desk.window.menuBar().actions()]
    texts += [label.text() for label in desk.window.findChildren(QLabel) if label.buddy() is not None]
    texts += [bar.tabText(place) for bar in desk.window.findChildren(QTabBar) for place in range(bar.count())]
    mnemonics = [QKeySequence.mnemonic(text).toString() for text in texts]
    letters = [letter for letter in mnemonics if letter]
    assert len(letters) >= 10
    assert sorted(letters) == sorted(set(letters))


def test_everything_that_takes_the_focus_has_a_name(desk: Desk) -> None:
    from PySide6.QtCore import Qt

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
