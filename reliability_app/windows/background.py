"""Runs analyses beside the window, one at a time, the newest question first; late answers are dropped."""

from __future__ import annotations

import sys
from concurrent.futures import Future, ThreadPoolExecutor

from PySide6.QtCore import QObject, Qt, Signal

from reliability_app.session.analysis import Question, SetAnalysis, analyse

# While a worker computes, the interpreter hands over this often, so that the window stays smooth.
_SWITCH_INTERVAL = 0.001


class Outdated(Exception):
    """Ends a piece of work whose answer nobody waits for any more."""


class Analyst(QObject):
    """Answers questions in a thread of its own, a slow one first with quick bounds that stand in.

    Only the newest question counts: one that waits is replaced by the next, one being answered is dropped at its next
    step, and an answer that comes after a newer question was put is not told. All signals arrive on the thread of the
    window.

    Signals
    -------
    answered(SetAnalysis)
        The answer; twice for a slow question, the first time provisional.
    advanced(int)
        Steps of slow work done so far.
    failed(str)
        The analysis could not be carried out through a fault of the program.
    """

    answered = Signal(object)
    advanced = Signal(int)
    failed = Signal(str)
    _told = Signal(int, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._worker = ThreadPoolExecutor(max_workers=1, thread_name_prefix="analysis")
        self._generation = 0
        self._waiting: Future[None] | None = None
        self._closed = False
        self._told.connect(self._tell, Qt.ConnectionType.QueuedConnection)
        sys.setswitchinterval(_SWITCH_INTERVAL)

    @property
    def is_busy(self) -> bool:
        """True while the final answer to the newest question is still to come."""
        return self._waiting is not None

    def ask(self, question: Question) -> None:
        """Put a question in the place of any that waits or is being answered."""
        if self._closed:
            return
        self.stop()
        self._waiting = self._worker.submit(self._answer, self._generation, question)

    def stop(self) -> None:
        """Give up the question that waits or is being answered; what was told of it stands."""
        self._generation += 1
        if self._waiting is not None:
            self._waiting.cancel()
        self._waiting = None

    def close(self) -> None:
        """Give up everything and wait for the worker to end; nothing is told afterwards."""
        self.stop()
        self._closed = True
        self._worker.shutdown(wait=True, cancel_futures=True)

    def _answer(self, generation: int, question: Question) -> None:
        steps = 0

        def proceed() -> None:
            nonlocal steps
            if generation != self._generation:
                raise Outdated
            steps += 1
            self._emit(generation, steps)

        try:
            if generation != self._generation:
                return
            first = analyse(question, quick=True, proceed=proceed)
            self._emit(generation, first)
            if first.is_provisional:
                self._emit(generation, analyse(question, proceed=proceed))
        except Outdated:
            return
        except Exception as trouble:  # told on the window's thread: a worker must not die silently
            self._emit(generation, trouble)

    def _emit(self, generation: int, outcome: SetAnalysis | Exception | int) -> None:
        if not self._closed:
            self._told.emit(generation, outcome)

    def _tell(self, generation: int, outcome: SetAnalysis | Exception | int) -> None:
        if generation != self._generation or self._closed:
            return
        if isinstance(outcome, int):
            self.advanced.emit(outcome)
            return
        if not (isinstance(outcome, SetAnalysis) and outcome.is_provisional):
            self._waiting = None
        if isinstance(outcome, SetAnalysis):
            self.answered.emit(outcome)
        else:
            self.failed.emit(f"The analysis failed ({type(outcome).__name__}: {outcome}).")
