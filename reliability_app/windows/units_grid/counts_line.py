"""The line below the grid: how many units are in which state, and why the current row cannot be read."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QToolButton, QVBoxLayout, QWidget

from reliability_app.session.unit_table import Counts
from reliability_app.windows.units_grid.wrapped_label import wrapped_label


class CountsLine(QWidget):
    """Counts the units, and while any row cannot be read says why, with a button that goes to the next such row.

    Signals
    -------
    next_unread_asked()
        The next row that cannot be read is to be shown.
    list_asked(shown)
        The list of all cells that cannot be read is to be shown, or put away.
    """

    next_unread_asked = Signal()
    list_asked = Signal(bool)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._unread = 0
        self._counts = QLabel()
        self._counts.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self._reason = wrapped_label()
        self._button = _button("Show unread", "Show the next unread row", "Go to the next row that cannot be read (F8)")
        self._button.clicked.connect(self.next_unread_asked)
        self._list = _button(
            "List", "List all unread cells", "List all cells that cannot be read, with reasons (Shift+F8)"
        )
        self._list.setCheckable(True)
        self._list.toggled.connect(self.list_asked)
        self._lay_out()

    @property
    def counts_text(self) -> str:
        """The counts as shown."""
        return self._counts.text()

    @property
    def reason_text(self) -> str:
        """The reason as shown; "" where none is."""
        return self._reason.text() if self._unread else ""

    def tell_counts(self, counts: Counts) -> None:
        """Show the counts."""
        self._unread = counts.unread
        self._counts.setText(counts_sentence(counts))
        self._button.setVisible(counts.unread > 0)
        self._list.setVisible(counts.unread > 0)
        self._reason.setVisible(counts.unread > 0)

    def open_list(self) -> None:
        """Ask for the list of unread cells, if there are any, and again if it is open."""
        if self._unread:
            self._list.setChecked(False)
            self._list.setChecked(True)

    def note_list_closed(self) -> None:
        """Take in that the list of unread cells was put away."""
        self._list.setChecked(False)

    def tell_reason(self, row: int, reason: str | None) -> None:
        """Show why a row cannot be read, in a sentence; None for a row that can be."""
        if reason is None:
            left_out = "1 row is" if self._unread == 1 else f"{self._unread} rows are"
            self._reason.setText(f"{left_out} kept but left out of the analysis.")
        else:
            self._reason.setText(f"! Row {row + 1}: {reason}")

    def _lay_out(self) -> None:
        line = QHBoxLayout()
        line.setContentsMargins(0, 0, 0, 0)
        line.addWidget(self._counts)
        line.addStretch(1)
        line.addWidget(self._list)
        line.addWidget(self._button)
        column = QVBoxLayout(self)
        column.setContentsMargins(6, 0, 3, 3)
        column.setSpacing(2)
        column.addLayout(line)
        column.addWidget(self._reason)


def _button(text: str, name: str, tip: str) -> QToolButton:
    button = QToolButton()
    button.setText(text)
    button.setAccessibleName(name)
    button.setToolTip(tip)
    button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return button


def counts_sentence(counts: Counts) -> str:
    """Say the counts: "12 failed, 8 running, 0 unread"; found failed are named where there are any."""
    found = f", {counts.found_failed} found failed" if counts.found_failed else ""
    return f"{counts.failed} failed, {counts.running} running{found}, {counts.unread} unread"
