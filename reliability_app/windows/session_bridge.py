"""Carries what the session and the message channel tell in plain Python over to Qt signals."""

from __future__ import annotations

from PySide6.QtCore import QObject, Signal

from reliability_app.session.document import Session
from reliability_app.session.messages import Messages


class SessionBridge(QObject):
    """Emits `changed(Change)` after every edit and `said(Message)` for every message."""

    changed = Signal(object)
    said = Signal(object)

    def __init__(self, session: Session, messages: Messages, parent: QObject | None = None) -> None:
        super().__init__(parent)
        session.listen(self.changed.emit)
        messages.listen(self.said.emit)
