"""The table of readings: what was asked, the estimate, its bounds; copies to a spreadsheet as tab-separated text."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QAction, QGuiApplication, QKeySequence
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.picture import Reading
from reliability_app.session.table_contents import readings_table
from reliability_app.session.wording import SAFE_SIDES, Toward, ask_title, value_text
from reliability_app.windows.copied_table import copy_table

_ROUNDED: tuple[Toward, ...] = ("nearest", *SAFE_SIDES)
_HEADINGS = ("Reading", "Estimate", "Lower", "Upper", "")
_DISPLAY, _TIP = Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.ToolTipRole
_ALIGN, _FONT = Qt.ItemDataRole.TextAlignmentRole, Qt.ItemDataRole.FontRole
_Index = QModelIndex | QPersistentModelIndex


class ReadingsModel(QAbstractTableModel):
    """Readings as rows; the last column marks those with cautions of their own."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.readings: tuple[Reading, ...] = ()
        self.life_unit = ""

    def show_readings(self, readings: Sequence[Reading], life_unit: str) -> None:
        """Show these readings."""
        self.beginResetModel()
        self.readings, self.life_unit = tuple(readings), life_unit
        self.endResetModel()

    def rowCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of readings."""
        return 0 if parent.isValid() else len(self.readings)

    def columnCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of columns."""
        return 0 if parent.isValid() else len(_HEADINGS)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = _DISPLAY) -> object:
        """Return a heading."""
        if role == _DISPLAY and orientation == Qt.Orientation.Horizontal:
            return _HEADINGS[section]
        return None

    def data(self, index: _Index, role: int = _DISPLAY) -> object:
        """Return text, tip, alignment or font of a cell."""
        reading, column = self.readings[index.row()], index.column()
        if role == _DISPLAY:
            return self._text(reading, column)
        if role == _TIP:
            return "\n".join(caution.text for caution in reading.cautions) or None
        if role == _ALIGN and 0 < column < 4:
            return Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
        if role == _FONT and index.row() == 0:
            parent = self.parent()
            font = parent.font() if isinstance(parent, QWidget) else QGuiApplication.font()
            font.setBold(True)
            return font
        return None

    def _text(self, reading: Reading, column: int) -> str:
        if column == 0:
            return ask_title(reading.ask, self.life_unit)
        if column == 4:
            return "!" if any(caution.severity >= Severity.CAUTION for caution in reading.cautions) else ""
        value = (reading.estimate, reading.lower, reading.upper)[column - 1]
        toward = _ROUNDED[column - 1]
        return "" if value is None else value_text(reading.ask, value, self.life_unit, toward=toward)


class ReadingsTable(QTableView):
    """Shows the readings; Enter or a double click makes one the main reading, Delete takes one away."""

    main_chosen = Signal(int)
    removal_asked = Signal(int)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._model = ReadingsModel(self)
        self._analysis: SetAnalysis | None = None
        self.setModel(self._model)
        self.setAccessibleName("Readings")
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.verticalHeader().hide()
        self.setShowGrid(False)
        self.setAlternatingRowColors(True)
        self.setTabKeyNavigation(False)
        header = self.horizontalHeader()
        header.setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        header.setStretchLastSection(True)
        header.setMinimumSectionSize(24)
        self.verticalHeader().setDefaultSectionSize(self.fontMetrics().height() + 6)
        self._add_actions()
        self.doubleClicked.connect(lambda index: self.main_chosen.emit(index.row()))

    def show_analysis(self, analysis: SetAnalysis) -> None:
        """Show the readings of an analysis; the row selected stays, or the last where one was added."""
        self._analysis = analysis
        readings, before = analysis.readings, self._model.rowCount()
        row = self.currentIndex().row() if len(readings) <= before or not before else len(readings) - 1
        self._model.show_readings(readings, analysis.question.life_unit)
        self.setColumnHidden(2, all(reading.lower is None for reading in readings))
        self.setColumnHidden(3, all(reading.upper is None for reading in readings))
        if 0 <= row < len(readings):
            self.selectRow(row)
            self.scrollTo(self._model.index(row, 0))

    def copy_all(self) -> None:
        """Copy all readings with headings, what they rest on and their cautions."""
        if self._analysis is not None:
            copy_table(readings_table(self._analysis))

    def _add_actions(self) -> None:
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)
        for text, keys, act in (
            ("Read this on the chart", ["Return", "Enter"], lambda row: self.main_chosen.emit(row)),
            ("Copy readings", [QKeySequence.StandardKey.Copy], lambda _: self.copy_all()),
            ("Remove reading", ["Del"], lambda row: self.removal_asked.emit(row)),
        ):
            action = QAction(text, self)
            action.setShortcuts([QKeySequence(key) for key in keys])
            action.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
            action.triggered.connect(lambda _=False, act=act: act(self.currentIndex().row()))
            self.addAction(action)
