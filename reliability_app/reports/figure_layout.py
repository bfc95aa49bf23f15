"""Where the parts of a picture stand on its sheet: title, chart, axes, foot; all in points, y downwards."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import QPointF, QRectF

from reliability_app.engine.paper import Tick
from reliability_app.reports.axis_ticks import level_ticks, upright_ticks
from reliability_app.reports.figure import Axis, Figure
from reliability_app.reports.lettering import Lettering

# The text grows with the width of the sheet between these sizes (points), so that a small picture stays legible.
_WIDTH_PER_SIZE, _LEAST_SIZE, _MOST_SIZE = 50.0, 6.0, 11.0
_FOOT_SIZE, _MOST_FOOT_SIZE = 0.82, 7.5
_LEAST_CHART_SHARE = 0.5  # of the height asked for; a foot that needs more makes the sheet taller
_TITLE_ROOM = 1.7  # line heights: half of the topmost label stands above the chart
_TICK_LENGTH, _TICK_GAP = 4.0, 3.0  # units
TAG_PADDING, TAG_GAP = 4.0, 5.0  # units on either side of the text of a tag, and between tag and axis
_WIDEST_TAG = "99.9 %"
_LEAST_LENGTH = 24.0  # points; a shorter axis is not worth a label


@dataclass(frozen=True)
class Layout:
    """The places of everything on the sheet.

    Attributes
    ----------
    width, height : float
        The sheet in points.
    letters, foot_letters : Lettering
    area : QRectF
        The chart between its axes.
    level, upright : Axis
    level_ticks, upright_ticks : tuple of Tick
    title_base : float
        Height of the base line of the title.
    upright_title : tuple of str
        The title of the upright axis, in lines that are as long as the axis at the most.
    foot_lines : tuple of str
        The foot as wrapped; the origin is its last line.
    foot_top, margin : float
    """

    width: float
    height: float
    letters: Lettering
    foot_letters: Lettering
    area: QRectF
    level: Axis
    upright: Axis
    level_ticks: tuple[Tick, ...]
    upright_ticks: tuple[Tick, ...]
    title_base: float
    upright_title: tuple[str, ...]
    foot_lines: tuple[str, ...]
    foot_top: float
    margin: float

    def x(self, position: float) -> float:
        """Return where a position of the level axis stands."""
        return self.area.left() + (position - self.level.low) / (self.level.high - self.level.low) * self.area.width()

    def y(self, position: float) -> float:
        """Return where a position of the upright axis stands."""
        share = (position - self.upright.low) / (self.upright.high - self.upright.low)
        return self.area.bottom() - share * self.area.height()

    def point(self, x: float, y: float) -> QPointF:
        """Return where a point of the chart stands; one far outside stays within what a device can count."""
        return QPointF(min(max(self.x(x), -1e5), 1e5), min(max(self.y(y), -1e5), 1e5))


def lay_out(figure: Figure, width: float, height: float, *, as_outlines: bool = False) -> Layout:
    """Return the layout of a figure on a sheet of this size in points; it may come out taller (see sheet_height)."""
    letters = _letters(width, as_outlines)
    foot_letters, unit = letters.times(min(_FOOT_SIZE, _MOST_FOOT_SIZE / letters.size)), letters.unit
    margin = 8.0 * unit
    lines = _foot_lines(figure, foot_letters, width - 2.0 * margin)
    foot_height = _foot_height(lines, foot_letters, margin)
    height = max(height, _LEAST_CHART_SHARE * height + foot_height)
    title_base = margin + letters.ascent
    top = margin + (_TITLE_ROOM if figure.title else 0.5) * letters.line_height
    bottom = height - foot_height - 2.0 * letters.line_height - (_TICK_LENGTH + 2.0 * _TICK_GAP) * unit - 0.5 * margin
    found_upright = _upright(figure.upright, bottom - top, letters)
    title_lines = tuple(letters.wrapped(figure.upright.title, bottom - top))
    beside = len(title_lines) * letters.line_height + (TAG_GAP + 2.0 * _TICK_GAP) * unit
    left = margin + beside + _widest_label(figure, found_upright, letters)
    right, found_level = _level(figure.level, left, width - margin, letters)
    return Layout(
        width=width,
        height=height,
        letters=letters,
        foot_letters=foot_letters,
        area=QRectF(left, top, right - left, bottom - top),
        level=figure.level,
        upright=figure.upright,
        level_ticks=tuple(found_level),
        upright_ticks=tuple(found_upright),
        title_base=title_base,
        upright_title=title_lines,
        foot_lines=lines,
        foot_top=height - foot_height,
        margin=margin,
    )


def sheet_height(figure: Figure, width: float, height: float) -> float:
    """Return the height in points a figure takes: that asked for, or more where its cautions need the room."""
    return lay_out(figure, width, height).height


def _letters(width: float, as_outlines: bool) -> Lettering:
    return Lettering(min(max(width / _WIDTH_PER_SIZE, _LEAST_SIZE), _MOST_SIZE), as_outlines=as_outlines)


def _foot_lines(figure: Figure, letters: Lettering, width: float) -> tuple[str, ...]:
    paragraphs = (*figure.foot, figure.origin) if figure.origin else figure.foot
    return tuple(line for paragraph in paragraphs for line in letters.wrapped(paragraph, width))


def _foot_height(lines: Sequence[str], letters: Lettering, margin: float) -> float:
    return len(lines) * letters.line_height + (1.5 * margin if lines else 0.5 * margin)


def _upright(axis: Axis, length: float, letters: Lettering) -> list[Tick]:
    if length < _LEAST_LENGTH:
        return []
    return upright_ticks(axis.ticks, axis.low, axis.high, length=length, line=letters.line_height, room=axis.room)


def _widest_label(figure: Figure, ticks: Sequence[Tick], letters: Lettering) -> float:
    """Return the room for the labels of the upright axis and for the tag of the reading, which has a rim."""
    tag = _WIDEST_TAG if figure.reading is None else figure.reading.mark.value_text
    rim = 2.0 * TAG_PADDING * letters.unit
    return max([letters.width(tag) + rim, *(letters.width(tick.label) + _TICK_LENGTH * letters.unit for tick in ticks)])


def _level(axis: Axis, left: float, edge: float, letters: Lettering) -> tuple[float, list[Tick]]:
    """Return the right end of a level axis and its ticks; a last label has the room it needs beyond the end."""
    right = edge
    found: list[Tick] = []
    for _ in range(2):
        if right - left < _LEAST_LENGTH:
            return right, []
        found = level_ticks(
            axis.ticks,
            axis.low,
            axis.high,
            length=right - left,
            line=letters.line_height,
            room=axis.room,
            width_of=letters.width,
        )
        each = (right - left) / (axis.high - axis.low)
        ends = [(tick.position - axis.low) * each + 0.5 * letters.width(tick.label) for tick in found if tick.major]
        right -= max(0.0, left + max(ends, default=0.0) - edge)
    return right, found
