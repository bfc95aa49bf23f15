"""The bar above the grid: which set is shown, its name typed in place, what can be done to it, the unit of lives."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QEvent, QSize, Qt, Signal
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QLabel, QMenu, QStackedWidget, QToolButton, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.session.document import Session
from reliability_app.session.edits import ChangeLifeUnit, Edit, RenameSet
from reliability_app.session.messages import Messages
from reliability_app.windows.entry_line import EntryLine
from reliability_app.windows.set_commands import SetCommands
from reliability_app.windows.set_swatch import HEIGHT, WIDTH, swatch

USUAL_UNITS = ("h", "days", "cycles", "km")


class NameLine(EntryLine):
    """A line for a name; Escape leaves the name as it was."""

    left = Signal()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Leave at Escape."""
        if event.key() == Qt.Key.Key_Escape:
            self.left.emit()
        else:
            super().keyPressEvent(event)


class SetBar(QWidget):
    """Shows the sets of a session and tells which one is chosen: `set_chosen(int)`."""

    set_chosen = Signal(int)

    def __init__(
        self, session: Session, push_edit: Callable[[Edit], None], messages: Messages, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._session, self._push_edit, self._messages = session, push_edit, messages
        self._place = 0
        self._is_naming = False
        self.sets = QComboBox()
        self.sets.setAccessibleName("Set")
        self.sets.setIconSize(QSize(WIDTH, HEIGHT))
        self.sets.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.sets.setMinimumContentsLength(10)
        self.name_line = NameLine()
        self.name_line.setAccessibleName("Name of the set")
        self.commands = SetCommands(session, push_edit, messages, lambda: self.current, self)
        self.add_button = _button("+", "Add a set")
        self.more_button = _button("…", "What can be done to the set")
        self.more_button.setPopupMode(QToolButton.ToolButtonPopupMode.InstantPopup)
        self.more_button.setMenu(QMenu(self.more_button))
        self.commands.fill(self.more_button.menu())
        self.life_unit = QComboBox()
        self.life_unit.setEditable(True)
        self.life_unit.addItems(USUAL_UNITS)
        self.life_unit.setAccessibleName("Unit of the lives")
        self.life_unit.setMinimumContentsLength(6)
        self._lay_out()
        self.sets.activated.connect(self.set_chosen)
        self.commands.chosen.connect(self.set_chosen)
        self.commands.rename_asked.connect(self.rename_set)
        self.add_button.clicked.connect(self.commands.add)
        self.name_line.editingFinished.connect(self._take_name)
        self.name_line.left.connect(self._leave_name)
        self._connect_life_unit()

    @property
    def current(self) -> int:
        """The place of the set shown."""
        return self._place

    def refresh(self, current: int) -> None:
        """Show the session's sets as they are now, with the one at `current` chosen."""
        self._place = current
        self._leave_name()
        self.sets.clear()
        for one in self._session.sets:
            name = f"{one.name} (hidden)" if one.hidden else one.name
            self.sets.addItem(swatch(one.colour, self.palette(), hidden=one.hidden), name)
        self.sets.setCurrentIndex(current)
        self.sets.setToolTip(self.sets.currentText())
        self.life_unit.setEditText(self._session.life_unit)

    def rename_set(self) -> None:
        """Let the name of the set shown be typed in its place."""
        self.name_line.setText(self._session.sets[self.current].name)
        self.name_line.selectAll()
        self._is_naming = True
        self._names.setCurrentWidget(self.name_line)
        self.name_line.setFocus()

    def changeEvent(self, event: QEvent) -> None:
        """Follow light and dark."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and self.sets.count() == len(self._session.sets):
            for place, one in enumerate(self._session.sets):
                self.sets.setItemIcon(place, swatch(one.colour, self.palette(), hidden=one.hidden))

    def _take_name(self) -> None:
        if not self._is_naming:  # the line has lost the focus because naming has ended
            return
        old, name = self._session.sets[self.current].name, self.name_line.text().strip()
        if any(one.name == name for place, one in enumerate(self._session.sets) if place != self.current):
            self._messages.say(Severity.CAUTION, f"There is a set called {name!r} already: choose another name.")
            name = ""
        self._leave_name()
        if name and name != old:
            self._push_edit(RenameSet(self.current, old, name))

    def _leave_name(self) -> None:
        self._is_naming = False
        had_focus = self.name_line.hasFocus()
        self._names.setCurrentWidget(self.sets)
        if had_focus:
            self.sets.setFocus()

    def _take_life_unit(self) -> None:
        unit = self.life_unit.currentText().strip()
        if unit != self._session.life_unit:
            self._push_edit(ChangeLifeUnit(self._session.life_unit, unit))

    def _connect_life_unit(self) -> None:
        self.life_unit.activated.connect(self._take_life_unit)
        line = EntryLine()
        line.setAccessibleName("Unit of the lives")
        line.editingFinished.connect(self._take_life_unit)
        self.life_unit.setLineEdit(line)
        self.life_unit.setToolTip("The name of the unit; the numbers stay as they are")

    def _lay_out(self) -> None:
        self._names = QStackedWidget()
        self._names.addWidget(self.sets)
        self._names.addWidget(self.name_line)
        self._names.setSizePolicy(self.sets.sizePolicy())
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        for widget, stretch in (
            (QLabel("Set"), 0),
            (self._names, 1),
            (self.add_button, 0),
            (self.more_button, 0),
            (QLabel("Lives in"), 0),
            (self.life_unit, 0),
        ):
            layout.addWidget(widget, stretch)


def _button(text: str, what: str) -> QToolButton:
    button = QToolButton()
    button.setText(text)
    button.setToolTip(what)
    button.setAccessibleName(what)
    return button
