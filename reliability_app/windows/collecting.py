"""Collects garbage on the window's thread only: a widget freed on a worker's thread can hang the program.

Where Python collects on a worker's thread and frees a widget there, Qt's destructor holds one of its locks and waits
for the interpreter, while the window's thread holds the interpreter and waits for that lock.
"""

from __future__ import annotations

import gc

from PySide6.QtCore import QObject, QTimer

_LOOK_EVERY_MS = 500
# New objects, then collections of the younger generation, after which one is collected: the usual thresholds of Python.
_THRESHOLDS = (2000, 10, 10)


class Collector(QObject):
    """Takes the collecting of garbage over from Python, as long as it lives."""

    def __init__(self, parent: QObject) -> None:
        super().__init__(parent)
        gc.disable()
        timer = QTimer(self, interval=_LOOK_EVERY_MS)
        timer.timeout.connect(self.collect)
        timer.start()

    def collect(self) -> None:
        """Collect the oldest generation that is due."""
        for generation, (count, most) in reversed(list(enumerate(zip(gc.get_count(), _THRESHOLDS, strict=True)))):
            if count > most:
                gc.collect(generation)
                return
