"""The table of visits: each with its counts, the reading followed, the verdict and what was foretold and found."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence

from PySide6.QtCore import QEvent, Qt, Signal
from PySide6.QtGui import QAction, QKeySequence
from PySide6.QtWidgets import QAbstractItemView, QHeaderView, QTableWidget, QTableWidgetItem, QWidget

from reliability_app.session.document import Ask
from reliability_app.session.picture import Reading
from reliability_app.session.visit_agreement import Held
from reliability_app.session.visit_history import HistoryPoint
from reliability_app.session.wording import SAFE_SIDES, Toward, ask_title, basis_text, value_text
from reliability_app.windows.copied_table import copy_table
from reliability_app.windows.panels.shown_cells import shown_cells
from reliability_app.windows.visit_work import Pair

_RIGHT = Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter
_ENDS: tuple[tuple[str, str, Toward], ...] = (
    ("Estimate", "estimate", "nearest"),
    ("Lower", "lower", SAFE_SIDES[0]),
    ("Upper", "upper", SAFE_SIDES[1]),
)
_NOTHING = "\N{EN DASH}"


class VisitsTable(QTableWidget):
    """One row for each visit of a set and one for today; a label is changed in place.

    Signals
    -------
    relabelled(int, str)
        The visit at this place is to be called so.
    delete_asked(), open_asked()
        The current visit is to be deleted, or shown as it stood.
    """

    relabelled = Signal(int, str)
    delete_asked = Signal()
    open_asked = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._points: tuple[HistoryPoint, ...] = ()
        self._labels: list[str] = []
        self._title = "Visits"
        self._is_filling = False
        self.setAccessibleName("Visits")
        self.setSelectionBehavior(QAbstractItemView.SelectionBehavior.SelectRows)
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setEditTriggers(QAbstractItemView.EditTrigger.EditKeyPressed)
        self.setTabKeyNavigation(False)
        self.setAlternatingRowColors(True)
        self.setShowGrid(False)
        self.setWordWrap(False)
        self.verticalHeader().hide()
        self.horizontalHeader().setSectionResizeMode(QHeaderView.ResizeMode.ResizeToContents)
        self.horizontalHeader().setStretchLastSection(True)
        self.itemChanged.connect(self._take_label)
        self.itemDoubleClicked.connect(lambda _: self.open_asked.emit())
        self._make_actions()

    @property
    def current_place(self) -> int | None:
        """The visit of the current row; None for today, or where no row is current."""
        row = self.currentRow()
        return self._points[row].place if 0 <= row < len(self._points) else None

    def go_to(self, place: int | None) -> None:
        """Make the row of a visit, or of today, the current one."""
        row = next((row for row, point in enumerate(self._points) if point.place == place), None)
        if row is not None:
            self.setCurrentCell(row, 0)

    def show_points(
        self,
        name: str,
        points: Sequence[HistoryPoint],
        labels: Sequence[str],
        ask: Ask,
        life_unit: str,
        *,
        found: Mapping[Pair, Held],
        verdict_today: str,
    ) -> None:
        """Show the visits of a set; `labels` are those of all visits, `found` what has been held against each other."""
        place = self.current_place if self.rowCount() else None
        self._points, self._labels = tuple(points), list(labels)
        self._title = f"{name}: {ask_title(ask, life_unit)} at each visit"
        columns = list(_columns(points, ask, life_unit, found, verdict_today))
        self._is_filling = True
        self.clear()
        self.setRowCount(len(points))
        self.setColumnCount(len(columns))
        for column, (heading, texts, is_number) in enumerate(columns):
            self.setHorizontalHeaderItem(column, QTableWidgetItem(heading))
            for row, text in enumerate(texts):
                place = points[row].place
                item = QTableWidgetItem(text if column or place is None else self._labels[place])
                item.setToolTip(text)
                if is_number:
                    item.setTextAlignment(_RIGHT)
                if column or place is None:
                    item.setFlags(item.flags() & ~Qt.ItemFlag.ItemIsEditable)
                self.setItem(row, column, item)
        self._is_filling = False
        self._fit_rows()
        self.go_to(place)

    def edit_label(self) -> None:
        """Let the label of the current visit be typed."""
        item = self.item(self.currentRow(), 0)
        if self.current_place is not None and item is not None:
            self.setFocus()
            self.editItem(item)

    def copy_all(self) -> None:
        """Copy the table with its headings."""
        copy_table(shown_cells(self, self._title))

    def changeEvent(self, event: QEvent) -> None:
        """Follow the font of the program."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange:
            self._fit_rows()

    def _make_actions(self) -> None:
        for text, keys, act in (
            ("Show the visit as it stood", ("Return", "Enter"), self.open_asked.emit),
            ("Change the label", ("F2",), self.edit_label),
            ("Delete the visit", ("Delete",), self.delete_asked.emit),
            ("Copy the table of visits", (QKeySequence.StandardKey.Copy,), self.copy_all),
        ):
            action = QAction(text, self)
            action.setShortcuts([QKeySequence(key) for key in keys])
            action.setShortcutContext(Qt.ShortcutContext.WidgetShortcut)
            action.triggered.connect(lambda _=False, act=act: act())
            self.addAction(action)
        self.setContextMenuPolicy(Qt.ContextMenuPolicy.ActionsContextMenu)

    def _take_label(self, item: QTableWidgetItem) -> None:
        place = self._points[item.row()].place if item.row() < len(self._points) else None
        if not self._is_filling and item.column() == 0 and place is not None and item.text() != self._labels[place]:
            self.relabelled.emit(place, item.text().strip())

    def _fit_rows(self) -> None:
        for row in range(self.rowCount()):
            self.setRowHeight(row, self.fontMetrics().height() + 6)


