"""The age axis, on a log or a linear scale; and the axis with even steps."""

from __future__ import annotations

import numpy as np

from reliability_app.engine.paper import AgeScale, AgeScaleKind, Tick
from reliability_app.reports.axis_ticks import EVEN_ROOM, LEVEL_ROOM
from reliability_app.windows.charts.round_axis import RoundAxis


class AgeAxis(RoundAxis):
    """Shows positions of an age scale as ages."""

    def __init__(self, kind: AgeScaleKind) -> None:
        self.age_scale = AgeScale(kind)
        self.room_between = LEVEL_ROOM[kind]
        super().__init__("bottom")

    def set_kind(self, kind: AgeScaleKind) -> None:
        """Change over to a log or a linear scale."""
        if kind != self.age_scale.kind:
            self.age_scale = AgeScale(kind)
            self.room_between = LEVEL_ROOM[kind]
            self._forget()

    def position_of(self, value: float) -> float:
        """Return the position of an age."""
        with np.errstate(divide="ignore", invalid="ignore"):
            return float(self.age_scale.to_scale(value))

    def text_of(self, position: float) -> str:
        """Return the age at a position."""
        return f"{float(self.age_scale.from_scale(position)):.5g}"

    def ticks_between(self, low: float, high: float, most: int) -> list[Tick]:
        """Return the ages between two positions."""
        return self.age_scale.ticks(low, high, most)


class EvenAxis(RoundAxis):
    """An axis with even steps, for percents running, rates, parameters and scores."""

    room = EVEN_ROOM
    room_between = LEVEL_ROOM["linear"]

    def __init__(self, orientation: str = "left") -> None:
        self._scale = AgeScale("linear")
        super().__init__(orientation)

    def ticks_between(self, low: float, high: float, most: int) -> list[Tick]:
        """Return the round values between two values."""
        return self._scale.ticks(low, high, most)
