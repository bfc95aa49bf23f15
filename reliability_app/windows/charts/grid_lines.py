"""The lines of the paper: one item that draws all of them at once, since lines are the main cost of a repaint."""

from __future__ import annotations

import pyqtgraph as pg
from PySide6.QtCore import QLineF, QRectF
from PySide6.QtGui import QColor, QPainter, QPen
from PySide6.QtWidgets import QGraphicsItem, QStyleOptionGraphicsItem, QWidget

from reliability_app.engine.paper import Tick
from reliability_app.windows.charts.round_axis import RoundAxis
from reliability_app.windows.theme import Theme

_BEHIND_EVERYTHING = -1000.0


class GridLines(QGraphicsItem):
    """Draws a line at every tick of two axes, behind everything else in the view.

    `fine` adds lines at the ticks without a label, as printed probability paper has them.
    """

    def __init__(self, view_box: pg.ViewBox, level: RoundAxis, upright: RoundAxis, *, fine: bool) -> None:
        super().__init__(view_box)
        self._level, self._upright = level, upright
        self._has_fine = fine
        self._grid, self._fine = QPen(), QPen()
        self._view_box = view_box
        self.setZValue(_BEHIND_EVERYTHING)
        view_box.sigRangeChanged.connect(self._moved)
        view_box.sigResized.connect(self._moved)

    def retheme(self, theme: Theme) -> None:
        """Take the colours of a theme."""
        self._grid, self._fine = QPen(QColor(theme.grid)), QPen(QColor(theme.fine_grid))
        self.update()

    def boundingRect(self) -> QRectF:
        """Return the whole of the view."""
        return QRectF(self._view_box.rect())

    def paint(self, painter: QPainter, _option: QStyleOptionGraphicsItem, _widget: QWidget | None = None) -> None:
        """Draw the fine lines, then those at labels, each on whole pixels."""
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
        (left, right), (low, high) = self._view_box.viewRange()
        area = self.boundingRect()
        across = area.width() / (right - left)
        along = area.height() / (high - low)

        def lines(major: bool) -> list[QLineF]:
            def of(ticks: list[Tick]) -> list[float]:
                return [tick.position for tick in ticks if tick.major == major]

            upright = [area.left() + (x - left) * across for x in of(self._level.shown_ticks())]
            level = [area.bottom() - (y - low) * along for y in of(self._upright.shown_ticks())]
            return [QLineF(x, area.top(), x, area.bottom()) for x in upright] + [
                QLineF(area.left(), y, area.right(), y) for y in level
            ]

        if self._has_fine:
            painter.setPen(self._fine)
            painter.drawLines(lines(major=False))
        painter.setPen(self._grid)
        painter.drawLines(lines(major=True))

    def _moved(self, *_: object) -> None:
        self.prepareGeometryChange()
        self.update()
