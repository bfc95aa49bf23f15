"""A line to type a value into that leaves undo to the window once its text has been taken."""

from __future__ import annotations

from PySide6.QtCore import QEvent
from PySide6.QtGui import QKeyEvent, QKeySequence
from PySide6.QtWidgets import QLineEdit

_UNDOING = (QKeySequence.StandardKey.Undo, QKeySequence.StandardKey.Redo)


class EntryLine(QLineEdit):
    """A line edit whose own undo lasts only while something is being typed.

    A plain QLineEdit keeps Ctrl+Z to itself for as long as it has the focus, so that the step which its text has become
    could not be undone from where it was made. Texts set by the program (`setText`) count as taken.
    """

    def event(self, event: QEvent) -> bool:
        """Leave the keys of undo and redo to the window while nothing typed is waiting here."""
        if (
            isinstance(event, QKeyEvent)
            and event.type() == QEvent.Type.ShortcutOverride
            and not self.isModified()
            and any(event.matches(key) for key in _UNDOING)
        ):
            event.ignore()
            return False
        return super().event(event)
