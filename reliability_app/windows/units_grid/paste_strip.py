"""The line under the grid that says what the last paste was understood to be, and takes it back on request."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QPoint, Qt, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QToolButton, QVBoxLayout, QWidget

from reliability_app.windows.units_grid.wrapped_label import wrapped_label


class PasteStrip(QFrame):
    """Says what a paste was understood to be; its oddities unfold below the line.

    Signals
    -------
    undo_asked()
        The paste is to be taken back.
    change_asked(QPoint)
        It is to be understood differently: show what can be chosen, at a place on the screen.
    closed()
        The user has read it and put it away.
    """

    undo_asked = Signal()
    change_asked = Signal(QPoint)
    closed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAutoFillBackground(True)
        self.setAccessibleName("What was pasted")
        self._sentence = wrapped_label(Qt.TextFormat.RichText)
        self._notes = wrapped_label(Qt.TextFormat.RichText)
        self._notes.setVisible(False)
        self._notes_button = _button("", "Show or hide what was odd about the paste")
        self._notes_button.setCheckable(True)
        self._notes_button.toggled.connect(self._notes.setVisible)
        self._undo_button = _button("Undo paste", "Undo paste")
        self._undo_button.clicked.connect(self.undo_asked)
        self._change_button = _button("Change \N{HORIZONTAL ELLIPSIS}", "Read the paste differently")
        self._change_button.clicked.connect(self._ask_change)
        close = _button("\N{MULTIPLICATION SIGN}", "Close this line")
        close.clicked.connect(self._close)
        self._lay_out(close)
        self.hide()

    def tell(self, sentence: str, *, notes: Sequence[str], unread: int, can_undo: bool, can_change: bool) -> None:
        """Show what a paste was understood to be, with the number of its rows that cannot be read."""
        faults = "" if not unread else f"  <b>! {_rows(unread)} cannot be read.</b>"
        self._sentence.setText(f"{_escaped(sentence)}{faults}")
        self._notes.setText("<br>".join(_escaped(note) for note in notes))
        count = len(notes)
        self._notes_button.setText("1 note" if count == 1 else f"{count} notes")
        self._notes_button.setVisible(count > 0)
        self._notes_button.setChecked(False)
        self._undo_button.setVisible(can_undo)
        self._change_button.setVisible(can_change)
        self.show()

    @property
    def sentence(self) -> str:
        """The line as shown."""
        return self._sentence.text()

    @property
    def notes(self) -> str:
        """What was odd, as it unfolds."""
        return self._notes.text()

    @property
    def shows_notes(self) -> bool:
        """Whether the oddities are unfolded."""
        return self._notes.isVisible()

    def forbid_undo(self) -> None:
        """Take the buttons away that work on the paste: something else was done since."""
        self._undo_button.setVisible(False)
        self._change_button.setVisible(False)

    def _ask_change(self) -> None:
        corner = self._change_button.rect().bottomLeft()
        self.change_asked.emit(self._change_button.mapToGlobal(corner))

    def _close(self) -> None:
        self.hide()
        self.closed.emit()

    def _lay_out(self, close: QToolButton) -> None:
        line, buttons = QHBoxLayout(), QHBoxLayout()
        line.addWidget(self._sentence, 1)
        line.addWidget(close, 0, Qt.AlignmentFlag.AlignTop)
        # Below the sentence and not beside it: the page of the grid is narrow, and large fonts would leave it no room.
        for button in (self._notes_button, self._change_button, self._undo_button):
            buttons.addWidget(button)
        buttons.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(8, 3, 3, 3)
        column.setSpacing(0)
        column.addLayout(line)
        column.addWidget(self._notes)
        column.addLayout(buttons)


def _button(text: str, name: str) -> QToolButton:
    button = QToolButton()
    button.setText(text)
    button.setAccessibleName(name)
    button.setToolTip(name)
    button.setAutoRaise(True)
    button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return button


def _rows(count: int) -> str:
    return "1 row" if count == 1 else f"{count} rows"


def _escaped(text: str) -> str:
    return text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
