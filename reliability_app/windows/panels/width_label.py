"""A label of wrapping words that asks for just the height they need in the width it has, and no more."""

from __future__ import annotations

from PySide6.QtCore import QEvent, QSize, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QApplication, QLabel, QSizePolicy


class WidthLabel(QLabel):
    """Words of `size` times the usual size that can be selected, called `name` by a screen reader.

    The size a plain label asks for is that of a narrow block of text, which keeps a splitter from giving the room to
    its neighbour.
    """

    def __init__(self, name: str, size: float = 1.0) -> None:
        super().__init__()
        self.setAccessibleName(name)
        self.setWordWrap(True)
        self.setTextInteractionFlags(
            Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
        )
        policy = QSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Minimum)
        policy.setHeightForWidth(True)
        self.setSizePolicy(policy)
        self._size = size
        self._scale()

    def sizeHint(self) -> QSize:
        """Ask for the height of the words in the present width."""
        return QSize(super().sizeHint().width(), self.heightForWidth(self.width()))

    def minimumSizeHint(self) -> QSize:
        """Ask for no less than that."""
        return QSize(super().minimumSizeHint().width(), self.heightForWidth(self.width()))

    def changeEvent(self, event: QEvent) -> None:
        """Follow the size of the program's text."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.ApplicationFontChange:
            self._scale()

    def _scale(self) -> None:
        font = QApplication.font(self)
        font.setPointSizeF(font.pointSizeF() * self._size)
        self.setFont(font)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Ask anew where the width has changed."""
        super().resizeEvent(event)
        if event.size().width() != event.oldSize().width():
            self.updateGeometry()
