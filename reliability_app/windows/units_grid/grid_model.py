"""Shows one unit table to Qt, cell by cell, with an empty row at its end; what is typed goes out as an edit."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QObject, QPersistentModelIndex, Qt
from PySide6.QtGui import QBrush

from reliability_app.session.edits import BlockEdit, Edit
from reliability_app.session.states import FOUND_FAILED
from reliability_app.session.unit_table import HEADINGS, UnitTable
from reliability_app.windows.units_grid.grid_colours import GridColours

Index = QModelIndex | QPersistentModelIndex

# Comparing with a Qt enum member costs 4.5 us a time and data() is called some thousand times for one repaint;
# comparing with an int held by the module costs 0.02 us.
DISPLAY = int(Qt.ItemDataRole.DisplayRole)
EDIT = int(Qt.ItemDataRole.EditRole)
BACKGROUND = int(Qt.ItemDataRole.BackgroundRole)
FOREGROUND = int(Qt.ItemDataRole.ForegroundRole)
ALIGNMENT = int(Qt.ItemDataRole.TextAlignmentRole)
TOOL_TIP = int(Qt.ItemDataRole.ToolTipRole)
ACCESSIBLE_TEXT = int(Qt.ItemDataRole.AccessibleTextRole)
ACCESSIBLE_DESCRIPTION = int(Qt.ItemDataRole.AccessibleDescriptionRole)
FAULT = int(Qt.ItemDataRole.UserRole) + 1
COLUMN_KEY = int(Qt.ItemDataRole.UserRole) + 2

_RIGHT = int(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
_LEFT = int(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignVCenter)
_HORIZONTAL = Qt.Orientation.Horizontal
_FLAGS = Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemIsEditable
_TOP = QModelIndex()

NUMBERS = frozenset({"life", "until", "quantity", "entered"})
_AGES = frozenset({"life", "until", "entered"})
_DEFAULTS = {"quantity": "1", "state": FOUND_FAILED}
_NUMBER_STARTS = frozenset("0123456789-.")

HEADING_HELP = {
    "unit": "Name of the unit. Later tables are matched to earlier ones by it.",
    "life": "Age at failure; for a running unit the age reached so far; for one found failed the last age at which "
    "it was known to run.",
    "until": "Only for a unit found failed: the age at which the failure was found.",
    "state": "failed, running, or found failed (it failed somewhere between Life and Until).",
    "quantity": "How many units this row stands for; empty means 1.",
    "entered": "Age at which the unit came under observation; empty means from new.",
    "cause": "Failure mode, in your own words.",
    "note": "Anything worth keeping; it is not used in the analysis.",
}


class GridModel(QAbstractTableModel):
    """The model of the Units grid over a `UnitTable`, which it never changes itself.

    Each cell that is typed goes out as one edit through `push_edit`; the table changes when the edit is applied,
    and `refresh` then tells the views. The last row is always empty: typing there makes the table longer.
    """

    def __init__(self, push_edit: Callable[[Edit], None], parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._push_edit = push_edit
        self._set_index = 0
        self._life_unit = "h"
        self._colours: GridColours | None = None
        self._show(UnitTable())

    @property
    def table(self) -> UnitTable:
        """The table shown."""
        return self._table

    @property
    def set_index(self) -> int:
        """The place in the session of the set whose table is shown."""
        return self._set_index

    @property
    def columns(self) -> tuple[str, ...]:
        """The keys of the columns, left to right."""
        return self._columns

    def show_table(self, table: UnitTable, set_index: int, *, life_unit: str) -> None:
        """Show another table."""
        self.beginResetModel()
        self._set_index = set_index
        self._life_unit = life_unit
        self._show(table)
        self.endResetModel()

    def set_colours(self, colours: GridColours) -> None:
        """Take over colours that fit the palette."""
        self._colours = colours

    def refresh(self, *, life_unit: str) -> None:
        """Tell the views that the table has changed.

        Selection, current cell and scroll position stay where they are: rows come and go at the end, and the cells
        before are announced as changed, which costs one repaint of what is visible.
        """
        self._life_unit = life_unit
        self._adopt_columns(self._table.columns)
        self._adopt_row_count(self._table.row_count + 1)
        self.dataChanged.emit(self.index(0, 0), self.index(self._rows - 1, len(self._columns) - 1))
        self.headerDataChanged.emit(_HORIZONTAL, 0, len(self._columns) - 1)
        self.headerDataChanged.emit(Qt.Orientation.Vertical, 0, self._rows - 1)

    def rowCount(self, parent: Index = _TOP) -> int:
        """Count the rows shown, the empty one at the end included."""
        return 0 if parent.isValid() else self._rows

    def columnCount(self, parent: Index = _TOP) -> int:
        """Count the columns shown."""
        return 0 if parent.isValid() else len(self._columns)

    def flags(self, index: Index) -> Qt.ItemFlag:
        """Every cell can be selected and edited."""
        return _FLAGS if index.isValid() else Qt.ItemFlag.NoItemFlags

    def data(self, index: Index, role: int = DISPLAY) -> object:
        """Give one aspect of one cell."""
        row = index.row()
        column = self._columns[index.column()]
        if role in (DISPLAY, EDIT):
            return self._table.text(row, column) or (self._default(row, column) if role == DISPLAY else "")
        if role == ALIGNMENT:
            return self._alignment(row, column)
        if role == BACKGROUND:
            return self._background(row, column)
        if role == FOREGROUND:
            return self._foreground(row, column)
        if role in (FAULT, TOOL_TIP, ACCESSIBLE_DESCRIPTION):
            return self._fault(row, column)
        if role == COLUMN_KEY:
            return column
        if role == ACCESSIBLE_TEXT:
            return self._spoken(row, column)
        return None

    def setData(self, index: Index, value: object, role: int = EDIT) -> bool:
        """Send out what was typed into a cell as an edit, if it is anything new."""
        if role != EDIT or not index.isValid():
            return False
        text = str(value).strip()
        row, column = index.row(), self._columns[index.column()]
        if text != self._table.text(row, column):
            self._push_edit(BlockEdit(self._set_index, row, (column,), ((text,),)))
        return True

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = DISPLAY) -> object:
        """Give one aspect of a column's or a row's heading."""
        if orientation == _HORIZONTAL:
            return self._column_heading(self._columns[section], role) if section < len(self._columns) else None
        return self._row_heading(section, role)

    def heading(self, column: str) -> str:
        """Give the heading of a column, with its unit where it holds ages."""
        text = HEADINGS.get(column, column)
        return f"{text} ({self._life_unit})" if column in _AGES and self._life_unit else text

    def row_fault(self, row: int) -> tuple[str, str] | None:
        """Give the first column of a row that cannot be read, and the reason; None for a row without fault."""
        if row >= self._table.row_count or self._table.row_is_read(row) is not False:
            return None
        for column in self._columns:
            if reason := self._table.fault(row, column):
                return column, reason
        return None

    def reason_to_tell(self, row: int, section: int) -> str | None:
        """Give the reason why a cell, or else another one of its row, cannot be read; None for a row without fault."""
        reason = self._table.fault(row, self._columns[section]) if row < self._table.row_count else None
        if reason is None and (fault := self.row_fault(row)) is not None:
            reason = fault[1]
        return reason

    def next_unread(self, after: int) -> int | None:
        """Find the next row after `after` that cannot be read, starting again from the top; None if all can be."""
        count = self._table.row_count
        for step in range(1, count + 1):
            row = (after + step) % count
            if self._table.row_is_read(row) is False:
                return row
        return None

    def _show(self, table: UnitTable) -> None:
        self._table = table
        self._columns = table.columns
        self._rows = table.row_count + 1

    def _adopt_columns(self, columns: tuple[str, ...]) -> None:
        old, new = len(self._columns), len(columns)
        if columns[:old] == self._columns and new > old:
            self.beginInsertColumns(_TOP, old, new - 1)
            self._columns = columns
            self.endInsertColumns()
        elif self._columns[:new] == columns and new < old:
            self.beginRemoveColumns(_TOP, new, old - 1)
            self._columns = columns
            self.endRemoveColumns()
        elif old == new:  # one was renamed: the current cell and the selection stay
            self._columns = columns
        else:
            self.beginResetModel()
            self._show(self._table)
            self.endResetModel()

    def _adopt_row_count(self, rows: int) -> None:
        if rows > self._rows:
            self.beginInsertRows(_TOP, self._rows, rows - 1)
            self._rows = rows
            self.endInsertRows()
        elif rows < self._rows:
            self.beginRemoveRows(_TOP, rows, self._rows - 1)
            self._rows = rows
            self.endRemoveRows()

    def _default(self, row: int, column: str) -> str:
        # What an empty cell counts as in the analysis, shown in quiet letters.
        if column not in _DEFAULTS or not self._table.row_is_read(row):
            return ""
        return _DEFAULTS[column]

    def _fault(self, row: int, column: str) -> str | None:
        return self._table.fault(row, column)

    def _background(self, row: int, column: str) -> QBrush | None:
        if self._colours is None or self._table.row_is_read(row) is not False:
            return None
        return self._colours.fault if self._table.fault(row, column) else self._colours.unread

    def _foreground(self, row: int, column: str) -> QBrush | None:
        if column in _DEFAULTS and self._colours is not None and not self._table.text(row, column):
            return self._colours.quiet
        return None

    def _alignment(self, row: int, column: str) -> int:
        if column in NUMBERS:
            return _RIGHT
        if column in HEADINGS:
            return _LEFT
        return _RIGHT if _looks_like_number(self._table.text(row, column)) else _LEFT

    def _spoken(self, row: int, column: str) -> str:
        text = self._table.text(row, column) or self._default(row, column)
        return f"{text or 'empty'}, cannot be read" if self._fault(row, column) else text

    def _column_heading(self, column: str, role: int) -> object:
        if role == DISPLAY:
            return self.heading(column)
        if role == TOOL_TIP:
            return HEADING_HELP.get(column, "A column of your own table; it is kept and saved.")
        if role == ALIGNMENT:
            return _RIGHT if column in NUMBERS else _LEFT
        return None

    def _row_heading(self, row: int, role: int) -> object:
        if role == DISPLAY:
            if row >= self._table.row_count:
                return "+"
            return f"! {row + 1}" if self._table.row_is_read(row) is False else str(row + 1)
        if role == TOOL_TIP:
            if row >= self._table.row_count:
                return "Type here to add a unit."
            fault = self.row_fault(row)
            return f"Left out of the analysis. {fault[1]}" if fault else None
        if role == ALIGNMENT:
            return _RIGHT
        if role == FOREGROUND and self._colours is not None and self._table.row_is_read(row) is False:
            return self._colours.mark
        return None


def _looks_like_number(text: str) -> bool:
    if text[:1] not in _NUMBER_STARTS or not text:
        return False
    try:
        float(text)
    except ValueError:
        return False
    return True
