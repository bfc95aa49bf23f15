"""The Units grid: the table with its menus, the line on the last paste, and the count of units below."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QPoint, Signal
from PySide6.QtGui import QAction
from PySide6.QtWidgets import QMenu, QVBoxLayout, QWidget

from reliability_app.session.document import Change, Session
from reliability_app.session.edits import Edit, RemoveColumn, TableEdit
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, UnitTable
from reliability_app.windows.units_grid import block_commands
from reliability_app.windows.units_grid.counts_line import CountsLine
from reliability_app.windows.units_grid.grid_actions import GridActions, make_actions
from reliability_app.windows.units_grid.grid_clipboard import put_cells, read_clip
from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_moves import CellRange
from reliability_app.windows.units_grid.grid_view import GridView
from reliability_app.windows.units_grid.paste_changes import change_menu
from reliability_app.windows.units_grid.paste_plan import PastePlace, PastePlan, plan_again, plan_paste
from reliability_app.windows.units_grid.paste_strip import PasteStrip

# What the grid shows; a reading that is dragged must not repaint it all the time.
_SHOWN = ("units", "life_unit", "everything")


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
        self._paste: Edit | None = None
        self._plan: PastePlan | None = None
        self._aimed_at: PastePlace | None = None
        self.model = GridModel(push_edit, self)
        self.view = GridView(self.model, self)
        self.strip = PasteStrip(self)
        self.counts_line = CountsLine(self)
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
        self._put_strip_away()
        self.model.show_table(session.sets[set_index].table, set_index, life_unit=session.life_unit)
        self._tell_counts()

    def refresh(self, change: Change) -> None:
        """Follow a change of the session: called for every one of them."""
        self._follow_paste()
        unit_set = self._session.sets[min(self._set_index, len(self._session.sets) - 1)]
        if unit_set.table is not self.model.table:
            self.show_set(self._session, self._session.sets.index(unit_set))
        elif change.kind in _SHOWN and change.set_index in (None, self._set_index):
            self.model.refresh(life_unit=self._session.life_unit)
            self._tell_counts()

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
        self._carry_out_paste(plan_paste(read_clip(), place), place)

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
        section = self.model.columns.index(fault[0]) if fault is not None else 0
        self.view.setFocus()
        self.view.go_to(row, section)
        self._tell_reason()

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

    def _carry_out_paste(self, plan: PastePlan, place: PastePlace) -> None:
        self._push(plan.edit)
        self._tell_paste(plan)
        self._paste, self._plan, self._aimed_at = plan.edit, plan, place

    def _show_change_menu(self, corner: QPoint) -> None:
        if self._plan is None or self._plan.understood is None:
            return
        menu = change_menu(self._plan.understood, self._read_paste_again, self)
        menu.aboutToHide.connect(menu.deleteLater)
        menu.popup(corner)

    def _read_paste_again(self, understood: Understanding) -> None:
        """Put the paste in the way it is now read in the place of the paste as it was."""
        paste, place = self._paste, self._aimed_at
        if paste is None or place is None:
            return
        self.undo_paste_asked.emit(paste)
        if not paste.applied:
            self._carry_out_paste(plan_again(understood, place), place)

    def _tell_paste(self, plan: PastePlan) -> None:
        unread = sum(self._table.row_is_read(row) is False for row in plan.rows)
        if plan.columns:
            self.view.select_block(self._block(plan))
        elif plan.rows:
            self.view.go_to(plan.rows[0], 0)
        if plan.edit is not None and len(plan.rows) == len(plan.columns) == 1 and not unread:
            self._put_strip_away()
            return
        self.strip.tell(
            plan.sentence,
            notes=plan.notes,
            unread=unread,
            can_undo=plan.edit is not None,
            can_change=plan.understood is not None,
        )

    def _block(self, plan: PastePlan) -> CellRange:
        sections = [self.model.columns.index(column) for column in plan.columns]
        return CellRange(plan.rows[0], min(sections), plan.rows[-1], max(sections))

    def _follow_paste(self) -> None:
        """Keep the strip true: gone with its paste, and without Undo once anything else was done."""
        if self._paste is None:
            return
        if self._paste.applied:
            self.strip.forbid_undo()
        else:
            self._put_strip_away()

    def _put_strip_away(self) -> None:
        self._paste = None
        self.strip.hide()

    def _tell_counts(self) -> None:
        self.counts_line.tell_counts(self._table.counts())
        self._tell_reason()

    def _tell_reason(self) -> None:
        row, section = self.view.current_cell()
        self.counts_line.tell_reason(row, self.model.reason_to_tell(row, section))

    def _on_row_changed(self, row: int) -> None:
        self.row_selected.emit(row if row < self._table.row_count else -1)

    def _lay_out(self) -> None:
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(3)
        column.addWidget(self.view, 1)
        column.addWidget(self.strip)
        column.addWidget(self.counts_line)
        self.setFocusProxy(self.view)

    def _connect(self) -> None:
        self.view.row_changed.connect(self._on_row_changed)
        self.view.selectionModel().currentChanged.connect(self._tell_reason)
        self.view.menu_asked.connect(self._show_cell_menu)
        self.view.column_menu_asked.connect(self._show_column_menu)
        self.strip.closed.connect(self._put_strip_away)
        self.strip.change_asked.connect(self._show_change_menu)
        self.strip.undo_asked.connect(lambda: self.undo_paste_asked.emit(self._paste))
        self.counts_line.next_unread_asked.connect(self.show_next_unread)

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
        if column not in BUILT_IN_COLUMNS:
            menu.addSeparator()
            menu.addAction("&Remove column", lambda: self._push_edit(RemoveColumn(self._set_index, column)))
        return menu


def _menu(parent: QWidget, name: str) -> QMenu:
    menu = QMenu(parent)
    menu.setAccessibleName(name)
    menu.aboutToHide.connect(menu.deleteLater)
    return menu
