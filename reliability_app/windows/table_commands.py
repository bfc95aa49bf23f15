"""Tables out of the window: readings, sets side by side, units and candidates, copied or saved as CSV and XLSX."""

from __future__ import annotations

from collections.abc import Mapping
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from PySide6.QtCore import QObject
from PySide6.QtWidgets import QFileDialog

from reliability_app.engine.cautions import Severity
from reliability_app.engine.errors import RigpaperError
from reliability_app.session.table_contents import candidates_table, readings_table, side_by_side_table, units_table
from reliability_app.session.table_saving import SUFFIXES, save_table
from reliability_app.session.tables_out import TableOut
from reliability_app.windows.copied_table import copy_table
from reliability_app.windows.waiting import wait_for

if TYPE_CHECKING:
    from reliability_app.windows.main_window import MainWindow

TableName = Literal["readings", "side by side", "units", "candidates"]
TITLES: Mapping[TableName, str] = {
    "readings": "&Readings",
    "side by side": "Readings &side by side",
    "units": "&Units",
    "candidates": "&Candidates",
}
NOT_YET = "The numbers are just being worked out anew: take the table when they are there."
NO_CANDIDATES = "The families have not been compared yet: open the Candidates page first."
NO_READINGS = "There are no readings: paste or type the lives of some units first."
_LARGE_ROWS = 5_000


class TableCommands(QObject):
    """Copies and saves what the tables of the window hold, never a number that is out of date."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        self._folder: Path | None = None

    def copy(self, name: TableName) -> None:
        """Put a table on the clipboard, with the digits shown."""
        table = self._table(name)
        if table is not None:
            copy_table(table)

    def save(self, name: TableName) -> None:
        """Ask for a file and save a table there, with all its digits."""
        table = self._table(name)
        path = None if table is None else self._ask_path(table)
        if table is None or path is None:
            return
        try:
            write = partial(save_table, table, path)
            if len(table.rows) > _LARGE_ROWS:
                wait_for(write)
            else:
                write()
        except RigpaperError as trouble:
            self._say(str(trouble))
            return
        self._folder = path.parent

    def _table(self, name: TableName) -> TableOut | None:
        """Return a table as it stands now, or say why there is none."""
        window = self._window
        window.contents.grid.finish_entry()
        if name == "units":
            return units_table(window.session, window.shown_set)
        if name == "candidates":
            compared = window.contents.candidates.table
            return self._or_say(None if compared is None else candidates_table(compared), NO_CANDIDATES)
        answering = window.answering
        if name == "side by side":
            several = answering.all_current
            return self._or_say(None if several is None else side_by_side_table(several), NOT_YET, NO_READINGS)
        one = answering.current
        return self._or_say(None if one is None else readings_table(one), NOT_YET, NO_READINGS)

    def _or_say(self, table: TableOut | None, why_none: str, why_empty: str = "") -> TableOut | None:
        if table is None or (why_empty and not table.rows):
            self._say(why_none if table is None else why_empty)
            return None
        return table

    def _ask_path(self, table: TableOut) -> Path | None:
        beside = self._window.files.path
        folder = self._folder or (None if beside is None else beside.parent)
        filters = [f"{title} (*{suffix})" for suffix, title in SUFFIXES.items()]
        dialog = QFileDialog(self._window, "Save table", str(folder or ""))
        dialog.setNameFilters(filters)
        dialog.setAcceptMode(QFileDialog.AcceptMode.AcceptSave)
        dialog.setDefaultSuffix(next(iter(SUFFIXES)))

        def follow(chosen: str) -> None:
            dialog.setDefaultSuffix(next(suffix for suffix, title in SUFFIXES.items() if chosen.startswith(title)))

        dialog.filterSelected.connect(follow)
        dialog.selectFile(_plain(table.title))
        accepted, files = dialog.exec(), dialog.selectedFiles()
        dialog.deleteLater()
        return Path(files[0]) if accepted and files else None

    def _say(self, text: str) -> None:
        self._window.messages.say(Severity.CAUTION, text)


def _plain(name: str) -> str:
    """Return a table's title as a file can be called."""
    return "".join(character if character.isalnum() or character in " -_()" else "_" for character in name)
