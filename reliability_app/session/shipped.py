"""Finds the folders that ship with the program, installed or run from a checkout."""

from __future__ import annotations

from pathlib import Path

from reliability_app.engine.errors import RigpaperError

_PACKAGE = Path(__file__).resolve().parent.parent


def shipped(name: str) -> Path:
    """Give the folder `name`: "resources" or "sample_sets".

    Raises
    ------
    RigpaperError
        When the installation is incomplete.
    """
    # A wheel holds the folders inside the package; in a checkout they stand beside it.
    for folder in (_PACKAGE / "shipped" / name, _PACKAGE.parent / name):
        if folder.is_dir():
            return folder
    raise RigpaperError(
        f"The folder {name} that comes with Rigpaper is missing from {_PACKAGE}. Install Rigpaper again."
    )
