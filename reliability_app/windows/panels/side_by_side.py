"""Readings side by side: a row for each reading, columns for each set shown, and what the numbers of each rest on."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QEvent, QRect, QSize, Qt, Signal
from PySide6.QtGui import QAction, QKeySequence, QResizeEvent
from PySide6.QtWidgets import (
    QAbstractItemView,
    QLabel,
    QPushButton,
    QSizePolicy,
    QStackedWidget,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from reliability_app.engine.cautions import Severity
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.picture import Reading
from reliability_app.session.table_contents import NO_TEST_OF_DIFFERENCE, side_by_side_table, whole_basis
from reliability_app.session.wording import SAFE_SIDES, Toward, ask_title, value_text
from reliability_app.windows.command_search import WHY_PROPERTY
from reliability_app.windows.copied_table import copy_table
from reliability_app.windows.set_swatch import HEIGHT, WIDTH, swatch

_ENDS = ("Estimate", "Lower", "Upper")
_ROUNDED: tuple[Toward, ...] = ("nearest", *SAFE_SIDES)
_MARGIN = 4
_TOGETHER, _ALONE = "Side by side", "This set alone"


class SideBySideTable(QTableWidget):
    """Shows the readings of several sets; its last row says what those of each set rest on."""

    _analyses: tuple[SetAnalysis, ...] = ()  # Qt sends change events while a widget is still being made

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName("Readings side by side")
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ContiguousSelection)
        self.setTabKeyNavigation(False)
        self.setAlternatingRowColors(True)
        self.setShowGrid(False)
        self.setIconSize(QSize(WIDTH, HEIGHT))
        self.verticalHeader().hide()
        self.verticalHeader().setMinimumSectionSize(1)
        self.horizontalHeader().sectionResized.connect(self._fit_last_row)
        copy = QAction("Copy readings side by side", self)
        copy.setShortcut(QKeySequence(QKeySequence.StandardKey.Copy))
        copy.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        copy.triggered.connect(self.copy_all)
        self.addAction(copy)
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)

    def show_analyses(self, analyses: Sequence[SetAnalysis]) -> None:
        """Show the readings of these sets."""
        self._analyses = tuple(analyses)
        self.clear()
        self.clearSpans()
        asked = max((analysis.readings for analysis in analyses), key=len, default=())
        self.setRowCount(len(asked) + 1)
        self.setColumnCount(1 + sum(len(_ends(analysis)) for analysis in analyses))
        self.setHorizontalHeaderItem(0, QTableWidgetItem("Reading"))
        for row, reading in enumerate(asked):
            self.setItem(row, 0, QTableWidgetItem(ask_title(reading.ask, analyses[0].question.life_unit)))
        self.setItem(len(asked), 0, _top(QTableWidgetItem("Rests on")))
        column = 1
        for analysis in analyses:
            column = self._show_set(analysis, column, row_count=len(asked))
        self._fit_columns()
        self._fit_last_row()

    def copy_all(self) -> None:
        """Copy the whole table with its bases and cautions."""
        copy_table(side_by_side_table(self._analyses))

    def changeEvent(self, event: QEvent) -> None:
        """Follow the palette and the font of the program."""
        super().changeEvent(event)
        if event.type() in (QEvent.Type.PaletteChange, QEvent.Type.FontChange) and self._analyses:
            self.show_analyses(self._analyses)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Give the last row the height its texts need."""
        super().resizeEvent(event)
        self._fit_last_row()

    def _show_set(self, analysis: SetAnalysis, column: int, *, row_count: int) -> int:
        """Fill the columns of a set from `column` on, and return the one after them."""
        question, ends = analysis.question, _ends(analysis)
        for at, end in enumerate(ends):
            heading = QTableWidgetItem(f"{question.name}\n{_ENDS[end]}" if at == 0 else f"\n{_ENDS[end]}")
            heading.setData(Qt.ItemDataRole.AccessibleTextRole, f"{question.name}: {_ENDS[end]}")
            if at == 0:
                heading.setIcon(swatch(question.colour, self.palette()))
            self.setHorizontalHeaderItem(column + at, heading)
            for row, reading in enumerate(analysis.readings):
                self.setItem(row, column + at, _end_item(reading, end, question.life_unit))
        basis = _top(QTableWidgetItem(whole_basis(analysis)))
        self.setItem(row_count, column, basis)
        if len(ends) > 1:
            self.setSpan(row_count, column, 1, len(ends))
        return column + len(ends)

    def _fit_columns(self) -> None:
        """Make columns as wide as their numbers; what the numbers rest on is wrapped below them."""
        metrics, header, last = self.fontMetrics(), self.horizontalHeader(), self.rowCount() - 1
        for row in range(last):
            self.setRowHeight(row, metrics.height() + 6)
        for column in range(self.columnCount()):
            items = [self.item(row, column) for row in range(self.rowCount() if column == 0 else last)]
            widest = max((metrics.horizontalAdvance(item.text()) for item in items if item is not None), default=0)
            self.setColumnWidth(column, max(widest + 4 * _MARGIN, header.sectionSizeHint(column)))

    def _fit_last_row(self, *_: object) -> None:
        last, metrics = self.rowCount() - 1, self.fontMetrics()
        if last < 0:
            return
        heights = [metrics.height()]
        for column in range(1, self.columnCount()):
            item = self.item(last, column)
            if item is not None:
                span = range(column, column + self.columnSpan(last, column))
                width = sum(self.columnWidth(one) for one in span) - 2 * _MARGIN
                room = QRect(0, 0, max(width, 40), 10_000)
                heights.append(metrics.boundingRect(room, Qt.TextFlag.TextWordWrap, item.text()).height())
        self.setRowHeight(last, max(heights) + 2 * _MARGIN)


