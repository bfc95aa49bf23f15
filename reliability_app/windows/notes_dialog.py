"""The dialog for the session's title and notes."""

from __future__ import annotations

from PySide6.QtWidgets import QDialog, QDialogButtonBox, QFormLayout, QLineEdit, QPlainTextEdit, QWidget

from reliability_app.session.document import Session
from reliability_app.session.edits import ChangeNotes, ChangeTitle, Edit


class NotesDialog(QDialog):
    """Shows title and notes of a session; `edits` says what the user changed."""

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._session = session
        self.setWindowTitle("Title and notes")
        self.title = QLineEdit(session.title)
        self.title.setAccessibleName("Title of the session")
        self.notes = QPlainTextEdit(session.notes)
        self.notes.setAccessibleName("Notes of the session")
        self.notes.setTabChangesFocus(True)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel)
        buttons.accepted.connect(self.accept)
        buttons.rejected.connect(self.reject)
        layout = QFormLayout(self)
        layout.addRow("&Title", self.title)
        layout.addRow("&Notes", self.notes)
        layout.addRow(buttons)
        self.resize(560, 320)

    def edits(self) -> list[Edit]:
        """Return one edit for each of the two that differs from the session."""
        title, notes = self.title.text().strip(), self.notes.toPlainText()
        changes: list[Edit] = []
        if title != self._session.title:
            changes.append(ChangeTitle(self._session.title, title))
        if notes != self._session.notes:
            changes.append(ChangeNotes(self._session.notes, notes))
        return changes
