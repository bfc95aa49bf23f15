"""A small editor that stands in a page: one or two lines to type into, Enter takes them, Escape puts it away."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from PySide6.QtCore import QRect, Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from reliability_app.engine.errors import RigpaperError
from reliability_app.windows.entry_line import EntryLine

_WIDTH = 11  # characters of a line
_GAP = 6
_WIDEST_REASON = 0.8  # of the page


class InPageEditor(QFrame):
    """Asks for one or two values in front of a page; what cannot be taken is said below the lines."""

    def __init__(self, page: QWidget) -> None:
        super().__init__(page)
        self._page = page
        self._take: Callable[[list[str]], None] | None = None
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAutoFillBackground(True)
        self.setAccessibleName(f"{page.accessibleName()} editor".strip())
        self._title, self._to, self.reason = QLabel(), QLabel("to"), QLabel()
        self.reason.setWordWrap(True)
        self.lines = (EntryLine(), EntryLine())
        row = QHBoxLayout()
        for part in (self._title, self.lines[0], self._to, self.lines[1]):
            row.addWidget(part)
        column = QVBoxLayout(self)
        column.setContentsMargins(8, 6, 8, 6)
        column.addLayout(row)
        column.addWidget(self.reason)
        for line in self.lines:
            line.returnPressed.connect(self.accept)
        self.hide()

    def ask(self, title: str, texts: Sequence[str], take: Callable[[list[str]], None], *, beside: QRect) -> None:
        """Show the lines with these texts; `take` gets what is typed, and raises RigpaperError where it refuses it."""
        self._take = take
        self._title.setText(title)
        has_two = len(texts) > 1
        for line, text, name in zip(self.lines, (*texts, ""), ("", " to"), strict=False):
            line.setText(text)
            line.setFixedWidth(_WIDTH * self.fontMetrics().averageCharWidth() + 16)
            line.setAccessibleName(title + name)
        if not has_two:
            self.lines[0].setFixedWidth(2 * self.lines[0].width())
        self._to.setVisible(has_two)
        self.lines[1].setVisible(has_two)
        self._say("")
        self._stand(beside)
        self.show()
        self.raise_()
        self.lines[0].setFocus()
        self.lines[0].selectAll()

    def accept(self) -> None:
        """Take what is typed, or say why it cannot be."""
        typed = [line.text() for line in self.lines if not line.isHidden()]
        try:
            if self._take is not None:
                self._take(typed)
        except RigpaperError as trouble:
            self._say(str(trouble))
            return
        self.put_away()

    def put_away(self) -> None:
        """Hide, and give the keyboard back to the page."""
        self.hide()
        self._page.setFocus()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Put the editor away on Escape; every other key stays here, so that it moves no chart."""
        if event.key() == Qt.Key.Key_Escape:
            self.put_away()
        event.accept()

    def _say(self, reason: str) -> None:
        self.reason.setText(reason)
        self.reason.setVisible(bool(reason))
        self.reason.setMaximumWidth(int(_WIDEST_REASON * self._page.width()))
        self._stand(self.geometry())

    def _stand(self, beside: QRect) -> None:
        """Stand at a place of the page, wholly inside it."""
        self.adjustSize()
        left = min(max(beside.left() + _GAP, _GAP), self._page.width() - self.width() - _GAP)
        top = min(
            max(beside.top() - (0 if self.isVisible() else _GAP), _GAP), self._page.height() - self.height() - _GAP
        )
        self.move(max(left, 0), max(top, 0))
