"""Saves and opens session files: never half a file, the previous state kept, refusals in sentences."""

from __future__ import annotations

import os
import stat
from pathlib import Path

from reliability_app.session.atomic_write import write_whole
from reliability_app.session.document import Session
from reliability_app.session.file_state import FileState, changed_when
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.session_errors import (
    ChangedMeanwhile,
    NewerVersion,
    NotSaved,
    SessionUnreadable,
    system_reason,
)

SUFFIX = ".json"
LARGEST = 500_000_000
"""Bytes of the largest file that is opened: some four million units. More would only fill the memory."""


def save(session: Session, path: Path, *, seen: FileState | None = None) -> FileState | None:
    """Write `session` to `path`, whole or not at all; the previous state stays beside it (see `backup_of`).

    A file that holds the very same already is left alone, so that its backup still tells of an earlier state.
    A symbolic link stays one: the file it leads to is written.

    Parameters
    ----------
    session : Session
    path : Path
    seen : FileState, optional
        What the file held when it was opened or last saved here. A file that holds something else by now was changed
        by another program, and is left alone.

    Returns
    -------
    FileState or None
        What it holds now, to be given at the next saving.

    Raises
    ------
    ChangedMeanwhile
        When another program has changed the file since it was seen.
    NotSaved
        When it could not be written; the file is then as it was.
    """
    text = to_text(session)
    if seen is not None and not seen.still_holds(path):
        raise ChangedMeanwhile(
            f"{path} was not saved: another program has changed it{changed_when(path)}, after it was opened here. "
            "Save your work under another name and compare the two, or save again over the other changes."
        )
    write_text(text, path, backup=True)
    return FileState.of(path)


def write_text(text: str, path: Path, *, backup: bool) -> None:
    """Write `text` to `path` as `save` does, with or without a backup.

    Raises
    ------
    NotSaved
    """
    target = Path(os.path.realpath(path))
    data = text.encode()
    try:
        if _holds_already(target, data):
            return
        write_whole(target, data, backup=backup_of(target) if backup else None)
    except OSError as error:
        kept = "The file there is as it was" if os.path.lexists(target) else "No file was written there"
        raise NotSaved(
            f"{path} was not saved: {system_reason(error)}. {kept}, and your work is still open here. "
            "Put that right and save again, or save it in another place."
        ) from error


def load(path: Path) -> Session:
    """Open the session file at `path`, which stays as it is.

    Raises
    ------
    SessionUnreadable
        When it is not there, may not be read, or is no session of a version this program knows.
    """
    try:
        return from_text(_read(path), source=str(path))
    except NewerVersion:
        raise
    except SessionUnreadable as error:
        backup = backup_of(Path(os.path.realpath(path)))
        if backup.is_file():
            error.advice = f"The state before its last saving is in {backup}: open that instead."
        raise


def load_and_note(path: Path) -> tuple[Session, FileState | None]:
    """Open the session file at `path`, and note what it holds, for `save` to compare with; errors as `load`."""
    seen = FileState.of(path)  # before it is read: a change in between is then told at the next saving
    return load(path), seen


def backup_of(path: Path) -> Path:
    """Give the place where the previous state of the file at `path` stays when it is saved."""
    return path.with_name(path.name + "~")


def is_session_file(path: Path) -> bool:
    """Say, by its name or first character, whether `path` is to be opened as a session and not as a table."""
    if path.name.lower().endswith((SUFFIX, SUFFIX + "~")):
        return True
    if not path.is_file():  # opening a pipe would wait
        return False
    try:
        with path.open("rb") as file:
            return file.read(64).removeprefix(b"\xef\xbb\xbf").lstrip().startswith(b"{")
    except OSError:
        return False


def _holds_already(target: Path, data: bytes) -> bool:
    """Say whether the file at `target` is `data` already; refuse (OSError) what must not be replaced."""
    try:
        mode = os.stat(target).st_mode
        if not (stat.S_ISREG(mode) or stat.S_ISDIR(mode)):  # a rename would replace even /dev/null
            raise OSError(0, "it is a device or pipe")
        # For writing too: a rename would replace even a write-protected file without asking.
        with target.open("r+b") as file:
            return os.fstat(file.fileno()).st_size == len(data) and file.read() == data
    except FileNotFoundError:
        return False


def _read(path: Path) -> str:
    try:
        status = os.stat(path)
        if not stat.S_ISREG(status.st_mode):
            kind = "a folder" if stat.S_ISDIR(status.st_mode) else "a device or pipe"
            raise SessionUnreadable(str(path), f"it is {kind}, not a file")
        if status.st_size > LARGEST:
            reason = f"it holds {status.st_size:,} bytes, and no session above {LARGEST:,} bytes is opened"
            raise SessionUnreadable(str(path), reason)
        data = path.read_bytes()
    except OSError as error:
        raise SessionUnreadable(str(path), system_reason(error)) from error
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        newlines = data.count(b"\n", 0, error.start)
        raise SessionUnreadable(
            str(path), "its text is not UTF-8, so it is no session", place=f"line {newlines + 1}"
        ) from None
