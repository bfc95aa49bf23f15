"""The strip that finds text in the units and puts other text in its place: what to look for, how many there are."""

from __future__ import annotations

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QFrame, QGridLayout, QHBoxLayout, QLabel, QLineEdit, QToolButton, QWidget

# A long table takes some 0.1 s to look through: not at every key.
_LOOK_AFTER_MS = 120


class FindStrip(QFrame):
    """Asks for a text and tells how many cells hold it.

    Signals
    -------
    changed(str)
        Another text is looked for.
    next_asked(), previous_asked()
        Go to the next match, or to the one before.
    replace_asked(), replace_all_asked()
        Put the replacement in the place of the match shown, or of all.
    closed()
        The strip was put away.
    """

    changed = Signal(str)
    next_asked = Signal()
    previous_asked = Signal()
    replace_asked = Signal()
    replace_all_asked = Signal()
    closed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAutoFillBackground(True)
        self.setAccessibleName("Find in the units")
        self.wanted = _line("Find", "Text to find in any column")
        self.replacement = _line("Replace with", "Text to put in its place")
        self._count = QLabel()
        self._count.setAccessibleName("Cells found")
        self._replacing: list[QWidget] = []
        self._pause = QTimer(self, singleShot=True, interval=_LOOK_AFTER_MS)
        self._pause.timeout.connect(self._look)
        self.wanted.textEdited.connect(lambda _: self._pause.start())
        self._lay_out()
        self.hide()

    @property
    def count_text(self) -> str:
        """What is said of the cells found."""
        return self._count.text()

    def open(self, *, replacing: bool) -> None:
        """Show the strip and select what was looked for last."""
        for widget in self._replacing:
            widget.setVisible(replacing)
        self.show()
        self.wanted.setFocus()
        self.wanted.selectAll()
        self.changed.emit(self.wanted.text())

    def tell(self, place: int | None, count: int) -> None:
        """Say how many cells hold the text, and which of them is shown."""
        if not self.wanted.text():
            self._count.setText("")
        elif not count:
            self._count.setText("not found")
        elif place is None:
            self._count.setText("1 cell" if count == 1 else f"{count} cells")
        else:
            self._count.setText(f"{place} of {count}")

    def tell_replaced(self, count: int) -> None:
        """Say in how many cells the text was replaced."""
        self._count.setText("1 cell replaced" if count == 1 else f"{count} cells replaced")

    def put_away(self) -> None:
        """Close the strip."""
        self.hide()
        self.closed.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter goes on, with Shift back; Escape closes."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            backwards = bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)
            if self._pause.isActive():
                self._look()
            elif backwards:
                self.previous_asked.emit()
            else:
                self.next_asked.emit()
        elif event.key() == Qt.Key.Key_Escape:
            self.put_away()
        else:
            super().keyPressEvent(event)

    def _look(self) -> None:
        self._pause.stop()
        self.changed.emit(self.wanted.text())

    def _lay_out(self) -> None:
        grid = QGridLayout(self)
        grid.setContentsMargins(6, 3, 3, 3)
        grid.setVerticalSpacing(2)
        buttons = QHBoxLayout()
        buttons.setSpacing(2)
        for text, name, signal in (
            ("▲", "Go to the match before (Shift+F3)", self.previous_asked),
            ("▼", "Go to the next match (F3)", self.next_asked),
            ("\N{MULTIPLICATION SIGN}", "Close this line (Escape)", None),
        ):
            button = _button(text, name)
            button.clicked.connect(self.put_away if signal is None else signal)
            buttons.addWidget(button)
        label = QLabel("Find")
        grid.addWidget(label, 0, 0)
        grid.addWidget(self.wanted, 0, 1)
        grid.addWidget(self._count, 0, 2)
        grid.addLayout(buttons, 0, 3)
        one, every = _button("Replace", "Replace in the cell shown"), _button("All", "Replace in all cells found")
        one.clicked.connect(self.replace_asked)
        every.clicked.connect(self.replace_all_asked)
        replaced_label = QLabel("Replace with")
        grid.addWidget(replaced_label, 1, 0)
        grid.addWidget(self.replacement, 1, 1)
        grid.addWidget(one, 1, 2)
        grid.addWidget(every, 1, 3)
        grid.setColumnStretch(1, 1)
        self._replacing = [replaced_label, self.replacement, one, every]


def _line(name: str, tip: str) -> QLineEdit:
    line = QLineEdit()
    line.setAccessibleName(name)
    line.setToolTip(tip)
    line.setClearButtonEnabled(True)
    return line


def _button(text: str, name: str) -> QToolButton:
    button = QToolButton()
    button.setText(text)
    button.setAccessibleName(name)
    button.setToolTip(name)
    button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return button
