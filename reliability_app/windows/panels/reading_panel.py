"""The reading panel: the sentence, what it rests on, the table of readings, and the cautions beside them."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import Qt, QTimer, Signal
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import (
    QHBoxLayout,
    QLabel,
    QPushButton,
    QSizePolicy,
    QSplitter,
    QVBoxLayout,
    QWidget,
)

from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.ask_text import AskUnreadable, example_asks, read_ask
from reliability_app.session.document import Ask
from reliability_app.session.edits import ChangeAsks, Edit
from reliability_app.session.plain_output import cautions_of, statement
from reliability_app.session.wording import basis_text, parameters_text, reading_sentence
from reliability_app.windows.entry_line import EntryLine
from reliability_app.windows.panels.cautions_view import CautionsView
from reliability_app.windows.panels.readings_table import ReadingsTable

_STALE_AFTER_MS = 250


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
        self.sentence = _text("Reading sentence", 1.25)
        self.rests_on = _text("What the reading rests on", 1.0)
        self.parameters = _text("Fitted parameters", 1.0)
        self.copy_button = QPushButton("Copy")
        self.copy_button.setAccessibleName("Copy the reading with its basis and cautions")
        self.copy_button.setToolTip("Copy the reading with its basis and cautions")
        self.progress = QLabel()
        self.stop_button = QPushButton("Stop")
        self.stop_button.setToolTip("Keep the provisional bound")
        self.stop_button.setAccessibleName("Stop calibrating and keep the provisional bound")
        self._show_progress(False)
        self.table = ReadingsTable()
        self.new_ask = EntryLine()
        self.new_ask_trouble = QLabel()
        self.cautions = CautionsView()
        self._lay_out()
        self._stale = QTimer(self, singleShot=True, interval=_STALE_AFTER_MS)
        self._stale.timeout.connect(self._turn_pale)
        self.copy_button.clicked.connect(self.copy_statement)
        self.stop_button.clicked.connect(self._stop)
        self.new_ask.returnPressed.connect(self._add_ask)
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
        main = analysis.main
        if main is None:
            reason = next((caution.text for caution in analysis.cautions[:-1]), "")
            self.sentence.setText(reason or "Paste or type the lives of some units to begin.")
            self.rests_on.setText("")
        else:
            said, unit = reading_sentence(main, question.life_unit), question.life_unit
            # A number and its unit stay on one line.
            self.sentence.setText(said.replace(f" {unit}", f"\u00a0{unit}") if unit else said)
            self.rests_on.setText(f"({basis_text(question.basis, question.counts, main)})")
        self.parameters.setText(parameters_text(analysis.fit))
        self.new_ask.setPlaceholderText(example_asks(question.life_unit))
        self.copy_button.setEnabled(main is not None)
        self.table.show_analysis(analysis)
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
            QGuiApplication.clipboard().setText(statement(self._analysis))

    def show_failure(self) -> None:
        """Show that there is no answer, because the analysis failed."""
        self._stale.stop()
        self._analysis = None
        self._show_progress(False)
        self.setEnabled(False)
        self.sentence.setText("No reading: the analysis failed.")
        self.rests_on.setText("")
        self.parameters.setText("")

    def _turn_pale(self) -> None:
        self.rests_on.setText("Computing: what stands above is out of date.")
        self.setEnabled(False)

    def _add_ask(self) -> None:
        unit = self._analysis.question.life_unit if self._analysis else "h"
        try:
            ask = read_ask(self.new_ask.text(), unit)
        except AskUnreadable as trouble:
            self.new_ask_trouble.setText(str(trouble))
            self.new_ask_trouble.show()
            return
        self.new_ask_trouble.hide()
        self.new_ask.setText("")
        if ask not in self._asks:
            self._change_asks((*self._asks, ask))

    def _make_main(self, place: int) -> None:
        if place > 0:
            ask = self._asks[place]
            self._change_asks((ask, *(other for other in self._asks if other != ask)))

    def _remove(self, place: int) -> None:
        if len(self._asks) > 1:
            self._change_asks(tuple(ask for at, ask in enumerate(self._asks) if at != place))

    def _change_asks(self, asks: tuple[Ask, ...]) -> None:
        self._push_edit(ChangeAsks(self._asks, asks))

    def _lay_out(self) -> None:
        self.new_ask.setAccessibleName("Add a reading: a percent, an age, or hazard and an age")
        self.new_ask_trouble.setWordWrap(True)
        self.new_ask_trouble.hide()
        top = QHBoxLayout()
        top.addWidget(self.sentence, 1)
        top.addWidget(self.copy_button, 0, Qt.AlignmentFlag.AlignTop)
        left = QWidget()
        column = QVBoxLayout(left)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.table, 1)
        column.addWidget(self.new_ask)
        column.addWidget(self.new_ask_trouble)
        halves = QSplitter(Qt.Orientation.Horizontal)
        halves.addWidget(left)
        halves.addWidget(self.cautions)
        halves.setChildrenCollapsible(False)
        halves.setSizes([420, 380])
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
        layout.addWidget(halves, 1)


def _text(name: str, size: float) -> QLabel:
    label = QLabel()
    label.setAccessibleName(name)
    label.setWordWrap(True)
    label.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Minimum)
    label.setTextInteractionFlags(
        Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
    )
    font = label.font()
    font.setPointSizeF(font.pointSizeF() * size)
    label.setFont(font)
    return label
