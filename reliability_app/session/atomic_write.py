"""Writes a file whole or not at all: whatever happens meanwhile, the old file or the new one is there."""

from __future__ import annotations

import os
import secrets
import shutil
import stat
import time
from contextlib import suppress
from pathlib import Path

_SUFFIX = ".rigpaper-saving"
_ABANDONED_AFTER = 3600.0
"""Seconds after which a temporary file is taken to be left over from a program that was killed."""


def write_whole(path: Path, data: bytes, *, backup: Path | None = None) -> None:
    """Put `data` in the place of the file at `path`, keeping its owner and mode.

    Parameters
    ----------
    path : Path
        No symbolic link: the link itself would be replaced.
    data : bytes
    backup : Path, optional
        Where the previous state, if there is one, stays; a backup from before goes.

    Raises
    ------
    OSError
        When it cannot be done; `path` is then as it was.
    """
    _remove_abandoned(path.parent)
    temporary = _temporary(path)
    try:
        _write_through(temporary, data, like=path)
        if backup is not None and path.exists():
            _keep(path, backup)
        os.replace(temporary, path)
    except BaseException:
        with suppress(OSError):
            temporary.unlink()
        raise
    _sync_folder(path.parent)


def _temporary(path: Path) -> Path:
    # In the same folder, because only within one file system is a rename atomic.
    return path.with_name(f".{path.name[:40]}.{secrets.token_hex(4)}{_SUFFIX}")


def _write_through(temporary: Path, data: bytes, *, like: Path) -> None:
    # Not tempfile.mkstemp: it makes files that only their owner reads, whatever the user's umask says.
    descriptor = os.open(temporary, os.O_WRONLY | os.O_CREAT | os.O_EXCL, 0o666)
    with open(descriptor, "wb") as file:
        with suppress(FileNotFoundError):
            _take_over_owner_and_mode(descriptor, os.stat(like))
        file.write(data)
        file.flush()
        os.fsync(descriptor)


def _take_over_owner_and_mode(descriptor: int, status: os.stat_result) -> None:
    # Only root may give files away, and some network disks know no modes: neither is a reason not to save.
    with suppress(OSError):
        os.fchown(descriptor, status.st_uid, status.st_gid)
    with suppress(OSError):
        os.fchmod(descriptor, stat.S_IMODE(status.st_mode))


def _keep(path: Path, backup: Path) -> None:
    temporary = _temporary(backup)
    try:
        try:
            os.link(path, temporary)  # costs no space and no time; not every file system has it
        except OSError:
            shutil.copy2(path, temporary)
        os.replace(temporary, backup)
    except BaseException:
        with suppress(OSError):
            temporary.unlink()
        raise


def _sync_folder(folder: Path) -> None:
    # The file itself is safe by now; some network file systems cannot flush a folder.
    with suppress(OSError):
        descriptor = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(descriptor)
        finally:
            os.close(descriptor)


def _remove_abandoned(folder: Path) -> None:
    for left_over in folder.glob(f".*{_SUFFIX}"):
        with suppress(OSError):
            if time.time() - left_over.stat().st_mtime > _ABANDONED_AFTER:
                left_over.unlink()
