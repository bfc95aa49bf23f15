"""Does slow work in a thread while the window goes on painting, and waits for its result."""

from __future__ import annotations

import sys
import threading
from collections.abc import Callable
from typing import Generic, TypeVar

from PySide6.QtCore import QEventLoop, Qt, QTimer
from PySide6.QtGui import QGuiApplication

Result = TypeVar("Result")
_LOOK_EVERY_MS = 20
# While Python works in another thread the window gets its turn this often.
_SWITCH_S = 0.001


def wait_for(act: Callable[[], Result]) -> Result:
    """Return what `act` returns, or raise what it raises; the user can look on, but do nothing, until it has ended."""
    work = _Work(act)
    thread = threading.Thread(target=work.run, name="waited for", daemon=True)
    loop = QEventLoop()
    timer = QTimer(interval=_LOOK_EVERY_MS)
    timer.timeout.connect(lambda: None if thread.is_alive() else loop.quit())
    before = sys.getswitchinterval()
    sys.setswitchinterval(_SWITCH_S)
    QGuiApplication.setOverrideCursor(Qt.CursorShape.WaitCursor)
    try:
        thread.start()
        timer.start()
        loop.exec(QEventLoop.ProcessEventsFlag.ExcludeUserInputEvents)
    finally:
        timer.stop()
        QGuiApplication.restoreOverrideCursor()
        sys.setswitchinterval(before)
    return work.result()


class _Work(Generic[Result]):
    """A piece of work, and how it ended."""

    def __init__(self, act: Callable[[], Result]) -> None:
        self._act = act
        self._results: list[Result] = []
        self._trouble: BaseException | None = None

    def run(self) -> None:
        try:
            self._results.append(self._act())
        except BaseException as trouble:  # raised again where it is waited for
            self._trouble = trouble

    def result(self) -> Result:
        if self._trouble is not None:
            raise self._trouble
        return self._results[0]
