"""Asks about the sets shown and brings the answers onto pages and panels: none that is out of date."""

from __future__ import annotations

from PySide6.QtCore import QObject, Signal

from reliability_app.reports.foot import joint_statement
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.document import LifeAsk, Session
from reliability_app.session.further_pictures import FurtherPicture, further_of
from reliability_app.windows.background import Analyst
from reliability_app.windows.contents import Contents
from reliability_app.windows.page_feed import PageContent, PageFeed
from reliability_app.windows.set_answers import SetAnswers, Wanted


class Answering(QObject):
    """Stands between the questions of a session and what the window shows of the answers.

    Signals
    -------
    shown()
        Pages and panels show the answer to the set worked on.
    troubled(str)
        An analysis failed through a fault of the program, and nothing is shown any more.
    """

    shown = Signal()
    troubled = Signal(str)

    def __init__(self, session: Session, contents: Contents, analyst: Analyst, parent: QObject) -> None:
        super().__init__(parent)
        self._session, self._contents, self._analyst = session, contents, analyst
        self.answers = SetAnswers(session)
        self.feed = PageFeed(contents.tabs, contents.charts, self)
        self._further: dict[int, FurtherPicture] = {}
        self.analysis: SetAnalysis | None = None
        self._moved: SetAnalysis | None = None  # with a reading that is being dragged
        self._current = 0
        analyst.answered.connect(self._take_answer)
        analyst.failed.connect(self._take_failure)

    @property
    def is_current(self) -> bool:
        """True where every set shown is shown as the session has it, if with provisional bounds."""
        return self.answers.all_held(self._current) is not None

    @property
    def current(self) -> SetAnalysis | None:
        """The answer to the set worked on, where it holds."""
        return self.answers.held(self._current)

    @property
    def all_current(self) -> list[SetAnalysis] | None:
        """The answers to all sets shown, in their order; None while one is still to come."""
        return self.answers.all_held(self._current)

    def forget(self) -> None:
        """Drop everything, because another session is shown."""
        self._analyst.stop()
        self.answers.forget()
        self._further = {}
        self.analysis = self._moved = None

    def ask(self, current: int) -> None:
        """Ask what is not known of the sets shown with the one at `current` in front, and show what is."""
        self._current, self._moved = current, None
        held = self.answers.held(current)
        if held is None:
            self._contents.reading.expect_newer()
        wanted = self.answers.ask(current)
        if wanted is not None:
            self._put(wanted)
        if held is not None:
            self._show(held)

    def stop(self) -> None:
        """Keep the provisional bounds that there are."""
        self._analyst.stop()
        self.answers.settle()

    def drag_to(self, percent: float) -> None:
        """Follow the reading line: the sentence and the bracket at once, the session when the line is let go."""
        held = self._moved or self.answers.held(self._current)
        if held is not None:
            self._moved = self.analysis = held.with_main_ask(LifeAsk(percent))
            self._contents.reading.show_analysis(self._moved)
            self._show_pictures(self._moved)

    def let_go(self) -> None:
        """Show what the session asks for, after a drag that ended where it began."""
        self._moved = None
        held = self.answers.held(self._current)
        if held is not None:
            self._show(held)

    def _put(self, wanted: list[Wanted]) -> None:
        if wanted:
            self._analyst.ask(wanted)
        else:
            self._analyst.stop()

    def _take_answer(self, analysis: SetAnalysis) -> None:
        unit_set = self.answers.take(analysis)
        if unit_set is None or self._current >= len(self._session.sets):
            return
        held = self.answers.held(self._current)
        if held is None:
            return
        if self._session.sets[self._current] is unit_set:
            self._moved = None
            self._show(held)
        else:
            self._show_pictures(self._moved or held)

    def _show(self, analysis: SetAnalysis) -> None:
        self.analysis = analysis
        self._contents.reading.show_analysis(analysis)
        self._show_pictures(analysis)
        self.shown.emit()

    def _show_pictures(self, front: SetAnalysis) -> None:
        """Draw the sets whose curves are true; state and list the readings of those whose readings are."""
        places = self.answers.shown(self._current)
        found = [(place, front if place == self._current else self.answers.drawn(place)) for place in places]
        drawn = [(place, one) for place, one in found if one is not None]
        read = [one for place, one in drawn if place == self._current or one is self.answers.held(place)]
        self._further = {place: further_of(one, self._further.get(place)) for place, one in drawn}
        self.feed.show(
            PageContent(
                pictures=tuple(one.picture for _, one in drawn),
                current=[place for place, _ in drawn].index(self._current),
                life_unit=self._session.life_unit,
                further=tuple(self._further.values()),
                statement=joint_statement(read),
                places=tuple(self._further),
            )
        )
        self._contents.reading.readings.show_analyses(read, still_to_come=len(places) - len(read))

    def _take_failure(self, text: str) -> None:
        self.forget()
        self._contents.reading.show_failure()
        self.feed.show(PageContent(life_unit=self._session.life_unit))
        self.troubled.emit(text)
