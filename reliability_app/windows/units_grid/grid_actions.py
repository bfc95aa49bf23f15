"""The actions of the grid for the Edit menu and its own menus, with keys that are the same on every platform."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields
from typing import Protocol

from PySide6.QtCore import Qt
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QWidget


class GridDoing(Protocol):
    """What carries the actions out."""

    def cut(self) -> None: ...  # noqa: D102 - as its action says
    def copy(self) -> None: ...  # noqa: D102
    def copy_with_headings(self) -> None: ...  # noqa: D102
    def paste(self) -> None: ...  # noqa: D102
    def clear(self) -> None: ...  # noqa: D102
    def fill_down(self) -> None: ...  # noqa: D102
    def insert_rows(self) -> None: ...  # noqa: D102
    def delete_rows(self) -> None: ...  # noqa: D102
    def sort_up(self) -> None: ...  # noqa: D102
    def sort_down(self) -> None: ...  # noqa: D102
    def select_all(self) -> None: ...  # noqa: D102
    def show_next_unread(self) -> None: ...  # noqa: D102


@dataclass(frozen=True, eq=False)
class GridActions:
    """One action per thing that can be done with the grid, in the order of the Edit menu."""

    cut: QAction
    copy: QAction
    copy_with_headings: QAction
    paste: QAction
    clear: QAction
    fill_down: QAction
    insert_rows: QAction
    delete_rows: QAction
    sort_up: QAction
    sort_down: QAction
    select_all: QAction
    next_unread: QAction

    def all(self) -> list[QAction]:
        """Give the actions in the order of the Edit menu."""
        return [getattr(self, action.name) for action in fields(self)]


def make_actions(owner: QWidget, doing: GridDoing) -> GridActions:
    """Make the actions; their keys work while `owner` or a part of it has the focus.

    The keys are named one by one: StandardKey.Delete includes Ctrl+D on X11, where fill down belongs.
    """

    def action(text: str, slot: Callable[[], None], *keys: str) -> QAction:
        made = QAction(text, owner)
        made.setShortcuts([QKeySequence(key) for key in keys])
        made.setShortcutContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
        made.triggered.connect(lambda: slot())
        owner.addAction(made)
        return made

    return GridActions(
        cut=action("Cu&t", doing.cut, "Ctrl+X", "Shift+Delete"),
        copy=action("&Copy", doing.copy, "Ctrl+C", "Ctrl+Insert"),
        copy_with_headings=action("Copy with &headings", doing.copy_with_headings, "Ctrl+Shift+H"),
        paste=action("&Paste", doing.paste, "Ctrl+V", "Shift+Insert"),
        clear=action("Cl&ear cells", doing.clear, "Delete", "Backspace"),
        fill_down=action("&Fill down", doing.fill_down, "Ctrl+D"),
        insert_rows=action("&Insert rows above", doing.insert_rows, "Ctrl+Shift+I"),
        delete_rows=action("&Delete rows", doing.delete_rows, "Ctrl+Delete", "Ctrl+Backspace"),
        sort_up=action("&Sort by this column, smallest first", doing.sort_up),
        sort_down=action("Sort by this column, &largest first", doing.sort_down),
        select_all=action("Select &all", doing.select_all, "Ctrl+A"),
        next_unread=action("&Next unread row", doing.show_next_unread, "F8"),
    )
