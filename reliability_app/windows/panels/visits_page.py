"""Visits: a reading through the visits of a session, what came between them, the requirement, and old visits again."""

from __future__ import annotations

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QShowEvent
from PySide6.QtWidgets import (
    QComboBox,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPushButton,
    QSizePolicy,
    QSplitter,
    QTabWidget,
    QVBoxLayout,
    QWidget,
)

from reliability_app.reports.figure import Figure
from reliability_app.reports.visits_figure import VisitSeries
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.document import Ask, Session
from reliability_app.session.requirement import Judgement
from reliability_app.session.visit import asks_of
from reliability_app.session.visit_agreement import Held
from reliability_app.session.visit_history import HistoryPoint, history
from reliability_app.session.visits import differs_from_last
from reliability_app.session.wording import ask_title
from reliability_app.windows.charts.visits_chart import VisitsChart
from reliability_app.windows.page_feed import PageContent
from reliability_app.windows.panels.between_visits import BetweenVisits
from reliability_app.windows.panels.requirement_panel import RequirementPanel
from reliability_app.windows.panels.scrolled import scrolled
from reliability_app.windows.panels.visit_view import VisitView
from reliability_app.windows.panels.visits_table import VisitsTable
from reliability_app.windows.units_grid.wrapped_label import wrapped_label
from reliability_app.windows.visit_work import Compared, JudgedSets, Pair

_AS_IT_STOOD = 3  # place of the tab
_LEAST_CHART = 110
RECORDING = "Recording when the bounds stand …"


