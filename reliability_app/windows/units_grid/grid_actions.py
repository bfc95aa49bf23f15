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
    def list_unread(self) -> None: ...  # noqa: D102
    def find_text(self) -> None: ...  # noqa: D102
    def find_next(self) -> None: ...  # noqa: D102
    def find_previous(self) -> None: ...  # noqa: D102
    def replace(self) -> None: ...  # noqa: D102
    def hide_columns(self) -> None: ...  # noqa: D102
    def show_columns(self) -> None: ...  # noqa: D102
    def add_column(self) -> None: ...  # noqa: D102
    def rename_column(self) -> None: ...  # noqa: D102
    def remove_column(self) -> None: ...  # noqa: D102


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
    list_unread: QAction
    find: QAction
    find_next: QAction
    find_previous: QAction
    replace: QAction
    hide_columns: QAction
    show_columns: QAction
    add_column: QAction
    rename_column: QAction
    remove_column: QAction

    def all(self) -> list[QAction]:
        """Give the actions in the order of the Edit menu."""
        return [getattr(self, action.name) for action in fields(self)]

    def groups(self) -> tuple[tuple[QAction, ...], ...]:
        """Give the actions as they stand together in the Edit menu; the last group is for columns."""
        return (
            (self.cut, self.copy, self.copy_with_headings, self.paste, self.clear, self.select_all),
            (self.find, self.find_next, self.find_previous, self.replace),
            (self.fill_down, self.insert_rows, self.delete_rows, self.sort_up, self.sort_down),
            (self.next_unread, self.list_unread),
            (self.add_column, self.rename_column, self.remove_column, self.hide_columns, self.show_columns),
        )


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
        copy_with_headings=action("Copy with &headings", doing.copy_with_headings, "Ctrl+Shift+T"),
        paste=action("&Paste", doing.paste, "Ctrl+V", "Shift+Insert"),
        clear=action("Cl&ear cells", doing.clear, "Delete", "Backspace"),
        fill_down=action("&Fill down", doing.fill_down, "Ctrl+D"),
        insert_rows=action("&Insert rows above", doing.insert_rows, "Ctrl+Shift+I"),
        delete_rows=action("&Delete rows", doing.delete_rows, "Ctrl+Delete", "Ctrl+Backspace"),
        sort_up=action("&Sort by this column, smallest first", doing.sort_up),
        sort_down=action("Sort by this column, &largest first", doing.sort_down),
        select_all=action("Select &all", doing.select_all, "Ctrl+A"),
        next_unread=action("&Next unread row", doing.show_next_unread, "F8"),
        list_unread=action("List of &unread cells", doing.list_unread, "Shift+F8"),
        find=action("Find …", doing.find_text, "Ctrl+F"),
        find_next=action("Find next", doing.find_next, "F3"),
        find_previous=action("Find previous", doing.find_previous, "Shift+F3"),
        replace=action("Replace …", doing.replace, "Ctrl+H"),
        hide_columns=action("Hide columns", doing.hide_columns, "Ctrl+Shift+K"),
        show_columns=action("Show all columns", doing.show_columns),
        add_column=action("New column …", doing.add_column),
        rename_column=action("Rename column …", doing.rename_column),
        remove_column=action("Remove column", doing.remove_column),
    )
