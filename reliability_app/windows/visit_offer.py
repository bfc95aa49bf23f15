"""The line that offers to record a visit after saving, when something has changed since the last one."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLineEdit, QPushButton, QVBoxLayout, QWidget

from reliability_app.windows.units_grid.wrapped_label import wrapped_label

FIRST = "Saved. A visit keeps these units and readings with their date, to be held against later ones."
_MOST_NAMED = 3


class VisitOffer(QFrame):
    """Asks for nothing and stops nothing: it can be taken, closed or left.

    Signals
    -------
    taken(str)
        A visit of this label is to be recorded, and the session saved with it.
    declined()
        Not now.
    """

    taken = Signal(str)
    declined = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAccessibleName("Offer to record a visit")
        self.text = wrapped_label()
        self.label = QLineEdit()
        self.label.setPlaceholderText("label")
        self.label.setAccessibleName("Label of the visit offered")
        self.label.setMaximumWidth(18 * self.fontMetrics().averageCharWidth())
        self.take_button, self.close_button = QPushButton("Record and save"), QPushButton("Not now")
        self.close_button.setAccessibleName("Do not record a visit now")
        row = QHBoxLayout()
        for part in (self.label, self.take_button, self.close_button):
            row.addWidget(part)
        row.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(8, 4, 4, 4)
        column.setSpacing(2)
        column.addWidget(self.text)
        column.addLayout(row)
        self.take_button.clicked.connect(self._take)
        self.label.returnPressed.connect(self._take)
        self.close_button.clicked.connect(self._decline)
        self.hide()

    def offer(self, changed: Sequence[str], *, is_first: bool) -> None:
        """Show the offer; `changed` names what differs from the last visit."""
        named = ", ".join(changed[:_MOST_NAMED]) + (" and more" if len(changed) > _MOST_NAMED else "")
        self.text.setText(FIRST if is_first else f"Saved. Changed since the last visit: {named}. Record a visit?")
        self.label.clear()
        self.show()

    def _take(self) -> None:
        self.hide()
        self.taken.emit(self.label.text().strip())

    def _decline(self) -> None:
        self.hide()
        self.declined.emit()
