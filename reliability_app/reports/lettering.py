"""Text of a picture: measured and drawn alike on every device, as text or as outlines of its letters."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property
from itertools import pairwise

from PySide6.QtCore import QPointF, Qt
from PySide6.QtGui import QBrush, QColor, QFont, QFontMetricsF, QPainter, QPainterPath, QTransform

# Letters are measured large and without hinting, and drawn scaled down: their places then hang on no device's pixels.
_DRAWN_AT = 200


@dataclass(frozen=True)
class Lettering:
    """One size of text.

    Attributes
    ----------
    size : float
        Height of the font in points, 1/72 of an inch.
    family : str
        A font family; empty for the program's usual one.
    as_outlines : bool
        Draw the outlines of the letters, which look the same where the font is missing.
    """

    size: float
    family: str = ""
    as_outlines: bool = False

    def times(self, factor: float) -> Lettering:
        """Return a larger or smaller lettering."""
        return replace(self, size=factor * self.size)

    @cached_property
    def _font(self) -> QFont:
        font = QFont(self.family) if self.family else QFont()
        font.setPixelSize(_DRAWN_AT)
        font.setHintingPreference(QFont.HintingPreference.PreferNoHinting)
        return font

    @cached_property
    def _metrics(self) -> QFontMetricsF:
        return QFontMetricsF(self._font)

    @property
    def _scale(self) -> float:
        return self.size / _DRAWN_AT

    @property
    def unit(self) -> float:
        """A twelfth of the size in points: the unit of all widths and marks."""
        return self.size / 12.0

    @cached_property
    def line_height(self) -> float:
        """Height of a line in points."""
        return self._metrics.height() * self._scale

    @cached_property
    def ascent(self) -> float:
        """Height of a line above its base line, in points."""
        return self._metrics.ascent() * self._scale

    def width(self, text: str) -> float:
        """Return the width of a text in points."""
        return self._metrics.horizontalAdvance(text) * self._scale

    def elided(self, text: str, width: float) -> str:
        """Return a text shortened in its middle to a width in points."""
        return self._metrics.elidedText(text, Qt.TextElideMode.ElideMiddle, width / self._scale)

    def wrapped(self, text: str, width: float) -> list[str]:
        """Return the lines of a text that fit into a width in points; a word that is longer is broken."""
        lines: list[str] = []
        for paragraph in text.splitlines():
            line = ""
            for word in paragraph.split(" "):
                longer = f"{line} {word}" if line else word
                if self.width(longer) <= width:
                    line = longer
                    continue
                if line:
                    lines.append(line)
                *full, line = self._broken(word, width)
                lines += full
            lines.append(line)
        return lines

    def _broken(self, word: str, width: float) -> list[str]:
        """Return a word in pieces, each as long as has room and of at least one character."""
        cuts = [0]
        for place in range(1, len(word)):
            if self.width(word[cuts[-1] : place + 1]) > width:
                cuts.append(place)
        return [word[start:stop] for start, stop in pairwise([*cuts, len(word)])]

    def draw(self, painter: QPainter, x: float, base: float, text: str, colour: QColor) -> None:
        """Write a text from x on, on a base line; x and base in points."""
        if not text:
            return
        if self.as_outlines:
            path = QPainterPath()
            path.addText(QPointF(0.0, 0.0), self._font, text)
            path.setFillRule(Qt.FillRule.WindingFill)
            placed = QTransform(self._scale, 0.0, 0.0, self._scale, x, base).map(path)
            painter.fillPath(placed, QBrush(colour))
            return
        painter.save()
        painter.translate(x, base)
        painter.scale(self._scale, self._scale)
        painter.setFont(self._font)
        painter.setPen(colour)
        painter.drawText(QPointF(0.0, 0.0), text)
        painter.restore()

    def draw_in_row(self, painter: QPainter, x: float, middle: float, text: str, colour: QColor) -> None:
        """Write a text from x on, on a line whose middle is at a height."""
        self.draw(painter, x, middle - 0.5 * self.line_height + self.ascent, text, colour)
