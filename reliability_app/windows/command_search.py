"""The list of all commands: one key opens it, typing narrows it, Enter carries the chosen one out."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from PySide6.QtCore import QEvent, QObject, QPoint, Qt, QTimer
from PySide6.QtGui import QAction, QKeyEvent, QKeySequence, QPalette
from PySide6.QtWidgets import (
    QFrame,
    QHeaderView,
    QLabel,
    QLineEdit,
    QMenu,
    QTreeWidget,
    QTreeWidgetItem,
    QVBoxLayout,
    QWidget,
)

# Why an action cannot be carried out now; whoever disables it says so by this property.
WHY_PROPERTY = "why_disabled"

_COMMAND = int(Qt.ItemDataRole.UserRole)
_ROWS = 14
_WIDTH_IN_CHARACTERS = 92


@dataclass(frozen=True, eq=False)
class Command:
    """An action of the menus: what it is called, the menus it stands in, its keys."""

    action: QAction
    path: str

    @property
    def title(self) -> str:
        """What it is called, without the mark of its letter."""
        return plain_title(self.action.text())

    @property
    def keys(self) -> str:
        """Its keys, as the system writes them."""
        written = (key.toString(QKeySequence.SequenceFormat.NativeText) for key in self.action.shortcuts())
        return ", ".join(written)

    @property
    def why_not(self) -> str:
        """Why it cannot be carried out now; empty where it can be, or where nobody said why."""
        why = self.action.property(WHY_PROPERTY)
        return why if isinstance(why, str) and not self.action.isEnabled() else ""


def commands_of(menus: Iterable[QMenu], path: str = "") -> list[Command]:
    """Return the commands of menus and of the menus within them, in their order."""
    found: list[Command] = []
    for menu in menus:
        menu.aboutToShow.emit()  # some list their entries only then
        here = " › ".join(part for part in (path, plain_title(menu.title())) if part)
        for action in menu.actions():
            inner = action.menu()
            if isinstance(inner, QMenu):
                found += commands_of([inner], here)
            elif action.text() and not action.isSeparator():
                found.append(Command(action, here))
    return found


def matching(commands: Sequence[Command], wanted: str) -> list[Command]:
    """Return the commands in which every word of `wanted` occurs; those whose name begins with it first."""
    words = wanted.casefold().split()
    found = [
        command
        for command in commands
        if all(word in f"{command.title} {command.path} {command.keys}".casefold() for word in words)
    ]
    start = " ".join(words)
    # What stands deep in a menu (samples, files opened last) comes after commands that fit as well.
    return sorted(found, key=lambda command: (_rank(command.title.casefold(), start), command.path.count("›")))


def _rank(title: str, start: str) -> int:
    return 0 if title.startswith(start) else 1 if f" {start}" in title else 2


def plain_title(text: str) -> str:
    """Return the text of an action or a menu as it is read."""
    return text.replace("&&", "\0").replace("&", "").replace("\0", "&")


class CommandSearch(QFrame):
    """The list, opened over the top of the window."""

    def __init__(self, window: QWidget) -> None:
        super().__init__(window, Qt.WindowType.Popup)
        self._window = window
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAccessibleName("All commands")
        self._commands: list[Command] = []
        self.wanted = QLineEdit()
        self.wanted.setAccessibleName("Search the commands")
        self.wanted.setPlaceholderText("Type a word of what you want to do")
        self.found = QTreeWidget()
        self.found.setAccessibleName("Commands found")
        self.found.setColumnCount(3)
        self.found.setHeaderHidden(True)
        self.found.setRootIsDecorated(False)
        self.found.setUniformRowHeights(True)
        self.found.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # the line keeps the keys and passes arrows on
        self.why = QLabel()
        self.why.setAccessibleName("Why the command cannot be carried out")
        self.why.setWordWrap(True)
        header = self.found.header()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setStretchLastSection(True)
        column = QVBoxLayout(self)
        column.addWidget(self.wanted)
        column.addWidget(self.found)
        column.addWidget(self.why)
        self.wanted.textChanged.connect(self._list)
        self.wanted.installEventFilter(self)
        self.found.itemClicked.connect(lambda item: self._run(item))
        self.found.currentItemChanged.connect(self._say_why)

    def open(self, menus: Iterable[QMenu]) -> None:
        """Show the commands of these menus."""
        self._commands = commands_of(menus)
        self.wanted.clear()
        self._list("")
        window, metrics = self._window, self.fontMetrics()
        width = min(_WIDTH_IN_CHARACTERS * metrics.averageCharWidth(), int(0.95 * window.width()))
        self.found.setFixedHeight(_ROWS * (metrics.height() + 4))
        self.setFixedWidth(width)
        self.adjustSize()
        self.move(window.mapToGlobal(QPoint((window.width() - width) // 2, window.height() // 12)))
        self.show()
        self.wanted.setFocus()

    def titles(self) -> list[str]:
        """Give the commands listed, by name."""
        items = (self.found.topLevelItem(place) for place in range(self.found.topLevelItemCount()))
        return [item.text(0) for item in items if item is not None]

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Take from the line the keys that move in the list and that carry a command out."""
        if watched is self.wanted and event.type() == QEvent.Type.KeyPress and isinstance(event, QKeyEvent):
            return self._take_key(Qt.Key(event.key()))
        return super().eventFilter(watched, event)

    def _take_key(self, key: Qt.Key) -> bool:
        steps = {Qt.Key.Key_Down: 1, Qt.Key.Key_Up: -1, Qt.Key.Key_PageDown: _ROWS, Qt.Key.Key_PageUp: -_ROWS}
        if key in steps:
            self._choose(self.found.currentIndex().row() + steps[key])
        elif key in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self._run(self.found.currentItem())
        else:
            return False
        return True

    def _choose(self, row: int) -> None:
        item = self.found.topLevelItem(max(0, min(row, self.found.topLevelItemCount() - 1)))
        if item is not None:
            self.found.setCurrentItem(item)

    def _list(self, wanted: str) -> None:
        self.found.clear()
        quiet = self.palette().color(QPalette.ColorGroup.Disabled, QPalette.ColorRole.WindowText)
        for command in matching(self._commands, wanted):
            item = QTreeWidgetItem(self.found, [command.title, command.path, command.keys])
            item.setData(0, _COMMAND, command)
            item.setForeground(1, quiet)
            if not command.action.isEnabled():
                for column in (0, 2):
                    item.setForeground(column, quiet)
                item.setToolTip(0, command.why_not)
            elif command.action.isCheckable() and command.action.isChecked():
                item.setText(0, f"{command.title}  ✓")
        if self.found.topLevelItemCount():
            self._choose(0)
        else:
            self.why.setText("No command holds this: try another word.")

    def _say_why(self, item: QTreeWidgetItem | None) -> None:
        command = item.data(0, _COMMAND) if item is not None else None
        if command is None or command.action.isEnabled():
            self.why.setText("")
        else:
            self.why.setText(command.why_not or "This cannot be done just now.")

    def _run(self, item: QTreeWidgetItem | None) -> None:
        command = item.data(0, _COMMAND) if item is not None else None
        if command is None or not command.action.isEnabled():
            return
        self.hide()
        # Only when the list is gone and the focus is back where it was.
        QTimer.singleShot(0, command.action, command.action.trigger)
