"""The list of all cells that cannot be read: row, what was typed, and why; choosing one goes to the cell."""

from __future__ import annotations

from PySide6.QtCore import QModelIndex, QSize, QStringListModel, Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QFrame,
    QHBoxLayout,
    QLabel,
    QListView,
    QToolButton,
    QVBoxLayout,
    QWidget,
)

from reliability_app.session.numbers import quoted
from reliability_app.session.row_reading import READ_COLUMNS
from reliability_app.session.unit_table import CellFault, UnitTable

MOST_ROWS = 1000
_SHOWN_LINES = 6
_FEWEST_LINES = 3


class FaultsList(QFrame):
    """Lists faults while it is open, and follows the table.

    Signals
    -------
    fault_chosen(row, column)
        The cell is to be shown.
    cell_wanted()
        The user goes on in the grid, at the cell shown.
    closed()
        The list was put away.
    """

    fault_chosen = Signal(int, str)
    cell_wanted = Signal()
    closed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAccessibleName("Cells that cannot be read")
        self._faults: list[CellFault] = []
        self._revision: int | None = None
        self._head = QLabel()
        self._texts = QStringListModel(self)
        self._view = _view(self._texts)
        self._view.selectionModel().currentChanged.connect(self._choose)
        self._view.activated.connect(lambda _: self.cell_wanted.emit())
        self._lay_out()
        self.hide()

    @property
    def texts(self) -> list[str]:
        """The entries as shown."""
        return self._texts.stringList()

    @property
    def head(self) -> str:
        """The line above the entries."""
        return self._head.text()

    def show_faults_of(self, table: UnitTable) -> None:
        """Open the list."""
        self._revision = None
        self.show()
        self.refresh(table)
        self._view.setFocus()
        self._choose(self._view.currentIndex())

    def refresh(self, table: UnitTable) -> None:
        """Follow the table; without a fault the list goes."""
        if not self.isVisible() or self._revision == table.revision:
            return
        self._revision = table.revision
        self._faults, left_out = _first_faults(table)
        if not self._faults:
            self.put_away()
            return
        more = f"; {_counted(left_out, 'further row')} not listed" if left_out else ""
        self._head.setText(f"{_counted(len(self._faults), 'cell')} to correct{more}")
        place = self._view.currentIndex().row()
        self._view.selectionModel().blockSignals(True)
        self._texts.setStringList([_entry(fault) for fault in self._faults])
        self._view.setCurrentIndex(self._texts.index(max(0, min(place, len(self._faults) - 1))))
        self._view.selectionModel().blockSignals(False)
        self._view.viewport().update()

    def put_away(self) -> None:
        """Close the list."""
        if self.isVisible():
            self.hide()
            self.closed.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Close by Escape."""
        if event.key() == Qt.Key.Key_Escape:
            self.put_away()
            self.cell_wanted.emit()
        else:
            super().keyPressEvent(event)

    def _choose(self, current: QModelIndex) -> None:
        if 0 <= current.row() < len(self._faults):
            fault = self._faults[current.row()]
            self.fault_chosen.emit(fault.row, fault.column)

    def _lay_out(self) -> None:
        close = QToolButton()
        close.setText("\N{MULTIPLICATION SIGN}")
        close.setAccessibleName("Close the list")
        close.setToolTip("Close the list (Esc)")
        close.setAutoRaise(True)
        close.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        close.clicked.connect(self.put_away)
        line = QHBoxLayout()
        line.addWidget(self._head, 1)
        line.addWidget(close)
        column = QVBoxLayout(self)
        column.setContentsMargins(8, 3, 3, 3)
        column.setSpacing(2)
        column.addLayout(line)
        column.addWidget(self._view)


class _Entries(QListView):
    """A list that asks for a few lines and no more, so that the grid keeps its room."""

    def sizeHint(self) -> QSize:
        """Ask for as many lines as are shown at once."""
        return QSize(super().sizeHint().width(), _SHOWN_LINES * self.fontMetrics().lineSpacing())

    def minimumSizeHint(self) -> QSize:
        """Be content with fewer where room is short."""
        return QSize(super().minimumSizeHint().width(), _FEWEST_LINES * self.fontMetrics().lineSpacing())


def _view(model: QStringListModel) -> QListView:
    view = _Entries()
    view.setModel(model)
    view.setAccessibleName("Cells that cannot be read, with reasons")
    view.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
    view.setWordWrap(True)
    view.setAlternatingRowColors(True)
    view.setResizeMode(QListView.ResizeMode.Adjust)
    view.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
    return view


def _entry(fault: CellFault) -> str:
    typed = quoted(fault.typed) if fault.typed else ""
    where = f"Row {fault.row + 1}" if typed in fault.reason else f"Row {fault.row + 1}, {typed}"
    return f"{where}: {fault.reason}"


def _first_faults(table: UnitTable) -> tuple[list[CellFault], int]:
    """Return the faults of the first MOST_ROWS unread rows, and how many rows more there are."""
    rows = [row for row in range(table.row_count) if table.row_is_read(row) is False]
    faults = [
        CellFault(row, column, table.text(row, column), reason)
        for row in rows[:MOST_ROWS]
        for column in READ_COLUMNS
        if (reason := table.fault(row, column))
    ]
    return faults, max(0, len(rows) - MOST_ROWS)


def _counted(count: int, what: str) -> str:
    return f"1 {what}" if count == 1 else f"{count:,} {what}s".replace(",", " ")
