"""Candidates: every family fitted to the set's units side by side; choosing one makes it the basis."""

from __future__ import annotations

from PySide6.QtCore import QAbstractTableModel, QEvent, QModelIndex, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QAction, QFont, QKeySequence, QPalette, QShowEvent
from PySide6.QtWidgets import QAbstractItemView, QHBoxLayout, QHeaderView, QPushButton, QTableView, QVBoxLayout, QWidget

from reliability_app.reports.candidates_figure import candidates_figure
from reliability_app.reports.figure import Figure
from reliability_app.reports.shown import Shown
from reliability_app.session.analysis import SetAnalysis
from reliability_app.session.candidate_table import CandidateTable
from reliability_app.session.table_contents import candidates_table
from reliability_app.windows.copied_table import copy_table
from reliability_app.windows.units_grid.wrapped_label import wrapped_label

NO_UNITS = "Paste or type the lives of some units: then every family is fitted to them here."
STALE = "These numbers belong to earlier units or another reading, and are being worked out anew."
_Index = QModelIndex | QPersistentModelIndex
_DISPLAY, _TIP, _ALIGN = Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.ToolTipRole, Qt.ItemDataRole.TextAlignmentRole
_FONT, _INK = Qt.ItemDataRole.FontRole, Qt.ItemDataRole.ForegroundRole
_NUMBERS = range(1, 7)