class ReadingsStack(QStackedWidget):
    """The readings of the set worked on, or at the press of a button those of all sets shown.

    Signals
    -------
    turned(bool)
        Several sets are shown from now on, which takes more room, or one.
    """

    turned = Signal(bool)

    def __init__(self, own: QWidget, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.table = SideBySideTable()
        self.action = QAction("Readings side by &side", self)
        self.action.setShortcut(QKeySequence("Ctrl+Alt+S"))
        self.action.setEnabled(False)
        self.action.setProperty(WHY_PROPERTY, "There is one set only: add another, or show one that is hidden.")
        self.note = QLabel()
        self.note.setWordWrap(True)
        self.note.setAccessibleName("What sets side by side do not show")
        self.note.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Minimum)
        self._analyses: tuple[SetAnalysis, ...] = ()
        self._is_wanted = False
        self.button = QPushButton(_TOGETHER)
        self.button.setAccessibleName("Readings of all sets")
        self.button.setToolTip("Readings of all sets side by side, or of this set (Ctrl+Alt+S)")
        self.button.setVisible(False)
        together = QWidget()
        column = QVBoxLayout(together)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(self.table, 1)
        column.addWidget(self.note)
        self.addWidget(own)
        self.addWidget(together)
        self.button.clicked.connect(self.turn)
        self.action.triggered.connect(self.turn)

    def show_analyses(self, analyses: Sequence[SetAnalysis], *, still_to_come: int = 0) -> None:
        """Show these sets; `still_to_come` more are being computed."""
        several = len(analyses) + still_to_come > 1
        self.button.setVisible(several)
        self.action.setEnabled(several)
        self._analyses = tuple(analyses)
        waiting = f"{still_to_come} more to come. " if still_to_come else ""
        self.note.setText(waiting + NO_TEST_OF_DIFFERENCE)
        self._show_wanted()

    def turn(self) -> None:
        """Show the readings of all sets in the place of those of one, or the other way round."""
        self._is_wanted = not self._is_wanted
        self._show_wanted()

    def _show_wanted(self) -> None:
        self.button.setText(_ALONE if self._is_wanted else _TOGETHER)
        was_shown, is_shown = self.currentIndex() == 1, self._is_wanted and not self.button.isHidden()
        if is_shown:  # filled only then: a reading line that is dragged must not wait for it
            self.table.show_analyses(self._analyses)
        self.setCurrentIndex(1 if is_shown else 0)
        if is_shown != was_shown:
            self.turned.emit(is_shown)


def _ends(analysis: SetAnalysis) -> list[int]:
    """Return which of estimate, lower and upper end the readings of a set have; the estimate always has its column."""
    readings = analysis.readings
    has = (True, any(one.lower is not None for one in readings), any(one.upper is not None for one in readings))
    return [end for end in range(3) if has[end]]


def _end_item(reading: Reading, end: int, life_unit: str) -> QTableWidgetItem:
    value = (reading.estimate, reading.lower, reading.upper)[end]
    text = "" if value is None else value_text(reading.ask, value, life_unit, toward=_ROUNDED[end])
    if end == 0 and any(caution.severity >= Severity.CAUTION for caution in reading.cautions):
        text = f"! {text}".rstrip()
    item = QTableWidgetItem(text)
    item.setTextAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
    item.setToolTip("\n".join(caution.text for caution in reading.cautions))
    return item


def _top(item: QTableWidgetItem) -> QTableWidgetItem:
    item.setTextAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop)
    return item
