"""An axis whose ticks come from the engine's scales: as many labels as have room at this size and font."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise
from math import ceil

import pyqtgraph as pg
from PySide6.QtGui import QFont, QFontMetricsF

from reliability_app.engine.paper import Tick
from reliability_app.windows.theme import Theme

_TICK_LENGTH = 4
_TEXT_OFFSET = 3
_WIDEST_TAG = "99.9 % "  # the tag of a usual reading has its place, so that the axis need not widen for it
_LEAST_LENGTH = 40.0  # pixels; a shorter axis is not worth a label


class RoundAxis(pg.AxisItem):  # type: ignore[misc]  # pyqtgraph ships no types
    """The common part of the axes: adaptive round ticks, theme, font, and place kept free for the reading's tag.

    `room` is the line heights an upright axis gives each label, `room_between` what a level one leaves between.
    """

    room = 1.6
    room_between = 1.2

    def __init__(self, orientation: str) -> None:
        self._font = QFont()
        self._covered: tuple[tuple[float, float], ...] = ()
        self._ticks: list[Tick] = []
        self._ticks_for: tuple[object, ...] = ()
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

    def cover(self, spans: Sequence[tuple[float, float]]) -> None:
        """Leave labels out that would touch the spans (in positions of the scale): a tag stands there."""
        if tuple(spans) != self._covered:
            self._covered = tuple(spans)
            self.picture = None
            self.update()

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
            return self.ticks_between(low, high, max(2, int(length / (self.room * line)) + 1))
        return self._fitting_level(low, high, length, line)

    def _fitting_level(self, low: float, high: float, length: float, line: float) -> list[Tick]:
        """Return the most labels that keep apart side by side, whatever their widths are."""
        most, each = max(2, int(length / (2.5 * line))), length / (high - low)
        while True:
            ticks = self.ticks_between(low, high, most)
            labelled = [(tick.position, self.label_size(tick.label)) for tick in ticks if tick.major]
            # How much of the room it needs each pair of neighbours has.
            shares = [
                (after - before) * each / (0.5 * (size_before + size_after) + self.room_between * line)
                for (before, size_before), (after, size_after) in pairwise(labelled)
            ]
            tightest = min(shares, default=1.0)
            if tightest >= 1.0 or most == 2:
                return ticks
            most = max(2, min(most - 1, ceil(most * tightest)))

    def _is_covered(self, position: float, label: str) -> bool:
        half = 0.5 * self.label_size(label) / self._pixels_each()
        return any(position + half > low and position - half < high for low, high in self._covered)
