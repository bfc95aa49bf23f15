"""The bar above the grid: which set is shown, adding, renaming and removing sets, the unit of the lives."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QComboBox, QHBoxLayout, QInputDialog, QLabel, QToolButton, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.session.document import Session, UnitSet
from reliability_app.session.edits import AddSet, ChangeLifeUnit, Edit, RemoveSet, RenameSet
from reliability_app.session.messages import Messages
from reliability_app.windows.entry_line import EntryLine

USUAL_UNITS = ("h", "days", "cycles", "km")


class SetBar(QWidget):
    """Shows the sets of a session and tells which one is chosen: `set_chosen(int)`."""

    set_chosen = Signal(int)

    def __init__(
        self, session: Session, push_edit: Callable[[Edit], None], messages: Messages, parent: QWidget | None = None
    ) -> None:
        super().__init__(parent)
        self._session, self._push_edit, self._messages = session, push_edit, messages
        self.sets = QComboBox()
        self.sets.setAccessibleName("Set")
        self.sets.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToContents)
        self.add_button = QToolButton()
        self.add_button.setText("+")
        self.add_button.setToolTip("Add a set")
        self.add_button.setAccessibleName("Add a set")
        self.life_unit = QComboBox()
        self.life_unit.setEditable(True)
        self.life_unit.addItems(USUAL_UNITS)
        self.life_unit.setAccessibleName("Unit of the lives")
        self.life_unit.setMinimumContentsLength(6)
        layout = QHBoxLayout(self)
        layout.setContentsMargins(0, 0, 0, 0)
        for widget, stretch in (
            (QLabel("Set"), 0),
            (self.sets, 1),
            (self.add_button, 0),
            (QLabel("Lives in"), 0),
            (self.life_unit, 0),
        ):
            layout.addWidget(widget, stretch)
        self.sets.activated.connect(self.set_chosen)
        self.add_button.clicked.connect(self.add_set)
        self.life_unit.activated.connect(self._take_life_unit)
        line = EntryLine()
        line.setAccessibleName("Unit of the lives")
        line.editingFinished.connect(self._take_life_unit)
        self.life_unit.setLineEdit(line)
        self.life_unit.setToolTip("The name of the unit; the numbers stay as they are")

    @property
    def current(self) -> int:
        """The place of the set shown."""
        return max(self.sets.currentIndex(), 0)

    def refresh(self, current: int) -> None:
        """Show the session's sets as they are now, with the one at `current` chosen."""
        self.sets.clear()
        self.sets.addItems([chosen.name for chosen in self._session.sets])
        self.sets.setCurrentIndex(current)
        self.life_unit.setEditText(self._session.life_unit)

    def add_set(self) -> None:
        """Add an empty set with the basis of the one shown, and show it."""
        place = len(self._session.sets)
        used = [chosen.colour for chosen in self._session.sets]
        basis = self._session.sets[self.current].basis
        new = UnitSet(name=free_name(self._session, f"Set {place + 1}"), basis=basis, colour=first_free(used))
        self._push_edit(AddSet(place, new))
        self.set_chosen.emit(place)

    def rename_set(self) -> None:
        """Ask for another name of the set shown."""
        old = self._session.sets[self.current].name
        name, agreed = QInputDialog.getText(self, "Rename set", "Name of the set:", text=old)
        name = name.strip()
        if not agreed or not name or name == old:
            return
        if any(chosen.name == name for chosen in self._session.sets):
            self._messages.say(Severity.CAUTION, f"There is a set called {name!r} already: choose another name.")
            return
        self._push_edit(RenameSet(self.current, old, name))

    def remove_set(self) -> None:
        """Remove the set shown; undo brings it back. The last one stays."""
        if len(self._session.sets) == 1:
            self._messages.say(
                Severity.NOTE, "This is the only set, so it stays: empty its rows, or start a new session."
            )
            return
        place = self.current
        self._push_edit(RemoveSet(place))
        self.set_chosen.emit(min(place, len(self._session.sets) - 1))

    def _take_life_unit(self) -> None:
        unit = self.life_unit.currentText().strip()
        if unit != self._session.life_unit:
            self._push_edit(ChangeLifeUnit(self._session.life_unit, unit))


def free_name(session: Session, wanted: str) -> str:
    """Return `wanted`, or the first of "wanted 2", "wanted 3" ... that no set has."""
    names = {chosen.name for chosen in session.sets}
    name, count = wanted, 1
    while name in names:
        count += 1
        name = f"{wanted} {count}"
    return name


def first_free(used: list[int]) -> int:
    """Return the lowest colour that no set has."""
    return next(colour for colour in range(len(used) + 1) if colour not in used)
