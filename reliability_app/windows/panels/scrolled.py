"""Puts a panel into an area that scrolls where the page is too low for it, instead of making the window taller."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QScrollArea, QWidget


def scrolled(panel: QWidget) -> QScrollArea:
    """Return the area that holds the panel; it is as low as it must be."""
    area = QScrollArea()
    area.setWidgetResizable(True)
    area.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # what stands in it has the focus, and is scrolled to
    area.setFrameShape(QScrollArea.Shape.NoFrame)
    area.setWidget(panel)
    return area
