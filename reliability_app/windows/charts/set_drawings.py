"""What a chart draws of its sets: one drawing each, that of the set in front above the same parts of the others."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from typing import Protocol

import pyqtgraph as pg
from PySide6.QtGui import QFont
from PySide6.QtWidgets import QGraphicsItem

from reliability_app.session.picture import SetPicture
from reliability_app.windows.charts.set_items import Marks
from reliability_app.windows.theme import SeriesStyle, Theme

_NEARER = 0.5  # less than lies between bands, lines, steps and marks


class SetDrawing(Protocol):
    """What a page draws of one set."""

    def show(self, picture: SetPicture, life_unit: str) -> None:
        """Draw a picture."""

    def dress(self, style: SeriesStyle, theme: Theme, *, mark_size: float, font: QFont) -> None:
        """Take the looks of the set."""

    def marks(self) -> Sequence[Marks]:
        """Return the marks that stand for units."""

    def remove(self) -> None:
        """Leave the plot for good."""


class SetDrawings(Sequence[SetDrawing]):
    """The drawings of the sets in a view, in the order of the sets."""

    def __init__(self, view_box: pg.ViewBox) -> None:
        self._ground = view_box.childGroup
        self._drawings: list[SetDrawing] = []
        self._depths: list[list[tuple[QGraphicsItem, float]]] = []

    def __getitem__(self, place: int) -> SetDrawing:  # type: ignore[override]  # slices are not needed
        return self._drawings[place]

    def __len__(self) -> int:
        return len(self._drawings)

    def __iter__(self) -> Iterator[SetDrawing]:
        return iter(self._drawings)

    def fit_to(self, count: int, make: Callable[[], SetDrawing]) -> None:
        """Have as many drawings as there are sets."""
        while len(self._drawings) > count:
            self._drop_last()
        while len(self._drawings) < count:
            before = set(self._ground.childItems())
            self._drawings.append(make())
            added = [item for item in self._ground.childItems() if item not in before]
            self._depths.append([(item, item.zValue()) for item in added])

    def forget(self) -> None:
        """Have everything drawn anew."""
        while self._drawings:
            self._drop_last()

    def bring_to_front(self, front: int) -> None:
        """Put the parts of one drawing above the same parts of the others."""
        for place, parts in enumerate(self._depths):
            for item, depth in parts:
                item.setZValue(depth + _NEARER if place == front else depth)

    def _drop_last(self) -> None:
        self._depths.pop()
        self._drawings.pop().remove()
