"""Which ticks of a scale an axis shows: as many labels as have room at its length and in its font."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace
from itertools import pairwise
from math import ceil

from reliability_app.engine.paper import AgeScaleKind, Tick
from reliability_app.session.number_style import in_style

TicksBetween = Callable[[float, float, int], list[Tick]]

UPRIGHT_ROOM, EVEN_ROOM = 1.6, 2.6
"""Line heights an upright axis gives each label: on probability paper, and with even steps."""
LEVEL_ROOM: dict[AgeScaleKind, float] = {"log": 1.2, "linear": 2.2}
"""Line heights a level axis leaves between two labels."""


def upright_ticks(
    ticks: TicksBetween, low: float, high: float, *, length: float, line: float, room: float
) -> list[Tick]:
    """Return the ticks of an upright axis of this length, for labels of this line height."""
    return _in_style(ticks(low, high, max(2, int(length / (room * line)) + 1)))


def level_ticks(
    ticks: TicksBetween,
    low: float,
    high: float,
    *,
    length: float,
    line: float,
    room: float,
    width_of: Callable[[str], float],
) -> list[Tick]:
    """Return the most ticks whose labels keep apart side by side, whatever their widths are."""
    most, each = max(2, int(length / (2.5 * line))), length / (high - low)
    while True:
        found = _in_style(ticks(low, high, most))
        tightest = _tightest(found, each, room * line, width_of)
        if tightest >= 1.0 or most == 2:
            return found
        most = max(2, min(most - 1, ceil(most * tightest)))


def _in_style(ticks: list[Tick]) -> list[Tick]:
    """Return the ticks with the labels' thousands set off as the user chose."""
    return [tick if tick.label == (label := in_style(tick.label)) else replace(tick, label=label) for tick in ticks]


def _tightest(ticks: Sequence[Tick], each: float, room: float, width_of: Callable[[str], float]) -> float:
    """Return the least share that a pair of neighbours has of the room it needs."""
    labelled = [(tick.position, width_of(tick.label)) for tick in ticks if tick.major]
    shares = [
        (after - before) * each / (0.5 * (size_before + size_after) + room)
        for (before, size_before), (after, size_after) in pairwise(labelled)
    ]
    return min(shares, default=1.0)