class CandidatesModel(QAbstractTableModel):
    """Candidates as rows; the family of the basis is in bold, numbers that are out of date are grey."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self._view = parent
        self.table: CandidateTable | None = None
        self._cells: list[tuple[str, ...]] = []
        self._chosen = ""
        self.is_stale = False

    def show_table(self, table: CandidateTable | None, chosen: str, *, is_stale: bool) -> None:
        """Show a table; `chosen` is the family of the basis."""
        self.beginResetModel()
        self.table, self._chosen, self.is_stale = table, chosen, is_stale
        self._cells = [] if table is None else [table.cells(place) for place in range(len(table.candidates))]
        self.endResetModel()

    def rowCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of families."""
        return 0 if parent.isValid() else len(self._cells)

    def columnCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of columns."""
        return 0 if parent.isValid() or self.table is None else len(self.table.headings)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = _DISPLAY) -> object:
        """Return a heading."""
        if role == _DISPLAY and orientation == Qt.Orientation.Horizontal and self.table is not None:
            return self.table.headings[section]
        return None

    def data(self, index: _Index, role: int = _DISPLAY) -> object:
        """Return text, tip, alignment, font or colour of a cell."""
        text = self._cells[index.row()][index.column()]
        if role == _DISPLAY or (role == _TIP and text):
            return text
        if role == _ALIGN and index.column() in _NUMBERS:
            return Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
        if role == _FONT and self.table is not None and self.table.candidates[index.row()].name == self._chosen:
            font = QFont(self._view.font())
            font.setBold(True)
            return font
        if role == _INK and self.is_stale:
            return self._view.palette().brush(QPalette.ColorGroup.Disabled, QPalette.ColorRole.Text)
        return None


class CandidatesPage(QWidget):
    """The table of candidates with what can be said of the choice.

    Signals
    -------
    compare_asked(SetAnalysis)
        The families are to be compared on the units of this analysis.
    simulate_asked(CandidateTable)
        The p-values of this table are to be simulated.
    stop_asked()
        What is being worked out is not wanted any more.
    family_chosen(str)
        This family is to be the basis.
    table_changed()
        Another table, or none, is shown.
    """

    compare_asked = Signal(object)
    simulate_asked = Signal(object)
    stop_asked = Signal()
    family_chosen = Signal(str)
    table_changed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName("Candidates page")
        self.name = "Candidates"
        self._analysis: SetAnalysis | None = None
        self._table: CandidateTable | None = None
        self._is_simulating = self._is_comparing = False
        self._wanted_elsewhere = False
        self._shown = Shown(())
        self.sentence = wrapped_label()
        self.sentence.setAccessibleName("What can be said of the choice of family")
        self.progress = wrapped_label()
        self.progress.setAccessibleName("Progress of the comparison")
        self.view = QTableView()
        self._model = CandidatesModel(self.view)
        self.choose_button = QPushButton("Make it the basis")
        self.simulate_button = QPushButton("Simulate p-values")
        self.simulate_button.setToolTip(
            "Say how often samples from each family agree with it no better than these units"
        )
        self.stop_button = QPushButton("Stop")
        self.stop_button.setAccessibleName("Stop simulating p-values")
        self._set_up_view()
        self._lay_out()
        self._connect()
        self._refresh()

    @property
    def table(self) -> CandidateTable | None:
        """The candidates of the analysis shown; None while there are none that hold."""
        return None if self._is_stale else self._table

    def show_analysis(self, analysis: SetAnalysis | None) -> None:
        """Compare the families on the units of another analysis, when the page is in front or a chart wants them."""
        self._analysis = analysis
        if analysis is not None and self._table is not None and not self._is_simulating:
            self._table = self._table.read_anew(analysis)
        if self._is_stale and (self._is_simulating or self._is_comparing):
            self._is_simulating = self._is_comparing = False
            self.stop_asked.emit()
        self._ask_if_wanted()
        self._refresh()
        self.table_changed.emit()

    def want_elsewhere(self, wanted: bool) -> None:
        """Keep the table up to date while the page is behind: another page draws from it."""
        self._wanted_elsewhere = wanted
        self._ask_if_wanted()

    def show_table(self, table: CandidateTable) -> None:
        """Show what came of the comparison."""
        if self._analysis is None or not table.is_about(self._analysis):
            return
        self._table, self._is_comparing = table, False
        if table.tested >= table.to_test:
            self._is_simulating = False
        self._refresh()
        self.table_changed.emit()

    def show_failure(self) -> None:
        """Show that a comparison ended without an outcome."""
        self._is_comparing = self._is_simulating = False
        self._refresh()

    def show_shown(self, shown: Shown) -> None:
        """Take what stands in the foot of the picture."""
        self._shown = shown

    def simulate(self) -> None:
        """Ask for the p-values."""
        if self.table is not None and not self._is_simulating:
            self._is_simulating = True
            self._refresh()
            self.simulate_asked.emit(self.table)

    def stop(self) -> None:
        """Give up what is being simulated; what there is stands."""
        self._is_simulating = False
        self.stop_asked.emit()
        self._refresh()

    def choose(self) -> None:
        """Make the family of the current row the basis."""
        row = self.view.currentIndex().row()
        table = self.table
        if table is not None and 0 <= row < len(table.candidates) and table.candidates[row].is_fitted:
            self.family_chosen.emit(table.candidates[row].name)

    def figure(self) -> Figure | None:
        """Return the table as a picture; None where there is none that holds."""
        return None if self.table is None else candidates_figure(self.table, self._shown)

    def showEvent(self, event: QShowEvent) -> None:
        """Compare the families when the page comes to the front."""
        super().showEvent(event)
        self._ask_if_wanted()
        self._refresh()

    def changeEvent(self, event: QEvent) -> None:
        """Follow the font of the program."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "view"):
            self.view.verticalHeader().setDefaultSectionSize(self.fontMetrics().height() + 6)

    # Inside

    @property
    def _is_stale(self) -> bool:
        return self._table is None or self._analysis is None or not self._table.is_about(self._analysis)

    def _ask_if_wanted(self) -> None:
        analysis = self._analysis
        wanted = self.isVisible() or self._wanted_elsewhere
        if wanted and analysis is not None and analysis.fit is not None and self._is_stale and not self._is_comparing:
            self._is_comparing = True
            self.compare_asked.emit(analysis)

    def _refresh(self) -> None:
        analysis, is_stale = self._analysis, self._is_stale
        has_units = analysis is not None and analysis.fit is not None
        table = self._table if has_units else None
        row = self.view.currentIndex().row()
        basis = analysis.question.basis if analysis is not None else None
        chosen = basis.family if basis is not None and not basis.threshold and basis.shape is None else ""
        self._model.show_table(table, chosen, is_stale=is_stale)
        if table is not None and 0 <= row < self._model.rowCount():
            self.view.selectRow(row)
        said = NO_UNITS if not has_units else "The families are being compared …" if table is None else table.sentence
        self.sentence.setText(STALE if table is not None and is_stale else said)
        self.progress.setText(self._progress_text())
        self.stop_button.setVisible(self._is_simulating)
        for button in (self.choose_button, self.simulate_button):
            button.setEnabled(self.table is not None)
        self.simulate_button.setVisible(not self._is_simulating)
        if self.table is not None and self.table.tested >= self.table.to_test:
            self.simulate_button.setEnabled(False)

    def _progress_text(self) -> str:
        table = self.table
        if table is None:
            return ""
        if self._is_simulating:
            return f"Simulating p-values: family {min(table.tested + 1, table.to_test)} of {table.to_test}"
        return "" if table.tested else "p-values are simulated on demand."

    def _set_up_view(self) -> None:
        view = self.view
        view.setModel(self._model)
        view.setAccessibleName("Candidates")
        view.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        view.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        view.verticalHeader().hide()
        view.setShowGrid(False)
        view.setAlternatingRowColors(True)
        view.setTabKeyNavigation(False)
        view.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        view.horizontalHeader().setStretchLastSection(True)
        view.verticalHeader().setDefaultSectionSize(self.fontMetrics().height() + 6)

    def _lay_out(self) -> None:
        row = QHBoxLayout()
        row.addWidget(self.choose_button)
        row.addWidget(self.simulate_button)
        row.addWidget(self.stop_button)
        row.addWidget(self.progress, 1)
        column = QVBoxLayout(self)
        column.addWidget(self.sentence)
        column.addWidget(self.view, 1)
        column.addLayout(row)
        self.setFocusProxy(self.view)

    def _connect(self) -> None:
        self.choose_button.clicked.connect(self.choose)
        self.simulate_button.clicked.connect(self.simulate)
        self.stop_button.clicked.connect(self.stop)
        self.view.doubleClicked.connect(self.choose)
        self.view.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)
        for text, keys, act in (
            ("Make it the basis", ["Return", "Enter"], self.choose),
            ("Copy the table", [QKeySequence.StandardKey.Copy], self.copy_table),
        ):
            action = QAction(text, self.view)
            action.setShortcuts([QKeySequence(key) for key in keys])
            action.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
            action.triggered.connect(lambda _=False, act=act: act())
            self.view.addAction(action)

    def copy_table(self) -> None:
        """Copy the table with its headings and the verdict, for a spreadsheet or a document."""
        if self.table is not None:
            copy_table(candidates_table(self.table))
