"""What every edit is: a step that can be applied and taken back exactly, and tells the session once."""

from __future__ import annotations

from abc import ABC, abstractmethod

from reliability_app.session.document import Change, Session


class Edit(ABC):
    """One step of the user's work: `apply` carries it out, `revert` puts back exactly what was there before.

    An edit addresses a set by its place in `session.sets`, so edits are taken back in the opposite order of
    their application, as an undo stack does. Each call tells the session's listeners once, when all is done.

    Attributes
    ----------
    label : str
        What the edit is, as it reads after the word "Undo": "paste of 12 rows".
    merge_key : str or None
        Successive edits with the same key are one gesture (a drag, the typing of one number) and one undo step.
    """

    merge_key: str | None = None
    _applied = False

    @property
    @abstractmethod
    def label(self) -> str:
        """What the edit is, as it reads after the word "Undo"."""

    @property
    @abstractmethod
    def change(self) -> Change:
        """What listeners are told after each `apply` and `revert`."""

    @property
    def applied(self) -> bool:
        """Whether the session now holds what this edit brought."""
        return self._applied

    def apply(self, session: Session) -> None:
        """Carry the edit out, for the first time or again after a `revert`.

        Raises
        ------
        RuntimeError
            When the edit is in force already: a fault of the caller.
        """
        if self._applied:
            raise RuntimeError(f"The edit '{self.label}' is in force already and cannot be applied twice.")
        self._do(session)
        self._applied = True
        session.changed(self.change)

    def revert(self, session: Session) -> None:
        """Put back what was there before `apply`.

        Raises
        ------
        RuntimeError
            When the edit is not in force: a fault of the caller.
        """
        if not self._applied:
            raise RuntimeError(f"The edit '{self.label}' is not in force and cannot be taken back.")
        self._undo(session)
        self._applied = False
        session.changed(self.change)

    def merged_with(self, later: Edit) -> Edit | None:
        """Give one edit that stands for this one and `later`, or None where the two are steps of their own."""
        if self.merge_key is None or type(later) is not type(self) or later.merge_key != self.merge_key:
            return None
        merged = self._merge(later)
        if merged is not None:
            merged._applied = self._applied
        return merged

    def _merge(self, later: Edit) -> Edit | None:  # noqa: ARG002 - an edit that can merge needs it
        return None

    @abstractmethod
    def _do(self, session: Session) -> None: ...

    @abstractmethod
    def _undo(self, session: Session) -> None: ...
