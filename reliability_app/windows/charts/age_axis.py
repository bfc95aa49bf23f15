"""The level axis of every chart: age, on a log or a linear scale; and the even upright axis of the curve pages."""

from __future__ import annotations

from reliability_app.engine.paper import AgeScale, AgeScaleKind, Tick
from reliability_app.windows.charts.round_axis import RoundAxis

_ROOM_BETWEEN: dict[AgeScaleKind, float] = {"log": 1.2, "linear": 2.2}


class AgeAxis(RoundAxis):
    """Shows positions of an age scale as ages."""

    def __init__(self, kind: AgeScaleKind) -> None:
        self.age_scale = AgeScale(kind)
        self.room_between = _ROOM_BETWEEN[kind]
        super().__init__("bottom")

    def set_kind(self, kind: AgeScaleKind) -> None:
        """Change over to a log or a linear scale."""
        if kind != self.age_scale.kind:
            self.age_scale = AgeScale(kind)
            self.room_between = _ROOM_BETWEEN[kind]
            self._forget()

    def ticks_between(self, low: float, high: float, most: int) -> list[Tick]:
        """Return the ages between two positions."""
        return self.age_scale.ticks(low, high, most)


class EvenAxis(RoundAxis):
    """An upright axis with even steps, for percents running and hazard rates."""

    room = 2.6

    def __init__(self) -> None:
        self._scale = AgeScale("linear")
        super().__init__("left")

    def ticks_between(self, low: float, high: float, most: int) -> list[Tick]:
        """Return the round values between two values."""
        return self._scale.ticks(low, high, most)
