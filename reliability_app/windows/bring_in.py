"""Bring in new results: a newer table held against the set, shown before anything changes, taken as one step."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QAbstractTableModel, QEvent, QModelIndex, QObject, QPersistentModelIndex, Qt, Signal
from PySide6.QtGui import QKeyEvent, QKeySequence, QPalette
from PySide6.QtWidgets import (
    QAbstractItemView,
    QCheckBox,
    QDialog,
    QDialogButtonBox,
    QFileDialog,
    QHBoxLayout,
    QHeaderView,
    QPushButton,
    QTableView,
    QVBoxLayout,
    QWidget,
)

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import Session
from reliability_app.session.edits import Edit
from reliability_app.session.new_results import BringIn, Happened, News, UnitNews, news_of
from reliability_app.session.pasted_text import understand
from reliability_app.session.table_files import read_table
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.file_commands import TABLE_FILTER
from reliability_app.windows.units_grid.grid_clipboard import read_clip
from reliability_app.windows.units_grid.paste_strip import PasteStrip
from reliability_app.windows.units_grid.wrapped_label import wrapped_label
from reliability_app.windows.waiting import wait_for

if TYPE_CHECKING:
    from reliability_app.windows.main_window import MainWindow

START = "Copy the newer table in its spreadsheet and paste it here, or choose its file. Units are matched by name."
NO_CHANGE = "Nothing in it is new: the set says the same already."
_HEADINGS = ("Take", "Unit", "What", "Before", "After")
_TAKE, _UNIT, _WHAT, _BEFORE = 0, 1, 2, 3
_LONG_TEXT = 300_000
_Index = QModelIndex | QPersistentModelIndex
_Role = Qt.ItemDataRole


class NewsModel(QAbstractTableModel):
    """What a newer table says, a row for each unit that changes; what is odd has a tick, which is not set."""

    ticked = Signal()

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self.units: list[UnitNews] = []
        self.taken: set[int] = set()

    def show_news(self, news: News | None) -> None:
        """Show what a newer table says: first what is asked about."""
        self.beginResetModel()
        self.taken = set()
        told = [] if news is None else [one for one in news.units if one.cells or one.is_asked_about]
        self.units = sorted(told, key=lambda one: not one.is_asked_about)
        self.endResetModel()

    def take_all(self, taken: bool) -> None:
        """Take everything that is asked about, or nothing of it."""
        self.taken = {one.incoming_row for one in self.units if one.is_asked_about} if taken else set()
        if self.units:
            self.dataChanged.emit(self.index(0, 0), self.index(len(self.units) - 1, 0))
        self.ticked.emit()

    def rowCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of units that change."""
        return 0 if parent.isValid() else len(self.units)

    def columnCount(self, parent: _Index = QModelIndex()) -> int:  # noqa: B008 - Qt's own default
        """Return the number of columns."""
        return 0 if parent.isValid() else len(_HEADINGS)

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = _Role.DisplayRole) -> object:
        """Return a heading."""
        shown = role == _Role.DisplayRole and orientation == Qt.Orientation.Horizontal
        return _HEADINGS[section] if shown else None

    def flags(self, index: _Index) -> Qt.ItemFlag:
        """Let what is asked about be ticked."""
        found = super().flags(index)
        asked = index.column() == _TAKE and self.units[index.row()].is_asked_about
        return found | Qt.ItemFlag.ItemIsUserCheckable if asked else found

    def data(self, index: _Index, role: int = _Role.DisplayRole) -> object:
        """Return text, tick or sentence of a cell."""
        one = self.units[index.row()]
        if role == _Role.DisplayRole:
            return self._text(one, index.column())
        if role == _Role.CheckStateRole and index.column() == _TAKE and one.is_asked_about:
            return Qt.CheckState.Checked if one.incoming_row in self.taken else Qt.CheckState.Unchecked
        if role in (_Role.ToolTipRole, _Role.AccessibleDescriptionRole):
            return one.sentence
        return None

    def setData(self, index: _Index, value: object, role: int = _Role.EditRole) -> bool:
        """Take the tick."""
        if role != _Role.CheckStateRole or not self.flags(index) & Qt.ItemFlag.ItemIsUserCheckable:
            return False
        row = self.units[index.row()].incoming_row
        is_set = Qt.CheckState(value) == Qt.CheckState.Checked
        self.taken = self.taken | {row} if is_set else self.taken - {row}
        self.dataChanged.emit(index, index)
        self.ticked.emit()
        return True

    def _text(self, one: UnitNews, column: int) -> str:
        if column == _TAKE:
            return "is it right?" if one.is_asked_about else "yes"
        if column == _UNIT:
            return one.unit or f"row {one.incoming_row + 1}"
        if column == _WHAT:
            same = one.happened is Happened.SAME
            return f"other cells: {', '.join(one.cells)}" if same else str(one.happened.value)
        return one.before if column == _BEFORE else one.after or "not readable"


