"""The list of cautions beside the readings, worst first, with a mark that says the severity without colour."""

from __future__ import annotations

from collections.abc import Sequence
from html import escape

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QLabel, QScrollArea, QWidget

from reliability_app.engine.cautions import Caution, Severity

_MARKS = {Severity.SERIOUS: "‼", Severity.CAUTION: "!", Severity.NOTE: "·"}


class CautionsView(QScrollArea):
    """Shows cautions as selectable text."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._label = QLabel()
        self._label.setWordWrap(True)
        self._label.setAlignment(Qt.AlignmentFlag.AlignTop)
        self._label.setTextFormat(Qt.TextFormat.RichText)
        self._label.setMargin(4)
        self._label.setAccessibleName("Cautions")
        self._label.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.setAccessibleName("Cautions")
        self.setWidget(self._label)
        self.setWidgetResizable(True)
        self.setFrameShape(QFrame.Shape.NoFrame)

    def show_cautions(self, cautions: Sequence[Caution]) -> None:
        """Show these cautions in the order given."""
        rows = "".join(_row(caution) for caution in cautions)
        self._label.setText(f"<table cellspacing='0' cellpadding='2'>{rows}</table>" if rows else "")

    def text(self) -> str:
        """Return what is shown, as rich text."""
        return self._label.text()


def _row(caution: Caution) -> str:
    text = escape(caution.text)
    if caution.severity is Severity.SERIOUS:
        text = f"<b>{text}</b>"
    return f"<tr><td><b>{_MARKS[caution.severity]}</b>&nbsp;</td><td>{text}</td></tr>"
