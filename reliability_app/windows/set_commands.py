"""Everything that is done to a set as a whole, as actions for the Sets menu and the button beside the set's name."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from functools import partial

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QAction, QActionGroup, QKeySequence
from PySide6.QtWidgets import QMenu, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.engine.errors import RigpaperError
from reliability_app.reports.series_looks import SYMBOLS
from reliability_app.session.document import Session, UnitSet
from reliability_app.session.edits import AddSet, Edit, RemoveSet
from reliability_app.session.messages import Messages
from reliability_app.session.set_edits import HideSet, MoveSet, RecolourSet, SplitSet, first_free, free_name, twin_of
from reliability_app.session.splitting import column_title, split_columns, split_set
from reliability_app.windows.command_search import WHY_PROPERTY
from reliability_app.windows.set_swatch import look_in_words, swatch
from reliability_app.windows.waiting import wait_for

_LARGE_ROWS = 5_000
_ONLY_ONE = "This is the only set, so it stays: empty its rows, or start a new session."


class SetCommands(QObject):
    """Acts on the set at `current()`.

    Signals
    -------
    chosen(int)
        The set at this place is to be shown.
    rename_asked()
        The name of the set shown is to be typed anew.
    """

    chosen = Signal(int)
    rename_asked = Signal()

    def __init__(
        self,
        session: Session,
        push_edit: Callable[[Edit], None],
        messages: Messages,
        current: Callable[[], int],
        parent: QWidget,
    ) -> None:
        super().__init__(parent)
        self._session, self._push_edit, self._messages, self._current = session, push_edit, messages, current
        self._widget = parent
        self.add_action = self._action("&Add a set", "Ctrl+Shift+N", self.add)
        self.hide_action = self._action("&Hide the set on the pages", "Ctrl+Shift+H", self.toggle_hidden)
        self.hide_action.setCheckable(True)
        self.colour_menu = self._menu("&Colour and mark", self._list_colours)
        self.shown_menu = self._menu("Shown on the pa&ges", self._list_shown)
        self.split_menu = self._menu("&Split by a column", self._list_columns)
        self._entries: Sequence[QAction | None] = (
            self._action("Re&name the set", "F6", self.rename_asked.emit),
            self.colour_menu.menuAction(),
            self._action("&Duplicate the set", "Ctrl+Shift+D", self.duplicate),
            self.split_menu.menuAction(),
            None,
            self.hide_action,
            self.shown_menu.menuAction(),
            None,
            self._action("Ne&xt set", "Ctrl+PgDown", partial(self.step, 1)),
            self._action("Pre&vious set", "Ctrl+PgUp", partial(self.step, -1)),
            self._action("Move the set &up", "Ctrl+Shift+PgUp", partial(self.move, -1)),
            self._action("Move the set do&wn", "Ctrl+Shift+PgDown", partial(self.move, 1)),
            None,
            self._action("Re&move the set", "", self.remove),
        )

    def fill(self, menu: QMenu) -> None:
        """Put the actions on the set shown into a menu."""
        for entry in self._entries:
            if entry is None:
                menu.addSeparator()
            else:
                menu.addAction(entry)
        menu.aboutToShow.connect(self._tick)

    # What the actions do

    def add(self) -> None:
        """Add an empty set with the basis of the one shown, and show it."""
        place = len(self._session.sets)
        name = free_name(self._session, f"Set {place + 1}")
        self._push_edit(AddSet(place, UnitSet(name=name, basis=self._shown.basis, colour=self._free_colour())))
        self.chosen.emit(place)

    def duplicate(self) -> None:
        """Add a set with the same units and basis behind the one shown, and show it."""
        place = self._current() + 1
        name = free_name(self._session, f"{self._shown.name} copy")
        self._push_edit(AddSet(place, twin_of(self._shown, name=name, colour=self._free_colour())))
        self.chosen.emit(place)

    def split(self, column: str) -> None:
        """Split the set shown by a column and show the first part; the set itself is hidden, and undo is one step."""
        place = self._current()
        act = partial(split_set, self._session, place, column)
        try:
            edit: SplitSet = wait_for(act) if self._shown.table.row_count > _LARGE_ROWS else act()
        except RigpaperError as trouble:
            self._messages.say(Severity.CAUTION, str(trouble))
            return
        whole = self._shown.name
        self._push_edit(edit)
        self.chosen.emit(place + 1)
        made = f"{whole} is split by {column_title(column)} into {len(edit.parts)} sets. It is hidden, not changed."
        self._messages.say(Severity.NOTE, made)

    def remove(self) -> None:
        """Remove the set shown; undo brings it back. The last one stays."""
        if len(self._session.sets) == 1:
            self._messages.say(Severity.NOTE, _ONLY_ONE)
            return
        place = self._current()
        self._push_edit(RemoveSet(place))
        self.chosen.emit(min(place, len(self._session.sets) - 1))

    def step(self, by: int) -> None:
        """Show the next or the previous set; after the last comes the first."""
        self.chosen.emit((self._current() + by) % len(self._session.sets))

    def move(self, by: int) -> None:
        """Move the set shown one place up or down; at the end it stays."""
        place = self._current()
        if 0 <= place + by < len(self._session.sets):
            self._push_edit(MoveSet(place, place + by))

    def toggle_hidden(self) -> None:
        """Hide the set shown on the pages of the others, or show it there again."""
        self._push_edit(HideSet(self._current(), not self._shown.hidden))

    # Inside

    @property
    def _shown(self) -> UnitSet:
        return self._session.sets[self._current()]

    def _free_colour(self) -> int:
        return first_free([one.colour for one in self._session.sets])

    def _tick(self) -> None:
        self.hide_action.setChecked(self._shown.hidden)

    def _list_colours(self, menu: QMenu) -> None:
        group = QActionGroup(menu)
        for colour in range(len(SYMBOLS)):
            action = menu.addAction(swatch(colour, self._widget.palette()), look_in_words(colour))
            action.setCheckable(True)
            action.setChecked(self._shown.colour % len(SYMBOLS) == colour)
            action.triggered.connect(partial(self._recolour, colour))
            group.addAction(action)

    def _recolour(self, colour: int, _checked: bool = False) -> None:
        if colour != self._shown.colour:
            self._push_edit(RecolourSet(self._current(), self._shown.colour, colour))

    def _list_shown(self, menu: QMenu) -> None:
        for place, one in enumerate(self._session.sets):
            action = menu.addAction(swatch(one.colour, self._widget.palette()), one.name.replace("&", "&&"))
            action.setCheckable(True)
            action.setChecked(not one.hidden)
            action.triggered.connect(partial(self._hide, place))

    def _hide(self, place: int, is_shown: bool) -> None:
        self._push_edit(HideSet(place, not is_shown))

    def _list_columns(self, menu: QMenu) -> None:
        columns = split_columns(self._shown.table)
        for column in columns:
            menu.addAction(column_title(column).replace("&", "&&"), partial(self.split, column))
        if not columns:
            none = menu.addAction("No column says what kind a unit is")
            none.setProperty(WHY_PROPERTY, "Add a column to the units, such as Lot, and fill it first.")
            none.setEnabled(False)

    def _action(self, text: str, keys: str, act: Callable[[], object]) -> QAction:
        action = QAction(text, self._widget)
        if keys:
            action.setShortcut(QKeySequence(keys))
        action.triggered.connect(lambda _=False: act())
        return action

    def _menu(self, title: str, fill: Callable[[QMenu], None]) -> QMenu:
        menu = QMenu(title, self._widget)

        def fill_anew() -> None:
            menu.clear()
            fill(menu)

        menu.aboutToShow.connect(fill_anew)
        return menu
