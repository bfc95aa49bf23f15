"""The upright axis of probability paper: round percents on the family's own scale."""

from __future__ import annotations

from reliability_app.engine.paper import ProbabilityScale, Tick
from reliability_app.windows.charts.round_axis import RoundAxis


class ProbabilityAxis(RoundAxis):
    """Shows z of a family's probability scale as percents."""

    def __init__(self, family_name: str) -> None:
        self.scale_of_family = ProbabilityScale(family_name)
        super().__init__("left")

    def set_family(self, family_name: str) -> None:
        """Change over to the paper of another family."""
        if family_name != self.scale_of_family.family_name:
            self.scale_of_family = ProbabilityScale(family_name)
            self._forget()

    def position_of(self, value: float) -> float:
        """Return z of a percent."""
        return float(self.scale_of_family.to_scale(0.01 * value)) if 0.0 < value < 100.0 else float("nan")

    def text_of(self, position: float) -> str:
        """Return the percent at z."""
        low, high = self.scale_of_family.limits
        return f"{100.0 * float(self.scale_of_family.from_scale(min(max(position, low), high))):.5g}"

    def ticks_between(self, low: float, high: float, most: int) -> list[Tick]:
        """Return the percents between two z."""
        limit_low, limit_high = self.scale_of_family.limits
        low, high = max(low, limit_low), min(high, limit_high)
        return self.scale_of_family.ticks(low, high, most) if low < high else []
