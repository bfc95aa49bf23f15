"""Wires the pages to the rest of the window: picked units, candidates, and readings typed on a chart."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject

from reliability_app.engine.cautions import Severity
from reliability_app.reports.shown import Shown
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.candidate_lines import candidate_lines
from reliability_app.session.document import Ask
from reliability_app.session.edits import ChangeAsks, ChangeBasis
from reliability_app.windows.comparing import FamilyComparer
from reliability_app.windows.page_feed import PageContent
from reliability_app.windows.units_grid.picked_rows import PickedRows

if TYPE_CHECKING:
    from reliability_app.windows.main_window import MainWindow


class PageWiring(QObject):
    """Carries what happens on a page to the grid and the session, and what is selected in the grid to the pages."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        contents = window.contents
        self._feed, self._candidates = window.answering.feed, contents.candidates
        self._places: tuple[int, ...] = (0,)  # of the sets drawn, in the session
        self._analysis: SetAnalysis | None = None
        self.comparer = FamilyComparer(self)
        self.picked = PickedRows(contents.grid.model, contents.grid.view, self)
        self.picked.rows_selected.connect(self._show_picked)
        for chart in contents.charts:
            chart.rows_picked.connect(self._select_rows)
            if chart not in contents.pages:
                chart.copy_action.triggered.connect(window.pictures.copy)
        for page in contents.pages:
            page.ask_typed.connect(self._read_typed)
        contents.paper.candidates_action.toggled.connect(self._want_candidates)
        self._feed.fed.connect(self._follow)
        self._connect_candidates()

    def _connect_candidates(self) -> None:
        page, comparer = self._candidates, self.comparer
        page.compare_asked.connect(comparer.compare)
        page.simulate_asked.connect(comparer.simulate)
        page.stop_asked.connect(comparer.stop)
        page.family_chosen.connect(self._choose_family)
        page.table_changed.connect(self._show_candidate_lines)
        comparer.answered.connect(page.show_table)
        comparer.failed.connect(page.show_failure)
        comparer.failed.connect(self._say_failure)

    def _follow(self, content: PageContent) -> None:
        """Bring along what is not drawn from pictures alone."""
        self._places = content.places
        before = self._analysis
        self._analysis = content.further[content.current].analysis if content.further else None
        shown = Shown(content.pictures, content.current, content.life_unit, statement=content.statement)
        self._candidates.show_shown(shown)
        if self._analysis is None or before is None or before.question is not self._analysis.question:
            self._candidates.show_analysis(self._analysis)
            self._show_picked(self.picked.rows())

    def close(self) -> None:
        """Give up what is being worked out, and wait for the thread."""
        self.comparer.close()

    # Picked units

    def _show_picked(self, rows: tuple[int, ...]) -> None:
        place = self._window.shown_set
        if place in self._places:
            self._feed.highlight(self._places.index(place), rows)

    def _select_rows(self, place: int, rows: tuple[int, ...], joins: bool) -> None:
        wanted = self._places[place] if place < len(self._places) else self._window.shown_set
        if wanted != self._window.shown_set:
            self._window.show_set(wanted)
            joins = False
        self.picked.select(rows, joins=joins)

    # Candidates

    def _want_candidates(self, wanted: bool) -> None:
        self._candidates.want_elsewhere(wanted)
        self._show_candidate_lines()

    def _show_candidate_lines(self) -> None:
        table, analysis = self._candidates.table, self._analysis
        is_wanted = self._window.contents.paper.candidates_action.isChecked()
        failure = None if analysis is None else analysis.picture.failure
        if not is_wanted or table is None or analysis is None or failure is None:
            self._feed.show_candidates(())
            return
        self._feed.show_candidates(candidate_lines(table.candidates, analysis.question.basis.family, failure.x))

    def _say_failure(self, text: str) -> None:
        self._window.messages.say(Severity.SERIOUS, text)

    def _choose_family(self, name: str) -> None:
        window = self._window
        place = window.shown_set
        old = window.session.sets[place].basis
        new = replace(old, family=name, threshold=False, shape=None)
        if new != old:
            window.push_edit(ChangeBasis(place, old, new))

    # Readings

    def _read_typed(self, ask: Ask) -> None:
        asks = self._window.session.asks
        if asks[:1] != (ask,):
            others = tuple(other for other in asks if other != ask)
            self._window.push_edit(ChangeAsks(asks, (ask, *others)))
