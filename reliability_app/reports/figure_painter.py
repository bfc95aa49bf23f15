"""The one painter of pictures: draws a Figure on any QPainter, in points, without bitmaps, clips or cosmetic pens."""

from __future__ import annotations

from functools import singledispatchmethod

import numpy as np
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPainterPath, QPen, QPolygonF

from reliability_app.engine.paper import Tick
from reliability_app.reports.clipping import Box, Floats, area_inside, band_areas, line_pieces
from reliability_app.reports.figure import Band, Figure, LegendEntry, Line, Marks, Note, Outline, Part
from reliability_app.reports.figure_layout import Layout
from reliability_app.reports.mark_paths import mark_path
from reliability_app.reports.reading_painter import ReadingPainter
from reliability_app.reports.series_looks import FINE_GRID, GRID, INK, MUTED, PAPER, Dash, Symbol

_PEN_STYLES: dict[Dash, Qt.PenStyle] = {
    "solid": Qt.PenStyle.SolidLine,
    "dash": Qt.PenStyle.DashLine,
    "dash dot": Qt.PenStyle.DashDotLine,
    "dot": Qt.PenStyle.DotLine,
    "dash dot dot": Qt.PenStyle.DashDotDotLine,
}
_CROWD = 150  # marks; more are drawn smaller and without a rim
_CROWDED_SIZE = 0.65
_MOST_NUMBERS = 40
_NUMBERS_SIZE = 0.85
_SAME_PLACE = 0.1  # points; of a crowd's marks that stand so close only one is drawn
_ROW_GAP, _FIRST_ROW = 3.0, 2.0  # units between the rows of marks on the lower edge, and below the first
_SAMPLE, _LEGEND_GAP, _LEGEND_MARGIN, _LONGEST_NAME = 30.0, 8.0, 10.0, 190.0  # units


def paint_figure(painter: QPainter, figure: Figure, layout: Layout) -> None:
    """Draw a figure as it was laid out; the painter's unit is the point, 1/72 of an inch."""
    FigurePainter(painter, layout).paint(figure)


