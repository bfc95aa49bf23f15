"""Runs analyses and simulations beside the window; of each only the newest counts, and late answers are dropped."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Future, ThreadPoolExecutor

from PySide6.QtCore import QObject, Qt, Signal

from reliability_app.engine.bounds import Proceed
from reliability_app.session.analysis import Question, SetAnalysis, analyse
from reliability_app.session.plan_simulation import simulate_plan
from reliability_app.windows.set_answers import Wanted

# While a worker computes, the interpreter hands over this often, so that the window stays smooth.
_SWITCH_INTERVAL = 0.001

Work = Callable[[Proceed], Iterator[object]]
_DONE = object()


class Outdated(Exception):
    """Ends a piece of work whose answer nobody waits for any more."""


class Worker(QObject):
    """Carries out work in a thread of its own, one piece at a time.

    Only the newest piece counts: one that waits is replaced by the next, one being carried out is dropped at its next
    step, and an outcome that comes after newer work was given is not told. All signals arrive on the thread of the
    window.

    Signals
    -------
    answered(object)
        An outcome of the work.
    advanced(int)
        Steps of slow work done so far.
    failed(str)
        The work could not be carried out through a fault of the program.
    """

    answered = Signal(object)
    advanced = Signal(int)
    failed = Signal(str)
    _told = Signal(int, object)

    def __init__(self, what: str, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._what = what
        self._thread = ThreadPoolExecutor(max_workers=1, thread_name_prefix=what)
        self._generation = 0
        self._waiting: Future[None] | None = None
        self._closed = False
        self._told.connect(self._tell, Qt.ConnectionType.QueuedConnection)
        sys.setswitchinterval(_SWITCH_INTERVAL)

    @property
    def is_busy(self) -> bool:
        """True while the last outcome of the newest work is still to come."""
        return self._waiting is not None

    def start(self, work: Work) -> None:
        """Put work in the place of any that waits or is being carried out; it gives its outcomes one by one."""
        if self._closed:
            return
        self.stop()
        self._waiting = self._thread.submit(self._carry_out, self._generation, work)

    def stop(self) -> None:
        """Give up the work that waits or is being carried out; what was told of it stands."""
        self._generation += 1
        if self._waiting is not None:
            self._waiting.cancel()
        self._waiting = None

    def close(self) -> None:
        """Give up everything and wait for the thread to end; nothing is told afterwards."""
        self.stop()
        self._closed = True
        self._thread.shutdown(wait=True, cancel_futures=True)

    def _carry_out(self, generation: int, work: Work) -> None:
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
            for outcome in work(proceed):
                self._emit(generation, outcome)
            self._emit(generation, _DONE)
        except Outdated:
            return
        except Exception as trouble:  # told on the window's thread: a worker must not die silently
            self._emit(generation, trouble)

    def _emit(self, generation: int, outcome: object) -> None:
        if not self._closed:
            self._told.emit(generation, outcome)

    def _tell(self, generation: int, outcome: object) -> None:
        if generation != self._generation or self._closed:
            return
        if outcome is _DONE:
            self._waiting = None
        elif isinstance(outcome, int):
            self.advanced.emit(outcome)
        elif isinstance(outcome, Exception):
            self._waiting = None
            self.failed.emit(f"The {self._what} failed ({type(outcome).__name__}: {outcome}).")
        else:
            self.answered.emit(outcome)


class Analyst(Worker):
    """Answers questions about sets with a SetAnalysis each, a slow one first with quick bounds that stand in."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__("analysis", parent)

    def ask(self, questions: Sequence[Wanted]) -> None:
        """Put questions in the place of any that wait or are being answered.

        All are answered quickly before any is answered slowly, each time in their order.
        """

        def work(proceed: Proceed) -> Iterator[SetAnalysis]:
            slow: list[Question] = []
            for one in questions:
                first = one.provisional
                if first is None:
                    first = analyse(one.question, quick=True, proceed=proceed)
                    yield first
                if first.is_provisional:
                    slow.append(one.question)
            yield from (analyse(question, proceed=proceed) for question in slow)

        self.start(work)


class PlanSimulator(Worker):
    """Simulates the plan of an analysed set, and tells a SimulatedPlan; a step is a simulated test."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__("simulation", parent)

    def simulate(self, analysis: SetAnalysis) -> None:
        """Simulate this plan in the place of any other."""
        self.start(lambda proceed: iter([simulate_plan(analysis, proceed=proceed)]))
