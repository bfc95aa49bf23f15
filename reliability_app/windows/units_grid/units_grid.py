"""The Units grid: the table with its menus, the line on the last paste, and the count of units below."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial

from PySide6.QtCore import QPoint, Signal
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QMenu, QVBoxLayout, QWidget

from reliability_app.session.document import Change, Session
from reliability_app.session.edits import Edit, TableEdit
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.command_search import WHY_PROPERTY
from reliability_app.windows.units_grid import block_commands
from reliability_app.windows.units_grid.column_commands import ColumnCommands
from reliability_app.windows.units_grid.counts_line import CountsLine
from reliability_app.windows.units_grid.faults_list import FaultsList
from reliability_app.windows.units_grid.find_strip import FindStrip
from reliability_app.windows.units_grid.finder import Finder
from reliability_app.windows.units_grid.grid_actions import GridActions, make_actions
from reliability_app.windows.units_grid.grid_clipboard import put_cells, read_clip
from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_moves import CellRange
from reliability_app.windows.units_grid.grid_view import GridView
from reliability_app.windows.units_grid.paste_plan import PastePlace, plan_paste
from reliability_app.windows.units_grid.paste_strip import PasteStrip
from reliability_app.windows.units_grid.shown_columns import ShownColumns
from reliability_app.windows.units_grid.table_intake import TableIntake
from reliability_app.windows.waiting import wait_for

# What the grid shows; a reading that is dragged must not repaint it all the time.
_SHOWN = ("units", "life_unit", "everything")

# Understanding a longer text may take longer than a window may stand still.
_LONG_TEXT = 300_000


class UnitsGrid(QWidget):
    """The units of one set as a spreadsheet.

    Every change goes out through `push_edit` and shows when `refresh` is called with what the session then says;
    the grid listens to nothing by itself.

    Signals
    -------
    row_selected(int)
        Another row is the current one, counted from 0; -1 for the empty row at the end.
    undo_paste_asked(edit)
        The user wants the paste `edit` taken back, if it is still the latest step.
    """

    row_selected = Signal(int)
    undo_paste_asked = Signal(object)

    def __init__(self, push_edit: Callable[[Edit], None], parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._push_edit = push_edit
        self._session = Session()
        self._set_index = 0
        self.model = GridModel(push_edit, self)
        self.view = GridView(self.model, self)
        self.strip = PasteStrip(self)
        self.intake = TableIntake(self.model, self.view, self.strip, push_edit, self)
        self.faults = FaultsList(self)
        self.counts_line = CountsLine(self)
        self.shown_columns = ShownColumns(self.model, self.view, self)
        self.columns = ColumnCommands(self.model, self.view, self.shown_columns, push_edit, self)
        self.find_strip = FindStrip(self)
        self.finder = Finder(self.model, self.view, self.find_strip, self.shown_columns, push_edit, self)
        self.actions_by_name: GridActions = make_actions(self, self)
        self._lay_out()
        self._connect()
        self.show_set(self._session, 0)

    def actions_for_menu(self) -> list[QAction]:
        """Give the actions for the Edit menu, in its order."""
        return self.actions_by_name.all()

    def show_set(self, session: Session, set_index: int) -> None:
        """Show the units of another set, or of another session."""
        self._session = session
        self._set_index = set_index
        self.intake.put_away()
        self.model.show_table(session.sets[set_index].table, set_index, life_unit=session.life_unit)
        self._tell_counts()
        self.finder.follow()

    def refresh(self, change: Change) -> None:
        """Follow a change of the session: called for every one of them."""
        self.intake.follow()
        unit_set = self._session.sets[min(self._set_index, len(self._session.sets) - 1)]
        if unit_set.table is not self.model.table:
            self.show_set(self._session, self._session.sets.index(unit_set))
        elif change.kind in _SHOWN and change.set_index in (None, self._set_index):
            self.model.refresh(life_unit=self._session.life_unit)
            self._tell_counts()
            self.finder.follow()

    def show_opened(self, understood: Understanding) -> None:
        """Tell what the file, whose table is shown, was understood to be; it can be read differently."""
        self.intake.show_opened(understood)

    def finish_entry(self) -> None:
        """Take over what is being typed: called before saving, closing and whatever else looks at the session."""
        self.view.finish_entry()

    def reveal(self, edit: Edit) -> None:
        """Show and select the place of an edit that was just undone or redone, if it is in this set."""
        if not isinstance(edit, TableEdit) or edit.set_index != self._set_index or edit.place is None:
            return
        place = edit.place
        sections = [self.model.columns.index(column) for column in place.columns if column in self.model.columns]
        left, right = (min(sections), max(sections)) if sections else (0, len(self.model.columns) - 1)
        last = self.model.rowCount() - 1
        top = min(place.row, last)
        self.view.select_block(CellRange(top, left, min(max(place.row + place.count - 1, top), last), right))

    # What the actions do

    def cut(self) -> None:
        """Copy the selected cells and empty them."""
        self.copy()
        self._push(block_commands.clear_edit(*self._aim(), doing="cut"))

    def copy(self) -> None:
        """Copy the selected cells, for a spreadsheet or for this grid."""
        _, cells = block_commands.cells_to_copy(self._table, self.view.selected_ranges())
        if cells:
            put_cells(cells)

    def copy_with_headings(self) -> None:
        """Copy the selected cells with the headings of their columns, as a table for a document."""
        columns, cells = block_commands.cells_to_copy(self._table, self.view.selected_ranges())
        put_cells(cells, headings=[self.model.heading(column) for column in columns])

    def paste(self) -> None:
        """Paste what the clipboard holds, as one edit."""
        self.view.finish_entry()
        place = self._paste_place()
        clip = read_clip()
        plan = wait_for(partial(plan_paste, clip, place)) if len(clip.text) > _LONG_TEXT else plan_paste(clip, place)
        self.intake.carry_out(plan, place)

    def clear(self) -> None:
        """Empty the selected cells."""
        self._push(block_commands.clear_edit(*self._aim()))

    def fill_down(self) -> None:
        """Fill the selected block with its top row, or with the row above it if it is one row high."""
        self._push(block_commands.fill_down_edit(*self._aim()))

    def insert_rows(self) -> None:
        """Insert as many rows as are selected, above them."""
        edit = block_commands.insert_rows_edit(*self._aim())
        self._push(edit)
        self.reveal(edit)

    def delete_rows(self) -> None:
        """Delete the selected rows."""
        _, section = self.view.current_cell()
        edit = block_commands.delete_rows_edit(*self._aim())
        if edit is not None:
            self._push(edit)
            row, _ = self.view.current_cell()
            self.view.go_to(min(row, self.model.rowCount() - 1), section)

    def sort_up(self) -> None:
        """Sort all rows by the current column, smallest first."""
        self._sort(self.view.current_cell()[1], descending=False)

    def sort_down(self) -> None:
        """Sort all rows by the current column, largest first."""
        self._sort(self.view.current_cell()[1], descending=True)

    def select_all(self) -> None:
        """Select all cells."""
        self.view.selectAll()

    def show_next_unread(self) -> None:
        """Go to the next row that cannot be read; its reason shows below the grid."""
        row = self.model.next_unread(self.view.current_cell()[0])
        if row is None:
            return
        fault = self.model.row_fault(row)
        self.view.setFocus()
        self._go_to_fault(row, fault[0] if fault is not None else self.model.columns[0])

    def list_unread(self) -> None:
        """Open the list of all cells that cannot be read, if there are any."""
        self.counts_line.open_list()

    def find_text(self) -> None:
        """Ask for a text to find in the units."""
        self.finder.open()

    def replace(self) -> None:
        """Ask for a text to find, and one to put in its place."""
        self.finder.open_replacing()

    def find_next(self) -> None:
        """Go to the next cell that holds the text looked for."""
        self.finder.go_on()

    def find_previous(self) -> None:
        """Go to the cell before that holds the text looked for."""
        self.finder.go_back()

    def hide_columns(self) -> None:
        """Hide the columns of the selection; their cells go on counting."""
        self.columns.hide()

    def show_columns(self) -> None:
        """Show all columns."""
        self.shown_columns.show_all()

    def add_column(self) -> None:
        """Add a column of the user's own."""
        self.columns.add()

    def rename_column(self) -> None:
        """Rename the current column, if it is one of the user's own."""
        self.columns.rename()

    def remove_column(self) -> None:
        """Remove the current column, if it is one of the user's own."""
        self.columns.remove()

    # Inside

    @property
    def _table(self) -> UnitTable:
        return self.model.table

    def _aim(self) -> tuple[UnitTable, int, list[CellRange]]:
        self.view.finish_entry()
        return self._table, self._set_index, self.view.selected_ranges()

    def _push(self, edit: Edit | None) -> None:
        if edit is not None:
            self._push_edit(edit)

    def _sort(self, section: int, *, descending: bool) -> None:
        self.view.finish_entry()
        column = self.model.columns[section]
        self._push(block_commands.sort_edit(self._table, self._set_index, column, descending=descending))

    def _paste_place(self) -> PastePlace:
        return PastePlace(
            model=self.model,
            cell=self.view.current_cell(),
            ranges=self.view.selected_ranges(),
            session_is_empty=all(unit_set.table.row_count == 0 for unit_set in self._session.sets),
            life_unit=self._session.life_unit,
        )

    def _tell_counts(self) -> None:
        self.counts_line.tell_counts(self._table.counts())
        self.faults.refresh(self._table)
        self._tell_reason()

    def _show_list(self, shown: bool) -> None:
        if shown:
            self.strip.fold()
            self.faults.show_faults_of(self._table)
        else:
            self.faults.put_away()

    def _go_to_fault(self, row: int, column: str) -> None:
        self.shown_columns.show(column)
        self.view.go_to(row, self.model.columns.index(column))
        self._tell_reason()

    def _tell_reason(self) -> None:
        row, section = self.view.current_cell()
        self.counts_line.tell_reason(row, self.model.reason_to_tell(row, section))

    def _mark_own_column(self) -> None:
        act, is_own = self.actions_by_name, self.columns.current_is_own()
        for action in (act.rename_column, act.remove_column):
            action.setEnabled(is_own)
            action.setProperty(WHY_PROPERTY, "Only columns of your own can be changed: go to a cell of one first.")
        act.show_columns.setEnabled(bool(self.shown_columns.hidden_here()))
        act.show_columns.setProperty(WHY_PROPERTY, "No column is hidden.")

    def _on_row_changed(self, row: int) -> None:
        self.row_selected.emit(row if row < self._table.row_count else -1)

    def _lay_out(self) -> None:
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(3)
        column.addWidget(self.find_strip)
        column.addWidget(self.view, 1)
        column.addWidget(self.strip)
        column.addWidget(self.faults)
        column.addWidget(self.counts_line)
        self.setFocusProxy(self.view)

    def _connect(self) -> None:
        self.view.row_changed.connect(self._on_row_changed)
        self.view.selectionModel().currentChanged.connect(self._tell_reason)
        self.view.selectionModel().currentChanged.connect(self._mark_own_column)
        self.shown_columns.changed.connect(self._mark_own_column)
        self.view.menu_asked.connect(self._show_cell_menu)
        self.view.column_menu_asked.connect(self._show_column_menu)
        self.intake.undo_asked.connect(self.undo_paste_asked)
        self.counts_line.next_unread_asked.connect(self.show_next_unread)
        self.counts_line.list_asked.connect(self._show_list)
        self.faults.fault_chosen.connect(self._go_to_fault)
        self.faults.cell_wanted.connect(self.view.setFocus)
        self.faults.closed.connect(self.counts_line.note_list_closed)

    def _show_cell_menu(self, place: QPoint) -> None:
        self.cell_menu().popup(place)

    def cell_menu(self) -> QMenu:
        """Make the menu of the cells and of the row numbers."""
        act = self.actions_by_name
        menu = _menu(self, "Cells")
        for group in (
            (act.cut, act.copy, act.copy_with_headings, act.paste, act.clear),
            (act.fill_down, act.insert_rows, act.delete_rows),
            (act.sort_up, act.sort_down),
        ):
            menu.addActions(group)
            menu.addSeparator()
        return menu

    def _show_column_menu(self, section: int, place: QPoint) -> None:
        self.column_menu(section).popup(place)

    def column_menu(self, section: int) -> QMenu:
        """Make the menu of one column's heading."""
        column = self.model.columns[section]
        menu = _menu(self, f"Column {self.model.heading(column)}")
        menu.addAction("Sort, &smallest first", lambda: self._sort(section, descending=False))
        menu.addAction("Sort, &largest first", lambda: self._sort(section, descending=True))
        self.columns.add_to_menu(menu, column)
        return menu


def _menu(parent: QWidget, name: str) -> QMenu:
    menu = QMenu(parent)
    menu.setAccessibleName(name)
    menu.aboutToHide.connect(menu.deleteLater)
    return menu