class FigurePainter:
    """Draws one figure."""

    def __init__(self, painter: QPainter, layout: Layout) -> None:
        self._painter, self._layout = painter, layout
        self._letters, self._unit = layout.letters, layout.letters.unit
        self._small = layout.letters.times(_NUMBERS_SIZE)
        self._box = Box(layout.level.low, layout.level.high, layout.upright.low, layout.upright.high)

    def paint(self, figure: Figure) -> None:
        """Draw everything, from the ground up."""
        painter, layout = self._painter, self._layout
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        painter.fillRect(QRectF(0.0, 0.0, layout.width, layout.height), QColor(PAPER))
        self._paint_title(figure)
        self._paint_foot()
        if figure.empty_text:
            self._paint_empty(figure.empty_text)
            return
        if figure.has_grid:
            self._paint_grid(figure)
        for part in figure.parts:
            self._paint_part(part)
        reading = ReadingPainter(painter, layout, figure.reading) if figure.reading is not None else None
        self._paint_axes(() if reading is None else reading.tags())
        if reading is not None:
            reading.paint()
        if len(figure.legend) > 1:
            self._paint_legend(figure)

    # --- around the chart

    def _paint_title(self, figure: Figure) -> None:
        layout = self._layout
        room = layout.width - 2.0 * layout.margin
        text = self._letters.elided(figure.title, room)
        self._letters.draw(self._painter, layout.margin, layout.title_base, text, QColor(INK))

    def _paint_foot(self) -> None:
        layout, letters = self._layout, self._layout.foot_letters
        if not layout.foot_lines:
            return
        self._painter.setPen(self._pen(GRID, 1.0))
        edge = layout.width - layout.margin
        self._painter.drawLine(QLineF(layout.margin, layout.foot_top, edge, layout.foot_top))
        base = layout.foot_top + 0.5 * layout.margin + letters.ascent
        for line in layout.foot_lines:
            letters.draw(self._painter, layout.margin, base, line, QColor(INK))
            base += letters.line_height

    def _paint_empty(self, text: str) -> None:
        area = self._layout.area
        for row, line in enumerate(self._letters.wrapped(text, 0.8 * area.width())):
            x = area.center().x() - 0.5 * self._letters.width(line)
            self._letters.draw_in_row(
                self._painter, x, area.center().y() + row * self._letters.line_height, line, QColor(MUTED)
            )

    def _paint_grid(self, figure: Figure) -> None:
        for major, tone in ((False, FINE_GRID), (True, GRID)):
            if major or figure.has_fine_grid:
                self._painter.setPen(self._pen(tone, 1.0))
                self._painter.drawLines(self._grid_lines(major))

    def _grid_lines(self, major: bool) -> list[QLineF]:
        layout, area = self._layout, self._layout.area
        upright = [layout.x(tick.position) for tick in layout.level_ticks if tick.major == major]
        level = [layout.y(tick.position) for tick in layout.upright_ticks if tick.major == major]
        return [QLineF(x, area.top(), x, area.bottom()) for x in upright] + [
            QLineF(area.left(), y, area.right(), y) for y in level
        ]

    def _paint_axes(self, tags: tuple[QRectF, ...]) -> None:
        """Draw lines, ticks, labels and titles; a label that a tag of the reading covers is left out."""
        painter, layout, letters, unit = self._painter, self._layout, self._letters, self._unit
        area, ink = layout.area, QColor(INK)
        painter.setPen(self._pen(MUTED, 1.0))
        painter.drawLine(area.bottomLeft(), area.bottomRight())
        painter.drawLine(area.bottomLeft(), area.topLeft())
        for tick in layout.level_ticks:
            x = layout.x(tick.position)
            painter.setPen(self._pen(MUTED, 1.0))
            painter.drawLine(QLineF(x, area.bottom(), x, area.bottom() + self._tick_length(tick)))
            width = letters.width(tick.label)
            place = QRectF(x - 0.5 * width, area.bottom() + 7.0 * unit, width, letters.line_height)
            self._write(tick.label, place, tags, ink)
        for tick in layout.upright_ticks:
            y = layout.y(tick.position)
            painter.setPen(self._pen(MUTED, 1.0))
            painter.drawLine(QLineF(area.left() - self._tick_length(tick), y, area.left(), y))
            width = letters.width(tick.label)
            place = QRectF(area.left() - 7.0 * unit - width, y - 0.5 * letters.line_height, width, letters.line_height)
            self._write(tick.label, place, tags, ink)
        self._paint_axis_titles()

    def _tick_length(self, tick: Tick) -> float:
        return (4.0 if tick.major else 2.0) * self._unit

    def _write(self, text: str, place: QRectF, tags: tuple[QRectF, ...], ink: QColor) -> None:
        if text and not any(place.intersects(tag) for tag in tags):
            self._letters.draw(self._painter, place.left(), place.top() + self._letters.ascent, text, ink)

    def _paint_axis_titles(self) -> None:
        painter, layout, letters = self._painter, self._layout, self._letters
        area, ink = layout.area, QColor(INK)
        width = letters.width(layout.level.title)
        base = area.bottom() + 10.0 * self._unit + letters.line_height + letters.ascent
        letters.draw(painter, area.center().x() - 0.5 * width, base, layout.level.title, ink)
        for row, line in enumerate(layout.upright_title):
            painter.save()
            x = layout.margin + row * letters.line_height + letters.ascent
            painter.translate(x, area.center().y() + 0.5 * letters.width(line))
            painter.rotate(-90.0)
            letters.draw(painter, 0.0, 0.0, line, ink)
            painter.restore()

    # --- the parts

    @singledispatchmethod
    def _paint_part(self, part: Part) -> None:
        raise TypeError(f"The painter knows no part called {type(part).__name__}: teach it one in figure_painter.py.")

    @_paint_part.register
    def _paint_band(self, part: Band) -> None:
        for x, y in band_areas(part.x, part.lower, part.upper, self._box):
            self._fill(x, y, part.colour, part.strength)

    @_paint_part.register
    def _paint_outline(self, part: Outline) -> None:
        x, y = area_inside(part.x, part.y, self._box)
        if x.size >= 3:
            self._fill(x, y, part.colour, part.strength)
        closed_x, closed_y = np.append(part.x, part.x[:1]), np.append(part.y, part.y[:1])
        self._paint_line(Line(closed_x, closed_y, part.colour, part.width, part.dash))

    @_paint_part.register
    def _paint_line(self, part: Line) -> None:
        self._painter.setPen(self._pen(part.colour, part.width, part.dash, part.strength))
        self._painter.setBrush(Qt.BrushStyle.NoBrush)
        for x, y in line_pieces(part.x, part.y, self._box):
            self._painter.drawPolyline(self._polygon(x, y))

    @_paint_part.register
    def _paint_note(self, part: Note) -> None:
        if self._box.holds(np.array(part.x), np.array(part.y)):
            place = self._layout.point(part.x, part.y)
            self._letters.draw_in_row(
                self._painter, place.x() + 4.0 * self._unit, place.y(), part.text, QColor(part.colour)
            )

    @_paint_part.register
    def _paint_marks(self, part: Marks) -> None:
        crowded = part.x.size > _CROWD
        size = part.size * (_CROWDED_SIZE if crowded else 1.0) * self._unit
        y = part.y
        if part.edge_row is not None:
            height = (0.5 + part.edge_row) * (part.size + _ROW_GAP) + _FIRST_ROW
            y = np.full_like(part.x, self._position_above_edge(height * self._unit))
        at = np.flatnonzero(self._box.holds(part.x, y))
        x, y = part.x[at], y[at]
        drawn = self._apart(x, y) if crowded else np.arange(at.size)
        self._dress_marks(part, crowded=crowded)
        path = mark_path(part.symbol, size)
        for place in self._points(x[drawn], y[drawn]):
            self._painter.drawPath(path.translated(place))
        if part.counts is not None and not crowded:
            self._paint_counts(x, y, part.counts[at], size)

    def _dress_marks(self, part: Marks, *, crowded: bool) -> None:
        """Give filled marks a rim of paper, so that neighbours stay apart, and open ones a ground of it."""
        if part.filled:
            self._painter.setPen(Qt.PenStyle.NoPen if crowded else self._pen(PAPER, 0.75))
            self._painter.setBrush(QColor(part.colour))
        else:
            self._painter.setPen(self._pen(part.colour, 1.25))
            self._painter.setBrush(QColor(PAPER))

    def _paint_counts(self, x: Floats, y: Floats, counts: np.ndarray, size: float) -> None:
        many = np.flatnonzero(counts > 1)
        if many.size > _MOST_NUMBERS:
            return
        for at in many.tolist():
            place = self._layout.point(float(x[at]), float(y[at]))
            text = str(int(counts[at]))
            self._small.draw(
                self._painter, place.x() + 0.5 * size + self._unit, place.y() - 0.25 * size, text, QColor(MUTED)
            )

    # --- the legend

    def _paint_legend(self, figure: Figure) -> None:
        unit, letters, area = self._unit, self._letters, self._layout.area
        longest = min(_LONGEST_NAME * unit, 0.4 * area.width())
        names = [letters.elided(entry.name, longest) for entry in figure.legend]
        line = letters.line_height + 3.0 * unit
        width = (3.0 * _LEGEND_GAP + _SAMPLE) * unit + max(map(letters.width, names))
        height = len(names) * line + _LEGEND_GAP * unit
        gap = _LEGEND_MARGIN * unit
        left = area.left() + gap if figure.legend_corner == "left" else area.right() - width - gap
        ground = QColor(PAPER)
        ground.setAlphaF(0.88)
        self._painter.fillRect(QRectF(left, area.top() + gap, width, height), ground)
        for row, (entry, name) in enumerate(zip(figure.legend, names, strict=True)):
            middle = area.top() + gap + 0.5 * _LEGEND_GAP * unit + (row + 0.5) * line
            self._paint_sample(entry, QPointF(left + _LEGEND_GAP * unit, middle))
            letters.draw_in_row(self._painter, left + (2.0 * _LEGEND_GAP + _SAMPLE) * unit, middle, name, QColor(INK))

    def _paint_sample(self, entry: LegendEntry, start: QPointF) -> None:
        painter, look = self._painter, entry.look
        painter.setPen(self._pen(look.colour, 2.0, look.dash))
        painter.drawLine(start, start + QPointF(_SAMPLE * self._unit, 0.0))
        if not entry.has_mark:
            return
        painter.setPen(self._pen(PAPER, 0.75))
        painter.setBrush(QColor(look.colour))
        middle = start + QPointF(0.5 * _SAMPLE * self._unit, 0.0)
        painter.drawPath(self._mark(look.symbol).translated(middle))

    # --- tools

    def _mark(self, symbol: Symbol) -> QPainterPath:
        return mark_path(symbol, 9.0 * self._unit)

    def _pen(self, colour: str, width: float, dash: Dash = "solid", strength: float = 1.0) -> QPen:
        tone = QColor(colour)
        tone.setAlphaF(strength)
        pen = QPen(tone, width * self._unit, _PEN_STYLES[dash], Qt.PenCapStyle.FlatCap, Qt.PenJoinStyle.RoundJoin)
        pen.setCosmetic(False)
        return pen

    def _fill(self, x: Floats, y: Floats, colour: str, strength: float) -> None:
        tone = QColor(colour)
        tone.setAlphaF(strength)
        self._painter.setPen(Qt.PenStyle.NoPen)
        self._painter.setBrush(tone)
        self._painter.drawPolygon(self._polygon(x, y))

    def _polygon(self, x: Floats, y: Floats) -> QPolygonF:
        return QPolygonF(self._points(x, y))

    def _points(self, x: Floats, y: Floats) -> list[QPointF]:
        across, along = self._layout.x, self._layout.y
        return [QPointF(across(a), along(b)) for a, b in zip(x.tolist(), y.tolist(), strict=True)]

    def _position_above_edge(self, height: float) -> float:
        axis = self._layout.upright
        return axis.low + height / self._layout.area.height() * (axis.high - axis.low)

    def _apart(self, x: Floats, y: Floats) -> np.ndarray:
        """Return which marks to draw so that no two of them stand in the same place as far as an eye can tell."""
        area, level, upright = self._layout.area, self._layout.level, self._layout.upright
        columns = np.rint(x * area.width() / (level.high - level.low) / _SAME_PLACE)
        rows = np.rint(y * area.height() / (upright.high - upright.low) / _SAME_PLACE)
        _, first = np.unique(np.column_stack([columns, rows]), axis=0, return_index=True)
        return np.sort(first)
