"""What a chart draws of one set: a fitted line with its band, marks of units, and the marks along the lower edge."""

from __future__ import annotations

from collections.abc import Callable, Collection, Sequence
from functools import cached_property

import numpy as np
import pyqtgraph as pg
from numpy.typing import NDArray
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QColor, QFont, QPainter, QPainterPath, QPen
from PySide6.QtWidgets import QGraphicsPathItem

from reliability_app.windows.theme import SeriesStyle, Theme

Floats = NDArray[np.float64]
Integers = NDArray[np.int64]

BAND_DEPTH, LINE_DEPTH, STEPS_DEPTH, MARKS_DEPTH = -30.0, -20.0, -10.0, 10.0
_LINE_WIDTH = 2.0
_MOST_NUMBERS = 40
_MOST_WITH_TIPS = 5000  # pyqtgraph looks at every mark when the mouse moves
_CROWD = 150
BAND_SHARE = {False: 0.12, True: 0.16}  # how strongly a band's ground is coloured, on light and on dark


def smooth_curve() -> pg.PlotCurveItem:
    """Return an empty line that breaks where its values do not exist."""
    return pg.PlotCurveItem(connect="finite", antialias=True)


class FitLine:
    """A fitted line with its band: two edges, or one edge filled towards the line."""

    def __init__(self, view_box: pg.ViewBox) -> None:
        self._view_box = view_box
        self.band = QGraphicsPathItem()
        self.band.setPen(QPen(Qt.PenStyle.NoPen))
        self.band.setZValue(BAND_DEPTH)
        self.line, self.low_edge, self.high_edge = (smooth_curve() for _ in range(3))
        for item in (self.band, self.low_edge, self.high_edge, self.line):
            view_box.addItem(item, ignoreBounds=True)
        for curve in (self.line, self.low_edge, self.high_edge):
            curve.setZValue(LINE_DEPTH)

    def show(self, x: Floats, y: Floats, lower: Floats | None, upper: Floats | None) -> None:
        """Show the line y over x; a bound that is None is open, one that is NaN does not exist there."""
        self.line.setData(x, y)
        for edge, bound in ((self.low_edge, lower), (self.high_edge, upper)):
            edge.setVisible(bound is not None)
            if bound is not None:
                edge.setData(x, bound)
        path = QPainterPath()
        if lower is not None or upper is not None:
            path = band_path(x, y if lower is None else lower, y if upper is None else upper)
        self.band.setPath(path)

    def clear(self) -> None:
        """Show nothing."""
        nothing = np.empty(0)
        self.show(nothing, nothing, None, None)

    def dress(self, style: SeriesStyle, *, is_dark: bool) -> None:
        """Take the colour and the dash of a set."""
        colour = QColor(style.colour)
        self.line.setPen(pg.mkPen(colour, width=_LINE_WIDTH, style=style.dash))
        edge, ground = QColor(colour), QColor(colour)
        edge.setAlphaF(0.65)
        ground.setAlphaF(BAND_SHARE[is_dark])
        for curve in (self.low_edge, self.high_edge):
            curve.setPen(pg.mkPen(edge, width=1.0))
        self.band.setBrush(ground)

    def remove(self) -> None:
        """Take the items out of the view for good."""
        for item in (self.band, self.low_edge, self.high_edge, self.line):
            self._view_box.removeItem(item)


class CountedSpots(pg.ScatterPlotItem):  # type: ignore[misc]  # pyqtgraph ships no types
    """Marks beside which a small number stands where one mark is several units."""

    def __init__(self) -> None:
        super().__init__(pxMode=True, hoverable=True, tip=None)
        self._numbers: list[tuple[int, str]] = []
        self._ink, self._text_font = QColor(), QFont()

    def set_counts(self, counts: Sequence[int]) -> None:
        """Say how many units each mark is; where very many marks are several units, no number is written."""
        numbers = [(at, str(count)) for at, count in enumerate(counts) if count > 1]
        self._numbers = numbers if len(numbers) <= _MOST_NUMBERS else []
        self.update()

    def dress_numbers(self, ink: str, font: QFont) -> None:
        """Take colour and font of the numbers."""
        self._ink, self._text_font = QColor(ink), QFont(font)
        self.update()

    def paint(self, painter: QPainter, *args: object) -> None:
        """Draw the marks and the numbers, which keep their size at every zoom."""
        transform = painter.transform()
        super().paint(painter, *args)
        if not self._numbers:
            return
        painter.resetTransform()
        painter.setFont(self._text_font)
        painter.setPen(self._ink)
        for at, text in self._numbers:
            spot = self.data[at]
            where = transform.map(QPointF(float(spot["x"]), float(spot["y"])))
            painter.drawText(where + QPointF(0.5 * self.opts["size"] + 1.0, -0.25 * self.opts["size"]), text)


