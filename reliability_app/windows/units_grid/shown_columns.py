"""Which columns of the grid are shown: hidden ones keep their cells, count in the analysis, and are remembered."""

from __future__ import annotations

from collections.abc import Iterable

from PySide6.QtCore import QObject, Signal
from PySide6.QtWidgets import QTableView

from reliability_app.windows.units_grid.grid_model import GridModel


class ShownColumns(QObject):
    """Hides columns of a view by their keys, so that they stay hidden in other sets and tables.

    Signals
    -------
    changed()
        Other columns are hidden now.
    """

    changed = Signal()

    def __init__(self, model: GridModel, view: QTableView, parent: QObject) -> None:
        super().__init__(parent)
        self._model, self._view = model, view
        self._hidden: frozenset[str] = frozenset()
        model.modelReset.connect(self._apply)
        model.columnsInserted.connect(self._apply)
        model.columnsRemoved.connect(self._apply)

    @property
    def hidden(self) -> frozenset[str]:
        """The keys of the hidden columns, also of those that the table shown does not have."""
        return self._hidden

    def set_hidden(self, keys: Iterable[str]) -> None:
        """Hide these columns and no others; if no column would be left, all are shown."""
        self._hidden = frozenset(keys)
        if self._hidden.issuperset(self._model.columns):
            self._hidden = frozenset()
        self._apply()
        self.changed.emit()

    def hide(self, keys: Iterable[str]) -> None:
        """Hide some columns; at least one of the table stays."""
        left = self._hidden.union(keys)
        if not left.issuperset(self._model.columns):
            self.set_hidden(left)

    def show(self, key: str) -> None:
        """Show a column."""
        if key in self._hidden:
            self.set_hidden(self._hidden - {key})

    def show_all(self) -> None:
        """Show all columns."""
        self.set_hidden(())

    def hidden_here(self) -> list[str]:
        """Give the hidden columns of the table shown, from left to right."""
        return [column for column in self._model.columns if column in self._hidden]

    def _apply(self) -> None:
        for section, column in enumerate(self._model.columns):
            self._view.setColumnHidden(section, column in self._hidden)
        index = self._view.currentIndex()
        if index.isValid() and self._view.isColumnHidden(index.column()):
            near = sorted(range(len(self._model.columns)), key=lambda place: abs(place - index.column()))
            shown = next(place for place in near if not self._view.isColumnHidden(place))
            self._view.setCurrentIndex(self._model.index(index.row(), shown))
