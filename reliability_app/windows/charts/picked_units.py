"""Rings round the marks of the units that are selected in the table."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Protocol

import numpy as np
import pyqtgraph as pg
from PySide6.QtCore import QPointF, QRectF

from reliability_app.windows.charts.set_items import MARKS_DEPTH, EdgeMarks, Marks
from reliability_app.windows.theme import Theme

_RING_SHARE = 1.9  # size of a ring, in sizes of a mark
_ON_TOP = 1.0


class PickedUnits:
    """Draws the rings of one set; one item for marks on the chart, one for those that stand on its lower edge."""

    def __init__(self, view_box: pg.ViewBox) -> None:
        self.place = 0
        self._rows: frozenset[int] = frozenset()
        self._view_box = view_box
        self.rings = pg.ScatterPlotItem(pxMode=True, symbol="o")
        self._edge_rings: list[tuple[EdgeMarks, pg.ScatterPlotItem]] = []
        self._pen, self._size = pg.mkPen("k"), 16.0
        self._add(self.rings)

    @property
    def count(self) -> int:
        """How many marks are ringed."""
        return len(self.rings.data) + sum(len(item.data) for _, item in self._edge_rings)

    def choose(self, place: int, rows: Sequence[int]) -> None:
        """Ring these rows of the set at `place`."""
        self.place, self._rows = place, frozenset(rows)

    def dress(self, theme: Theme, mark_size: float) -> None:
        """Take the theme: rings are in the colour of the text, so that they stand out from every set."""
        self._pen, self._size = pg.mkPen(theme.foreground, width=1.5), _RING_SHARE * mark_size
        for item in (self.rings, *(item for _, item in self._edge_rings)):
            item.setPen(self._pen)
            item.setSize(self._size)

    def show(self, drawn: Sequence[Marks]) -> None:
        """Ring the chosen units among these marks."""
        for _, item in self._edge_rings:
            self._view_box.removeItem(item)
        self._edge_rings = []
        x, y = [np.empty(0)], [np.empty(0)]
        for marks in drawn:
            at = marks.places_of(self._rows) if self._rows else np.empty(0, np.intp)
            if at.size == 0:
                continue
            across, along = (values[at] for values in marks.item.getData())
            if isinstance(marks, EdgeMarks):
                item = pg.ScatterPlotItem(pxMode=True, symbol="o")
                self._add(item)
                item.setData(across, along, **self._looks)
                marks.carry(item)
                self._edge_rings.append((marks, item))
            else:
                x.append(across)
                y.append(along)
        self.rings.setData(np.concatenate(x), np.concatenate(y), **self._looks)

    @property
    def _looks(self) -> dict[str, object]:
        return {"pen": self._pen, "brush": None, "size": self._size, "symbol": "o"}

    def _add(self, item: pg.ScatterPlotItem) -> None:
        item.setZValue(MARKS_DEPTH + _ON_TOP)
        self._view_box.addItem(item, ignoreBounds=True)


class Drawn(Protocol):
    """What is drawn of a set."""

    def marks(self) -> Sequence[Marks]:
        """Return the marks that stand for units."""


def rows_clicked(drawings: Sequence[Drawn], spot: QPointF) -> tuple[int, tuple[int, ...]]:
    """Return the set whose mark is at a point of the scene, the one on top first, and the rows of the mark."""
    for place in reversed(range(len(drawings))):
        rows = [row for marks in drawings[place].marks() for row in marks.rows_at(spot)]
        if rows:
            return place, tuple(dict.fromkeys(rows))
    return 0, ()


def rows_framed(drawings: Sequence[Drawn], frame: QRectF, *, first: int) -> tuple[int, tuple[int, ...]]:
    """Return the set that has marks in a frame, the one at `first` before the others, and the rows of its marks."""
    for place in sorted(range(len(drawings)), key=lambda place: place != first):
        rows = [row for marks in drawings[place].marks() for row in marks.rows_within(frame)]
        if rows:
            return place, tuple(dict.fromkeys(rows))
    return 0, ()
