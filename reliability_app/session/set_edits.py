"""What is done to a set as a whole: its colour, its place among the others, whether pages draw it, its parts."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from reliability_app.session.document import Change, Session, UnitSet
from reliability_app.session.edit import Edit
from reliability_app.session.unit_table import UnitTable


@dataclass(eq=False)
class RecolourSet(Edit):
    """Give one set another place in the palette."""

    set_index: int
    old: int
    new: int

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "change of colour"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("sets", self.set_index)

    def _do(self, session: Session) -> None:
        session.sets[self.set_index].colour = self.new

    def _undo(self, session: Session) -> None:
        session.sets[self.set_index].colour = self.old


@dataclass(eq=False)
class HideSet(Edit):
    """Leave one set out of the pages that draw the others, or draw it again."""

    set_index: int
    hidden: bool

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "hiding of a set" if self.hidden else "showing of a set"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("sets", self.set_index)

    def _do(self, session: Session) -> None:
        session.sets[self.set_index].hidden = self.hidden

    def _undo(self, session: Session) -> None:
        session.sets[self.set_index].hidden = not self.hidden


@dataclass(eq=False)
class MoveSet(Edit):
    """Move one set to another place among the others."""

    old: int
    new: int

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "moving of a set"

    @property
    def change(self) -> Change:
        """Name the place where the set now stands."""
        return Change("sets", self.new if self.applied else self.old)

    def _do(self, session: Session) -> None:
        session.sets.insert(self.new, session.sets.pop(self.old))

    def _undo(self, session: Session) -> None:
        session.sets.insert(self.old, session.sets.pop(self.new))


@dataclass(eq=False)
class SplitSet(Edit):
    """Bring the parts of a set in behind it and hide it itself: its units are there twice, and are drawn once."""

    set_index: int
    parts: Sequence[UnitSet]
    was_hidden: bool = False

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"split into {len(self.parts)} sets"

    @property
    def change(self) -> Change:
        """Name the first part, or the whole where the split is taken back."""
        return Change("sets", self.set_index + 1 if self.applied else self.set_index)

    def _do(self, session: Session) -> None:
        session.sets[self.set_index].hidden = True
        session.sets[self.set_index + 1 : self.set_index + 1] = self.parts

    def _undo(self, session: Session) -> None:
        del session.sets[self.set_index + 1 : self.set_index + 1 + len(self.parts)]
        session.sets[self.set_index].hidden = self.was_hidden


def twin_of(unit_set: UnitSet, *, name: str, colour: int) -> UnitSet:
    """Return a set with the same units and basis that later changes of either do not touch; it is not hidden."""
    table = UnitTable()
    table.restore(unit_set.table.snapshot())
    return replace(unit_set, name=name, colour=colour, table=table, kept=dict(unit_set.kept), hidden=False)


def free_name(session: Session, wanted: str, *, taken: Sequence[str] = ()) -> str:
    """Return `wanted`, or the first of "wanted 2", "wanted 3" ... that no set has and that is not taken."""
    names = {*(chosen.name for chosen in session.sets), *taken}
    name, count = wanted, 1
    while name in names:
        count += 1
        name = f"{wanted} {count}"
    return name


def first_free(used: Sequence[int]) -> int:
    """Return the lowest colour that no set has."""
    return next(colour for colour in range(len(used) + 1) if colour not in used)
