"""The size of all text: so many points larger or smaller than the system has it."""

from __future__ import annotations

from typing import cast

from PySide6.QtGui import QFont, QGuiApplication
from PySide6.QtWidgets import QApplication

SMALLEST_STEP, LARGEST_STEP = -2, 12
_SYSTEM_SIZE = "rigpaper_system_text_size"  # where the application keeps the size its text came with
_SMALLEST_TEXT = 6.0


def apply_text_step(step: int) -> None:
    """Make all text this many points larger than the system has it."""
    application = QGuiApplication.instance()
    if not isinstance(application, QApplication):
        return
    if application.property(_SYSTEM_SIZE) is None:
        application.setProperty(_SYSTEM_SIZE, application.font().pointSizeF())
    size = max(_SMALLEST_TEXT, cast(float, application.property(_SYSTEM_SIZE)) + step)
    font = QFont(application.font())
    if font.pointSizeF() != size:
        font.setPointSizeF(size)
        application.setFont(font)
