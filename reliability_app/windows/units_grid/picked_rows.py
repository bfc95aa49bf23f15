"""Tells which rows of the grid are selected, and selects rows whose marks were picked on a chart."""

from __future__ import annotations

from collections.abc import Collection
from itertools import chain

from PySide6.QtCore import QItemSelection, QItemSelectionModel, QObject, QTimer, Signal

from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_view import GridView

_Flag = QItemSelectionModel.SelectionFlag


class PickedRows(QObject):
    """The selection of a grid as rows.

    Signals
    -------
    rows_selected(tuple)
        The rows of the table that are selected now, in part or whole; told once after any number of changes.
    """

    rows_selected = Signal(tuple)

    def __init__(self, model: GridModel, view: GridView, parent: QObject) -> None:
        super().__init__(parent)
        self._model, self._view = model, view
        self._told: tuple[int, ...] | None = None
        self._soon = QTimer(self)
        self._soon.setSingleShot(True)
        self._soon.timeout.connect(self._tell)
        view.selectionModel().selectionChanged.connect(self._soon.start)
        view.selectionModel().currentChanged.connect(self._soon.start)
        model.modelReset.connect(self._soon.start)

    def rows(self) -> tuple[int, ...]:
        """Return the rows selected, without the empty one at the end."""
        count = self._model.table.row_count
        ranges = (range(part.top, min(part.bottom + 1, count)) for part in self._view.selected_ranges())
        return tuple(sorted(set(chain.from_iterable(ranges))))

    def select(self, rows: Collection[int], *, joins: bool) -> None:
        """Select whole rows and show the first of them; with `joins` beside what is selected."""
        wanted = sorted({*rows, *(self.rows() if joins else ())})
        if not wanted:
            return
        last = self._model.columnCount() - 1
        selection = QItemSelection()
        for first, end in _runs(wanted):
            selection.select(self._model.index(first, 0), self._model.index(end, last))
        shown = self._model.index(min(rows, default=wanted[0]), self._view.current_cell()[1])
        self._view.selectionModel().setCurrentIndex(shown, _Flag.NoUpdate)
        self._view.selectionModel().select(selection, _Flag.ClearAndSelect)
        self._view.scrollTo(shown)

    def _tell(self) -> None:
        rows = self.rows()
        if rows != self._told:
            self._told = rows
            self.rows_selected.emit(rows)


def _runs(rows: list[int]) -> list[tuple[int, int]]:
    """Return the first and the last of each run of neighbours."""
    starts = [row for place, row in enumerate(rows) if place == 0 or rows[place - 1] != row - 1]
    ends = [row for place, row in enumerate(rows) if place + 1 == len(rows) or rows[place + 1] != row + 1]
    return list(zip(starts, ends, strict=True))
