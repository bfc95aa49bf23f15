"""Between two visits: what changed, in words and unit by unit, and what was foretold of it and found."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import (
    QAbstractItemView,
    QComboBox,
    QHBoxLayout,
    QHeaderView,
    QLabel,
    QPushButton,
    QSizePolicy,
    QSplitter,
    QTableWidget,
    QTableWidgetItem,
    QVBoxLayout,
    QWidget,
)

from reliability_app.session.new_results import Happened
from reliability_app.session.visit_agreement import Held
from reliability_app.session.visit_history import Changes
from reliability_app.session.wording import age_text, number_text, share_text
from reliability_app.windows.copied_table import copy_table
from reliability_app.windows.panels.shown_cells import shown_cells
from reliability_app.windows.units_grid.wrapped_label import wrapped_label
from reliability_app.windows.visit_work import Compared, Pair

WAITING = "Being worked out …"
NOTHING_YET = "Record a visit: from then on what changes, and what fails, is held against it here."
STOPPED = "Stopped: choose the visits again to go on."
_RIGHT = Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
_MOST_ROWS = 5000  # of a table that a person may want to look through


class BetweenVisits(QWidget):
    """Two visits chosen, their differences, and how the failures since agree with the earlier fit.

    Signals
    -------
    pair_chosen(tuple)
        These two visits are to be compared: places, None for today.
    stop_asked()
        What is being worked out is not wanted any more.
    """

    pair_chosen = Signal(object)
    stop_asked = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._life_unit = "h"
        self._held: Held | None = None
        self.earlier, self.later = QComboBox(), QComboBox()
        for box, name in ((self.earlier, "Earlier visit"), (self.later, "Later visit, or today")):
            box.setAccessibleName(name)
            box.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
            box.setMinimumContentsLength(10)
            box.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
            box.activated.connect(self._choose)
        self.changed, self.foretold = wrapped_label(), wrapped_label()
        self.changed.setAccessibleName("What changed between the visits")
        self.foretold.setAccessibleName("What was foretold and found")
        self.progress = QLabel()
        self.stop_button = QPushButton("Stop")
        self.stop_button.setAccessibleName("Stop comparing visits")
        self.stop_button.clicked.connect(self._stop)
        self.change_table = _table("Units that changed", ("Unit", "What", "Before", "After"))
        self.unit_table = _table("Units foretold and found", ("Unit", "Age then", "Age since", "Chance", "Found"))
        copy = QAction("Copy what was foretold and found", self.unit_table)
        copy.setShortcut(QKeySequence(QKeySequence.StandardKey.Copy))
        copy.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
        copy.triggered.connect(self.copy_units)
        self.unit_table.addAction(copy)
        self.unit_table.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)
        self._lay_out()
        self.set_waiting(False)

    @property
    def pair(self) -> Pair | None:
        """The two visits chosen."""
        then, now = self.earlier.currentData(), self.later.currentData()
        return None if then is None else (int(then), None if now is None or now < 0 else int(now))

    @property
    def summary(self) -> str:
        """What came between the two visits, in words; "" while it is not known."""
        if self.pair is None or not self.changed.text():
            return self.changed.text()
        said = f"{self.earlier.currentText()} to {self.later.currentText()}: {self.changed.text()}"
        held = self._held
        return said if held is None else f"{said} {'! ' if held.speaks else ''}{held.sentence}"

    def offer(self, titles: Sequence[tuple[int, str]], life_unit: str, *, has_news: Callable[[], bool]) -> None:
        """Offer these visits, places and titles; the pair chosen stays where it can.

        Else it is the last one with today, or, where today has no news, the last but one with the last.
        """
        self._life_unit = life_unit
        before = self.pair
        pairs = [(place, later) for place, _ in titles for later in (*(p for p, _ in titles if p > place), None)]
        chosen = before if before in pairs else None
        if chosen is None and titles:
            is_back = len(titles) > 1 and not has_news()
            chosen = (titles[-2][0], titles[-1][0]) if is_back else (titles[-1][0], None)
        self.earlier.clear()
        for place, title in titles:
            self.earlier.addItem(title, place)
        self._offer_later(titles, chosen)
        for box in (self.earlier, self.later):
            box.setEnabled(bool(titles))
        if not titles:
            self.clear(NOTHING_YET)

    def forget(self) -> None:
        """Drop everything, because another session is shown."""
        self.earlier.clear()
        self.later.clear()
        self.clear("")

    def choose(self, pair: Pair) -> None:
        """Choose two visits."""
        titles = [(int(self.earlier.itemData(at)), self.earlier.itemText(at)) for at in range(self.earlier.count())]
        self._offer_later(titles, pair)
        self.pair_chosen.emit(pair)

    def clear(self, text: str) -> None:
        """Show no comparison, and say why."""
        self._held = None
        self.changed.setText(text)
        self.foretold.setText("")
        for table in (self.change_table, self.unit_table):
            table.setRowCount(0)

    def show_changes(self, compared: Compared) -> None:
        """Show what changed."""
        changes = compared.changes
        if changes is None:
            self.clear("One of the two does not have this set.")
            return
        self.changed.setText(f"Changed: {changes.sentence}")
        _fill(self.change_table, list(_changed_rows(changes)))

    def show_held(self, held: Held) -> None:
        """Show what was foretold and found."""
        self._held = held
        mid_p = "" if held.agreement is None else f" Mid-p {number_text(held.agreement.mid_p, 2)}."
        mark = "! " if held.speaks else ""
        self.foretold.setText(" ".join([f"{mark}{held.sentence}{mid_p}", *held.remarks()]))
        unit = self._life_unit
        rows = [
            (
                row.unit,
                age_text(row.then, unit),
                age_text(row.reached, unit),
                share_text(row.chance),
                _found_text(row.failed, row.quantity),
            )
            for row in held.rows()
        ]
        _fill(self.unit_table, rows, numbers=range(1, 4))

    def set_waiting(self, waiting: bool) -> None:
        """Show or hide that something is being worked out, and the button that stops it."""
        self.progress.setText(WAITING if waiting else "")
        self.stop_button.setVisible(waiting)

    def copy_units(self) -> None:
        """Copy what was foretold and found, unit by unit, under its sentence."""
        if self._held is not None:
            copy_table(shown_cells(self.unit_table, "Foretold and found", (("Result", self.foretold.text()),)))

    def _offer_later(self, titles: Sequence[tuple[int, str]], chosen: Pair | None) -> None:
        self.later.clear()
        if chosen is None:
            return
        self.earlier.setCurrentIndex(self.earlier.findData(chosen[0]))
        for place, title in titles:
            if place > chosen[0]:
                self.later.addItem(title, place)
        self.later.addItem("today", -1)
        at = self.later.findData(-1 if chosen[1] is None else chosen[1])
        self.later.setCurrentIndex(at if at >= 0 else self.later.count() - 1)

    def _choose(self, _at: int) -> None:
        pair = self.pair
        if pair is not None:
            later = None if pair[1] is not None and pair[1] <= pair[0] else pair[1]
            self.choose((pair[0], later))

    def _stop(self) -> None:
        self.set_waiting(False)
        self.progress.setText(STOPPED)
        self.stop_asked.emit()

    def _lay_out(self) -> None:
        choice = QHBoxLayout()
        choice.addWidget(QLabel("From"))
        choice.addWidget(self.earlier, 1)
        choice.addWidget(QLabel("to"))
        choice.addWidget(self.later, 1)
        choice.addWidget(self.progress)
        choice.addWidget(self.stop_button)
        tables = QSplitter(Qt.Orientation.Horizontal)
        tables.addWidget(self.change_table)
        tables.addWidget(self.unit_table)
        tables.setChildrenCollapsible(False)
        column = QVBoxLayout(self)
        column.setContentsMargins(6, 6, 6, 6)
        column.addLayout(choice)
        column.addWidget(self.changed)
        column.addWidget(self.foretold)
        column.addWidget(tables, 1)


def _table(name: str, headings: Sequence[str]) -> QTableWidget:
    table = QTableWidget(0, len(headings))
    table.setAccessibleName(name)
    table.setHorizontalHeaderLabels(list(headings))
    table.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
    table.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
    table.setTabKeyNavigation(False)
    table.setAlternatingRowColors(True)
    table.setShowGrid(False)
    table.setMinimumHeight(5 * table.fontMetrics().height())
    table.verticalHeader().hide()
    table.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
    table.horizontalHeader().setStretchLastSection(True)
    return table


def _fill(table: QTableWidget, rows: Sequence[Sequence[str]], *, numbers: range = range(0)) -> None:
    table.setRowCount(min(len(rows), _MOST_ROWS))
    height = table.fontMetrics().height() + 6
    for row, texts in enumerate(rows[:_MOST_ROWS]):
        table.setRowHeight(row, height)
        for column, text in enumerate(texts):
            item = QTableWidgetItem(text)
            item.setToolTip(text)
            if column in numbers:
                item.setTextAlignment(_RIGHT)
            table.setItem(row, column, item)


def _changed_rows(changes: Changes) -> list[tuple[str, str, str, str]]:
    named = dict.fromkeys(changes.excluded, "no longer read") | dict.fromkeys(changes.included, "read again")
    rows = []
    for one in changes.news.units:
        if one.happened is Happened.SAME and not one.cells and one.unit not in named:
            continue
        what = named.get(one.unit) or ("other cells" if one.happened is Happened.SAME else str(one.happened.value))
        rows.append((one.unit or f"row {one.incoming_row + 1}", what, one.before, one.after or "not readable"))
    rows += [(name, "taken out", "", "") for name in changes.removed]
    rows += [("Basis", text, "", "") for text in changes.basis]
    return rows


def _found_text(failed: int, quantity: int) -> str:
    if quantity == 1:
        return "failed" if failed else "running"
    return f"{failed} of {quantity} failed"
