"""Draws the reading on a picture: lines to both axes, the bound as a bracket, a ring, and tags on the axes."""

from __future__ import annotations

from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPen, QPolygonF

from reliability_app.reports.figure import ShownReading
from reliability_app.reports.figure_layout import TAG_GAP, TAG_PADDING, Layout
from reliability_app.reports.reading_mark import Along, beyond_text
from reliability_app.reports.series_looks import PAPER, ink_on

_RING, _FOOT, _GAP = 5.0, 5.0, 3.0  # units; half the length of a bracket's end is its foot


class ReadingPainter:
    """Draws one reading over a chart that is laid out."""

    def __init__(self, painter: QPainter, layout: Layout, shown: ShownReading) -> None:
        self._painter, self._layout = painter, layout
        self._mark, self._drags = shown.mark, shown.drags
        self._colour, self._ink = QColor(shown.colour), QColor(ink_on(shown.colour))
        self._letters, self._unit = layout.letters, layout.letters.unit
        self._area = layout.area
        self._spot = layout.point(shown.mark.age, shown.mark.value)

    def tags(self) -> tuple[QRectF, ...]:
        """Return the places of the tags that are shown; axis labels there are to be left out."""
        return tuple(box for box, _ in self._tags())

    def _tags(self) -> list[tuple[QRectF, str]]:
        mark, spot, area, unit = self._mark, self._spot, self._area, self._unit
        found = []
        if mark.age_text and area.left() <= spot.x() <= area.right():
            width, height = self._size(mark.age_text)
            left = min(spot.x() - 0.5 * width, self._layout.width - self._layout.margin - width)
            found.append((QRectF(left, area.bottom() + 6.0 * unit, width, height), mark.age_text))
        if mark.value_text and area.top() <= spot.y() <= area.bottom():
            width, height = self._size(mark.value_text)
            left = area.left() - TAG_GAP * unit - width
            found.append((QRectF(left, spot.y() - 0.5 * height, width, height), mark.value_text))
        return found

    def _size(self, text: str) -> tuple[float, float]:
        return self._letters.width(text) + 2.0 * TAG_PADDING * self._unit, self._letters.line_height

    def paint(self) -> None:
        """Draw everything that lies inside the chart, and the tags."""
        self._paint_lines()
        self._paint_bracket()
        if self._area.contains(self._spot):
            self._painter.setPen(self._pen(2.0))
            self._painter.setBrush(QColor(PAPER))
            self._painter.drawEllipse(self._spot, _RING * self._unit, _RING * self._unit)
        for box, text in self._tags():
            self._paint_ground(box, self._colour)
            self._letters.draw_in_row(
                self._painter, box.left() + TAG_PADDING * self._unit, box.center().y(), text, self._ink
            )

    def _paint_lines(self) -> None:
        spot, area = self._spot, self._area
        to_value = QLineF(area.left(), spot.y(), spot.x(), spot.y())
        to_age = QLineF(spot.x(), spot.y(), spot.x(), area.bottom())
        if self._drags == "value":
            rest = QLineF(spot.x(), spot.y(), area.right(), spot.y())
        else:
            rest = QLineF(spot.x(), area.top(), spot.x(), spot.y())
        self._draw_inside(rest, self._pen(1.0, strength=0.45, style=Qt.PenStyle.DotLine))
        self._draw_inside(to_value, self._pen(1.0))
        self._draw_inside(to_age, self._pen(1.0))

    def _paint_bracket(self) -> None:
        mark, layout = self._mark, self._layout
        for position, text, inward in mark.ends:
            end = layout.point(position, mark.value) if mark.along == "age" else layout.point(mark.age, position)
            self._draw_inside(QLineF(end, self._spot), self._pen(3.0))
            inside = self._inside(end)
            if inside != end:
                # The bound lies beyond the picture: its number stands at the edge with an arrow.
                self._paint_end_text(inside, beyond_text(text, inward, mark.along), -inward)
                continue
            self._painter.setPen(self._pen(2.0, cap=Qt.PenCapStyle.SquareCap))
            self._painter.setBrush(Qt.BrushStyle.NoBrush)
            self._painter.drawPolyline(QPolygonF([end + corner for corner in self._corners(inward, mark.along)]))
            if text:
                self._paint_end_text(end, text, inward)

    def _corners(self, inward: int, along: Along) -> list[QPointF]:
        foot = _FOOT * self._unit
        if along == "age":
            return [QPointF(x * inward * foot, y * foot) for x, y in ((1, -1), (0, -1), (0, 1), (1, 1))]
        return [QPointF(x * foot, -y * inward * foot) for x, y in ((-1, 1), (-1, 0), (1, 0), (1, 1))]

    def _inside(self, end: QPointF) -> QPointF:
        area = self._area
        return QPointF(min(max(end.x(), area.left()), area.right()), min(max(end.y(), area.top()), area.bottom()))

    def _paint_end_text(self, end: QPointF, text: str, inward: int) -> None:
        """Write the bound outside its end of the bracket, or inside where that would not fit."""
        box = self._end_text_box(end, text, inward)
        ground = QColor(PAPER)
        ground.setAlphaF(0.85)
        self._paint_ground(box, ground)
        self._letters.draw_in_row(
            self._painter, box.left() + TAG_PADDING * self._unit, box.center().y(), text, self._colour
        )

    def _end_text_box(self, end: QPointF, text: str, inward: int) -> QRectF:
        width, height = self._size(text)
        gap, area = _GAP * self._unit, self._area
        if self._mark.along == "value":
            y = end.y() + gap if inward > 0 else end.y() - height - gap
            return QRectF(end.x() - 0.5 * width, y, width, height)
        left = end.x() - width - gap if inward > 0 else end.x() + gap
        box = QRectF(left, end.y() - 0.5 * height, width, height)
        if area.left() <= box.left() and box.right() <= area.right():
            return box
        return box.translated(inward * (width + gap), -height)

    def _paint_ground(self, box: QRectF, colour: QColor) -> None:
        self._painter.setPen(Qt.PenStyle.NoPen)
        self._painter.setBrush(colour)
        self._painter.drawRoundedRect(box, 3.0 * self._unit, 3.0 * self._unit)

    def _draw_inside(self, line: QLineF, pen: QPen) -> None:
        """Draw the part of a level or upright line that lies in the chart."""
        area = self._area
        start, stop = self._inside(line.p1()), self._inside(line.p2())
        is_level = line.y1() == line.y2()
        is_seen = area.top() <= line.y1() <= area.bottom() if is_level else area.left() <= line.x1() <= area.right()
        if is_seen and start != stop:
            self._painter.setPen(pen)
            self._painter.drawLine(start, stop)

    def _pen(
        self,
        width: float,
        *,
        strength: float = 1.0,
        style: Qt.PenStyle = Qt.PenStyle.SolidLine,
        cap: Qt.PenCapStyle = Qt.PenCapStyle.FlatCap,
    ) -> QPen:
        tone = QColor(self._colour)
        tone.setAlphaF(strength)
        pen = QPen(tone, width * self._unit, style, cap, Qt.PenJoinStyle.MiterJoin)
        pen.setCosmetic(False)
        return pen
