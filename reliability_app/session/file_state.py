"""Tells whether a file is still what it was when it was opened or saved, or another program has changed it since."""

from __future__ import annotations

import hashlib
import os
from contextlib import suppress
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path


@dataclass(frozen=True)
class FileState:
    """What a file held at one moment: its size, the time of its last change, and a digest of its bytes."""

    size: int
    changed_ns: int
    digest: bytes

    @classmethod
    def of(cls, path: Path) -> FileState | None:
        """Take the state of the file at `path`; None where there is none that can be read."""
        with suppress(OSError):
            status = os.stat(path)
            return cls(status.st_size, status.st_mtime_ns, _digest(path))
        return None

    def still_holds(self, path: Path) -> bool:
        """Say whether the file still holds the same; its bytes are compared only where its size or time differ.

        A file that has gone counts as the same: saving puts it back, and overwrites nobody's work.
        """
        try:
            status = os.stat(path)
        except FileNotFoundError:
            return True
        except OSError:
            return False
        if status.st_size != self.size:
            return False
        if status.st_mtime_ns == self.changed_ns:
            return True
        try:
            return _digest(path) == self.digest
        except OSError:
            return False


def changed_when(path: Path) -> str:
    """Give the time of the last change of a file, as "at 2026-03-02 14:05:10"; "" where it is not known."""
    with suppress(OSError):
        return f" at {datetime.fromtimestamp(os.stat(path).st_mtime):%Y-%m-%d %H:%M:%S}"
    return ""


def _digest(path: Path) -> bytes:
    with path.open("rb") as file:
        return hashlib.file_digest(file, hashlib.sha256).digest()
