"""A label whose sentences wrap in whatever width there is, and which is as high as they then need."""

from __future__ import annotations

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLabel, QSizePolicy


def wrapped_label(text_format: Qt.TextFormat = Qt.TextFormat.PlainText) -> QLabel:
    """Make such a label; its text can be selected and copied."""
    label = QLabel()
    label.setTextFormat(text_format)
    label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
    policy = QSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Minimum)
    # A policy that is set anew forgets that the height depends on the width, and the last line is cut off.
    policy.setHeightForWidth(True)
    label.setWordWrap(True)
    label.setSizePolicy(policy)
    return label
