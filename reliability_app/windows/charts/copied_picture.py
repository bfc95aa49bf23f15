"""Puts a statement below the image of a chart, so that a picture pasted elsewhere still says what it rests on."""

from __future__ import annotations

from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QImage, QPainter

from reliability_app.windows.theme import Theme

_MARGIN = 10.0
_WRAPPED = Qt.TextFlag.TextWordWrap | Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop


def with_foot(chart: QImage, text: str, theme: Theme, font: QFont) -> QImage:
    """Return the image of a chart with wrapped text below it; the chart alone where there is none."""
    if not text:
        return chart
    scale = chart.devicePixelRatio()
    width, height = chart.width() / scale, chart.height() / scale
    room = QRectF(_MARGIN, 0.0, width - 2.0 * _MARGIN, 1e4)
    foot = QFontMetricsF(font).boundingRect(room, _WRAPPED.value, text).height()
    image = QImage(chart.width(), round((height + foot + 2.0 * _MARGIN) * scale), QImage.Format.Format_RGB32)
    image.setDevicePixelRatio(scale)
    image.fill(QColor(theme.background))
    painter = QPainter(image)
    painter.drawImage(0, 0, chart)
    painter.setFont(font)
    painter.setPen(QColor(theme.foreground))
    painter.drawText(QRectF(_MARGIN, height + _MARGIN, room.width(), foot), _WRAPPED.value, text)
    painter.end()
    return image
