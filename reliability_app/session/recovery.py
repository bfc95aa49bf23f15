"""Recovery copies: unsaved work kept in the user's state folder, found again at the start after a crash.

A copy is one line that says which file it belongs to, and then the text of a session file. While its window
is alive the copy is locked (file_lock.py), so what can be locked by others belongs to a window that is gone.
"""

from __future__ import annotations

import json
import secrets
from contextlib import suppress
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from platformdirs import user_state_path

from reliability_app.session.document import Session
from reliability_app.session.file_lock import FileInUse, FileLock
from reliability_app.session.json_file import write_text
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.session_errors import NotSaved, SessionUnreadable, system_reason

_SUFFIX = ".recovery"


def recovery_folder() -> Path:
    """Give the folder of recovery copies, which need not exist yet."""
    return user_state_path("rigpaper", appauthor=False) / "recovery"


class RecoveryCopy:
    """The recovery copy of one window: `keep` it while work is unsaved, `discard` it when that is over."""

    def __init__(self, folder: Path | None = None) -> None:
        self._folder = folder if folder is not None else recovery_folder()
        self._path = self._folder / f"{secrets.token_hex(8)}{_SUFFIX}"
        self._lock = FileLock(self._path)

    def keep(self, session: Session, original: Path | None = None) -> None:
        """Write the copy, in the place of the one before; `original` is the file the session was opened from.

        Raises
        ------
        NotSaved
            When it cannot be written; the one before, if any, is still there.
        """
        head = json.dumps({"original": None if original is None else str(original.absolute())})
        try:
            self._folder.mkdir(mode=0o700, parents=True, exist_ok=True)
        except OSError as error:
            reason = f"{self._folder} cannot be made: {system_reason(error)}."
            raise NotSaved(f"No recovery copy is kept: {reason} Save your work often.") from error
        self._lock.take()
        write_text(f"{head}\n{to_text(session)}", self._path, backup=False)

    def discard(self) -> None:
        """Remove the copy, if there is one."""
        with suppress(OSError):
            self._path.unlink(missing_ok=True)
        self._lock.release()


@dataclass(frozen=True)
class FoundCopy:
    """A recovery copy whose window ended without closing it.

    `original` is the file its session was opened from or saved to, None if there was none; `written` the time of
    its last state.
    """

    path: Path
    original: Path | None
    written: datetime

    @property
    def original_is_newer(self) -> bool:
        """Whether the file it belongs to was changed after the copy was kept."""
        with suppress(OSError):
            return self.original is not None and self.original.stat().st_mtime > self.written.timestamp()
        return False

    def load(self) -> Session:
        """Give the session as it was last kept.

        Raises
        ------
        SessionUnreadable
        """
        try:
            text = self.path.read_text(encoding="utf-8")
        except (OSError, UnicodeDecodeError) as error:
            reason = system_reason(error) if isinstance(error, OSError) else "its text is not UTF-8"
            raise SessionUnreadable(str(self.path), reason) from error
        return from_text(text.partition("\n")[2], source=str(self.path))

    def remove(self) -> None:
        """Delete the copy: its work has been taken over, or is not wanted."""
        with suppress(OSError):
            self.path.unlink(missing_ok=True)


def found_copies(folder: Path | None = None) -> list[FoundCopy]:
    """Give the recovery copies left over by windows that are gone, the latest first."""
    folder = folder if folder is not None else recovery_folder()
    copies = []
    for path in folder.glob(f"*{_SUFFIX}"):
        with suppress(FileInUse, OSError), FileLock(path):
            written = datetime.fromtimestamp(path.stat().st_mtime).astimezone()
            copies.append(FoundCopy(path=path, original=_original(path), written=written))
    return sorted(copies, key=lambda copy: copy.written, reverse=True)


def _original(path: Path) -> Path | None:
    with path.open(encoding="utf-8", errors="replace") as file, suppress(ValueError, TypeError, KeyError):
        return Path(json.loads(file.readline(100_000))["original"])
    return None
