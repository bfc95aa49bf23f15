"""The reading on a chart: a line to drag, a mark on the curve, a drop line to the age, the bound as a bracket."""

from __future__ import annotations

from typing import Literal

import pyqtgraph as pg
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt, Signal
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QPainter, QPainterPath, QPen
from PySide6.QtWidgets import QGraphicsObject, QStyleOptionGraphicsItem, QWidget

from reliability_app.reports.reading_mark import Along, ReadingMark, beyond_text
from reliability_app.reports.series_looks import ink_on
from reliability_app.windows.charts.round_axis import RoundAxis
from reliability_app.windows.theme import Theme

Grip = Literal["main", "across", "lower", "upper"]

_PLACES: dict[Along, int] = {"age": 0, "value": 1}
_IN_FRONT = 50.0
_GRIP = 7.0  # pixels to either side within which the mouse takes the line
_RING = 5.0
_FOOT = 5.0  # half the length of a bracket's end, and how far its feet reach inwards
_PADDING = 4.0


class ReadingLine(QGraphicsObject):
    """Draws a ReadingMark over a plot and lets it be dragged.

    Parameters
    ----------
    plot : pyqtgraph.PlotItem
        The plot it belongs to.
    level, upright : RoundAxis
        The axes that carry the tags.
    drags : "age" or "value"
        What a drag changes: "value" gives a level line, "age" an upright one.

    Signals
    -------
    dragged(float)
        The position on the dragged axis, while the mouse moves.
    dragged_across(float)
        The position on the other axis, while the other line is moved.
    end_dragged(str, float)
        The position on the age axis to which the "lower" or "upper" end of the bracket is moved.
    released()
        The end of a drag.
    """

    dragged = Signal(float)
    dragged_across = Signal(float)
    end_dragged = Signal(str, float)
    released = Signal()

    def __init__(self, plot: pg.PlotItem, level: RoundAxis, upright: RoundAxis, *, drags: Along) -> None:
        super().__init__(plot)
        self._plot, self._level, self._upright = plot, level, upright
        self._drags: Along = drags
        self._mark: ReadingMark | None = None
        self._colour, self._ground, self._ink = QColor(), QColor(), QColor()
        self._font = QFont()
        self._grabbed_at: float | None = None
        self._hovered: Grip | None = None
        self._grip: Grip | None = None
        self.takes_across = True  # False where a height on the chart belongs to more than one age
        self.setZValue(_IN_FRONT)
        self.setVisible(False)
        plot.vb.sigRangeChanged.connect(self._moved)
        plot.vb.sigResized.connect(self._moved)

    @property
    def mark(self) -> ReadingMark | None:
        """The mark shown, or None."""
        return self._mark

    @property
    def is_dragging(self) -> bool:
        """True from grip to release."""
        return self._grabbed_at is not None

    def show_mark(self, mark: ReadingMark | None) -> None:
        """Show a reading, or hide without one."""
        self._mark = mark
        if mark is not None:
            self._upright.make_room(mark.value_text)
        self.setVisible(mark is not None)
        self._moved()

    def dress(self, theme: Theme, colour: str, font: QFont) -> None:
        """Take the theme, the colour of the set it reads, and the font of the tags."""
        self._colour, self._ground = QColor(colour), QColor(theme.background)
        self._ink, self._font = QColor(ink_on(colour)), QFont(font)
        if self._mark is not None:
            self._upright.make_room(self._mark.value_text)
        self._moved()

    def grip(self) -> QPointF | None:
        """Return a point of the scene at which the mouse can take the line, or None without one in sight."""
        spot, area = self._spot(), self._area()
        if spot is None:
            return None
        if self._drags == "value":
            spot.setX(area.left() + 0.25 * area.width())
        else:
            spot.setY(area.top() + 0.25 * area.height())
        return self.mapToScene(spot) if area.contains(spot) else None

    # --- geometry, in pixels of the plot

    def _area(self) -> QRectF:
        return QRectF(self._plot.vb.geometry())

    def _pixel(self, age: float, value: float) -> QPointF:
        (left, right), (low, high) = self._plot.vb.viewRange()
        area = self._area()
        x = area.left() + (age - left) / (right - left) * area.width()
        y = area.bottom() - (value - low) / (high - low) * area.height()
        # A point far outside would overflow Qt's integer raster.
        return QPointF(min(max(x, -1e5), 1e5), min(max(y, -1e5), 1e5))

    def spot(self) -> QPointF | None:
        """Return the point of the reading in the scene, or None without one."""
        spot = self._spot()
        return None if spot is None else self.mapToScene(spot)

    def _spot(self) -> QPointF | None:
        return None if self._mark is None else self._pixel(self._mark.age, self._mark.value)

    def boundingRect(self) -> QRectF:
        """Return the whole of the plot: the tags stand on its axes."""
        return QRectF(self._plot.rect())

    def shape(self) -> QPainterPath:
        """Return all that the mouse can take: both lines, the ends of the bracket, the tag of the main line."""
        path = QPainterPath()
        path.setFillRule(Qt.FillRule.WindingFill)  # where two grips overlap there is no hole
        for _, box in self._grips():
            path.addRect(box)
        return path

    def is_at(self, spot: QPointF) -> bool:
        """True where a point of the scene lies on the reading."""
        return self._grip_at(spot) is not None

    def _grips(self) -> list[tuple[Grip, QRectF]]:
        """Return what the mouse can take, the first one first where they overlap."""
        mark, spot, area = self._mark, self._spot(), self._area()
        if mark is None or spot is None:
            return []
        grips: list[tuple[Grip, QRectF]] = []
        for position, _, inward in mark.ends if mark.along == "age" else ():
            end = self._pixel(position, mark.value)
            if area.contains(end):
                grips.append(("lower" if inward > 0 else "upper", _around(end, 0.0, 0.0)))
        level_is_seen = area.top() <= spot.y() <= area.bottom()
        upright_is_seen = area.left() <= spot.x() <= area.right()
        to_axis = QRectF(spot.x() - _GRIP, spot.y(), 2.0 * _GRIP, max(area.bottom() - spot.y(), 0.0))
        to_value = QRectF(area.left(), spot.y() - _GRIP, max(spot.x() - area.left(), 0.0), 2.0 * _GRIP)
        if self._drags == "value" and level_is_seen:
            whole = QRectF(area.left(), spot.y() - _GRIP, area.width(), 2.0 * _GRIP)
            grips += [("main", whole), ("main", self._value_tag())]
        elif self._drags == "age" and upright_is_seen:
            whole = QRectF(spot.x() - _GRIP, area.top(), 2.0 * _GRIP, area.height())
            grips += [("main", whole), ("main", self._age_tag())]
        if self._drags == "value" and upright_is_seen and level_is_seen:
            grips += [("across", to_axis), ("across", self._age_tag())]
        elif self._drags == "age" and level_is_seen and upright_is_seen and self.takes_across:
            grips += [("across", to_value), ("across", self._value_tag())]
        return grips

    def _grip_at(self, scene_spot: QPointF) -> Grip | None:
        spot = self.mapFromScene(scene_spot)
        return next((grip for grip, box in self._grips() if box.contains(spot)), None)

    def _direction(self, grip: Grip) -> Along:
        """Return the axis along which a grip moves."""
        if grip == "main":
            return self._drags
        return "age" if grip in ("lower", "upper") or self._drags == "value" else "value"

    def _moved(self, *_: object) -> None:
        self.prepareGeometryChange()
        self._cover_labels()
        self.update()

    def _cover_labels(self) -> None:
        """Have the axes leave out the labels under the tags."""
        mark, area = self._mark, self._area()
        if mark is None or area.width() <= 0 or area.height() <= 0:
            self._level.cover(())
            self._upright.cover(())
            return
        (left, right), (low, high) = self._plot.vb.viewRange()
        wide = (right - left) / area.width() * (0.5 * self._age_tag().width() + _PADDING)
        tall = (high - low) / area.height() * 0.5 * self._value_tag().height()
        self._level.cover([(mark.age - wide, mark.age + wide)] if mark.age_text else ())
        self._upright.cover([(mark.value - tall, mark.value + tall)] if mark.value_text else ())

    def _tag_size(self, text: str) -> tuple[float, float]:
        metrics = QFontMetricsF(self._font)
        return metrics.horizontalAdvance(text) + 2.0 * _PADDING, metrics.height()

    def _age_tag(self) -> QRectF:
        """Return the tag on the age axis, centred under the reading."""
        spot, area = self._spot(), self._area()
        if spot is None or self._mark is None:
            return QRectF()
        width, height = self._tag_size(self._mark.age_text)
        return QRectF(round(spot.x() - 0.5 * width), area.bottom() + 5.0, width, height)

    def _value_tag(self) -> QRectF:
        """Return the tag on the upright axis, beside the line."""
        spot, area = self._spot(), self._area()
        if spot is None or self._mark is None:
            return QRectF()
        width, height = self._tag_size(self._mark.value_text)
        return QRectF(area.left() - 5.0 - width, round(spot.y() - 0.5 * height), width, height)

    # --- drawing

    def paint(self, painter: QPainter, _option: QStyleOptionGraphicsItem, _widget: QWidget | None = None) -> None:
        """Draw line, drop line, bracket and ring inside the view, and the tags on the axes."""
        mark, spot, area = self._mark, self._spot(), self._area()
        if mark is None or spot is None:
            return
        painter.save()
        painter.setClipRect(area)
        self._paint_lines(painter, spot, area)
        self._paint_bracket(painter, mark, spot)
        self._paint_ring(painter, spot)
        painter.restore()
        if mark.age_text and area.left() <= spot.x() <= area.right():
            self._paint_tag(painter, self._age_tag(), mark.age_text)
        if mark.value_text and area.top() <= spot.y() <= area.bottom():
            self._paint_tag(painter, self._value_tag(), mark.value_text)

    def _paint_lines(self, painter: QPainter, spot: QPointF, area: QRectF) -> None:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
        to_value = QLineF(area.left(), spot.y(), spot.x(), spot.y())
        to_age = QLineF(spot.x(), spot.y(), spot.x(), area.bottom())
        rest = (
            QLineF(spot.x(), spot.y(), area.right(), spot.y())
            if self._drags == "value"
            else QLineF(spot.x(), area.top(), spot.x(), spot.y())
        )
        faint = QColor(self._colour)
        faint.setAlphaF(0.45)
        painter.setPen(QPen(faint, 1.0, Qt.PenStyle.DotLine))
        painter.drawLine(rest)
        held = self._grip or self._hovered
        strong = self._direction(held) if held in ("main", "across") else None
        for line, drags in ((to_value, "value"), (to_age, "age")):
            painter.setPen(QPen(self._colour, 2.0 if drags == strong else 1.0))
            painter.drawLine(line)

    def _paint_bracket(self, painter: QPainter, mark: ReadingMark, spot: QPointF) -> None:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, False)
        for position, text, inward in mark.ends:
            end = self._pixel(position, mark.value) if mark.along == "age" else self._pixel(mark.age, position)
            painter.setPen(QPen(self._colour, 3.0, Qt.PenStyle.SolidLine, Qt.PenCapStyle.FlatCap))
            painter.drawLine(end, spot)
            inside = self._inside(end)
            if inside != end:
                # The bound lies beyond the picture: its number stands at the edge with an arrow.
                self._paint_end_text(painter, inside, beyond_text(text, inward, mark.along), -inward, mark.along)
                continue
            painter.setPen(QPen(self._colour, 2.0, Qt.PenStyle.SolidLine, Qt.PenCapStyle.SquareCap))
            if mark.along == "age":
                corners = [QPointF(inward * _FOOT, -_FOOT), QPointF(0, -_FOOT), QPointF(0, _FOOT)]
                corners.append(QPointF(inward * _FOOT, _FOOT))
            else:
                corners = [QPointF(-_FOOT, -inward * _FOOT), QPointF(-_FOOT, 0), QPointF(_FOOT, 0)]
                corners.append(QPointF(_FOOT, -inward * _FOOT))
            painter.drawPolyline([end + corner for corner in corners])
            if text:
                self._paint_end_text(painter, end, text, inward, mark.along)

    def _inside(self, end: QPointF) -> QPointF:
        """Return the point of the picture nearest to an end of the bracket."""
        area = self._area()
        return QPointF(
            min(max(end.x(), area.left()), area.right()),
            min(max(end.y(), area.top()), area.bottom()),
        )

    def _end_text_box(self, end: QPointF, text: str, inward: int, along: Along) -> QRectF:
        """Return the place of a bound's text: outside its end of the bracket, or inside where that would not fit."""
        width, height = self._tag_size(text)
        area = self._area()
        if along == "value":
            y = end.y() + 3.0 if inward > 0 else end.y() - height - 3.0
            return QRectF(end.x() - 0.5 * width, y, width, height)
        box = QRectF(end.x() - width - 3.0 if inward > 0 else end.x() + 3.0, end.y() - 0.5 * height, width, height)
        if area.left() <= box.left() and box.right() <= area.right():
            return box
        return box.translated(inward * (width + 3.0), -height)

    def _paint_end_text(self, painter: QPainter, end: QPointF, text: str, inward: int, along: Along) -> None:
        """Write the bound beside its end of the bracket, on a piece of ground."""
        box = self._end_text_box(end, text, inward, along)
        ground = QColor(self._ground)
        ground.setAlphaF(0.85)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(ground)
        painter.drawRoundedRect(box, 3.0, 3.0)
        painter.setFont(self._font)
        painter.setPen(self._colour)
        painter.drawText(box, Qt.AlignmentFlag.AlignCenter, text)

    def _paint_ring(self, painter: QPainter, spot: QPointF) -> None:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        painter.setPen(QPen(self._colour, 2.0))
        painter.setBrush(self._ground)
        painter.drawEllipse(spot, _RING, _RING)

    def _paint_tag(self, painter: QPainter, box: QRectF, text: str) -> None:
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, True)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(self._colour)
        painter.drawRoundedRect(box, 3.0, 3.0)
        painter.setFont(self._font)
        painter.setPen(self._ink)
        painter.drawText(box, Qt.AlignmentFlag.AlignCenter, text)

    # --- the mouse, as pyqtgraph's scene hands it on

    def hoverEvent(self, event: pg.GraphicsScene.mouseEvents.HoverEvent) -> None:
        """Show that the line can be taken, and which way it goes."""
        grip = None if event.isExit() else self._grip_at(event.scenePos())
        if grip is not None and not event.acceptDrags(Qt.MouseButton.LeftButton):
            grip = None
        if grip != self._hovered:
            self._hovered = grip
            if grip is None:
                self.unsetCursor()
            else:
                is_upright = self._direction(grip) == "value"
                self.setCursor(Qt.CursorShape.SizeVerCursor if is_upright else Qt.CursorShape.SizeHorCursor)
            self.update()

    def mouseDragEvent(self, event: pg.GraphicsScene.mouseEvents.MouseDragEvent) -> None:
        """Follow the mouse; what was taken keeps the distance to the mouse at which it was taken."""
        if event.button() != Qt.MouseButton.LeftButton or self._mark is None or self._plot.vb.is_framing:
            event.ignore()
            return
        box = self._plot.vb
        if event.isStart():
            self._grip = self._grip_at(event.buttonDownScenePos())
            if self._grip is None:
                event.ignore()
                return
            taken = box.mapSceneToView(event.buttonDownScenePos())
            at = _PLACES[self._direction(self._grip)]
            self._grabbed_at = self._position_of(self._grip) - (taken.x(), taken.y())[at]
        if self._grip is None:
            event.ignore()
            return
        event.accept()
        at = _PLACES[self._direction(self._grip)]
        mouse = box.mapSceneToView(event.scenePos())
        low, high = box.viewRange()[at]
        self._tell(self._grip, min(max((mouse.x(), mouse.y())[at] + (self._grabbed_at or 0.0), low), high))
        if event.isFinish():
            self._grabbed_at, self._grip = None, None
            self.released.emit()
            self.update()

    def _position_of(self, grip: Grip) -> float:
        """Return where a grip stands on the axis along which it moves."""
        mark = self._mark
        if mark is None:
            return 0.0
        ends = {"lower": mark.lower, "upper": mark.upper}
        if grip in ends:
            return float(ends[grip] or 0.0)
        return mark.age if self._direction(grip) == "age" else mark.value

    def _tell(self, grip: Grip, position: float) -> None:
        if grip == "main":
            self.dragged.emit(position)
        elif grip == "across":
            self.dragged_across.emit(position)
        else:
            self.end_dragged.emit(grip, position)


def _around(spot: QPointF, width: float, height: float) -> QRectF:
    """Return the box that takes the mouse about a point or a box of a size."""
    return QRectF(spot.x() - _GRIP, spot.y() - _GRIP, width + 2.0 * _GRIP, height + 2.0 * _GRIP)
