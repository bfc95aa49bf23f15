"""The legend: colour, mark and dash of each set beside its name, in a quiet corner of the view."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

import pyqtgraph as pg
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter
from PySide6.QtWidgets import QGraphicsItem, QStyleOptionGraphicsItem, QWidget

from reliability_app.windows.theme import SeriesStyle, Theme

Corner = Literal["left", "right"]

_SAMPLE = 30.0
_GAP = 8.0
_MARGIN = 10.0
_LONGEST_NAME = 30  # characters of average width
_IN_FRONT = 40.0


@dataclass(frozen=True)
class LegendEntry:
    """A set's name and the way it is drawn."""

    name: str
    style: SeriesStyle


class Legend(QGraphicsItem):
    """Draws the entries in an upper corner of the view; hidden with fewer than two."""

    def __init__(self, view_box: pg.ViewBox, corner: Corner) -> None:
        super().__init__(view_box)
        self._view_box, self._corner = view_box, corner
        self._entries: tuple[LegendEntry, ...] = ()
        self._font = QFont()
        self._ink, self._ground = QColor(), QColor()
        self._mark_size = 8.0
        self.setZValue(_IN_FRONT)
        self.setVisible(False)
        view_box.sigResized.connect(self._moved)

    @property
    def names(self) -> tuple[str, ...]:
        """The names shown, top to bottom."""
        return tuple(entry.name for entry in self._entries) if self.isVisible() else ()

    def show_entries(self, entries: Sequence[LegendEntry]) -> None:
        """Show one line for each set."""
        self._entries = tuple(entries)
        self.setVisible(len(entries) > 1)
        self._moved()

    def dress(self, theme: Theme, font: QFont, mark_size: float) -> None:
        """Take theme, font and the size of the marks."""
        self._ink, self._ground = QColor(theme.foreground), QColor(theme.background)
        self._font, self._mark_size = QFont(font), mark_size
        self._moved()

    def boundingRect(self) -> QRectF:
        """Return the box of the legend, in pixels of the view."""
        metrics = QFontMetricsF(self._font)
        widest = max((metrics.horizontalAdvance(self._elided(entry.name)) for entry in self._entries), default=0.0)
        width = _GAP + _SAMPLE + _GAP + widest + _GAP
        height = len(self._entries) * self._line_height() + _GAP
        left = _MARGIN if self._corner == "left" else self._view_box.width() - width - _MARGIN
        return QRectF(left, _MARGIN, width, height)

    def paint(self, painter: QPainter, _option: QStyleOptionGraphicsItem, _widget: QWidget | None = None) -> None:
        """Draw ground, samples and names."""
        box = self.boundingRect()
        ground = QColor(self._ground)
        ground.setAlphaF(0.88)
        painter.fillRect(box, ground)
        painter.setFont(self._font)
        line = self._line_height()
        for row, entry in enumerate(self._entries):
            middle = box.top() + 0.5 * _GAP + (row + 0.5) * line
            self._paint_sample(painter, entry.style, QPointF(box.left() + _GAP, middle))
            painter.setPen(self._ink)
            name = QRectF(box.left() + 2 * _GAP + _SAMPLE, middle - 0.5 * line, box.width(), line)
            painter.drawText(name, Qt.AlignmentFlag.AlignVCenter | Qt.AlignmentFlag.AlignLeft, self._elided(entry.name))

    def _paint_sample(self, painter: QPainter, style: SeriesStyle, start: QPointF) -> None:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        painter.setPen(pg.mkPen(style.colour, width=2.0, style=style.dash))
        painter.drawLine(start, start + QPointF(_SAMPLE, 0.0))
        if not style.symbol:  # a line only
            return
        painter.save()
        painter.translate(start + QPointF(0.5 * _SAMPLE, 0.0))
        pen, brush = pg.mkPen(self._ground, width=0.75), pg.mkBrush(style.colour)
        pg.graphicsItems.ScatterPlotItem.drawSymbol(painter, style.symbol, self._mark_size, pen, brush)
        painter.restore()

    def _elided(self, name: str) -> str:
        metrics = QFontMetricsF(self._font)
        longest = _LONGEST_NAME * metrics.averageCharWidth()
        return metrics.elidedText(name, Qt.TextElideMode.ElideMiddle, longest)

    def _line_height(self) -> float:
        return QFontMetricsF(self._font).height() + 4.0

    def _moved(self, *_: object) -> None:
        self.prepareGeometryChange()
        self.update()
