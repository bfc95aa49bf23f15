"""New, open, save and the rest of the File menu; nothing unsaved is dropped without asking."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from functools import partial
from pathlib import Path

from PySide6.QtCore import QObject, QTimer, Signal
from PySide6.QtWidgets import QFileDialog, QMessageBox, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import Session
from reliability_app.session.edits import AddSet, ChangeLifeUnit
from reliability_app.session.file_lock import FileInUse, FileLock
from reliability_app.session.file_state import FileState
from reliability_app.session.json_file import SUFFIX, save
from reliability_app.session.messages import Messages
from reliability_app.session.opening import Opened, open_file
from reliability_app.session.recovery import FoundCopy, RecoveryCopy
from reliability_app.session.session_errors import ChangedMeanwhile
from reliability_app.session.set_edits import first_free, free_name
from reliability_app.session.table_files import SPREADSHEET_SUFFIXES, TEXT_SUFFIXES
from reliability_app.windows.settings import WindowSettings
from reliability_app.windows.undo import UndoStack
from reliability_app.windows.units_grid.paste_plan import other_unit
from reliability_app.windows.waiting import wait_for

SESSION_FILTER = "Rigpaper sessions (*.json)"
_TABLES = " ".join(f"*{suffix}" for suffix in (*SPREADSHEET_SUFFIXES, *TEXT_SUFFIXES))
TABLE_FILTER = f"Tables of units ({_TABLES})"
ANY_FILTER = f"Sessions and tables (*.json {_TABLES})"
# Reading a larger file may take longer than a window may stand still.
_LARGE_BYTES = 200_000
# Unsaved work is kept this long after the first edit of a burst, so that never more than 2 s of work can be lost.
_KEEP_AFTER_MS = 1500

Answer = QMessageBox.StandardButton


class FileCommands(QObject):
    """Knows which file the session belongs to, and moves sessions between files and the window.

    `table_opened(understanding, place)` is emitted when a table became the set at that place. `finish_entry` is called
    first by whatever needs the session as the user sees it: it takes a half-typed cell in.
    """

    path_changed = Signal()
    saved = Signal()
    table_opened = Signal(object, int)

    def __init__(
        self,
        session: Session,
        undo: UndoStack,
        messages: Messages,
        settings: WindowSettings,
        window: QWidget,
        finish_entry: Callable[[], None],
        recovery: RecoveryCopy | None = None,
    ) -> None:
        super().__init__(window)
        self._session, self._undo, self._messages = session, undo, messages
        self._settings, self._window = settings, window
        self._finish_entry = finish_entry
        self._recovery = recovery or RecoveryCopy()
        self._lock: FileLock | None = None
        self._seen: FileState | None = None
        self._recovery_told = False
        self.path: Path | None = None
        self._copy_of: Path | None = None
        self._keep_timer = QTimer(self, singleShot=True, interval=_KEEP_AFTER_MS)
        self._keep_timer.timeout.connect(self.keep_recovery_copy)

    @property
    def title(self) -> str:
        """What the window's title calls the session."""
        if self.path is not None:
            return self.path.name
        if self._copy_of is not None:
            return f"Copy of {self._copy_of.name}"
        return self._session.title or "Untitled session"

    def new(self) -> None:
        """Start an empty session."""
        if self.may_drop_session():
            self._take_over(self._settings.new_session(), None)

    def open_by_dialog(self) -> None:
        """Ask for a file and open it."""
        name, _ = QFileDialog.getOpenFileName(
            self._window, "Open", self._folder(), f"{ANY_FILTER};;{SESSION_FILTER};;{TABLE_FILTER};;All files (*)"
        )
        if name:
            self.open(Path(name))

    def open(self, path: Path) -> bool:
        """Open a session or a table in the place of what is shown; say why where that cannot be."""
        opened = self._opened(path) if self.may_drop_session() else None
        if opened is None:
            return False
        self._settings.note_recent(path)
        if not opened.is_session:
            for unit_set in opened.session.sets:
                unit_set.basis = self._settings.preferred(unit_set.basis)
        self._take_over(opened.session, path if opened.is_session else None, opened.seen)
        if opened.understood is not None:
            self.table_opened.emit(opened.understood, 0)
        return True

    def open_copy(self, path: Path) -> bool:
        """Open a session without its file (a sample set): saving asks for a place of its own."""
        opened = self._opened(path) if self.may_drop_session() else None
        if opened is None:
            return False
        self._take_over(opened.session, None)
        if opened.session.notes:
            self._messages.say(Severity.NOTE, opened.session.notes)
        return True

    def add_sets_by_dialog(self) -> None:
        """Ask for a file and add its sets to the session."""
        name, _ = QFileDialog.getOpenFileName(self._window, "Add sets from a file", self._folder(), ANY_FILTER)
        if name:
            self.add_sets(Path(name))

    def add_sets(self, path: Path) -> None:
        """Add the sets of a session or a table, each as one undoable step."""
        session = self._session
        is_empty = all(unit_set.table.row_count == 0 for unit_set in session.sets)
        opened = self._opened(path, session_unit=None if is_empty else session.life_unit)
        if opened is None:
            return
        if opened.session.life_unit != session.life_unit:
            self._bring_unit(opened.session.life_unit, is_empty=is_empty, said=not _says_no_unit(opened))
        for found in opened.session.sets:
            sets = self._session.sets
            colour = first_free([other.colour for other in sets])
            new = replace(found, name=free_name(self._session, found.name), colour=colour)
            self._undo.push_edit(self._session, AddSet(len(sets), new))
        if opened.understood is not None:
            self.table_opened.emit(opened.understood, len(self._session.sets) - 1)

    def _bring_unit(self, unit: str, *, is_empty: bool, said: bool) -> None:
        """Take over the unit of lives that sets bring along, or say that it differs."""
        if not said:
            return
        if is_empty:
            self._undo.push_edit(self._session, ChangeLifeUnit(self._session.life_unit, unit))
        else:
            self._messages.say(Severity.CAUTION, other_unit(unit, self._session.life_unit))

    def _opened(self, path: Path, *, session_unit: str | None = None) -> Opened | None:
        """Read a file, or say why it cannot be read and forget it among the recent ones."""
        try:
            act = partial(open_file, path, session_unit=session_unit)
            return wait_for(act) if _is_large(path) else act()
        except RigpaperError as trouble:
            self._messages.say(Severity.SERIOUS, str(trouble))
            self._settings.forget_recent(path.absolute())
            return None

    def recover(self, copy: FoundCopy) -> bool:
        """Take over the unsaved work of a window that ended without closing."""
        try:
            session = copy.load()
        except RigpaperError as trouble:
            self._messages.say(Severity.SERIOUS, str(trouble))
            return False
        self._take_over(session, copy.original)
        if copy.original_is_newer:
            said = f"{copy.original} was changed after this unsaved work: compare the two before you save."
            self._messages.say(Severity.CAUTION, said)
        self._undo.resetClean()
        copy.remove()
        self.keep_recovery_copy()
        return True

    def save(self) -> bool:
        """Save to the session's file, or ask for one."""
        self._finish_entry()
        return self.save_as() if self.path is None else self._save_to(self.path)

    def save_as(self) -> bool:
        """Ask for a file and save there."""
        self._finish_entry()
        stem = f"{self._copy_of.stem} copy" if self._copy_of else self._session.title or "session"
        suggested = Path(self._folder()) / f"{stem}{SUFFIX}"
        start = str(self.path or suggested)
        name, _ = QFileDialog.getSaveFileName(self._window, "Save session as", start, SESSION_FILTER)
        if not name:
            return False
        path = Path(name)
        return self._save_to(path if path.suffix else path.with_suffix(SUFFIX))

    def may_drop_session(self) -> bool:
        """Ask whether unsaved work is to be saved; True when it is safe or may be dropped."""
        self._finish_entry()
        if self._undo.isClean():
            return True
        answer = QMessageBox.question(
            self._window,
            "Unsaved work",
            f"{self.title} has changes that are not saved. Save them?",
            Answer.Save | Answer.Discard | Answer.Cancel,
            Answer.Save,
        )
        if answer == Answer.Save:
            return self.save()
        return answer == Answer.Discard

    def note_edit(self) -> None:
        """Have unsaved work kept soon."""
        if not self._keep_timer.isActive():
            self._keep_timer.start()

    @property
    def has_unsaved_work(self) -> bool:
        """Whether anything would be lost if the program ended now."""
        return not self._undo.isClean()

    def keep_recovery_copy(self) -> bool:
        """Write the recovery copy now, or remove it when all is saved; False for trouble, which is told once."""
        try:
            if self._undo.isClean():
                self._recovery.discard()
            else:
                self._recovery.keep(self._session, self.path)
        except RigpaperError as trouble:
            if not self._recovery_told:
                self._recovery_told = True
                self._messages.say(Severity.CAUTION, str(trouble))
            return False
        return True

    def close(self) -> None:
        """Give back the file and remove the recovery copy: the window closes in order."""
        self._keep_timer.stop()
        self._recovery.discard()
        self._release()

    def _save_to(self, path: Path) -> bool:
        try:
            self._hold(path)
            self._seen = save(self._session, path, seen=self._seen if path == self.path else None)
        except ChangedMeanwhile as trouble:
            self._seen = None  # told once: saving again is meant
            self._messages.say(Severity.SERIOUS, str(trouble))
            return False
        except RigpaperError as trouble:
            self._messages.say(Severity.SERIOUS, str(trouble))
            return False
        self.path, self._copy_of = path, None
        self._settings.note_recent(path)
        self._undo.setClean()
        self.keep_recovery_copy()
        self.path_changed.emit()
        self.saved.emit()
        return True

    def _take_over(self, session: Session, path: Path | None, seen: FileState | None = None) -> None:
        self._release()
        self._seen = seen
        self.path, self._copy_of = path, None
        if path is not None:
            try:
                self._hold(path)
            except FileInUse as in_use:
                self.path, self._copy_of = None, path
                self._messages.say(Severity.CAUTION, str(in_use))
        self._undo.clear()
        self._session.replace_with(session)
        self.keep_recovery_copy()
        self.path_changed.emit()

    def _hold(self, path: Path) -> None:
        if self._lock is not None and self._lock.path == path:
            return
        lock = FileLock(path)
        lock.take()
        self._release()
        self._lock = lock

    def _release(self) -> None:
        if self._lock is not None:
            self._lock.release()
            self._lock = None

    def _folder(self) -> str:
        beside = self.path or self._copy_of
        return str(beside.parent) if beside is not None else ""


def _says_no_unit(opened: Opened) -> bool:
    return opened.understood is not None and not opened.understood.life_unit


def _is_large(path: Path) -> bool:
    try:
        return path.stat().st_size > _LARGE_BYTES
    except (OSError, ValueError):
        return False  # whoever opens it will say what is wrong
