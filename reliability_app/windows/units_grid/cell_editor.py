"""Draws the cells of the grid with their marks, and edits one cell as a spreadsheet does."""

from __future__ import annotations

from PySide6.QtCore import (
    QAbstractItemModel,
    QEvent,
    QItemSelectionModel,
    QModelIndex,
    QObject,
    QPersistentModelIndex,
    QRect,
    Qt,
    Signal,
)
from PySide6.QtGui import QBrush, QKeyEvent, QPainter, QPalette, QPen
from PySide6.QtWidgets import (
    QCompleter,
    QLineEdit,
    QStyle,
    QStyledItemDelegate,
    QStyleOptionViewItem,
    QWidget,
)

from reliability_app.session.states import FAILED, FOUND_FAILED, RUNNING
from reliability_app.session.unit_table import HEADINGS, STATES
from reliability_app.windows.units_grid.grid_colours import GridColours
from reliability_app.windows.units_grid.grid_model import COLUMN_KEY, DISPLAY, EDIT, FAULT, NUMBERS
from reliability_app.windows.units_grid.grid_moves import Step

Index = QModelIndex | QPersistentModelIndex


STEP_OF_KEY = {
    Qt.Key.Key_Return: Step.DOWN,
    Qt.Key.Key_Enter: Step.DOWN,
    Qt.Key.Key_Tab: Step.RIGHT,
    Qt.Key.Key_Backtab: Step.LEFT,
}
_BACKWARDS = {Step.DOWN: Step.UP, Step.RIGHT: Step.LEFT, Step.LEFT: Step.LEFT, Step.UP: Step.UP}
ARROWS = {
    Qt.Key.Key_Up: Step.UP,
    Qt.Key.Key_Down: Step.DOWN,
    Qt.Key.Key_Left: Step.LEFT,
    Qt.Key.Key_Right: Step.RIGHT,
}


def step_of(event: QKeyEvent) -> Step | None:
    """Give the step that Enter or Tab asks for, reversed by Shift; None for other keys."""
    modifiers = event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier
    shift = modifiers == Qt.KeyboardModifier.ShiftModifier
    if modifiers and not shift:
        return None
    step = STEP_OF_KEY.get(Qt.Key(event.key()))
    return _BACKWARDS[step] if step is not None and shift else step