def _columns(
    points: Sequence[HistoryPoint], ask: Ask, life_unit: str, found: Mapping[Pair, Held], verdict_today: str
) -> Iterator[tuple[str, list[str], bool]]:
    """Give heading, texts and alignment of each column that has anything to say."""
    yield "Visit", ["Today" if point.place is None else "" for point in points], False
    yield "Date", [f"{point.at.astimezone():%Y-%m-%d}" for point in points], False
    for heading, key in (("Failed", "failed"), ("Found failed", "found_failed"), ("Running", "running")):
        counts = [getattr(point.counts, key) for point in points]
        if any(counts) or key != "found_failed":
            yield heading, [str(count) for count in counts], True
    unread = [point.counts.unread for point in points]
    if any(unread):
        yield "Unread", [str(count) for count in unread], True
    title = ask_title(ask, life_unit)
    for heading, end, toward in _ENDS:
        texts = [_end_text(point.reading, end, life_unit, toward) for point in points]
        if end == "estimate" or any(text != _NOTHING for text in texts):
            yield title if end == "estimate" else heading, texts, True
    verdicts = [_verdict(point, verdict_today) for point in points]
    if any(verdicts):
        yield "Requirement", verdicts, False
    yield "Foretold, found", [_foretold(found.get(pair) if pair else None) for pair in _pairs_before(points)], False
    yield "Basis", [basis_text(point.basis, point.counts, point.reading) for point in points], False


def _end_text(reading: Reading | None, end: str, life_unit: str, toward: Toward) -> str:
    value = None if reading is None else getattr(reading, end)
    return _NOTHING if reading is None or value is None else value_text(reading.ask, value, life_unit, toward=toward)


def _verdict(point: HistoryPoint, today: str) -> str:
    if point.place is None:
        return today
    return "" if point.judged is None else f"{point.judged.verdict} (look {point.judged.look})"


def _pairs_before(points: Sequence[HistoryPoint]) -> Iterator[Pair | None]:
    """Give for each point the pair of the visit before it and itself."""
    before: int | None = None
    for point in points:
        yield None if before is None else (before, point.place)
        before = point.place


def _foretold(held: Held | None) -> str:
    if held is None or held.agreement is None:
        return ""
    least, most = held.agreement.limits
    return f"{'! ' if held.speaks else ''}{least} to {most}, {held.agreement.found}"
