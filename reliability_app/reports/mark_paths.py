"""The marks of units as paths of size one around the origin, y downwards."""

from __future__ import annotations

from math import cos, pi, sin

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QPainterPath, QTransform

from reliability_app.reports.series_looks import Symbol

_CORNERS: dict[Symbol, list[tuple[float, float]]] = {
    "square": [(-0.5, -0.5), (0.5, -0.5), (0.5, 0.5), (-0.5, 0.5)],
    "triangle": [(-0.5, 0.5), (0.0, -0.5), (0.5, 0.5)],
    "triangle down": [(-0.5, -0.5), (0.0, 0.5), (0.5, -0.5)],
    "diamond": [(0.0, -0.5), (-0.4, 0.0), (0.0, 0.5), (0.4, 0.0)],
    "pentagon": [(-0.5 * sin(0.4 * pi * k), -0.5 * cos(0.4 * pi * k)) for k in range(5)],
    "hexagon": [(0.5 * sin(pi * k / 3), -0.5 * cos(pi * k / 3)) for k in range(6)],
}


def mark_path(symbol: Symbol, size: float) -> QPainterPath:
    """Return the path of a mark."""
    path = QPainterPath()
    if symbol == "round":
        path.addEllipse(QRectF(-0.5, -0.5, 1.0, 1.0))
    elif symbol == "upright tick":
        path.moveTo(0.0, -0.5)
        path.lineTo(0.0, 0.5)
    else:
        first, *others = (QPointF(*corner) for corner in _CORNERS[symbol])
        path.moveTo(first)
        for corner in others:
            path.lineTo(corner)
        path.closeSubpath()
    return QTransform.fromScale(size, size).map(path)
