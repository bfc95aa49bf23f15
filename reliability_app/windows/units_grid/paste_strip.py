"""The strip under the grid: what a pasted or opened table was understood to be, what is still asked, and changes."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from functools import partial
from itertools import pairwise
from typing import Any

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QFrame, QHBoxLayout, QToolButton, QVBoxLayout, QWidget

from reliability_app.session.newer_table import InCommon
from reliability_app.session.pasted_text import reread
from reliability_app.session.table_errors import TableUnreadable
from reliability_app.session.understanding import OpenQuestion, Option, Understanding
from reliability_app.windows.units_grid.paste_changes import ChangePanel, Choice
from reliability_app.windows.units_grid.wrapped_label import wrapped_label
from reliability_app.windows.waiting import wait_for

# Reading more rows may take longer than a window may stand still.
_LONG = 10_000
NEWER = "newer"  # the key of an answer that is not about how the table is read


class PasteStrip(QFrame):
    """Says what a table was understood to be; its oddities and the ways to change it unfold below the line.

    Signals
    -------
    undo_asked()
        The paste is to be taken back.
    read_differently(understanding)
        The table was read again as the user wants it: put it in the place of its rows.
    closed()
        The user has read it and put it away.
    newer_answered(bool)
        The table asked about by `ask_newer` is a newer one of the same units, or it is not.
    """

    undo_asked = Signal()
    read_differently = Signal(object)
    closed = Signal()
    newer_answered = Signal(bool)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self.setAutoFillBackground(True)
        self.setAccessibleName("How the table was read")
        self._understood: Understanding | None = None
        self._is_same_table = False  # while it is read differently, what is unfolded stays so
        self._sentence = wrapped_label(Qt.TextFormat.RichText)
        self._notes = wrapped_label(Qt.TextFormat.RichText)
        self._notes.setVisible(False)
        self._question = _Question(self)
        self._question.answered.connect(self._read_differently)
        self._panel = ChangePanel(self)
        self._panel.chosen.connect(self._read_differently)
        self._panel.setVisible(False)
        self._notes_button = _button("", "Show or hide what was odd about the table")
        self._notes_button.setCheckable(True)
        self._notes_button.toggled.connect(self._notes.setVisible)
        self._change_button = _button("Change", "Read the table differently")
        self._change_button.setCheckable(True)
        self._change_button.toggled.connect(self._unfold)
        self._undo_button = _button("", "")
        self._undo_button.clicked.connect(self.undo_asked)
        self._sheets = Choice()
        self._sheets.setAccessibleName("Sheet of the file")
        self._sheets.setToolTip("Read another sheet of the file")
        self._sheets.activated.connect(self._read_sheet)
        self._close_button = _button("\N{MULTIPLICATION SIGN}", "Close this line")
        self._close_button.clicked.connect(self._close)
        self._lay_out()
        self.hide()

    def tell(
        self, sentence: str, *, notes: Sequence[str], unread: int, undo: str, understood: Understanding | None
    ) -> None:
        """Show what a table was understood to be, with the number of its rows that cannot be read.

        `undo` names what the undo button takes back ("" where there is nothing). `understood` is None for what cannot
        be read differently: cells pasted one by one.
        """
        faults = "" if not unread else f"  <b>! {_rows(unread)} cannot be read.</b>"
        self._sentence.setText(f"{_escaped(sentence)}{faults}")
        self._notes.setText("<br>".join(_escaped(note) for note in notes))
        count = len(notes)
        self._notes_button.setText("1 note" if count == 1 else f"{count} notes")
        self._notes_button.setVisible(count > 0)
        self._notes_button.setChecked(False)
        self._undo_button.setText(undo)
        self._undo_button.setAccessibleName(undo)
        self._undo_button.setToolTip(undo)
        self._undo_button.setVisible(bool(undo))
        self._show_changes(understood, fold=understood is None or not self._is_same_table)
        self.show()

    def ask_newer(self, sentence: str, found: InCommon) -> None:
        """Ask whether a table, which has not been pasted yet, is a newer one of the units there are."""
        self.tell(sentence, notes=(), unread=0, undo="", understood=None)
        options = (Option("Bring in as newer results …", {NEWER: True}), Option("Add as further rows", {NEWER: False}))
        self._question.ask(OpenQuestion(found.sentence, options))
        self._order_keys()

    @property
    def sentence(self) -> str:
        """The line as shown."""
        return self._sentence.text()

    @property
    def notes(self) -> str:
        """What was odd, as it unfolds."""
        return self._notes.text()

    @property
    def shows_notes(self) -> bool:
        """Whether the oddities are unfolded."""
        return self._notes.isVisible()

    @property
    def question(self) -> str:
        """What is asked; "" where nothing is."""
        return self._question.sentence if self._question.isVisible() else ""

    def fold(self) -> None:
        """Fold what is unfolded, to leave the room to something else."""
        self._notes_button.setChecked(False)
        self._change_button.setChecked(False)

    def forbid(self, *, change: bool) -> None:
        """Take the undo button away, since something else was done; with `change` also what changes the rows."""
        self._undo_button.setVisible(False)
        if change:
            self._show_changes(None, fold=True)

    def _show_changes(self, understood: Understanding | None, *, fold: bool) -> None:
        self._understood = understood
        self._change_button.setVisible(understood is not None)
        self._show_sheets(understood)
        questions = understood.questions if understood else ()
        self._question.ask(questions[0] if questions else None)
        if fold:
            self._change_button.setChecked(False)
        if understood is not None and self._change_button.isChecked():
            self._panel.show_choices(understood)
        self._order_keys()

    def _order_keys(self) -> None:
        """Let Tab go from above to below: what is made anew would come after everything else in the window."""
        buttons = (self._sheets, self._notes_button, self._change_button, self._undo_button)
        for first, second in pairwise((self._close_button, *self._question.buttons, *buttons, *self._panel.fields)):
            QWidget.setTabOrder(first, second)

    def _show_sheets(self, understood: Understanding | None) -> None:
        sheets = understood.source.sheets if understood else None
        names = sheets.names if sheets else ()
        self._sheets.clear()
        self._sheets.addItems(names)
        self._sheets.setVisible(len(names) > 1)
        if understood is not None and understood.source.sheet in names:
            self._sheets.setCurrentIndex(names.index(understood.source.sheet))

    def _read_sheet(self, place: int) -> None:
        if self._understood is not None:
            self._read_differently({"sheet": self._sheets.itemText(place)})

    def _unfold(self, unfolded: bool) -> None:
        if unfolded and self._understood is not None:
            self._panel.show_choices(self._understood)
        self._panel.setVisible(unfolded)
        if unfolded:
            self._order_keys()
            self._panel.fields[0].setFocus()

    def _read_differently(self, choice: Mapping[str, Any]) -> None:
        if NEWER in choice:
            self.newer_answered.emit(choice[NEWER])
            return
        if self._understood is None:
            return
        act: Callable[[], Understanding] = partial(reread, self._understood, **choice)
        is_long = len(self._understood.rows) > _LONG or "sheet" in choice
        try:
            again = wait_for(act) if is_long else act()
        except TableUnreadable as trouble:  # a sheet that cannot be read
            self._show_sheets(self._understood)
            self._sentence.setText(_escaped(str(trouble)))
            return
        self._is_same_table = True
        self.read_differently.emit(again)
        self._is_same_table = False

    def _close(self) -> None:
        self.hide()
        self.closed.emit()

    def _lay_out(self) -> None:
        line, buttons = QHBoxLayout(), QHBoxLayout()
        line.addWidget(self._sentence, 1)
        line.addWidget(self._close_button, 0, Qt.AlignmentFlag.AlignTop)
        # Below the sentence and not beside it: the page of the grid is narrow, and large fonts would leave it no room.
        buttons.addWidget(self._sheets)
        for button in (self._notes_button, self._change_button, self._undo_button):
            buttons.addWidget(button)
        buttons.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(8, 3, 3, 3)
        column.setSpacing(2)
        column.addLayout(line)
        column.addWidget(self._notes)
        column.addWidget(self._question)
        column.addLayout(buttons)
        column.addWidget(self._panel)


class _Question(QWidget):
    """What must be asked about a table, with one button per answer."""

    answered = Signal(object)

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self._label = wrapped_label()
        self._answers = QHBoxLayout()
        self._answers.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 2, 0, 2)
        column.setSpacing(2)
        column.addWidget(self._label)
        column.addLayout(self._answers)
        self.hide()

    @property
    def sentence(self) -> str:
        return self._label.text()

    @property
    def buttons(self) -> list[QToolButton]:
        return [button for button in self.findChildren(QToolButton) if not button.isHidden()]

    def ask(self, question: OpenQuestion | None) -> None:
        for button in self.findChildren(QToolButton):
            button.hide()
            self._answers.removeWidget(button)
            button.deleteLater()
        self.setVisible(question is not None)
        if question is None:
            return
        self._label.setText(question.sentence)
        for place, option in enumerate(question.options):
            button = _button(option.label, f"{question.sentence} {option.label}")
            button.setAutoRaise(False)
            button.clicked.connect(partial(self.answered.emit, option.choice))
            self._answers.insertWidget(place, button)


def _button(text: str, name: str) -> QToolButton:
    button = QToolButton()
    button.setText(text)
    button.setAccessibleName(name)
    button.setToolTip(name)
    button.setAutoRaise(True)
    button.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
    return button


def _rows(count: int) -> str:
    return "1 row" if count == 1 else f"{count} rows"


def _escaped(text: str) -> str:
    return text.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