class CellEditor(QStyledItemDelegate):
    """Draws and edits cells.

    Typing over a cell, the arrow keys finish the entry and move on; with F2 or a double click (`in_place`) they move
    within the text. The State column completes our own words while any synonym can be typed.

    Signals
    -------
    stepped(Step, bool)
        An entry was finished by a key that moves on; True when the key was an arrow.
    """

    stepped = Signal(object, bool)

    def __init__(self, parent: QObject) -> None:
        super().__init__(parent)
        self.in_place = False
        self._colours: GridColours | None = None

    def set_colours(self, colours: GridColours) -> None:
        """Take over colours that fit the palette."""
        self._colours = colours

    # Drawing

    def paint(self, painter: QPainter, option: QStyleOptionViewItem, index: Index) -> None:
        """Draw a cell: a state with its round mark, a faulty cell with an exclamation mark."""
        fault = index.data(FAULT)
        state = index.data(DISPLAY) if index.data(COLUMN_KEY) == "state" else ""
        if not fault and state not in STATES:
            super().paint(painter, option, index)
            return
        marked = QStyleOptionViewItem(option)
        self.initStyleOption(marked, index)
        style = option.widget.style()
        whole = QRect(marked.rect)
        style.drawPrimitive(QStyle.PrimitiveElement.PE_PanelItemViewItem, marked, painter, marked.widget)
        if fault:
            at_left = bool(marked.displayAlignment & Qt.AlignmentFlag.AlignRight)
            self._draw_fault(painter, whole, at_left=at_left, font_height=marked.fontMetrics.height())
            room = marked.fontMetrics.horizontalAdvance("!") + 6
            marked.rect.adjust(*((room, 0, 0, 0) if at_left else (0, 0, -room, 0)))
        elif state:
            self._draw_state(painter, marked, state)
            marked.rect.adjust(marked.fontMetrics.height(), 0, 0, 0)
        self._draw_text(painter, marked)

    def _draw_text(self, painter: QPainter, option: QStyleOptionViewItem) -> None:
        style = option.widget.style()
        margin = style.pixelMetric(QStyle.PixelMetric.PM_FocusFrameHMargin, None, option.widget) + 1
        room = option.rect.adjusted(margin, 0, -margin, 0)
        text = option.fontMetrics.elidedText(option.text, Qt.TextElideMode.ElideRight, room.width())
        painter.save()
        painter.setPen(_text_pen(option))
        painter.setFont(option.font)
        painter.drawText(room, int(option.displayAlignment), text)
        painter.restore()

    def _draw_fault(self, painter: QPainter, cell: QRect, *, at_left: bool, font_height: int) -> None:
        painter.save()
        font = painter.font()
        font.setBold(True)
        painter.setFont(font)
        if self._colours is not None:
            painter.setPen(self._colours.mark)
        side = Qt.AlignmentFlag.AlignLeft if at_left else Qt.AlignmentFlag.AlignRight
        inset = max(font_height // 4, 3)
        painter.drawText(cell.adjusted(inset, 0, -inset, 0), side | Qt.AlignmentFlag.AlignVCenter, "!")
        painter.restore()

    def _draw_state(self, painter: QPainter, option: QStyleOptionViewItem, state: str) -> None:
        # The marks of the charts: failed filled, running open, found failed half filled.
        size = max(option.fontMetrics.height() * 4 // 9, 5)
        left = option.rect.left() + (option.fontMetrics.height() - size) // 2 + 2
        mark = QRect(left, option.rect.center().y() - size // 2, size, size)
        pen = _text_pen(option)
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        pen.setWidthF(1.2)
        painter.setPen(pen)
        painter.setBrush(QBrush(pen.color()) if state == FAILED else Qt.BrushStyle.NoBrush)
        painter.drawEllipse(mark)
        if state == FOUND_FAILED:
            painter.setBrush(pen.color())
            painter.drawPie(mark, 90 * 16, 180 * 16)
        painter.restore()

    # Editing

    def createEditor(self, parent: QWidget, option: QStyleOptionViewItem, index: Index) -> QWidget:  # noqa: ARG002 - Qt's
        """Make a line to type in, over the cell."""
        column = str(index.data(COLUMN_KEY))
        editor = QLineEdit(parent)
        editor.setFrame(False)
        editor.setAutoFillBackground(True)
        editor.setAccessibleName(f"{HEADINGS.get(column, column)}, row {index.row() + 1}")
        if column in NUMBERS:
            editor.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        if column == "state":
            self._offer_states(editor)
        return editor

    def setEditorData(self, editor: QWidget, index: Index) -> None:
        """Put the cell's text into the line; a refresh of the table under way does not overwrite what is typed."""
        if isinstance(editor, QLineEdit) and not editor.isModified():
            editor.setText(str(index.data(EDIT)))

    def setModelData(self, editor: QWidget, model: QAbstractItemModel, index: Index) -> None:
        """Hand the text typed to the model."""
        if isinstance(editor, QLineEdit):
            model.setData(index, editor.text(), EDIT)

    def updateEditorGeometry(self, editor: QWidget, option: QStyleOptionViewItem, index: Index) -> None:
        """Cover the cell, and more to the right where its text is longer and there is room."""
        rect = QRect(option.rect)
        wanted = option.fontMetrics.horizontalAdvance(str(index.data(EDIT))) + 16
        viewport = editor.parentWidget()
        room = viewport.width() - rect.left() if viewport is not None else 0
        rect.setWidth(max(rect.width(), min(wanted, room)))
        editor.setGeometry(rect)

    def eventFilter(self, editor: QObject, event: QEvent) -> bool:
        """Finish an entry on Enter, Tab and arrows; everything else is Qt's habit."""
        if isinstance(editor, QLineEdit) and isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress:
            step, by_arrow = step_of(event), False
            if step is None and not self.in_place and event.modifiers() in _ARROW_MODIFIERS:
                step, by_arrow = ARROWS.get(Qt.Key(event.key())), True
            if step is not None:
                self._finish(editor)
                self.stepped.emit(step, by_arrow)
                return True
            if event.key() == Qt.Key.Key_Down and event.modifiers() & Qt.KeyboardModifier.AltModifier:
                show_list(editor)
                return True
        return super().eventFilter(editor, event)

    def _finish(self, editor: QLineEdit) -> None:
        self.commitData.emit(editor)
        self.closeEditor.emit(editor, QStyledItemDelegate.EndEditHint.NoHint)

    def _offer_states(self, editor: QLineEdit) -> None:
        completer = QCompleter([FAILED, RUNNING, FOUND_FAILED], editor)
        completer.setCaseSensitivity(Qt.CaseSensitivity.CaseInsensitive)
        completer.setCompletionMode(QCompleter.CompletionMode.InlineCompletion)
        editor.setCompleter(completer)
        completer.activated.connect(lambda text: self._choose(editor, text))
        # While the list is down Enter comes past `eventFilter`, straight from the list.
        editor.returnPressed.connect(lambda: self._take_as_typed(editor))

    def _choose(self, editor: QLineEdit, text: str) -> None:
        if editor.completer().completionMode() == QCompleter.CompletionMode.InlineCompletion:
            return
        editor.setText(text)
        self._finish(editor)

    def _take_as_typed(self, editor: QLineEdit) -> None:
        words = editor.completer().popup()
        if words is None or not words.currentIndex().isValid():
            self._finish(editor)
            self.stepped.emit(Step.DOWN, False)


def show_list(editor: QLineEdit) -> None:
    """Drop down the list of states under the line, where it has one."""
    completer = editor.completer()
    if completer is None:
        return
    completer.setCompletionMode(QCompleter.CompletionMode.UnfilteredPopupCompletion)
    completer.complete()
    words = completer.popup()
    if words is not None:
        # Marked as chosen, so that the first arrow key leads to the next word and not to this one.
        words.selectionModel().select(words.currentIndex(), QItemSelectionModel.SelectionFlag.ClearAndSelect)


_ARROW_MODIFIERS = (Qt.KeyboardModifier.NoModifier, Qt.KeyboardModifier.KeypadModifier)


def _text_pen(option: QStyleOptionViewItem) -> QPen:
    selected = bool(option.state & QStyle.StateFlag.State_Selected)
    active = bool(option.state & QStyle.StateFlag.State_Active)
    group = QPalette.ColorGroup.Active if active else QPalette.ColorGroup.Inactive
    role = QPalette.ColorRole.HighlightedText if selected else QPalette.ColorRole.Text
    return QPen(option.palette.color(group, role))
