"""The errors of reading and writing session files, and how a place and a reason are told in plain words.

RigpaperError
├── SessionUnreadable    a file that cannot be opened as a session; it stays as it was
│   └── NewerVersion     a session that a newer version of the program has saved
├── NotSaved             a session that could not be written; the file on disk is as it was
│   └── ChangedMeanwhile a file that another program has changed since it was opened here
└── FileInUse            (file_lock.py) a file that another window has open
"""

from __future__ import annotations

import errno
import re

import msgspec

from reliability_app.engine.errors import RigpaperError

_LONGEST = 300
"""Characters of a reason or place, which may quote what a hostile file holds."""


class SessionUnreadable(RigpaperError):
    """A file that cannot be opened as a session.

    Parameters
    ----------
    source : str
        The file, as the user knows it.
    reason : str
        What is wrong, as a clause without a full stop.
    place : str
        Where in the file: "line 12" or "$.sets[0].units[3].life"; empty when the whole file is meant.
    advice : str
        What to do now, as a sentence; a general one stands in where there is none.
    """

    def __init__(self, source: str, reason: str, *, place: str = "", advice: str = "") -> None:
        super().__init__(source, reason, place, advice)
        self.source = source
        self.reason = _shortened(reason)
        self.place = _shortened(place)
        self.advice = advice

    def __str__(self) -> str:
        if self.place:
            where, usual = f" ({self.place})", "Nothing was changed in it: correct that place in a text editor."
        else:
            where, usual = "", "Put that right, or choose another file."
        return f"{self.source} cannot be opened: {self.reason}{where}. {self.advice or usual}"


def _shortened(text: str) -> str:
    return text if len(text) <= _LONGEST else text[:_LONGEST] + " ..."


class NewerVersion(SessionUnreadable):
    """A session saved by a newer version of the program than this one."""


class NotSaved(RigpaperError):
    """A session that could not be written; what was on disk before is still there."""


class ChangedMeanwhile(NotSaved):
    """A file that another program has changed since it was opened or last saved here."""


_TYPES = {
    "object": "an object in braces",
    "array": "a list in brackets",
    "str": "text in quotes",
    "int": "a whole number",
    "float": "a number",
    "bool": "true or false",
    "null": "null",
}


def plain_reason(error: msgspec.ValidationError) -> tuple[str, str]:
    """Turn what the validating library says into a clause in plain words and the place in the file."""
    said, _, place = str(error).partition(" - at `")
    place = place.removesuffix("`") or "$"
    if wrong := re.fullmatch(r"Expected `(.+)`, got `(.+)`", said):
        return f"{_types(wrong[1])} should stand here, not {_types(wrong[2])}", place
    if missing := re.fullmatch(r"Object missing required field `(.+)`", said):
        return f'the key "{missing[1]}" is missing', place
    if limit := re.fullmatch(r"Expected `(.+)` (>|<|>=|<=) (.+)", said):
        return f"{_types(limit[1])} {limit[2]} {limit[3]} should stand here", place
    if unknown := re.fullmatch(r"Invalid (?:enum )?value (.+)", said):
        return f"the value {unknown[1]} is not one that this program knows", place
    return said[:1].lower() + said[1:], place


def _types(names: str) -> str:
    return " or ".join(_TYPES.get(name, name) for name in names.split(" | "))


_REASONS = {
    errno.ENOSPC: "the disk is full",
    errno.EDQUOT: "your share of the disk is used up",
    errno.EFBIG: "the system does not let the file grow that large",
    errno.EROFS: "that disk can only be read",
    errno.EACCES: "you are not allowed to",
    errno.EPERM: "you are not allowed to",
    errno.ENOENT: "there is no such file or folder",
    errno.ENOTDIR: "part of its path is a file, not a folder",
    errno.EISDIR: "it is a folder",
    errno.ENAMETOOLONG: "the name is too long",
    errno.ELOOP: "its symbolic links lead in a circle",
}


def system_reason(error: OSError) -> str:
    """Say as a clause why the system refused to read or write."""
    return _REASONS.get(error.errno or 0, str(error.strerror or error))
