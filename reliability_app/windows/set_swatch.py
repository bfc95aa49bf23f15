"""The swatch of a set: its line and mark as the charts draw them, small enough for lists, menus and headings."""

from __future__ import annotations

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QColor, QIcon, QPainter, QPalette, QPen, QPixmap, QPolygonF

from reliability_app.reports.mark_paths import mark_path
from reliability_app.reports.series_looks import DASHES, SYMBOLS, Dash
from reliability_app.windows.theme import theme_of

_DASH_WORDS: dict[Dash, str] = {
    "solid": "solid",
    "dash": "dashed",
    "dash dot": "dash-dotted",
    "dot": "dotted",
    "dash dot dot": "dash-dot-dotted",
}
_SCALE = 2  # so that it is sharp on screens of high resolution
WIDTH, HEIGHT = 28, 14


def swatch(colour: int, palette: QPalette, *, hidden: bool = False) -> QIcon:
    """Return the look of a colour index under a palette; a hidden set is pale."""
    theme = theme_of(palette)
    style = theme.style(colour)
    picture = QPixmap(WIDTH * _SCALE, HEIGHT * _SCALE)
    picture.setDevicePixelRatio(_SCALE)
    picture.fill(Qt.GlobalColor.transparent)
    painter = QPainter(picture)
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setOpacity(0.35 if hidden else 1.0)
    painter.setPen(QPen(QColor(style.colour), 2.0, style.dash))
    painter.drawPolyline(QPolygonF([QPointF(0, HEIGHT / 2), QPointF(WIDTH, HEIGHT / 2)]))
    painter.translate(WIDTH / 2, HEIGHT / 2)
    painter.setPen(Qt.PenStyle.NoPen)
    painter.setBrush(QColor(style.colour))
    painter.drawPath(mark_path(SYMBOLS[colour % len(SYMBOLS)], HEIGHT * 0.72))
    painter.end()
    return QIcon(picture)


def look_in_words(colour: int) -> str:
    """Return what a colour index is called: its marks and its line, which say the same as the colour."""
    place = colour % len(SYMBOLS)
    return f"{SYMBOLS[place].capitalize()} marks, {_DASH_WORDS[DASHES[place]]} line"
