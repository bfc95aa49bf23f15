"""The errors of opening a file as a table."""

from __future__ import annotations

from reliability_app.engine.errors import RigpaperError


class TableUnreadable(RigpaperError):
    """A file that cannot be opened as a table."""


class NoSuchSheet(TableUnreadable):
    """A sheet was named that the file does not have."""
