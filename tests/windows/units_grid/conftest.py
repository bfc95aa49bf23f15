"""A Units grid wired to a session and an undo stack as the main window wires it, shown and active."""

from dataclasses import dataclass

import pytest
from PySide6.QtCore import QMimeData, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from reliability_app.session.document import Session
from reliability_app.session.edits import Edit
from reliability_app.windows.undo import UndoStack
from reliability_app.windows.units_grid.grid_moves import CellRange
from reliability_app.windows.units_grid.units_grid import UnitsGrid

CONTROL = Qt.KeyboardModifier.ControlModifier
SHIFT = Qt.KeyboardModifier.ShiftModifier
NONE = Qt.KeyboardModifier.NoModifier


@dataclass
class Rig:
    """What a test works with: the grid, the session and undo stack behind it, and hands."""

    qtbot: QtBot
    session: Session
    undo: UndoStack
    grid: UnitsGrid

    @property
    def table(self):
        return self.session.sets[0].table

    @property
    def texts(self) -> list[dict[str, str]]:
        return [self.table.row(row) for row in range(self.table.row_count)]

    @property
    def cell(self) -> tuple[int, str]:
        row, section = self.grid.view.current_cell()
        return row, self.grid.model.columns[section]

    def key(self, key: Qt.Key, modifiers: Qt.KeyboardModifier = NONE) -> None:
        """Press a key; it goes where the system would send it: to an open list, or to what has the focus."""
        self.qtbot.keyClick(self._receiver(), key, modifiers)

    def type(self, text: str) -> None:
        for character in text:
            self.qtbot.keyClick(self._receiver(), character)

    def _receiver(self) -> QWidget:
        return QApplication.activePopupWidget() or QApplication.focusWidget()

    def go(self, row: int, column: str) -> None:
        self.grid.view.go_to(row, self.grid.model.columns.index(column))

    def select(self, top: int, left: str, bottom: int, right: str) -> None:
        places = self.grid.model.columns
        self.grid.view.select_block(CellRange(top, places.index(left), bottom, places.index(right)))

    def paste(self, text: str, html: str | None = None) -> None:
        mime = QMimeData()
        mime.setText(text)
        if html is not None:
            mime.setHtml(html)
        QGuiApplication.clipboard().setMimeData(mime)
        self.key(Qt.Key.Key_V, CONTROL)

    def fill(self, *rows: str) -> None:
        """Put rows into the table, not as a step to be undone; cells are separated by bars."""
        from reliability_app.session.edits import BlockEdit

        cells = [row.split("|") for row in rows]
        columns = ("unit", "life", "until", "state", "quantity", "entered", "cause", "note")[: max(map(len, cells))]
        BlockEdit(0, 0, columns, cells).apply(self.session)


@pytest.fixture
def rig(qtbot):
    session = Session()
    undo = UndoStack()

    def push(edit: Edit) -> None:
        undo.push_edit(session, edit)

    grid = UnitsGrid(push)
    session.listen(grid.refresh)
    undo.retraced.connect(grid.reveal)
    grid.undo_paste_asked.connect(undo.undo_if_latest)
    qtbot.addWidget(grid)
    grid.resize(700, 500)
    grid.show_set(session, 0)
    grid.show()
    grid.activateWindow()
    qtbot.waitActive(grid).__enter__()
    grid.view.setFocus()
    qtbot.waitUntil(grid.view.hasFocus)
    QGuiApplication.clipboard().clear()
    yield Rig(qtbot, session, undo, grid)
    undo.clear()