class VisitsPage(QWidget):
    """Everything about visits of the set worked on; of the others their readings in the chart.

    Signals
    -------
    record_asked(str)
        The session is to be recorded under this label.
    relabelled(int, str), deleted(int)
        A visit is to be called otherwise, or to go.
    compare_asked(tuple)
        This pair of visits is looked at, and is to be compared if it has not been.
    judge_asked()
        The page is looked at: the requirement is to be judged.
    stop_recording_asked()
        The visit is not to be recorded after all.
    """

    record_asked = Signal(str)
    relabelled = Signal(int, str)
    deleted = Signal(int)
    compare_asked = Signal(object)
    judge_asked = Signal()
    stop_recording_asked = Signal()

    def __init__(self, session: Session, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.name = "Visits"
        self.setAccessibleName("Visits page")
        self._session = session
        self._content = PageContent()
        self._is_due = False
        self._found: dict[Pair, Held] = {}
        self._verdicts: dict[str, Judgement | None] = {}
        self.chart = VisitsChart()
        self.reading = QComboBox()
        self.reading.setAccessibleName("Reading followed through the visits")
        self.reading.activated.connect(lambda _: self.refresh())
        self.label = QLineEdit()
        self.label.setPlaceholderText("label, as week 6")
        self.label.setAccessibleName("Label of the visit to be recorded")
        self.record_button = QPushButton("Record visit")
        self.record_button.setToolTip("Record units and readings as they stand now, with their date (Ctrl+R)")
        self.stop_button = QPushButton("Stop")
        self.stop_button.setAccessibleName("Stop recording the visit")
        self.told = QLabel()
        self.summary = wrapped_label()
        self.summary.setAccessibleName("What came between the visits chosen")
        self.table = VisitsTable()
        self.open_button, self.relabel_button, self.delete_button = (
            QPushButton(text) for text in ("Show as it stood", "Change label", "Delete")
        )
        self.delete_button.setAccessibleName("Delete the visit")
        self.between = BetweenVisits()
        self.requirement = RequirementPanel()
        self.visit_view = VisitView()
        self.tabs = QTabWidget()
        self.tabs.setAccessibleName("About the visits")
        self._lay_out()
        self._connect()
        self.set_recording(False)

    # What is shown

    @property
    def set_name(self) -> str:
        """The set worked on."""
        content = self._content
        return content.pictures[content.current].name if content.pictures else self._session.sets[0].name

    @property
    def ask(self) -> Ask:
        """The reading followed."""
        chosen = self.reading.currentData()
        asks = self._asks()
        return chosen if chosen in asks else asks[0]

    def take(self, content: PageContent) -> None:
        """Follow what the window shows."""
        before = self.set_name
        self._content = content
        if self.set_name != before:
            self._found, self._verdicts = {}, {}
            self.between.clear("")
            self._summarise()
        self.follow()

    def follow(self) -> None:
        """Show the session as it stands, as soon as the page is looked at."""
        self._is_due = True
        if self.isVisible():
            self.refresh()

    def refresh(self) -> None:
        """Show the session as it stands."""
        self._is_due = False
        session, content = self._session, self._content
        self._offer_readings()
        ask, held = self.ask, session.requirement
        required = None if held is None else held.requirement
        series = self._series(ask)
        self.chart.show_histories(content, series, ask, required)
        self._show_table(ask, series)
        titles = [(point.place, point.title) for point in self._points(series) if point.place is not None]
        self.between.offer(titles, session.life_unit, has_news=self._has_news)
        if self.between.pair is not None:
            self.compare_asked.emit(self.between.pair)
        self._summarise()
        self.requirement.show_requirement(held, session.requirement_log, session.life_unit)
        self.judge_asked.emit()
        shown = self.visit_view.visit
        if shown is not None and not any(one.record is shown.record for one in session.visits):
            self.visit_view.show_visit(None, "")
        self._mark_buttons()

    def show_compared(self, compared: Compared) -> None:
        """Show what changed between the visits chosen."""
        if compared.pair == self.between.pair:
            self.between.show_changes(compared)
            self._summarise()

    def show_held(self, held: Held) -> None:
        """Show what was foretold and found between two visits."""
        self._found[held.then, held.now] = held
        if (held.then, held.now) == self.between.pair:
            self.between.show_held(held)
            self._summarise()
            self.chart.told = (held.sentence,) if held.agreement is not None else ()
        self._show_table(self.ask, self._series(self.ask))

    def show_verdicts(self, judged: JudgedSets) -> None:
        """Show how the requirement stands today."""
        self._verdicts = dict(judged.verdicts)
        self.requirement.show_verdicts(judged.verdicts)
        self._show_table(self.ask, self._series(self.ask))

    def forget(self) -> None:
        """Drop what belongs to a session that is shown no more."""
        self._found, self._verdicts = {}, {}
        self.chart.told = ()
        self.label.clear()
        self.between.forget()
        self.visit_view.show_visit(None, "")
        self.tabs.setCurrentIndex(0)

    def forget_found(self) -> None:
        """Drop what was worked out of units that have changed since."""
        self._found = {pair: held for pair, held in self._found.items() if pair[1] is not None}
        self._verdicts = {}
        self.chart.told = ()

    def set_recording(self, recording: bool, why: str = RECORDING) -> None:
        """Show that a visit is being recorded, which may take the time of its bounds."""
        self.record_button.setEnabled(not recording)
        self.stop_button.setVisible(recording)
        self.told.setText(why if recording else "")

    def figure(self) -> Figure | None:
        """Return the chart as a picture."""
        if self._is_due:
            self.refresh()
        return self.chart.figure()

    def showEvent(self, event: QShowEvent) -> None:
        """Show the session when the page comes to the front."""
        super().showEvent(event)
        self.refresh()

    # What is done

    def record(self) -> None:
        """Have the session recorded under the label typed."""
        if self.record_button.isEnabled():
            self.record_asked.emit(self.label.text().strip())

    def open_visit(self) -> None:
        """Show the current visit as it stood."""
        place = self.table.current_place
        if place is not None:
            self.visit_view.show_visit(self._session.visits[place], self.set_name, len(self._session.sets))
            self.tabs.setCurrentIndex(_AS_IT_STOOD)

    def delete_visit(self) -> None:
        """Have the current visit deleted."""
        place = self.table.current_place
        if place is not None:
            self.deleted.emit(place)

    # Inside

    def _analysis_of(self, name: str) -> SetAnalysis | None:
        found = (one.analysis for one in self._content.further)
        return next((one for one in found if one.question.name == name), None)

    def _series(self, ask: Ask) -> list[VisitSeries]:
        return [
            VisitSeries(
                picture.name,
                picture.colour,
                history(self._session, picture.name, ask, self._analysis_of(picture.name)),
            )
            for picture in self._content.pictures
        ]

    def _points(self, series: list[VisitSeries]) -> tuple[HistoryPoint, ...]:
        return series[self._content.current].points if series else ()

    def _show_table(self, ask: Ask, series: list[VisitSeries]) -> None:
        judgement = self._verdicts.get(self.set_name)
        verdict = f"{judgement.verdict.value} (look {judgement.look})" if judgement is not None else ""
        self.table.show_points(
            self.set_name,
            self._points(series),
            [visit.label for visit in self._session.visits],
            ask,
            self._session.life_unit,
            found=self._found,
            verdict_today=verdict,
        )

    def _has_news(self) -> bool:
        """True where the units of today are not those of the last visit."""
        return f"the units of {self.set_name}" in differs_from_last(self._session)

    def _asks(self) -> tuple[Ask, ...]:
        recorded = (ask for visit in self._session.visits for ask in asks_of(visit))
        return tuple(dict.fromkeys((*self._session.asks, *recorded)))

    def _offer_readings(self) -> None:
        asks, chosen = self._asks(), self.reading.currentData()
        by_hand = self.reading.currentIndex() > 0 and chosen in asks
        self.reading.clear()
        for ask in asks:
            self.reading.addItem(ask_title(ask, self._session.life_unit), ask)
        self.reading.setCurrentIndex(asks.index(chosen) if by_hand else 0)

    def _summarise(self) -> None:
        """Say below the chart what came between the visits chosen."""
        self.summary.setText(self.between.summary)
        self.summary.setVisible(bool(self.between.summary))

    def _choose_clicked(self, place: int | None) -> None:
        self.table.go_to(place)
        self.tabs.setCurrentIndex(0)

    def _mark_buttons(self) -> None:
        has_visit = self.table.current_place is not None
        for button in (self.open_button, self.relabel_button, self.delete_button):
            button.setEnabled(has_visit)

    def _connect(self) -> None:
        self.record_button.clicked.connect(self.record)
        self.label.returnPressed.connect(self.record)
        self.stop_button.clicked.connect(self.stop_recording_asked)
        self.open_button.clicked.connect(self.open_visit)
        self.relabel_button.clicked.connect(self.table.edit_label)
        self.delete_button.clicked.connect(self.delete_visit)
        self.table.open_asked.connect(self.open_visit)
        self.table.delete_asked.connect(self.delete_visit)
        self.table.relabelled.connect(self.relabelled)
        self.table.currentCellChanged.connect(lambda *_: self._mark_buttons())
        self.chart.visit_clicked.connect(self._choose_clicked)

    def _lay_out(self) -> None:
        top = QHBoxLayout()
        top.setContentsMargins(6, 4, 6, 0)
        top.addWidget(QLabel("Reading"))
        top.addWidget(self.reading)
        top.addStretch(1)
        top.addWidget(self.told)
        top.addWidget(self.stop_button)
        self.label.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        top.addWidget(self.label, 2)
        top.addWidget(self.record_button)
        for widget, title in (
            (self._over_time(), "Over time"),
            (scrolled(self.between), "Between two visits"),
            (scrolled(self.requirement), "Requirement"),
            (scrolled(self.visit_view), "As it stood"),
        ):
            self.tabs.addTab(widget, title)
        outer = QVBoxLayout(self)
        outer.setContentsMargins(0, 0, 0, 0)
        outer.addLayout(top)
        outer.addWidget(self.tabs, 1)
        self.setFocusProxy(self.table)

    def _over_time(self) -> QWidget:
        """Lay out the chart above what came between the visits chosen, and the table of all."""
        listed = QWidget()
        column = QVBoxLayout(listed)
        column.setContentsMargins(6, 2, 6, 6)
        column.addWidget(self.summary)
        row, buttons = QHBoxLayout(), QVBoxLayout()
        row.addWidget(self.table, 1)
        for button in (self.open_button, self.relabel_button, self.delete_button):
            buttons.addWidget(button)
        buttons.addStretch(1)
        row.addLayout(buttons)
        column.addLayout(row, 1)
        self.chart.setMinimumHeight(_LEAST_CHART)
        self.table.setMinimumHeight(3 * self.fontMetrics().height())
        split = QSplitter(Qt.Orientation.Vertical)
        split.addWidget(self.chart)
        split.addWidget(scrolled(listed))
        split.setStretchFactor(0, 3)
        split.setStretchFactor(1, 2)
        split.setSizes([300, 200])
        split.setChildrenCollapsible(False)
        return split