class BringInDialog(QDialog):
    """Shows what a newer table would change in one set, and changes it when told to."""

    def __init__(
        self, session: Session, place: int, push_edit: Callable[[Edit], None], parent: QWidget, folder: str = ""
    ) -> None:
        super().__init__(parent)
        self._session, self._place, self._push_edit, self._folder = session, place, push_edit, folder
        self._news: News | None = None
        self.setWindowTitle(f"Bring in new results: {session.sets[place].name}")
        self.setAttribute(Qt.WidgetAttribute.WA_DeleteOnClose)
        self.paste_button, self.file_button = QPushButton("Paste"), QPushButton("Choose a file …")
        self.paste_button.setToolTip("Take the newer table from the clipboard (Ctrl+V)")
        self.strip = PasteStrip(self)
        self.sentence, self.note = wrapped_label(), wrapped_label()
        self.sentence.setAccessibleName("What will change")
        self.note.setAccessibleName("What is left as it is")
        self.model = NewsModel(self)
        self.view = QTableView()
        self.take_all = QCheckBox("Take everything that is asked about")
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel)
        self.take_button = buttons.addButton("Bring in", QDialogButtonBox.ButtonRole.AcceptRole)
        buttons.accepted.connect(self.bring_in)
        buttons.rejected.connect(self.reject)
        self._set_up_view()
        self._lay_out(buttons)
        self.paste_button.clicked.connect(self.paste)
        self.file_button.clicked.connect(self.choose_file)
        self.strip.read_differently.connect(self.show_table)
        self.model.ticked.connect(self._tell)
        self.take_all.toggled.connect(self.model.take_all)
        self._show_news(None, START)

    @property
    def edit(self) -> BringIn | None:
        """What would be done now; None where nothing would."""
        if self._news is None:
            return None
        found = BringIn(self._place, self._news, taken=frozenset(self.model.taken))
        return found if found.written else None

    def paste(self) -> None:
        """Take the newer table from the clipboard."""
        clip = read_clip()
        if not clip.text.strip():
            self._show_news(None, "There is no text to paste: copy the newer table first.")
            return
        act = partial(understand, clip.text, clip.html, existing=self._table, session_unit=self._unit)
        self.show_table(wait_for(act) if len(clip.text) > _LONG_TEXT else act())

    def choose_file(self) -> None:
        """Ask for the file of the newer table."""
        name, _ = QFileDialog.getOpenFileName(self, "Newer table", self._folder, f"{TABLE_FILTER};;All files (*)")
        if name:
            self.read_file(Path(name))

    def read_file(self, path: Path) -> None:
        """Take the newer table from a file; say why where that cannot be."""
        try:
            understood = wait_for(partial(read_table, path, session_unit=self._unit))
        except RigpaperError as trouble:
            self._show_news(None, str(trouble))
            return
        self.show_table(understood)

    def show_table(self, understood: Understanding) -> None:
        """Hold a table that was understood against the set."""
        self.strip.tell(
            understood.sentence, notes=understood.notes, unread=understood.faulty, undo="", understood=understood
        )
        theirs, ours = understood.life_unit, self._session.life_unit
        if theirs and ours and self._unit is not None and theirs != ours:
            said = (
                f"The table gives lives in {theirs}, the session in {ours}: convert the table, and bring it in again."
            )
            self._show_news(None, said)
            return
        newer = UnitTable.from_rows(understood.rows, understood.extra_columns)
        news = news_of(self._table, newer)
        self._show_news(news, news.sentence if news.changes_anything else NO_CHANGE)

    def bring_in(self) -> None:
        """Change the set, as one step, and close."""
        edit = self.edit
        if edit is not None:
            self._push_edit(edit)
            self.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Paste by key, whatever in the dialog has the focus."""
        if event.matches(QKeySequence.StandardKey.Paste):
            self.paste()
            return
        super().keyPressEvent(event)

    def changeEvent(self, event: QEvent) -> None:
        """Follow the font of the program."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "view"):
            self.view.verticalHeader().setDefaultSectionSize(self.fontMetrics().height() + 6)

    # Inside

    @property
    def _table(self) -> UnitTable:
        return self._session.sets[self._place].table

    @property
    def _unit(self) -> str | None:
        is_empty = all(one.table.row_count == 0 for one in self._session.sets)
        return None if is_empty else self._session.life_unit

    def _show_news(self, news: News | None, text: str) -> None:
        self._news = news
        self.model.show_news(news)
        self.take_all.blockSignals(True)
        self.take_all.setChecked(False)
        self.take_all.blockSignals(False)
        self.sentence.setText(text)
        self.take_all.setVisible(news is not None and len(news.questions) > 1)
        self.view.setVisible(bool(self.model.units))
        self.view.horizontalHeader().setStretchLastSection(False)  # else it would not stretch again
        self.view.resizeColumnsToContents()
        self.view.horizontalHeader().setStretchLastSection(True)
        self._tell()

    def _tell(self) -> None:
        """Say what is left as it is, and whether there is anything to bring in."""
        edit, news = self.edit, self._news
        self.take_button.setEnabled(edit is not None)
        left = 0 if news is None else len(news.questions) - len(self.model.taken)
        what = "1 unit that is asked about is" if left == 1 else f"{left} units that are asked about are"
        self.note.setText(f"{what} left as before, unless ticked." if left else "")
        count = 0 if edit is None else len(edit.written)
        self.take_button.setText(f"Bring in {count} row{'' if count == 1 else 's'}" if count else "Bring in")

    def _set_up_view(self) -> None:
        self.view.setModel(self.model)
        self.view.setAccessibleName("Units that change")
        self.view.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.view.setAlternatingRowColors(True)
        self.view.setShowGrid(False)
        self.view.setTabKeyNavigation(False)
        # Fusion draws the frame of a tick box in a darker Window colour, which a dark table swallows.
        palette = self.view.palette()
        palette.setColor(QPalette.ColorRole.Window, palette.color(QPalette.ColorRole.PlaceholderText))
        self.view.setPalette(palette)
        self.view.horizontalHeader().setPalette(self.palette())
        self.view.verticalHeader().hide()
        self.view.verticalHeader().setDefaultSectionSize(self.fontMetrics().height() + 6)
        self.view.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.Interactive)
        self.view.horizontalHeader().setStretchLastSection(True)

    def _lay_out(self, buttons: QDialogButtonBox) -> None:
        sources = QHBoxLayout()
        sources.addWidget(self.paste_button)
        sources.addWidget(self.file_button)
        sources.addStretch(1)
        column = QVBoxLayout(self)
        column.addLayout(sources)
        column.addWidget(self.strip)
        column.addWidget(self.sentence)
        column.addWidget(self.view, 1)
        column.addWidget(self.note)
        column.addWidget(self.take_all)
        column.addWidget(buttons)
        line = self.fontMetrics().height()
        self.resize(44 * line, 30 * line)


class BringInCommands(QObject):
    """Opens the dialog from the menu, and from a paste that looks like a newer table of the same units."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        self.dialog: BringInDialog | None = None
        window.contents.grid.intake.newer_results_brought.connect(self.open)

    def open(self, understood: Understanding | None = None) -> None:
        """Show the dialog about the set worked on, with a table if there is one already."""
        window = self._window
        window.contents.grid.finish_entry()
        beside = window.files.path
        folder = "" if beside is None else str(beside.parent)
        self.dialog = BringInDialog(window.session, window.shown_set, window.push_edit, window, folder)
        self.dialog.destroyed.connect(self._forget)
        self.dialog.open()
        if understood is not None:
            self.dialog.show_table(understood)

    def _forget(self) -> None:
        self.dialog = None
