"""Tells a second window that a file is open in a first one, also on another machine that shares the folder.

The system's own lock on a small hidden file beside the session is what counts: it ends with the process that
holds it, however that ends, so a lock never outlives its owner. What the file says only feeds the message.
"""

from __future__ import annotations

import json
import os
import platform
import sys
from contextlib import suppress
from datetime import datetime
from pathlib import Path
from types import TracebackType

from reliability_app.engine.errors import RigpaperError


class FileInUse(RigpaperError):
    """Another window has the file open."""


class FileLock:
    """The right of one window to save to the file at `path`; two names of one file (symbolic links) are one.

    Use it as a context manager, or call `take` and `release`.
    """

    def __init__(self, path: Path) -> None:
        target = Path(os.path.realpath(path))
        self.path = path
        self._lock_file = target.with_name(f".{target.name}.lock")
        self._descriptor: int | None = None

    @property
    def held(self) -> bool:
        """Whether this object holds the lock now."""
        return self._descriptor is not None

    def take(self) -> None:
        """Take the lock.

        Where none can be made (a folder that can only be read, a file system without locks) nothing is raised
        and the lock is not held afterwards: whether saving works there is for saving to find out.

        Raises
        ------
        FileInUse
            When another window, of this or another process, holds it.
        """
        while not self.held:
            try:
                descriptor = _open(self._lock_file)
            except OSError:
                return
            try:
                _lock(descriptor)
            except BlockingIOError:
                raise FileInUse(self._refusal(descriptor)) from None
            except OSError:
                return
            else:
                # Its last holder may have removed the hidden file between the opening and the locking.
                if _is_still(self._lock_file, descriptor):
                    self._descriptor = descriptor
                    self._note_holder(descriptor)
            finally:
                if self._descriptor != descriptor:
                    os.close(descriptor)

    def release(self) -> None:
        """Give the lock back, if it is held."""
        if self._descriptor is not None:
            with suppress(OSError):
                self._lock_file.unlink()
            os.close(self._descriptor)
            self._descriptor = None

    def __enter__(self) -> FileLock:
        self.take()
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.release()

    def _note_holder(self, descriptor: int) -> None:
        now = datetime.now().astimezone().isoformat(timespec="seconds")
        holder = {"host": platform.node(), "process": os.getpid(), "since": now}
        with suppress(OSError):  # on a full disk the lock holds all the same
            os.ftruncate(descriptor, 0)
            os.write(descriptor, json.dumps(holder).encode())

    def _refusal(self, descriptor: int) -> str:
        since = ""
        with suppress(OSError, ValueError, KeyError, TypeError):
            holder = json.loads(os.pread(descriptor, 1000, 0))
            where = "" if holder["host"] == platform.node() else f" on {holder['host']}"
            since = f"{where}, since {datetime.fromisoformat(holder['since']):%Y-%m-%d %H:%M}"
        return (
            f"{self.path} is open in another window already{since}. What is shown here is a copy: "
            "to change the file itself, close the other window first, or save this copy under another name."
        )


def _open(path: Path) -> int:
    try:
        return os.open(path, os.O_RDWR | os.O_CREAT, 0o666)
    except PermissionError:
        return os.open(path, os.O_RDONLY)  # another user's, in a shared folder; it can be locked all the same


def _lock(descriptor: int) -> None:
    """Lock the open file for this descriptor alone; BlockingIOError when another one has it."""
    if sys.platform == "win32":
        import msvcrt

        try:
            msvcrt.locking(descriptor, msvcrt.LK_NBLCK, 1)
        except OSError as error:
            raise BlockingIOError(*error.args) from None
    else:
        import fcntl

        fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)


def _is_still(path: Path, descriptor: int) -> bool:
    try:
        return os.path.samestat(os.stat(path), os.fstat(descriptor))
    except FileNotFoundError:
        return False
