"""Lets Qt measure and draw letters where no window is wanted, on a machine with a screen or without one."""

from __future__ import annotations

import sys

from PySide6.QtCore import QCoreApplication
from PySide6.QtGui import QGuiApplication


def application_for_pictures() -> QCoreApplication:
    """Return the running application, or a new one without windows; the caller holds it while drawing."""
    running = QCoreApplication.instance()
    if running is not None:
        return running
    # Elsewhere than on Linux the usual platform needs no window, and has the system's fonts where this one has not.
    quiet = ["-platform", "offscreen"] if sys.platform == "linux" else []
    return QGuiApplication(["rigpaper", *quiet])
