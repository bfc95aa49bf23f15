"""The table view of the Units grid: moves, selects and opens cells for typing as a spreadsheet does."""

from __future__ import annotations

from typing import Any

from PySide6.QtCore import (
    QEvent,
    QItemSelection,
    QItemSelectionModel,
    QModelIndex,
    QPersistentModelIndex,
    QPoint,
    QRect,
    Qt,
    Signal,
)
from PySide6.QtGui import QContextMenuEvent, QGuiApplication, QKeyEvent, QPainter, QPaintEvent, QPalette, QPen
from PySide6.QtWidgets import QAbstractItemView, QApplication, QHeaderView, QLineEdit, QTableView, QWidget

from reliability_app.windows.units_grid.cell_editor import ARROWS, CellEditor, show_list, step_of
from reliability_app.windows.units_grid.grid_colours import GridColours, mixed
from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_moves import (
    Cell,
    CellRange,
    Step,
    cells_ahead,
    edge_of_run,
    step_within,
)

_Trigger = QAbstractItemView.EditTrigger
_Flag = QItemSelectionModel.SelectionFlag
_IN_PLACE = (_Trigger.EditKeyPressed, _Trigger.DoubleClicked)
_CONTROL = Qt.KeyboardModifier.ControlModifier
_SHIFT = Qt.KeyboardModifier.ShiftModifier
# Widths in characters; what is longer is shown shortened, and whole in its tip.
_WIDTHS = {
    "unit": 10,
    "life": 11,
    "until": 11,
    "state": 17,
    "quantity": 7,
    "entered": 13,
    "cause": 13,
    "note": 20,
}
_OTHER_WIDTH = 11

HINT = "Paste a table here (Ctrl+V),\nor type a life and its state: failed or running."


