"""An old visit beside today: its units and its readings as they were recorded, which nothing here can change."""

from __future__ import annotations

from PySide6.QtCore import QAbstractTableModel, QEvent, QModelIndex, QObject, QPersistentModelIndex, Qt
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableView, QVBoxLayout, QWidget

from reliability_app.session.packed_units import unpacked
from reliability_app.session.unit_table import HEADINGS, UnitTable
from reliability_app.session.visit import Visit, basis_of, counts_of
from reliability_app.session.visit_history import readings_of
from reliability_app.session.wording import basis_text, counts_text, reading_sentence
from reliability_app.windows.units_grid.grid_clipboard import put_cells
from reliability_app.windows.units_grid.wrapped_label import wrapped_label

CHOOSE = "Choose a visit in the table of visits, and open it: it stands here as it was recorded."
_Index = QModelIndex | QPersistentModelIndex
_NUMBERS = frozenset({"life", "until", "quantity", "entered"})


class UnitsThen(QAbstractTableModel):
    """The units of a visit; only columns that hold anything are shown, and nothing can be edited."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.table = UnitTable()
        self.columns: tuple[str, ...] = ()

    def show_table(self, table: UnitTable) -> None:
        """Show other units."""
        self.beginResetModel()
        self.table = table
        rows = range(table.row_count)
        self.columns = tuple(column for column in table.columns if any(table.text(row, column) for row in rows))
        self.endResetModel()

    def rowCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of rows."""
        return 0 if parent.isValid() else self.table.row_count

    def columnCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of columns."""
        return 0 if parent.isValid() else len(self.columns)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return a heading or the number of a row."""
        if role != Qt.ItemDataRole.DisplayRole:
            return None
        if orientation == Qt.Orientation.Vertical:
            return str(section + 1)
        column = self.columns[section]
        return HEADINGS.get(column, column)

    def data(self, index: _Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        """Return the text of a cell, its alignment, or why it could not be read."""
        column = self.columns[index.column()]
        if role == Qt.ItemDataRole.DisplayRole:
            return self.table.text(index.row(), column)
        if role == Qt.ItemDataRole.ToolTipRole:
            return self.table.fault(index.row(), column)
        if role == Qt.ItemDataRole.TextAlignmentRole and column in _NUMBERS:
            return Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
        return None


class VisitView(QWidget):
    """One set as a visit recorded it, under a line that says of which day it is."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.visit: Visit | None = None
        self.heading, self.statement = wrapped_label(), wrapped_label()
        self.heading.setAccessibleName("Which visit is shown")
        self.statement.setAccessibleName("Readings as they were recorded")
        font = self.heading.font()
        font.setBold(True)
        self.heading.setFont(font)
        self.units = QTableView()
        self.model = UnitsThen(self)
        self.units.setModel(self.model)
        self.units.setAccessibleName("Units as they were recorded")
        self.units.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.units.setSelectionMode(QAbstractItemView.SelectionMode.ContiguousSelection)
        self.units.setTabKeyNavigation(False)
        self.units.setAlternatingRowColors(True)
        self.units.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Interactive)
        self.units.horizontalHeader().setStretchLastSection(True)
        copy = QAction("Copy the cells", self.units)
        copy.setShortcut(QKeySequence(QKeySequence.StandardKey.Copy))
        copy.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        copy.triggered.connect(self.copy_cells)
        self.units.addAction(copy)
        self.units.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)
        column = QVBoxLayout(self)
        column.setContentsMargins(6, 6, 6, 6)
        column.addWidget(self.heading)
        column.addWidget(self.statement)
        column.addWidget(self.units, 1)
        self.units.setMinimumHeight(6 * self.fontMetrics().height())
        self._fit_rows()
        self.show_visit(None, "")

    def show_visit(self, visit: Visit | None, name: str, of: int = 1) -> None:
        """Show a set as a visit recorded it; `of` is how many sets the session has now."""
        self.visit = visit
        recorded = None if visit is None else visit.set_named(name, of=of)
        self.units.setVisible(recorded is not None)
        if visit is None or recorded is None:
            self.heading.setText(CHOOSE if visit is None else f"{visit.title} did not have the set {name}.")
            self.statement.setText("")
            self.model.show_table(UnitTable())
            return
        self.heading.setText(f"{recorded.name} as of {visit.title}: recorded, and not to be changed here")
        unit, readings = visit.record.life_unit, readings_of(visit, recorded.name)
        said = [f"{counts_text(counts_of(recorded))}."]
        said += [reading_sentence(reading, unit) for reading in readings]
        basis, main = basis_of(recorded.basis), readings[0] if readings else None
        said.append(f"({basis_text(basis, counts_of(recorded), main)}; version {recorded.engine or 'unknown'})")
        self.statement.setText("\n".join(said))
        self.model.show_table(unpacked(recorded.units))
        self.units.resizeColumnsToContents()

    def copy_cells(self) -> None:
        """Copy the selected cells under their headings."""
        indexes = self.units.selectionModel().selectedIndexes()
        rows = sorted({index.row() for index in indexes})
        columns = sorted({index.column() for index in indexes})
        if rows:
            cells = [[self.model.table.text(row, self.model.columns[at]) for at in columns] for row in rows]
            names = [self.model.columns[at] for at in columns]
            put_cells(cells, headings=[HEADINGS.get(name, name) for name in names])

    def changeEvent(self, event: QEvent) -> None:
        """Follow the font of the program."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "units"):
            font = self.font()
            font.setBold(True)
            self.heading.setFont(font)
            self._fit_rows()

    def _fit_rows(self) -> None:
        self.units.verticalHeader().setDefaultSectionSize(self.fontMetrics().height() + 6)
