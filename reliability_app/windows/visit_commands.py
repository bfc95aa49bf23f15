"""Visits in the window: recorded, labelled, deleted, compared and judged; every change goes through the undo stack."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer

from reliability_app.engine.cautions import Severity
from reliability_app.engine.errors import RigpaperError
from reliability_app.session.analysis import Question
from reliability_app.session.held_requirement import SetRequirement
from reliability_app.session.requirement import Requirement
from reliability_app.session.visit_agreement import Held
from reliability_app.session.visit_reproduction import Reproduced, computed_otherwise
from reliability_app.session.visits import (
    DeleteVisit,
    RelabelVisit,
    differs_from_last,
    look_of_today,
    record_visit,
)
from reliability_app.windows.background import Worker
from reliability_app.windows.page_feed import PageContent
from reliability_app.windows.visit_work import (
    Compared,
    Pair,
    ReadyToRecord,
    RequirementJudge,
    VisitComparer,
    VisitPreparer,
    VisitReproducer,
)

if TYPE_CHECKING:
    from reliability_app.session.document import Change, Session
    from reliability_app.windows.main_window import MainWindow

NOTHING_TO_RECORD = "There are no units that could be read: a visit would record nothing."
CHANGED_MEANWHILE = "The session was changed while the visit was being recorded: record it again."
_LOOK_AGAIN_MS = 250  # for the first answer to be there before visits are computed anew
_WATCHED = ("units", "basis", "asks", "sets", "life_unit", "visits", "requirement")


class VisitCommands(QObject):
    """Stands between the Visits page, the offer after saving, and the session."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        self._session = window.session
        self._page, self._offer = window.contents.visits, window.contents.visit_offer
        self.comparer, self.judge = VisitComparer(self), RequirementJudge(self)
        self.preparer, self.reproducer = VisitPreparer(self), VisitReproducer(self)
        self._compared: tuple[object, ...] = ()
        self._judged: tuple[object, ...] = ()
        self._is_declined = False
        self._wait = QTimer(self, interval=_LOOK_AGAIN_MS)
        self._wait.timeout.connect(self._reproduce_when_idle)
        self._connect()
        self._page.take(window.answering.feed.content)

    def _connect(self) -> None:
        window, page = self._window, self._page
        window.answering.feed.fed.connect(self._follow)
        window.bridge.changed.connect(self._take_change)
        window.files.saved.connect(self.offer_after_saving)
        self._offer.taken.connect(lambda label: self.record(label, then_save=True))
        self._offer.declined.connect(self._decline)
        page.record_asked.connect(self.record)
        page.relabelled.connect(lambda place, label: window.push_edit(RelabelVisit(place, label)))
        page.deleted.connect(lambda place: window.push_edit(DeleteVisit(place)))
        page.compare_asked.connect(self._compare)
        page.between.pair_chosen.connect(self._compare_anew)
        page.between.stop_asked.connect(self.comparer.stop)
        page.judge_asked.connect(self._judge)
        page.stop_recording_asked.connect(self._stop_recording)
        page.requirement.required.connect(self._require)
        page.chart.copy_action.triggered.connect(window.pictures.copy)
        self.comparer.answered.connect(self._show_comparison)
        self.judge.answered.connect(page.show_verdicts)
        self.preparer.answered.connect(self._record_prepared)
        self.reproducer.answered.connect(self._tell_reproduced)
        self.comparer.failed.connect(lambda _: page.between.set_waiting(False))
        self.judge.failed.connect(page.requirement.show_trouble)
        self.preparer.failed.connect(lambda _: page.set_recording(False))
        for worker in self.workers:
            worker.failed.connect(self._tell_failure)

    @property
    def workers(self) -> tuple[Worker, ...]:
        """What runs beside the window."""
        return self.comparer, self.judge, self.preparer, self.reproducer

    def stop(self) -> None:
        """Give up everything that is being worked out."""
        self._wait.stop()
        for worker in self.workers:
            worker.stop()

    def close(self) -> None:
        """Give up everything and wait for the threads."""
        self.stop()
        for worker in self.workers:
            worker.close()

    # Recording

    def record(self, label: str = "", *, then_save: bool = False) -> None:
        """Record the session as it stands, as soon as its bounds are those of the basis."""
        window, session = self._window, self._session
        window.contents.grid.finish_entry()
        if not _has_units(session):
            self._say(NOTHING_TO_RECORD)
            return
        answers = window.answering.answers
        held = [answers.held(place) for place in range(len(session.sets))]
        wanted = [
            one if one is not None and not one.is_provisional else Question.about(session, place)
            for place, one in enumerate(held)
        ]
        self._page.set_recording(True)
        look = look_of_today(session)
        self.preparer.prepare(wanted, session.requirement, look, label=label, then_save=then_save)

    def record_by_key(self) -> None:
        """Record under the label typed on the page."""
        self._page.record()

    def _record_prepared(self, ready: ReadyToRecord) -> None:
        self._page.set_recording(False)
        try:
            edit = record_visit(self._session, ready.analyses, ready.label, judgements=ready.judgements)
        except RigpaperError:
            self._say(CHANGED_MEANWHILE)
            return
        self._offer.hide()
        self._is_declined = False
        self._page.label.clear()
        self._window.push_edit(edit)
        self._window.messages.say(Severity.NOTE, f"Recorded: {edit.visit.title}.")
        if ready.then_save:
            self._window.files.save()

    def _stop_recording(self) -> None:
        self.preparer.stop()
        self._page.set_recording(False)

    def offer_after_saving(self) -> None:
        """Offer to record a visit where units or answers are not those of the last one."""
        session = self._session
        changed = differs_from_last(session) if _has_units(session) and not self._is_declined else ()
        if changed:
            self._offer.offer(changed, is_first=not session.visits)
        else:
            self._offer.hide()

    def _decline(self) -> None:
        """Offer no more until another session is opened, or a visit recorded after all."""
        self._is_declined = True

    # Following the session

    def _follow(self, content: PageContent) -> None:
        before = self._page.set_name
        self._page.take(content)
        if self._page.set_name != before:
            self._drop_work()

    def _drop_work(self) -> None:
        """Give up what is being worked out of something that is shown no more."""
        self.comparer.stop()
        self.judge.stop()
        self._compared = self._judged = ()
        self._page.between.set_waiting(False)
        self._page.follow()

    def _take_change(self, change: Change) -> None:
        if change.kind == "everything":
            self.stop()
            self._compared = self._judged = ()
            self._is_declined = False
            self._page.set_recording(False)
            self._page.between.set_waiting(False)
            self._offer.hide()
            self._page.forget()
            if computed_otherwise(self._session):
                self._wait.start()
            return
        if change.kind in _WATCHED:
            self._page.forget_found()
            self._drop_work()

    # Comparing and judging

    def _compare(self, pair: Pair) -> None:
        session = self._session
        place = next((at for at, one in enumerate(session.sets) if one.name == self._page.set_name), None)
        if place is None:
            return
        shown = session.sets[place]
        key = (
            pair,
            shown.name,
            id(shown.table),
            shown.table.revision,
            shown.basis,
            len(session.sets),
            *(id(visit.record.sets) for visit in session.visits),
        )
        if key != self._compared:
            self._compared = key
            self._page.between.clear("")
            self._page.between.set_waiting(True)
            self.comparer.compare(session, place, pair)

    def _compare_anew(self, pair: Pair) -> None:
        self._compared = ()
        self._compare(pair)

    def _show_comparison(self, outcome: Compared | Held) -> None:
        if isinstance(outcome, Compared):
            self._page.show_compared(outcome)
            return
        self._page.show_held(outcome)
        if (outcome.then, outcome.now) == self._page.between.pair:
            self._page.between.set_waiting(False)

    def _judge(self) -> None:
        session, analyses = self._session, self._window.answering.all_current
        held = session.requirement
        if held is None or analyses is None or any(one.is_provisional for one in analyses):
            self.judge.stop()
            self._judged = ()
            return
        key = (held, *((id(one.fit), one.question.name) for one in analyses), len(session.visits))
        if key != self._judged:
            self._judged = key
            self.judge.judge(held, analyses, look_of_today(session))

    def _require(self, requirement: Requirement | None, adjusted: bool) -> None:
        self._window.push_edit(SetRequirement(requirement, adjusted))

    # Visits computed otherwise

    def _reproduce_when_idle(self) -> None:
        if self._window.analyst.is_busy:
            return
        self._wait.stop()
        self.reproducer.reproduce(computed_otherwise(self._session))

    def _tell_reproduced(self, found: Sequence[Reproduced]) -> None:
        if found:
            others = {0: "", 1: " One more visit differs too."}.get(
                len(found) - 1, f" {len(found) - 1} more visits differ too."
            )
            self._say(f"{found[0].sentence}{others} The visits stay as they were recorded.")

    def _say(self, text: str) -> None:
        self._window.messages.say(Severity.CAUTION, text)

    def _tell_failure(self, text: str) -> None:
        self._window.messages.say(Severity.SERIOUS, text)


def _has_units(session: Session) -> bool:
    """Return whether any unit can be read."""
    counts = [one.table.counts() for one in session.sets]
    return any(one.failed or one.running or one.found_failed for one in counts)
