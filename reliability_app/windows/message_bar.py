"""The bar above the pages that says what went wrong and how to go on, without stopping the work."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QToolButton, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.session.messages import Message

_MARKS = {Severity.NOTE: "i", Severity.CAUTION: "!", Severity.SERIOUS: "‼"}


class MessageBar(QFrame):
    """Shows the latest message until it is closed."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self._severity = Severity.NOTE
        self._mark = QLabel()
        self._text = QLabel()
        self._text.setWordWrap(True)
        self._text.setAccessibleName("Message")
        self._text.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        close = QToolButton()
        close.setText("×")
        close.setAutoRaise(True)
        close.setAccessibleName("Close the message")
        close.clicked.connect(self.hide)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(8, 4, 4, 4)
        layout.addWidget(self._mark, 0, Qt.AlignmentFlag.AlignTop)
        layout.addWidget(self._text, 1)
        layout.addWidget(close, 0, Qt.AlignmentFlag.AlignTop)
        self.hide()

    def show_message(self, message: Message) -> None:
        """Show a message in the place of the one before."""
        self._mark.setText(f"<b>{_MARKS[message.severity]}</b>")
        self._text.setText(message.text)
        self._severity = message.severity
        self.show()

    def put_away_notes(self) -> None:
        """Close the bar if what it says was only a note: the work has gone on since."""
        if self._severity is Severity.NOTE:
            self.hide()

    def text(self) -> str:
        """Return what is said, empty when the bar is closed."""
        return "" if self.isHidden() else self._text.text()
