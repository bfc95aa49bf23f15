"""An axis whose ticks come from the engine's scales: as many labels as have room at this size and font."""

from __future__ import annotations

from collections.abc import Sequence

import pyqtgraph as pg
from PySide6.QtGui import QFont, QFontMetricsF
from PySide6.QtWidgets import QGraphicsSceneResizeEvent

from reliability_app.engine.paper import Tick
from reliability_app.reports.axis_ticks import LEVEL_ROOM, UPRIGHT_ROOM, level_ticks, upright_ticks
from reliability_app.windows.theme import Theme

_TICK_LENGTH = 4
_TEXT_OFFSET = 3
_WIDEST_TAG = "99.9 % "  # the tag of a usual reading has its place, so that the axis need not widen for it
_LEAST_LENGTH = 40.0  # pixels; a shorter axis is not worth a label


class RoundAxis(pg.AxisItem):  # type: ignore[misc]  # pyqtgraph ships no types
    """The common part of the axes: adaptive round ticks, theme, font, and place kept free for the reading's tag.

    `room` is the line heights an upright axis gives each label, `room_between` what a level one leaves between.
    """

    room = UPRIGHT_ROOM
    room_between = LEVEL_ROOM["log"]

    def __init__(self, orientation: str) -> None:
        self._font = QFont()
        self._covered: tuple[tuple[float, float], ...] = ()
        self._ticks: list[Tick] = []
        self._ticks_for: tuple[object, ...] = ()
        self._is_broken = False  # whether the title stands in two lines
        super().__init__(orientation, maxTickLength=_TICK_LENGTH)
        self.enableAutoSIPrefix(False)
        self.setStyle(
            tickTextOffset=_TEXT_OFFSET,
            maxTextLevel=0,
            tickAlpha=255,
            hideOverlappingLabels=24,
            # An axis that narrows with its labels would move the whole picture while zooming.
            autoReduceTextSpace=False,
        )

    def ticks_between(self, low: float, high: float, most: int) -> list[Tick]:
        """Return the ticks of the scale, at most `most` of them labelled."""
        raise NotImplementedError

    def set_font(self, font: QFont) -> None:
        """Write ticks and title in `font`."""
        self._font = QFont(font)
        metrics = QFontMetricsF(font)
        self.textWidth, self.textHeight = metrics.horizontalAdvance(_WIDEST_TAG), metrics.height()
        self.setStyle(tickFont=self._font)
        self.label.setFont(font)
        self._forget()
        self._updateLabel()

    def retheme(self, theme: Theme) -> None:
        """Take the colours of a theme."""
        self.setPen(theme.muted)
        self.setTickPen(theme.muted)
        self.setTextPen(theme.foreground)

    def labelString(self) -> str:
        """Answer pyqtgraph: the title, its unit in a second line where one line would not fit."""
        found = str(super().labelString())
        return found.replace(" (", "<br>(", 1) if self._is_broken else found

    def resizeEvent(self, event: QGraphicsSceneResizeEvent | None = None) -> None:
        """Break the title of an upright axis that has become too short for it."""
        if self._is_upright:
            fits = QFontMetricsF(self._font).horizontalAdvance(self.labelText) <= self.size().height()
            if self._is_broken == fits:
                self._is_broken = not fits
                self._updateLabel()
        super().resizeEvent(event)

    def setLabel(self, text: str | None = None, **how: str) -> None:
        """Write another title, in as many lines as it needs."""
        super().setLabel(text, **how)
        self.resizeEvent()

    def make_room(self, tag: str) -> None:
        """Widen an upright axis so that a tag does not lie over its title; it does not narrow again by itself."""
        width = QFontMetricsF(self._font).horizontalAdvance(tag + " ")
        if self._is_upright and width > self.textWidth:
            self.textWidth = width
            self._updateWidth()

    def cover(self, spans: Sequence[tuple[float, float]]) -> None:
        """Leave labels out that would touch the spans (in positions of the scale): a tag stands there."""
        if tuple(spans) != self._covered:
            self._covered = tuple(spans)
            self.picture = None
            self.update()

    def shown_ends(self) -> tuple[float, float]:
        """Return the positions at the two ends of what is shown."""
        low, high = sorted(float(end) for end in self.range)
        return low, high

    def position_of(self, value: float) -> float:
        """Return the position of a value as it is written on this axis; NaN or infinite where it has none."""
        return value

    def text_of(self, position: float) -> str:
        """Return what would be written at a position."""
        return f"{position:.5g}"

    def shown_ticks(self) -> list[Tick]:
        """Return the ticks for the present range, size and font."""
        low, high = sorted(self.range)
        size = self.geometry()
        length = size.height() if self._is_upright else size.width()
        key = (low, high, length, self._font.key())
        if key != self._ticks_for:
            self._ticks_for, self._ticks = key, self._fitting(low, high, length)
        return self._ticks

    def tickValues(self, _low: float, _high: float, _size: float) -> list[tuple[float, list[float]]]:
        """Answer pyqtgraph: the labelled ticks on the first level, the minor ones on the second."""
        ticks = self.shown_ticks()
        return [
            (1.0, [tick.position for tick in ticks if tick.major]),
            (1.0, [tick.position for tick in ticks if not tick.major]),
        ]

    def tickStrings(self, values: Sequence[float], _scale: float, _spacing: float) -> list[str]:
        """Answer pyqtgraph: the labels, left blank where a tag covers them."""
        labels = {tick.position: tick.label for tick in self.shown_ticks()}
        return ["" if self._is_covered(value, labels[value]) else labels[value] for value in values]

    def label_size(self, text: str) -> float:
        """Return the length a label takes along the axis, in pixels."""
        metrics = QFontMetricsF(self._font)
        return float(metrics.height() if self._is_upright else metrics.horizontalAdvance(text))

    def _forget(self) -> None:
        """Work the ticks out anew at the next occasion."""
        self._ticks_for = ()
        self.picture = None
        self.update()

    @property
    def _is_upright(self) -> bool:
        return bool(self.orientation in ("left", "right"))

    def _pixels_each(self) -> float:
        low, high = (float(end) for end in sorted(self.range))
        size = self.geometry()
        return float(size.height() if self._is_upright else size.width()) / (high - low)

    def _fitting(self, low: float, high: float, length: float) -> list[Tick]:
        if not (high > low and length >= _LEAST_LENGTH):
            return []
        line = QFontMetricsF(self._font).height()
        if self._is_upright:
            return upright_ticks(self.ticks_between, low, high, length=length, line=line, room=self.room)
        room, width_of = self.room_between, self.label_size
        return level_ticks(self.ticks_between, low, high, length=length, line=line, room=room, width_of=width_of)

    def _is_covered(self, position: float, label: str) -> bool:
        half = 0.5 * self.label_size(label) / self._pixels_each()
        return any(position + half > low and position - half < high for low, high in self._covered)
