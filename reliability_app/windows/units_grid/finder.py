"""Finds and replaces text in the table shown: between the find strip, the table and its view."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QObject

from reliability_app.session.cell_search import Cell, Matches, find_cells, replaced_blocks
from reliability_app.session.edits import Edit
from reliability_app.windows.units_grid.block_commands import edit_of
from reliability_app.windows.units_grid.find_strip import FindStrip
from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_view import GridView
from reliability_app.windows.units_grid.shown_columns import ShownColumns


class Finder(QObject):
    """Carries out what the strip asks for. What was found is looked up again when the table has changed."""

    def __init__(
        self,
        model: GridModel,
        view: GridView,
        strip: FindStrip,
        columns: ShownColumns,
        push_edit: Callable[[Edit], None],
        parent: QObject,
    ) -> None:
        super().__init__(parent)
        self._model, self._view, self._strip, self._columns = model, view, strip, columns
        self._push_edit = push_edit
        self._known: tuple[object, int, str] | None = None
        self._found = Matches("", {})
        strip.changed.connect(self._look)
        strip.next_asked.connect(self.go_on)
        strip.previous_asked.connect(self.go_back)
        strip.replace_asked.connect(self._replace_one)
        strip.replace_all_asked.connect(self._replace_all)
        strip.closed.connect(view.setFocus)

    def open(self) -> None:
        """Ask what to find."""
        self._view.finish_entry()
        self._strip.open(replacing=False)

    def open_replacing(self) -> None:
        """Ask what to find and what to put in its place."""
        self._view.finish_entry()
        self._strip.open(replacing=True)

    def go_on(self) -> None:
        """Go to the next match, from the last to the first again."""
        self._show(self._matches().after(self._here, self._model.columns))

    def go_back(self) -> None:
        """Go to the match before, from the first to the last."""
        self._show(self._matches().before(self._here, self._model.columns))

    def follow(self) -> None:
        """Count again after a change of the table, while the strip is open."""
        if self._strip.isVisible():
            found = self._matches()
            self._strip.tell(found.place(self._here), found.count)

    @property
    def _here(self) -> Cell:
        row, section = self._view.current_cell()
        return row, self._model.columns[section]

    def _look(self, _wanted: str) -> None:
        """Show the first match from the current cell on, that cell included."""
        found = self._matches()
        if found.place(self._here) is None:
            self._show(found.after(self._here, self._model.columns))
        else:
            self._strip.tell(found.place(self._here), found.count)

    def _matches(self) -> Matches:
        table, wanted = self._model.table, self._strip.wanted.text()
        known = (table, table.revision, wanted)
        if self._known != known:
            self._known, self._found = known, find_cells(table, wanted)
        return self._found

    def _show(self, cell: Cell | None) -> None:
        if cell is not None:
            row, column = cell
            self._columns.show(column)
            self._view.go_to(row, self._model.columns.index(column))
        self._strip.tell(None if cell is None else self._found.place(cell), self._found.count)

    def _replace_one(self) -> None:
        found, here = self._matches(), self._here
        if found.place(here) is None:
            self.go_on()
            return
        self._replace(Matches(found.wanted, {here[1]: [here[0]]}))
        self.go_on()

    def _replace_all(self) -> None:
        found = self._matches()
        if self._replace(found):
            self._strip.tell_replaced(found.count)

    def _replace(self, which: Matches) -> bool:
        blocks = replaced_blocks(self._model.table, which, self._strip.replacement.text())
        edit = edit_of(blocks, self._model.set_index, doing="replacing")
        if edit is not None:
            self._push_edit(edit)
        return edit is not None
