"""The one channel for everything that is said to the user outside the readings."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from reliability_app.engine.cautions import Severity


@dataclass(frozen=True)
class Message:
    """One thing said: how serious it is, and whole sentences."""

    severity: Severity
    text: str


class Messages:
    """Passes every message on to its listeners and remembers the latest ones, oldest first."""

    REMEMBERED = 200

    def __init__(self) -> None:
        self.said: list[Message] = []
        self._listeners: list[Callable[[Message], None]] = []

    def listen(self, listener: Callable[[Message], None]) -> None:
        """Call `listener` with each message said from now on."""
        self._listeners.append(listener)

    def say(self, severity: Severity, text: str) -> None:
        """Say `text` (whole sentences) to the user."""
        message = Message(severity, text)
        self.said = [*self.said, message][-self.REMEMBERED :]
        for listener in tuple(self._listeners):
            listener(message)