class GridView(QTableView):
    """The grid's table.

    Typing opens the current cell and replaces its text; F2 or a double click edits the text in place. Enter goes down
    and Tab right, Shift reverses; after a run of Tabs, Enter starts the next row where the run began; inside a
    selected block both go round the block. Ctrl with an arrow jumps to the edge of what is filled. Ctrl+Tab leaves
    the grid.

    Signals
    -------
    row_changed(int)
        The current row is another one.
    menu_asked(QPoint)
        The menu for the selected cells is wanted, at a place on the screen.
    column_menu_asked(int, QPoint)
        The menu for a column's heading is wanted, at a place on the screen.
    """

    row_changed = Signal(int)
    menu_asked = Signal(QPoint)
    column_menu_asked = Signal(int, QPoint)

    def __init__(self, model: GridModel, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName("Units")
        self._tab_start: int | None = None
        self._mixing = False
        self._widths: dict[str, int] = {}
        self._editor = CellEditor(self)
        self._editor.stepped.connect(self._step_after_entry)
        self.setItemDelegate(self._editor)
        self._model = model
        self.setModel(model)
        self.setEditTriggers(_Trigger.AnyKeyPressed | _Trigger.EditKeyPressed | _Trigger.DoubleClicked)
        self.setSelectionMode(QAbstractItemView.SelectionMode.ExtendedSelection)
        self.setHorizontalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setWordWrap(False)
        self.setCornerButtonEnabled(True)
        self._set_up_headers()
        # Headings ask their selection model whether a whole column is selected, and that asks the table for every cell:
        # 2 s with 100,000 rows selected. They show no selection, so they are given a model that holds none.
        nothing_selected = QItemSelectionModel(model, self)
        self.horizontalHeader().setSelectionModel(nothing_selected)
        self.verticalHeader().setSelectionModel(nothing_selected)
        self.horizontalHeader().customContextMenuRequested.connect(self._ask_column_menu)
        self.verticalHeader().customContextMenuRequested.connect(self._ask_row_menu)
        self._mix_colours()
        self.selectionModel().currentChanged.connect(self._on_current_changed)
        model.modelReset.connect(self._after_reset)
        model.columnsInserted.connect(self._fit_columns)
        self.horizontalHeader().sectionResized.connect(self._keep_width)
        model.rowsInserted.connect(self._fit_row_heading)
        model.rowsRemoved.connect(self._fit_row_heading)
        self._after_reset()

    # What is selected

    def current_cell(self) -> tuple[int, int]:
        """Give the current cell as (row, column place); the first one where there is none."""
        index = self.currentIndex()
        return (index.row(), index.column()) if index.isValid() else (0, 0)

    def selected_ranges(self) -> list[CellRange]:
        """Give the selected rectangles from top to bottom; the current cell where nothing is selected."""
        # Never selectedIndexes(): one Python object per cell takes seconds on a large table.
        ranges = [
            CellRange(part.top(), part.left(), part.bottom(), part.right())
            for part in self.selectionModel().selection().toList()
        ]
        if not ranges:
            row, section = self.current_cell()
            ranges = [CellRange(row, section, row, section)]
        return sorted(ranges, key=lambda part: (part.top, part.left))

    def select_block(self, block: CellRange) -> None:
        """Select a rectangle and show it; its first cell that is not hidden becomes the current one."""
        left = next((section for section in block.sections if not self.isColumnHidden(section)), block.left)
        first = self._model.index(block.top, left)
        if not first.isValid():
            return
        self.selectionModel().setCurrentIndex(first, _Flag.ClearAndSelect)
        if not block.is_one_cell:
            self._select(block)
        self.scrollTo(first)

    def go_to(self, row: int, section: int) -> None:
        """Make one cell the current one, select it alone and show it."""
        self.select_block(CellRange(row, section, row, section))

    def _select(self, block: CellRange) -> None:
        last_row, last_section = self._model.rowCount() - 1, self._model.columnCount() - 1
        first = self._model.index(block.top, block.left)
        last = self._model.index(min(block.bottom, last_row), min(block.right, last_section))
        self.selectionModel().select(QItemSelection(first, last), _Flag.ClearAndSelect)

    def finish_entry(self) -> None:
        """Close an entry under way, keeping what was typed."""
        if self.state() == QAbstractItemView.State.EditingState:
            self.setFocus()

    # Editing

    def edit(self, index: QModelIndex | QPersistentModelIndex, *how: Any) -> Any:
        """Open a cell; by F2 and double click with the cursor in the text, otherwise ready to be typed over.

        `how` is what Qt gives: nothing, or the trigger and the event behind it.
        """
        in_place = bool(how) and how[0] in _IN_PLACE
        self._editor.in_place = in_place
        opened = super().edit(index, *how)
        if opened and in_place:
            line = QApplication.focusWidget()
            if isinstance(line, QLineEdit) and self.isAncestorOf(line):
                line.deselect()
                line.end(False)
                show_list(line)
        return opened

    def _step_after_entry(self, step: Step, by_arrow: bool) -> None:
        self.setFocus()
        if by_arrow:
            self._tab_start = None
            self._move_by(step)
        else:
            self.step(step)

    # Moving

    def step(self, step: Step) -> None:
        """Go on to the next cell as Enter and Tab do."""
        block = self._block_to_go_round()
        if block is not None:
            place = step_within(block, self.current_cell(), step)
            while self.isColumnHidden(place[1]) and place != self.current_cell():
                place = step_within(block, place, step)
            self.selectionModel().setCurrentIndex(self._model.index(*place), _Flag.NoUpdate)
            return
        row, section = self.current_cell()
        if step in (Step.RIGHT, Step.LEFT):
            if self._tab_start is None:
                self._tab_start = section
            tab_start = self._tab_start
            last = max(self._shown_sections())
            if step is Step.RIGHT and section == last and row + 1 < self._model.rowCount():
                # Past the last column goes on in the next row, where the run began.
                self._go_within_table(row + 1, tab_start)
            else:
                self._move_by(step)
            self._tab_start = tab_start
            return
        start = self._tab_start if self._tab_start is not None and step is Step.DOWN else section
        self._tab_start = None
        self._go_within_table(row + step.value[0], start)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Move as a spreadsheet does; what is no move is Qt's."""
        step = step_of(event)
        arrow = ARROWS.get(Qt.Key(event.key()))
        modifiers = event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier
        if step is not None:
            self.step(step)
        elif event.key() in (Qt.Key.Key_Tab, Qt.Key.Key_Backtab) and modifiers & _CONTROL:
            self._leave(forwards=not modifiers & _SHIFT)
        elif arrow is not None and modifiers in (_CONTROL, _CONTROL | _SHIFT):
            self._jump(arrow, extend=bool(modifiers & _SHIFT))
        elif event.key() == Qt.Key.Key_Space and modifiers == _SHIFT:
            rows = [row for part in self.selected_ranges() for row in (part.top, part.bottom)]
            self.select_block(CellRange(min(rows), 0, max(rows), self._model.columnCount() - 1))
        elif event.key() == Qt.Key.Key_Space and modifiers == _CONTROL:
            places = [place for part in self.selected_ranges() for place in (part.left, part.right)]
            self.select_block(CellRange(0, min(places), self._model.rowCount() - 1, max(places)))
        else:
            if arrow is not None:
                self._tab_start = None
            super().keyPressEvent(event)
            return
        event.accept()

    def _block_to_go_round(self) -> CellRange | None:
        ranges = self.selected_ranges()
        if len(ranges) != 1 or ranges[0].is_one_cell or not ranges[0].holds(self.current_cell()):
            return None
        return ranges[0]

    def _move_by(self, step: Step) -> None:
        row, section = self.current_cell()
        down, right = step.value
        shown = self._shown_sections()
        if right > 0:
            section = min((place for place in shown if place > section), default=section)
        elif right < 0:
            section = max((place for place in shown if place < section), default=section)
        self._go_within_table(row + down, section)

    def _shown_sections(self) -> list[int]:
        sections = range(self._model.columnCount())
        return [section for section in sections if not self.isColumnHidden(section)]

    def _go_within_table(self, row: int, section: int) -> None:
        row = max(0, min(row, self._model.rowCount() - 1))
        section = max(0, min(section, self._model.columnCount() - 1))
        self.go_to(row, section)

    def _jump(self, step: Step, *, extend: bool) -> None:
        cell = self.current_cell()
        ahead = cells_ahead(cell, step, rows=self._model.rowCount(), sections=self._model.columnCount())
        if step in (Step.LEFT, Step.RIGHT):
            ahead = [place for place in ahead if not self.isColumnHidden(place[1])]
        target = edge_of_run(cell, ahead, self._is_filled)
        if not extend:
            self.go_to(*target)
            return
        block = self._block_to_go_round()
        anchor = block.corner_opposite(cell) if block is not None else cell
        self._select(CellRange.between(anchor, target))
        self.selectionModel().setCurrentIndex(self._model.index(*target), _Flag.NoUpdate)
        self.scrollTo(self._model.index(*target))

    def _is_filled(self, cell: Cell) -> bool:
        return bool(self._model.table.text(cell[0], self._model.columns[cell[1]]))

    def _leave(self, *, forwards: bool) -> None:
        # The view itself keeps Tab; a plain widget's focus chain does not.
        QWidget.focusNextPrevChild(self, forwards)

    def _on_current_changed(self, current: QModelIndex, previous: QModelIndex) -> None:
        self.viewport().update()
        if current.row() != previous.row():
            self.row_changed.emit(current.row())

    # Looks

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        """Ask for the menu of the cells; from the keyboard, at the current cell."""
        place = event.globalPos()
        if event.reason() == QContextMenuEvent.Reason.Keyboard:
            place = self.viewport().mapToGlobal(self.visualRect(self.currentIndex()).bottomLeft())
        self.menu_asked.emit(place)

    def _ask_row_menu(self, point: QPoint) -> None:
        row = self.verticalHeader().logicalIndexAt(point)
        if row >= 0 and not any(row in part.rows for part in self.selected_ranges()):
            self.selectRow(row)
        self.menu_asked.emit(self.verticalHeader().viewport().mapToGlobal(point))

    def _ask_column_menu(self, point: QPoint) -> None:
        section = self.horizontalHeader().logicalIndexAt(point)
        if section >= 0:
            self.column_menu_asked.emit(section, self.horizontalHeader().viewport().mapToGlobal(point))

    def paintEvent(self, event: QPaintEvent) -> None:
        """Draw the cells, a frame around the current one, and in an empty table a hint."""
        super().paintEvent(event)
        painter = QPainter(self.viewport())
        palette = QGuiApplication.palette()
        index = self.currentIndex()
        if index.isValid() and self.hasFocus():
            painter.setPen(QPen(palette.color(QPalette.ColorRole.Highlight), 2))
            painter.drawRect(self.visualRect(index).adjusted(1, 1, -1, -1))
        if self._model.rowCount() == 1:
            painter.setPen(mixed(palette.color(QPalette.ColorRole.Base), palette.color(QPalette.ColorRole.Text), 0.6))
            below = QRect(QPoint(0, 0), self.viewport().size())
            below.setTop(self.rowHeight(0))
            painter.drawText(below, int(Qt.AlignmentFlag.AlignCenter), HINT)
        painter.end()

    def changeEvent(self, event: QEvent) -> None:
        """Follow the palette and the font."""
        super().changeEvent(event)
        # Qt calls this from within the constructor too, before anything is built.
        if not hasattr(self, "_editor"):
            return
        if event.type() in (QEvent.Type.PaletteChange, QEvent.Type.ApplicationPaletteChange):
            self._mix_colours()
        elif event.type() in (QEvent.Type.FontChange, QEvent.Type.ApplicationFontChange):
            self._widths.clear()
            self._set_up_headers()
            self._after_reset()

    def _mix_colours(self) -> None:
        if self._mixing:
            return
        self._mixing = True
        palette = QGuiApplication.palette()
        base, text = palette.color(QPalette.ColorRole.Base), palette.color(QPalette.ColorRole.Text)
        # Only these two are its own: for all others the view still follows the program's palette.
        own = QPalette()
        own.setColor(QPalette.ColorRole.Highlight, mixed(base, palette.color(QPalette.ColorRole.Highlight), 0.3))
        own.setColor(QPalette.ColorRole.HighlightedText, text)
        self.setPalette(own)
        colours = GridColours.of(palette)
        self._model.set_colours(colours)
        self._editor.set_colours(colours)
        self._mixing = False

    def _set_up_headers(self) -> None:
        rows, columns = self.verticalHeader(), self.horizontalHeader()
        rows.setSectionResizeMode(QHeaderView.ResizeMode.Fixed)
        rows.setDefaultSectionSize(self.fontMetrics().height() + 7)
        rows.setAccessibleName("Row numbers")
        columns.setAccessibleName("Columns")
        columns.setHighlightSections(False)
        columns.setTextElideMode(Qt.TextElideMode.ElideRight)
        rows.setHighlightSections(False)
        columns.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)
        rows.setContextMenuPolicy(Qt.ContextMenuPolicy.CustomContextMenu)

    def _after_reset(self) -> None:
        self._tab_start = None
        self._fit_row_heading()
        self._fit_columns()
        if not self.currentIndex().isValid():
            self.setCurrentIndex(self._model.index(0, 0))

    def _fit_columns(self) -> None:
        character = self.fontMetrics().averageCharWidth()
        for section, column in enumerate(self._model.columns):
            usual = character * _WIDTHS.get(column, _OTHER_WIDTH)
            self.setColumnWidth(section, self._widths.get(column, usual))

    def _keep_width(self, section: int, _old: int, width: int) -> None:
        if section < len(self._model.columns):
            self._widths[self._model.columns[section]] = width

    def _fit_row_heading(self) -> None:
        digits = "! " + "8" * max(len(str(self._model.rowCount())), 2)
        self.verticalHeader().setFixedWidth(self.fontMetrics().horizontalAdvance(digits) + 12)