class Marks:
    """Marks of units in the colour and shape of their set, filled or open."""

    def __init__(self, view_box: pg.ViewBox, *, filled: bool) -> None:
        self._view_box, self._filled = view_box, filled
        self._count = 0
        self._rows: tuple[tuple[int, ...], ...] = ()
        self._looks: tuple[object, ...] = ()
        self.item = CountedSpots()
        self.item.setZValue(MARKS_DEPTH)
        view_box.addItem(self.item, ignoreBounds=True)

    def show(
        self,
        x: Floats,
        y: Floats,
        *,
        counts: Integers,
        tip: Callable[[int], str],
        rows: Sequence[tuple[int, ...]] = (),
    ) -> None:
        """Show a mark at each finite point.

        Parameters
        ----------
        x, y : ndarray, shape (n,)
            Positions of the axes.
        counts : ndarray of int, shape (n,)
            Units that each mark is.
        tip : callable
            What to say of the mark with this index while the mouse is over it.
        rows : sequence of tuple of int
            The rows of the unit table that each mark stands for.
        """
        at = np.flatnonzero(np.isfinite(x) & np.isfinite(y))
        self._count = at.size
        self._rows = tuple(rows[place] for place in at.tolist()) if rows else ()
        self.__dict__.pop("_owners", None)
        says_tips = at.size <= _MOST_WITH_TIPS
        self.item.setData(
            x=x[at],
            y=y[at],
            data=at.tolist(),
            hoverable=says_tips,
            tip=(lambda x, y, data: tip(data)) if says_tips else None,  # noqa: ARG005 - pyqtgraph names them
        )
        self.item.set_counts(counts[at].tolist() if at.size <= _CROWD else ())

    def dress(
        self, style: SeriesStyle, theme: Theme, *, size: float, font: QFont, symbol: QPainterPath | None = None
    ) -> None:
        """Take the looks of a set; filled marks get a rim of ground so that neighbours stay apart.

        In a crowd the marks are smaller, and without the rim that would wash it out. `symbol` takes the place of
        the set's own mark.
        """
        crowded = self._count > _CROWD
        looks = (style, theme.background, theme.muted, size, font.key(), crowded, symbol is None)
        if looks == self._looks:
            return  # each of the following goes through every mark
        self._looks = looks
        self.item.setSymbol(style.symbol if symbol is None else symbol)
        self.item.setSize(round(0.65 * size) if crowded else size)
        self.item.dress_numbers(theme.muted, font)
        if self._filled:
            rim = pg.mkPen(None) if crowded else pg.mkPen(theme.background, width=0.75)
            self.item.setPen(rim)
            self.item.setBrush(pg.mkBrush(style.colour))
        else:
            self.item.setPen(pg.mkPen(style.colour, width=1.25))
            self.item.setBrush(pg.mkBrush(theme.background))

    def places_of(self, rows: Collection[int]) -> Integers:
        """Return which of the marks shown stand for any of these rows."""
        flat, owner = self._owners
        wanted = np.fromiter(rows, np.int64, len(rows))
        return np.unique(owner[np.isin(flat, wanted)])

    def rows_at(self, spot: QPointF) -> list[int]:
        """Return the rows of the marks at a point of the scene."""
        if not self._rows:
            return []
        found = self.item.pointsAt(self.item.mapFromScene(spot))
        return [row for point in found for row in self._rows[point.index()]]

    def rows_within(self, frame: QRectF) -> list[int]:
        """Return the rows of the marks in a frame of the view."""
        if not self._rows:
            return []
        x, y = (np.asarray(values) for values in self.item.getData())
        shift = self.item.pos()
        inside = (x + shift.x() >= frame.left()) & (x + shift.x() <= frame.right())
        inside &= (y + shift.y() >= frame.top()) & (y + shift.y() <= frame.bottom())
        return [row for place in np.flatnonzero(inside).tolist() for row in self._rows[place]]

    @cached_property
    def _owners(self) -> tuple[Integers, Integers]:
        """Each row, and the mark that stands for it."""
        counts = [len(group) for group in self._rows]
        flat = np.fromiter((row for group in self._rows for row in group), np.int64, sum(counts))
        return flat, np.repeat(np.arange(len(counts)), counts)

    def remove(self) -> None:
        """Take the marks out of the view for good."""
        self._view_box.removeItem(self.item)


class EdgeMarks(Marks):
    """Open marks that stand on the lower edge of the view wherever the view goes."""

    def __init__(self, view_box: pg.ViewBox) -> None:
        super().__init__(view_box, filled=False)
        self._height = 0.0
        self._carried: list[pg.GraphicsObject] = []
        view_box.sigYRangeChanged.connect(self._follow)
        view_box.sigResized.connect(self._follow)

    def stand(
        self, x: Floats, *, counts: Integers, tip: Callable[[int], str], rows: Sequence[tuple[int, ...]] = ()
    ) -> None:
        """Show a mark at each finite x."""
        self.show(x, np.zeros_like(x), counts=counts, tip=tip, rows=rows)
        self._follow()

    def carry(self, item: pg.GraphicsObject) -> None:
        """Keep another item at the same height, the latest only."""
        self._carried = [item]
        self._follow()

    def raise_to(self, height: float) -> None:
        """Stand `height` pixels above the lower edge."""
        self._height = height
        self._follow()

    def _follow(self, *_: object) -> None:
        pixels = float(self._view_box.height())
        if pixels > 0.0:
            low, high = self._view_box.viewRange()[1]
            for item in [self.item, *self._carried]:
                item.setPos(0.0, low + self._height * (high - low) / pixels)

    def remove(self) -> None:
        """Take the marks out of the view for good."""
        self._view_box.sigYRangeChanged.disconnect(self._follow)
        self._view_box.sigResized.disconnect(self._follow)
        super().remove()


def band_path(x: Floats, lower: Floats, upper: Floats) -> QPainterPath:
    """Return the area between two edges, in one piece for each stretch on which both exist."""
    path = QPainterPath()
    exists = np.isfinite(x) & np.isfinite(lower) & np.isfinite(upper)
    borders = np.flatnonzero(np.diff(np.concatenate([[False], exists, [False]]).astype(int)))
    for start, stop in borders.reshape(-1, 2):
        piece = slice(int(start), int(stop))
        around_x = np.concatenate([x[piece], x[piece][::-1]])
        around_y = np.concatenate([upper[piece], lower[piece][::-1]])
        path.addPolygon(pg.functions.arrayToQPolygonF(around_x, around_y))
        path.closeSubpath()
    return path
