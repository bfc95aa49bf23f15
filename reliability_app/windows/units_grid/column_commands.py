"""What can be done with the columns of the grid: hide and show any, add, rename and remove the user's own."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

from PySide6.QtCore import QObject
from PySide6.QtWidgets import QDialog, QDialogButtonBox, QFormLayout, QLabel, QLineEdit, QMenu, QWidget

from reliability_app.session.column_edits import AddColumn, RenameColumn
from reliability_app.session.edits import Edit, RemoveColumn
from reliability_app.session.unit_facts import ColumnNameRefused
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_view import GridView
from reliability_app.windows.units_grid.shown_columns import ShownColumns


class ColumnCommands(QObject):
    """Carries out the commands for the columns of the selection, or for the one a menu was opened on."""

    def __init__(
        self,
        model: GridModel,
        view: GridView,
        shown: ShownColumns,
        push_edit: Callable[[Edit], None],
        parent: QWidget,
    ) -> None:
        super().__init__(parent)
        self._model, self._view, self._shown, self._push_edit = model, view, shown, push_edit
        self._window = parent

    def hide(self) -> None:
        """Hide the columns of the selection."""
        ranges = self._view.selected_ranges()
        self._shown.hide({self._model.columns[section] for part in ranges for section in part.sections})

    def add(self) -> None:
        """Ask for a name and add a column of the user's own after all others."""
        self._view.finish_entry()
        name = ask_column_name(self._window, "New column", self._model.table, old="")
        if name is not None:
            self._push_edit(AddColumn(self._model.set_index, name))
            self._view.go_to(self._view.current_cell()[0], len(self._model.columns) - 1)

    def rename(self, column: str = "") -> None:
        """Ask for another name of a column of the user's own: the current one, unless it is named."""
        self._view.finish_entry()
        old = column or self._current()
        if old not in self._model.table.extra_columns:
            return
        name = ask_column_name(self._window, "Rename column", self._model.table, old=old)
        if name is not None and name != old:
            self._push_edit(RenameColumn(self._model.set_index, old, name))

    def remove(self, column: str = "") -> None:
        """Remove a column of the user's own with all that is in it: the current one, unless it is named."""
        self._view.finish_entry()
        gone = column or self._current()
        if gone in self._model.table.extra_columns:
            self._push_edit(RemoveColumn(self._model.set_index, gone))

    def current_is_own(self) -> bool:
        """Whether the current column is one of the user's own, which can be renamed and removed."""
        return self._current() in self._model.table.extra_columns

    def add_to_menu(self, menu: QMenu, column: str) -> None:
        """Add what can be done with one column, and the list of those that are hidden, to a menu."""
        menu.addSeparator()
        menu.addAction("&Hide column", lambda: self._shown.hide({column}))
        hidden = self._shown.hidden_here()
        if hidden:
            again = menu.addMenu("Show &column")
            for key in hidden:
                again.addAction(self._model.heading(key).replace("&", "&&"), partial(self._shown.show, key))
            menu.addAction("Show &all columns", self._shown.show_all)
        menu.addSeparator()
        menu.addAction("&New column …", self.add)
        if column in self._model.table.extra_columns:
            menu.addAction("Re&name column …", lambda: self.rename(column))
            menu.addAction("&Remove column", lambda: self.remove(column))

    def _current(self) -> str:
        return self._model.columns[self._view.current_cell()[1]]


def ask_column_name(parent: QWidget, title: str, table: UnitTable, *, old: str) -> str | None:
    """Ask for a name that a column can have; None where the user thought better of it."""
    dialog = ColumnNameDialog(title, table, old, parent)
    return dialog.name.text().strip() if dialog.exec() else None


class ColumnNameDialog(QDialog):
    """Asks for the name of a column, and says while it is typed why it cannot be used."""

    def __init__(self, title: str, table: UnitTable, old: str, parent: QWidget) -> None:
        super().__init__(parent)
        self.setWindowTitle(title)
        self._table, self._old = table, old
        self.name = QLineEdit(old)
        self.name.setAccessibleName("Name of the column")
        self.trouble = QLabel()
        self.trouble.setWordWrap(True)
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Ok | QDialogButtonBox.StandardButton.Cancel)
        buttons.accepted.connect(self.accept)
        buttons.rejected.connect(self.reject)
        self._agree = buttons.button(QDialogButtonBox.StandardButton.Ok)
        rows = QFormLayout(self)
        rows.addRow("&Name of the column", self.name)
        rows.addRow(self.trouble)
        rows.addRow(buttons)
        self.name.textChanged.connect(self._judge)
        self.name.selectAll()
        self._judge()

    def _judge(self) -> None:
        name = self.name.text().strip()
        try:
            self._table.check_column_name(name, instead_of=self._old)
            reason = ""
        except ColumnNameRefused as refused:
            reason = str(refused) if name else ""
        self._agree.setEnabled(bool(name) and not reason)
        self.trouble.setText(reason)
