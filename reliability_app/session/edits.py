"""Every change to a session as a small object that can be applied and taken back exactly; what undo is made of."""

from __future__ import annotations

from dataclasses import dataclass, field, replace

from reliability_app.session.document import Ask, Basis, Change, Session, UnitSet
from reliability_app.session.edit import Edit
from reliability_app.session.table_edits import (
    Block,
    BlockEdit,
    BlocksEdit,
    DeleteRows,
    InsertRows,
    PasteRows,
    RemoveColumn,
    ReplaceRows,
    SortRows,
    TableEdit,
)

__all__ = [
    "AddSet",
    "Block",
    "BlockEdit",
    "BlocksEdit",
    "ChangeAsks",
    "ChangeBasis",
    "ChangeLifeUnit",
    "ChangeNotes",
    "ChangeTitle",
    "DeleteRows",
    "Edit",
    "InsertRows",
    "PasteRows",
    "RemoveColumn",
    "RemoveSet",
    "RenameSet",
    "ReplaceRows",
    "SortRows",
    "TableEdit",
]

_BASIS_TITLES = {
    "family": "family",
    "fit": "fit method",
    "bound": "bound",
    "confidence": "confidence",
    "side": "side",
    "threshold": "threshold",
    "shape": "held shape",
}


@dataclass(eq=False)
class ChangeBasis(Edit):
    """Change what the numbers of one set rest on."""

    set_index: int
    old: Basis
    new: Basis
    merge_key: str | None = None

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        different = [
            title for name, title in _BASIS_TITLES.items() if getattr(self.old, name) != getattr(self.new, name)
        ]
        return f"change of {different[0]}" if len(different) == 1 else "change of basis"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("basis", self.set_index)

    def _merge(self, later: Edit) -> Edit | None:
        if not isinstance(later, ChangeBasis) or later.set_index != self.set_index:
            return None
        return replace(self, new=later.new)

    def _do(self, session: Session) -> None:
        session.sets[self.set_index].basis = self.new

    def _undo(self, session: Session) -> None:
        session.sets[self.set_index].basis = self.old


@dataclass(eq=False)
class ChangeAsks(Edit):
    """Change the readings asked for; the first is the one the sentence states and the charts mark."""

    old: tuple[Ask, ...]
    new: tuple[Ask, ...]
    merge_key: str | None = None

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        if len(self.new) > len(self.old):
            return "new reading"
        if len(self.new) < len(self.old):
            return "removal of a reading"
        return "change of the reading" if self.old[:1] != self.new[:1] else "change of the readings"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("asks")

    def _merge(self, later: Edit) -> Edit | None:
        return replace(self, new=later.new) if isinstance(later, ChangeAsks) else None

    def _do(self, session: Session) -> None:
        session.asks = tuple(self.new)

    def _undo(self, session: Session) -> None:
        session.asks = tuple(self.old)


@dataclass(eq=False)
class ChangeTitle(Edit):
    """Change the session's title."""

    old: str
    new: str

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "change of title"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("title")

    def _do(self, session: Session) -> None:
        session.title = self.new

    def _undo(self, session: Session) -> None:
        session.title = self.old


@dataclass(eq=False)
class ChangeNotes(Edit):
    """Change the session's notes."""

    old: str
    new: str

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "change of notes"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("notes")

    def _do(self, session: Session) -> None:
        session.notes = self.new

    def _undo(self, session: Session) -> None:
        session.notes = self.old


@dataclass(eq=False)
class ChangeLifeUnit(Edit):
    """Change the unit in which lives are given ("h", "cycles", "km"); the numbers stay as they are."""

    old: str
    new: str

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return "change of life unit"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("life_unit")

    def _do(self, session: Session) -> None:
        session.life_unit = self.new

    def _undo(self, session: Session) -> None:
        session.life_unit = self.old


@dataclass(eq=False)
class RenameSet(Edit):
    """Give one set another name."""

    set_index: int
    old: str
    new: str

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"renaming of {self.old}" if self.old else "naming of the set"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("sets", self.set_index)

    def _do(self, session: Session) -> None:
        session.sets[self.set_index].name = self.new

    def _undo(self, session: Session) -> None:
        session.sets[self.set_index].name = self.old


@dataclass(eq=False)
class AddSet(Edit):
    """Bring a set into the session, at `set_index` among the others."""

    set_index: int
    unit_set: UnitSet

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"new set {self.unit_set.name}".rstrip()

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("sets", self.set_index)

    def _do(self, session: Session) -> None:
        session.sets.insert(self.set_index, self.unit_set)

    def _undo(self, session: Session) -> None:
        del session.sets[self.set_index]


@dataclass(eq=False)
class RemoveSet(Edit):
    """Take a set out of the session; it is kept here whole until the edit itself is forgotten."""

    set_index: int
    _removed: UnitSet | None = field(default=None, init=False, repr=False)

    @property
    def label(self) -> str:  # noqa: D102 - said by Edit
        return f"removal of {self._removed.name}" if self._removed is not None else "removal of a set"

    @property
    def change(self) -> Change:  # noqa: D102 - said by Edit
        return Change("sets", self.set_index)

    def _do(self, session: Session) -> None:
        self._removed = session.sets.pop(self.set_index)

    def _undo(self, session: Session) -> None:
        assert self._removed is not None
        session.sets.insert(self.set_index, self._removed)
