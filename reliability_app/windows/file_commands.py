"""New, open, save and the rest of the File menu; nothing unsaved is dropped without asking."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QObject, QTimer, Signal
from PySide6.QtWidgets import QFileDialog, QMessageBox, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import Session, UnitSet
from reliability_app.session.edits import AddSet
from reliability_app.session.file_lock import FileInUse, FileLock
from reliability_app.session.json_file import SUFFIX, save
from reliability_app.session.messages import Messages
from reliability_app.session.opening import Opened, open_file
from reliability_app.session.recovery import FoundCopy, RecoveryCopy
from reliability_app.windows.set_bar import first_free, free_name
from reliability_app.windows.settings import WindowSettings
from reliability_app.windows.undo import UndoStack

SESSION_FILTER = "Rigpaper sessions (*.json)"
TABLE_FILTER = "Tables of units (*.csv *.tsv *.txt)"
ANY_FILTER = "Sessions and tables (*.json *.csv *.tsv *.txt)"
# Unsaved work is kept this long after the latest edit, so that a burst of edits is written once.
_KEEP_AFTER_MS = 1500

Answer = QMessageBox.StandardButton


class FileCommands(QObject):
    """Knows which file the session belongs to, and moves sessions between files and the window.

    `finish_entry` is called first by whatever needs the session as the user sees it: it takes a half-typed cell in.
    """

    path_changed = Signal()

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
            self._take_over(Session(), None)

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
        self._take_over(opened.session, path if opened.is_session else None)
        self._say_remarks(opened)
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
        opened = self._opened(path)
        if opened is None:
            return
        for found in opened.session.sets:
            sets = self._session.sets
            colour = first_free([other.colour for other in sets])
            new = UnitSet(free_name(self._session, found.name), found.table, found.basis, colour, found.kept)
            self._undo.push_edit(self._session, AddSet(len(sets), new))
        self._say_remarks(opened)

    def _opened(self, path: Path) -> Opened | None:
        """Read a file, or say why it cannot be read and forget it among the recent ones."""
        try:
            return open_file(path)
        except RigpaperError as trouble:
            self._messages.say(Severity.SERIOUS, str(trouble))
            self._settings.forget_recent(path.absolute())
            return None

    def _say_remarks(self, opened: Opened) -> None:
        if opened.remarks:
            self._messages.say(Severity.NOTE, " ".join(opened.remarks))

    def recover(self, copy: FoundCopy) -> bool:
        """Take over the unsaved work of a window that ended without closing."""
        try:
            session = copy.load()
        except RigpaperError as trouble:
            self._messages.say(Severity.SERIOUS, str(trouble))
            return False
        self._take_over(session, copy.original)
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
        self._keep_timer.start()

    def keep_recovery_copy(self) -> None:
        """Write the recovery copy now, or remove it when all is saved; trouble is told once."""
        try:
            if self._undo.isClean():
                self._recovery.discard()
            else:
                self._recovery.keep(self._session, self.path)
        except RigpaperError as trouble:
            if not self._recovery_told:
                self._recovery_told = True
                self._messages.say(Severity.CAUTION, str(trouble))

    def close(self) -> None:
        """Give back the file and remove the recovery copy: the window closes in order."""
        self._keep_timer.stop()
        self._recovery.discard()
        self._release()

    def _save_to(self, path: Path) -> bool:
        try:
            self._hold(path)
            save(self._session, path)
        except RigpaperError as trouble:
            self._messages.say(Severity.SERIOUS, str(trouble))
            return False
        self.path, self._copy_of = path, None
        self._settings.note_recent(path)
        self._undo.setClean()
        self.keep_recovery_copy()
        self.path_changed.emit()
        return True

    def _take_over(self, session: Session, path: Path | None) -> None:
        self._release()
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
