"""The reading panel: the sentence, what it rests on, the table of readings, and the cautions beside them."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import (
    QHBoxLayout,
    QLabel,
    QMenu,
    QPushButton,
    QSplitter,
    QVBoxLayout,
    QWidget,
)

from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.ask_text import AskUnreadable, Offer, example_asks, offers, read_ask
from reliability_app.session.document import Ask, MeanLifeAsk, with_headline
from reliability_app.session.edits import ChangeAsks, Edit
from reliability_app.session.plain_output import cautions_of, statement
from reliability_app.session.wording import basis_text, parameters_text, reading_sentence
from reliability_app.windows.entry_line import EntryLine
from reliability_app.windows.panels.cautions_view import CautionsView
from reliability_app.windows.panels.plan_line import PlanLine
from reliability_app.windows.panels.readings_table import ReadingsTable
from reliability_app.windows.panels.side_by_side import ReadingsStack
from reliability_app.windows.panels.width_label import WidthLabel

_STALE_AFTER_MS = 250
_NEVER_MAIN = (
    "The mean life is not made the main reading: it says nothing of early failures, and few units may reach it. "
    "Choose a B-life for that."
)


class ReadingPanel(QWidget):
    """States the main reading of the set shown, and lists the others.

    While a newer answer is being computed the old one stays for a moment, then turns pale with a note; it is never
    shown as current.
    """

    stop_asked = Signal()

    def __init__(self, push_edit: Callable[[Edit], None], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._push_edit = push_edit
        self._analysis: SetAnalysis | None = None
        self._asks: tuple[Ask, ...] = ()
        self.sentence = WidthLabel("Reading sentence", 1.25)
        self.rests_on = WidthLabel("What the reading rests on")
        self.parameters = WidthLabel("Fitted parameters")
        self.copy_button = QPushButton("Copy")
        self.copy_button.setAccessibleName("Copy the reading with its basis and cautions")
        self.copy_button.setToolTip("Copy the reading with its basis and cautions")
        self.progress = QLabel()
        self.stop_button = QPushButton("Stop")
        self.stop_button.setToolTip("Keep the provisional bound")
        self.stop_button.setAccessibleName("Stop calibrating and keep the provisional bound")
        self._show_progress(False)
        self.table = ReadingsTable()
        self.readings = ReadingsStack(self.table)
        self.plan = PlanLine()
        self.new_ask = EntryLine()
        self.kinds_button = QPushButton("&Kinds")
        self.kinds_button.setMenu(QMenu(self.kinds_button))
        self.new_ask_trouble = QLabel()
        self.cautions = CautionsView()
        self._lay_out()
        self._stale = QTimer(self, singleShot=True, interval=_STALE_AFTER_MS)
        self._stale.timeout.connect(self._turn_pale)
        self.copy_button.clicked.connect(self.copy_statement)
        self.stop_button.clicked.connect(self._stop)
        self.new_ask.returnPressed.connect(self._add_ask)
        self.kinds_button.menu().aboutToShow.connect(self._list_kinds)
        self.table.main_chosen.connect(self._make_main)
        self.table.removal_asked.connect(self._remove)

    def show_analysis(self, analysis: SetAnalysis) -> None:
        """Show a finished analysis."""
        self._stale.stop()
        self._analysis = analysis
        if not analysis.is_provisional:
            self._show_progress(False)
        question = analysis.question
        self._asks = question.asks
        self.setEnabled(True)
        if not self.new_ask.text():
            self.new_ask_trouble.hide()
        main = analysis.main
        if main is None:
            own = analysis.readings[0].cautions if analysis.readings else ()
            reason = next((caution.text for caution in (*own, *analysis.cautions[:-1])), "")
            self.sentence.setText(reason or "Paste or type the lives of some units to begin.")
            self.rests_on.setText("")
        else:
            said, unit = reading_sentence(main, question.life_unit), question.life_unit
            # A number and its unit stay on one line.
            self.sentence.setText(said.replace(f" {unit}", f"\u00a0{unit}") if unit else said)
            basis = f"({basis_text(question.basis, question.counts, main)})"
            self.rests_on.setText("\n".join(filter(None, (basis, main.measured if main else ""))))
        self.parameters.setText(parameters_text(analysis.fit))
        self.new_ask.setPlaceholderText(example_asks(question.life_unit))
        self.copy_button.setEnabled(main is not None)
        self.table.show_analysis(analysis)
        self.plan.show_analysis(analysis)
        self.cautions.show_cautions(cautions_of(analysis) if question.units.rows else ())

    def show_progress(self, steps: int) -> None:
        """Show that the calibration of a provisional bound goes on: `steps` batches of simulated tests so far."""
        if self._analysis is not None and self._analysis.is_provisional:
            self.progress.setText(f"Calibrating: {steps} batches of simulated tests")
            self._show_progress(True)

    def _stop(self) -> None:
        self._show_progress(False)
        self.stop_asked.emit()

    def _show_progress(self, is_shown: bool) -> None:
        self.progress.setVisible(is_shown)
        self.stop_button.setVisible(is_shown)

    def expect_newer(self) -> None:
        """Note that what is shown will soon be out of date."""
        if not self._stale.isActive():
            self._stale.start()

    def copy_statement(self) -> None:
        """Copy the reading, its basis and its cautions as text."""
        if self._analysis is not None:
            said = (statement(self._analysis), self.plan.statement())
            QGuiApplication.clipboard().setText("\n".join(filter(None, said)))

    def show_failure(self) -> None:
        """Show that there is no answer, because the analysis failed."""
        self._stale.stop()
        self._analysis = None
        self.plan.show_analysis(None)
        self._show_progress(False)
        self.setEnabled(False)
        self.sentence.setText("No reading: the analysis failed.")
        self.rests_on.setText("")
        self.parameters.setText("")

    def _turn_pale(self) -> None:
        self.rests_on.setText("Computing: what stands above is out of date.")
        self.setEnabled(False)

    def _list_kinds(self) -> None:
        """Offer every kind of reading, with ages from among those observed."""
        menu, analysis = self.kinds_button.menu(), self._analysis
        menu.clear()
        age = analysis.fit.data.last_observation if analysis and analysis.fit else None
        for offer in offers(self._life_unit, age):
            menu.addAction(offer.title, partial(self._take_offer, offer))

    def _take_offer(self, offer: Offer) -> None:
        """Put an offer into the line with its example selected; one without an example is added at once."""
        self.new_ask.setText(offer.text)
        self.new_ask.setFocus()
        if offer.example:
            self.new_ask.setSelection(offer.text.index(offer.example), len(offer.example))
        else:
            self._add_ask()

    @property
    def _life_unit(self) -> str:
        return self._analysis.question.life_unit if self._analysis else "h"

    def _add_ask(self) -> None:
        try:
            ask = read_ask(self.new_ask.text(), self._life_unit)
        except AskUnreadable as trouble:
            self._say_trouble(str(trouble))
            return
        self.new_ask_trouble.hide()
        self.new_ask.setText("")
        if ask not in self._asks:
            self._change_asks((*self._asks, ask))

    def _say_trouble(self, text: str) -> None:
        self.new_ask_trouble.setText(text)
        self.new_ask_trouble.show()

    def _make_main(self, place: int) -> None:
        self.new_ask_trouble.hide()
        if place > 0:
            ask = self._asks[place]
            if isinstance(ask, MeanLifeAsk):
                self._say_trouble(_NEVER_MAIN)
                return
            self._change_asks((ask, *(other for other in self._asks if other != ask)))

    def _remove(self, place: int) -> None:
        if len(self._asks) > 1:
            self._change_asks(with_headline(tuple(ask for at, ask in enumerate(self._asks) if at != place)))

    def _change_asks(self, asks: tuple[Ask, ...]) -> None:
        self._push_edit(ChangeAsks(self._asks, asks))

    def _lay_out(self) -> None:
        self.new_ask.setAccessibleName("Add a reading: a percent, an age, or another kind and its number")
        self.kinds_button.setAccessibleName("Kinds of reading to add")
        self.kinds_button.setToolTip("Every kind of reading that can be added")
        self.new_ask_trouble.setWordWrap(True)
        self.new_ask_trouble.hide()
        top = QHBoxLayout()
        top.addWidget(self.sentence, 1)
        top.addWidget(self.copy_button, 0, Qt.AlignmentFlag.AlignTop)
        left = QWidget()
        column = QVBoxLayout(left)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.readings, 1)
        adding = QHBoxLayout()
        adding.addWidget(self.new_ask, 1)
        adding.addWidget(self.kinds_button)
        adding.addWidget(self.readings.button)
        column.addLayout(adding)
        column.addWidget(self.new_ask_trouble)
        halves = QSplitter(Qt.Orientation.Horizontal)
        halves.addWidget(left)
        halves.addWidget(self._beside())
        halves.setChildrenCollapsible(False)
        halves.setSizes([450, 350])
        self.readings.turned.connect(lambda several: halves.setSizes([600, 200] if several else [450, 350]))
        layout = QVBoxLayout(self)
        layout.setContentsMargins(8, 6, 8, 6)
        layout.addLayout(top)
        layout.addWidget(self.rests_on)
        # Progress shares the line of the parameters and keeps its height, so that nothing moves when it comes and goes.
        slow = QHBoxLayout()
        slow.addWidget(self.parameters, 1)
        slow.addWidget(self.progress)
        slow.addWidget(self.stop_button)
        keep_place = self.stop_button.sizePolicy()
        keep_place.setRetainSizeWhenHidden(True)
        self.stop_button.setSizePolicy(keep_place)
        layout.addLayout(slow)
        layout.addWidget(self.plan)
        layout.addWidget(halves, 1)

    def _beside(self) -> QWidget:
        """Return what stands beside the readings: the cautions, and the way to try the plan of the test."""
        right = QWidget()
        column = QVBoxLayout(right)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.cautions, 1)
        column.addWidget(self.plan.button, 0, Qt.AlignmentFlag.AlignRight)
        return right
