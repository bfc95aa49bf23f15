"""The undo stack of the window: carries the session's edits out, takes them back, and knows what is saved."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QObject, Signal
from PySide6.QtGui import QAction, QKeySequence, QUndoCommand, QUndoStack

from reliability_app.session.document import Session
from reliability_app.session.edits import Edit

_NEVER_MERGES = -1
_MAY_MERGE = 1


class EditCommand(QUndoCommand):
    """One edit of the session as a step of the undo stack."""

    def __init__(self, session: Session, edit: Edit, stack: UndoStack) -> None:
        super().__init__(edit.label)
        self._session = session
        self._stack = stack
        self.edit = edit

    def redo(self) -> None:
        """Carry the edit out again (the first time, `UndoStack.push_edit` has done so already)."""
        if not self.edit.applied:
            self._stack.carry_out(self._session, self.edit)

    def undo(self) -> None:
        """Take the edit back."""
        if self.edit.applied:
            self._stack.take_back(self._session, self.edit)

    def id(self) -> int:
        """Tell Qt whether this step may become one with the step before it."""
        return _NEVER_MERGES if self.edit.merge_key is None else _MAY_MERGE

    def mergeWith(self, other: QUndoCommand) -> bool:
        """Become one step with `other` where both are parts of one gesture."""
        if not isinstance(other, EditCommand):
            return False
        merged = self.edit.merged_with(other.edit)
        if merged is None:
            return False
        self.edit = merged
        self.setText(merged.label)
        return True


class UndoStack(QUndoStack):
    """Undo and redo of everything that changes the session.

    `setClean` when the session was saved, `clear` when another was opened; `cleanChanged` drives the modified mark.

    Signals
    -------
    retraced(edit)
        An edit was just undone or redone by the user: show the place where that happened.
    """

    retraced = Signal(object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._busy = False

    def push_edit(self, session: Session, edit: Edit) -> None:
        """Apply `edit` to `session` and remember it as one undo step.

        An edit that fails raises here and leaves no step behind.

        Raises
        ------
        RuntimeError
            When a listener of the session answers an edit with another edit: a fault of the program.
        """
        self._guarded(edit.apply, session)
        self.push(EditCommand(session, edit, self))

    def latest(self) -> Edit | None:
        """Give the edit the next undo would take back."""
        command = self.command(self.index() - 1) if self.index() else None
        return command.edit if isinstance(command, EditCommand) else None

    def undo_if_latest(self, edit: Edit) -> bool:
        """Undo `edit` if it is the latest step still in force; otherwise leave everything and return False."""
        if self.latest() is not edit:
            return False
        self.undo()
        return True

    def carry_out(self, session: Session, edit: Edit) -> None:
        """Redo `edit`; called by its command."""
        self._guarded(edit.apply, session)
        self.retraced.emit(edit)

    def take_back(self, session: Session, edit: Edit) -> None:
        """Undo `edit`; called by its command."""
        self._guarded(edit.revert, session)
        self.retraced.emit(edit)

    def make_actions(self, parent: QObject) -> tuple[QAction, QAction]:
        """Make the Undo and Redo actions; their texts name the step, their keys are the same on every platform."""
        undo = self.createUndoAction(parent, "Undo")
        undo.setShortcuts([QKeySequence("Ctrl+Z")])
        redo = self.createRedoAction(parent, "Redo")
        # StandardKey.Redo lacks Ctrl+Y on X11 and Ctrl+Shift+Z on Windows.
        redo.setShortcuts([QKeySequence("Ctrl+Y"), QKeySequence("Ctrl+Shift+Z")])
        return undo, redo

    def _guarded(self, step: Callable[[Session], None], session: Session) -> None:
        if self._busy:
            raise RuntimeError("An edit was pushed while another was being carried out; undo would lose its order.")
        self._busy = True
        try:
            step(session)
        finally:
            self._busy = False
