"""Takes pasted and opened tables into the grid: one edit each, told in the strip, and read differently on request."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

from PySide6.QtCore import QObject, Signal

from reliability_app.session.edits import Edit, PasteRows
from reliability_app.session.newer_table import in_common
from reliability_app.session.reading_anew import ReadAnew
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable
from reliability_app.windows.units_grid.grid_model import GridModel
from reliability_app.windows.units_grid.grid_moves import CellRange
from reliability_app.windows.units_grid.grid_view import GridView
from reliability_app.windows.units_grid.paste_plan import PastePlace, PastePlan, plan_again, takes_life_unit
from reliability_app.windows.units_grid.paste_strip import PasteStrip


@dataclass(frozen=True, eq=False)
class _Taken:
    """A table in the grid.

    `edit` brought it (None: it came with its file); `place` is where it was pasted; `base` is the same table as it was
    read before, which `edit` replaced and whose undoing brings back.
    """

    plan: PastePlan
    edit: Edit | None
    place: PastePlace | None
    session_was_empty: bool
    revision: int
    base: _Taken | None = None

    @property
    def is_undone(self) -> bool:
        return self.edit is not None and not self.edit.applied


class TableIntake(QObject):
    """Knows what the latest paste, or the file just opened, was understood to be, and replaces its rows.

    Signals
    -------
    undo_asked(edit)
        `edit` is to be taken back, if it is still the latest step.
    newer_results_brought(understanding)
        A table that was pasted is a newer one of the units there are: nothing has been written yet.
    """

    undo_asked = Signal(object)
    newer_results_brought = Signal(object)

    def __init__(
        self, model: GridModel, view: GridView, strip: PasteStrip, push_edit: Callable[[Edit], None], parent: QObject
    ) -> None:
        super().__init__(parent)
        self._model, self._view, self._strip, self._push_edit = model, view, strip, push_edit
        self._taken: _Taken | None = None
        self._undone: _Taken | None = None
        self._busy = False
        self._asked: tuple[PastePlan, PastePlace, int] | None = None  # a paste that waits for an answer
        strip.newer_answered.connect(self._take_answer)
        strip.closed.connect(self.put_away)
        strip.undo_asked.connect(self._ask_undo)
        strip.read_differently.connect(self.read_again)

    def carry_out(self, plan: PastePlan, place: PastePlace) -> None:
        """Paste; first ask where the same units would stand in the table twice."""
        if plan.understood is not None and type(plan.edit) is PasteRows:  # not what takes the place of all rows
            found = in_common(self._table, plan.understood.rows)
            if found.is_newer_table:
                self.put_away()
                self._asked = (plan, place, self._table.revision)
                self._strip.ask_newer(plan.sentence, found)
                return
        self._asked = None
        self._take(plan, place, session_was_empty=place.session_is_empty)

    def _take_answer(self, newer: bool) -> None:
        if self._asked is None:
            return
        plan, place, _ = self._asked
        self.put_away()
        if newer:
            self.newer_results_brought.emit(plan.understood)
        else:
            self._take(plan, place, session_was_empty=place.session_is_empty)

    def show_opened(self, understood: Understanding) -> None:
        """Tell what the file, whose table the grid shows now, was understood to be."""
        rows = range(self._table.row_count)
        plan = PastePlan(None, understood.sentence, understood.notes, rows, understood=understood)
        self._take(plan, session_was_empty=True)

    def read_again(self, understood: Understanding) -> None:
        """Put the table as it is now read in the place of its rows as they were read before, as one step."""
        taken = self._taken
        if taken is None or taken.revision != self._table.revision:
            return
        self._busy = True
        try:
            if taken.edit is not None:
                self.undo_asked.emit(taken.edit)
            if not taken.is_undone:
                base = taken
            elif taken.base is not None:
                base = taken.base
            elif taken.place is not None:
                was_empty = taken.session_was_empty
                self._take(plan_again(understood, taken.place), taken.place, session_was_empty=was_empty)
                return
            plan = self._anew(understood, base)
            self._take(plan, taken.place, session_was_empty=taken.session_was_empty, base=base)
        finally:
            self._busy = False

    def follow(self) -> None:
        """Keep the strip true after any change: gone with its paste, without its buttons once they cannot work."""
        taken, revision = self._taken, self._table.revision
        if self._asked is not None and self._asked[2] != revision:
            self.put_away()  # the paste was planned for the table as it was
        if self._busy or taken is None:
            return
        if taken.is_undone and taken.base is not None:
            self._undone, self._taken = taken, replace(taken.base, revision=revision)
            self._tell(self._taken)
        elif taken.is_undone:
            self.put_away()
        elif self._undone is not None and not self._undone.is_undone:
            self._taken, self._undone = replace(self._undone, revision=revision), None
            self._tell(self._taken)
        elif taken.edit is not None or taken.revision != revision:
            self._strip.forbid(change=taken.revision != revision)

    def put_away(self) -> None:
        """Forget the table, and hide the strip."""
        self._taken = self._undone = None
        self._asked = None
        self._strip.hide()

    @property
    def _table(self) -> UnitTable:
        return self._model.table

    def _anew(self, understood: Understanding, base: _Taken) -> PastePlan:
        rows, before = base.plan.rows, base.plan.understood
        edit = ReadAnew(
            self._model.set_index,
            understood.rows,
            understood.extra_columns,
            life_unit=takes_life_unit(understood, session_is_empty=base.session_was_empty),
            first=rows.start,
            count=len(rows),
            former_extras=before.extra_columns if before else (),
        )
        now = range(rows.start, rows.start + len(understood.rows))
        return PastePlan(edit, understood.sentence, understood.notes, now, understood=understood)

    def _take(
        self, plan: PastePlan, place: PastePlace | None = None, *, session_was_empty: bool, base: _Taken | None = None
    ) -> None:
        self._undone = None
        if plan.edit is not None:
            self._push_edit(plan.edit)
        self._taken = _Taken(plan, plan.edit, place, session_was_empty, self._table.revision, base)
        self._tell(self._taken)

    def _ask_undo(self) -> None:
        if self._taken is not None and self._taken.edit is not None:
            self.undo_asked.emit(self._taken.edit)

    def _tell(self, taken: _Taken) -> None:
        plan = taken.plan
        unread = sum(self._table.row_is_read(row) is False for row in plan.rows)
        if plan.columns:
            sections = [self._model.columns.index(column) for column in plan.columns]
            self._view.select_block(CellRange(plan.rows[0], min(sections), plan.rows[-1], max(sections)))
        elif plan.rows:
            self._view.go_to(plan.rows[0], 0)
        if plan.edit is not None and len(plan.rows) == len(plan.columns) == 1 and not unread:
            self.put_away()
            return
        self._strip.tell(
            plan.sentence,
            notes=plan.notes,
            unread=unread,
            undo="" if taken.edit is None else "Undo change" if taken.base else "Undo paste",
            understood=plan.understood,
        )
