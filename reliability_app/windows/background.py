"""Runs analyses beside the window, one at a time, the newest question first; late answers are dropped."""

from __future__ import annotations

import sys
from concurrent.futures import Future, ThreadPoolExecutor

from PySide6.QtCore import QObject, Qt, Signal

from reliability_app.session.analysis import Question, SetAnalysis, analyse

# While a worker computes, the interpreter hands over this often, so that the window stays smooth.
_SWITCH_INTERVAL = 0.001


class Analyst(QObject):
    """Answers questions in a thread of its own.

    Only the newest question counts: one that waits is replaced by the next, and an answer that comes after a newer
    question was put is not told. `answered(SetAnalysis)` and `failed(str)` arrive on the thread of the window.
    """

    answered = Signal(object)
    failed = Signal(str)
    _finished = Signal(int, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._worker = ThreadPoolExecutor(max_workers=1, thread_name_prefix="analysis")
        self._generation = 0
        self._waiting: Future[None] | None = None
        self._closed = False
        self._finished.connect(self._tell, Qt.ConnectionType.QueuedConnection)
        sys.setswitchinterval(_SWITCH_INTERVAL)

    @property
    def is_busy(self) -> bool:
        """True while the answer to the newest question is still to come."""
        return self._waiting is not None

    def ask(self, question: Question) -> None:
        """Put a question in the place of any that still waits."""
        if self._closed:
            return
        if self._waiting is not None:
            self._waiting.cancel()
        self._generation += 1
        self._waiting = self._worker.submit(self._answer, self._generation, question)

    def forget(self) -> None:
        """Drop the question that waits or is being answered."""
        self._generation += 1
        if self._waiting is not None:
            self._waiting.cancel()
        self._waiting = None

    def close(self) -> None:
        """Drop everything and wait for the worker to end; nothing is told afterwards."""
        self.forget()
        self._closed = True
        self._worker.shutdown(wait=True, cancel_futures=True)

    def _answer(self, generation: int, question: Question) -> None:
        if generation != self._generation:
            return
        try:
            outcome: SetAnalysis | Exception = analyse(question)
        except Exception as trouble:  # told on the window's thread: a worker must not die silently
            outcome = trouble
        if not self._closed:
            self._finished.emit(generation, outcome)

    def _tell(self, generation: int, outcome: SetAnalysis | Exception) -> None:
        if generation != self._generation or self._closed:
            return
        self._waiting = None
        if isinstance(outcome, SetAnalysis):
            self.answered.emit(outcome)
        else:
            self.failed.emit(f"The analysis failed ({type(outcome).__name__}: {outcome}).")
