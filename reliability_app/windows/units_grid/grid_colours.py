"""The few colours of the grid beyond the system's own, mixed from the palette so that light and dark both work."""

from __future__ import annotations

from dataclasses import dataclass

from PySide6.QtGui import QBrush, QColor, QPalette

# Okabe-Ito vermilion, and its lighter relative for dark backgrounds; the marks say the same by shape.
_FAULT_ON_LIGHT = QColor("#c24a00")
_FAULT_ON_DARK = QColor("#ff9052")
_FAULT_TINT = 0.16
_UNREAD_TINT = 0.05


@dataclass(frozen=True)
class GridColours:
    """Brushes for cells: the background of a faulty cell and of the rest of its row, the fault mark, quiet text."""

    fault: QBrush
    unread: QBrush
    mark: QColor
    quiet: QBrush

    @classmethod
    def of(cls, palette: QPalette) -> GridColours:
        """Mix the colours for `palette`."""
        base = palette.color(QPalette.ColorRole.Base)
        mark = _FAULT_ON_DARK if base.lightness() < 128 else _FAULT_ON_LIGHT
        return cls(
            fault=QBrush(mixed(base, mark, _FAULT_TINT)),
            unread=QBrush(mixed(base, mark, _UNREAD_TINT)),
            mark=mark,
            quiet=QBrush(mixed(base, palette.color(QPalette.ColorRole.Text), 0.55)),
        )


def mixed(under: QColor, over: QColor, share: float) -> QColor:
    """Mix `share` (0 to 1) of `over` into `under`."""
    red, green, blue = (
        round(below + (above - below) * share)
        for below, above in (
            (under.red(), over.red()),
            (under.green(), over.green()),
            (under.blue(), over.blue()),
        )
    )
    return QColor(red, green, blue)
