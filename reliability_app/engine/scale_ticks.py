"""Ticks of a scale: which round numbers are labelled, what stands between them, and how they are written."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, replace
from decimal import Decimal
from itertools import islice, pairwise

from reliability_app.engine.round_numbers import (
    Room,
    multiples,
    plain_text,
    power_text,
    round_step_of_at_least,
    round_steps,
)

Position = Callable[[Decimal], float]
Candidates = Callable[[Decimal, float], list[Decimal]]

_FEWEST_SEEN = 2
_MOST_STEPS = 60  # twenty decades of 1-2-5 steps: more than a float can tell apart
_PLAIN_AGES = (Decimal("0.001"), Decimal(1_000_000))  # outside, a whole axis is written in powers of ten
_LEAST_PLAIN_PERCENT = Decimal("0.0001")


@dataclass(frozen=True)
class Tick:
    """One tick of a scale.

    Attributes
    ----------
    position : float
        Where it stands, in the coordinate of the scale.
    label : str
        What is written beside it; empty for a minor tick.
    major : bool
        True for a labelled tick.
    """

    position: float
    label: str
    major: bool


@dataclass(frozen=True)
class Zoom:
    """What is looked at, and how close labels may stand.

    Attributes
    ----------
    low, high : float
        The visible range of positions.
    gap : float
        The least distance between two labels.
    start, finest : float
        The largest and the smallest step worth trying: the span of the values, and that of the gap where
        values lie closest.
    first_figures : frozenset of Decimal or None
        Where steps are mixed, the figures a value may begin with: on a log scale 1500 and 700 are round beside each
        other, 1700 is not. None allows all.
    """

    low: float
    high: float
    gap: float
    start: float
    finest: float
    first_figures: frozenset[Decimal] | None = None

    def seen(self, values: Sequence[Decimal], position: Position) -> int:
        """Count the values inside the visible range."""
        return sum(self.low <= position(value) <= self.high for value in values)

    def allows(self, value: Decimal) -> bool:
        """Tell whether a value is round enough to stand between others."""
        return self.first_figures is None or value.scaleb(-value.adjusted()) in self.first_figures


def fullest(usual: Sequence[Decimal], candidates: Candidates, position: Position, zoom: Zoom) -> list[Decimal]:
    """Return the usual values, or multiples of round steps instead or beside them, whichever shows most.

    Values just outside the range count as taken, so that labels stand still while the range moves; only where
    that would leave fewer than two in sight are they forgotten.

    Parameters
    ----------
    usual : sequence of Decimal
        Values that have room beside each other.
    candidates : callable
        Gives the multiples of a step in the visible range, widened on both sides by the second argument.
    position : callable
        Where a value stands on the scale.
    zoom : Zoom
        The range and the room.
    """
    reach = 0.5 * (zoom.high - zoom.low)
    choices = [list(usual)]
    choices.append(_multiples_with_room(lambda step: candidates(step, reach), position, zoom, given=usual))
    choices.append(_multiples_with_room(lambda step: candidates(step, reach), position, zoom))
    best = max(choices, key=lambda values: zoom.seen(values, position))
    if zoom.seen(best, position) >= _FEWEST_SEEN:
        return best
    closer = replace(zoom, finest=zoom.finest / 50.0, first_figures=None)
    inside = _multiples_with_room(lambda step: candidates(step, 0.0), position, closer)
    return max(best, inside, key=lambda values: zoom.seen(values, position))


def _multiples_with_room(
    candidates: Callable[[Decimal], list[Decimal]],
    position: Position,
    zoom: Zoom,
    given: Sequence[Decimal] = (),
) -> list[Decimal]:
    """Choose multiples: all of the finest round step that fits everywhere, then finer ones where they fit."""
    room = Room(zoom.gap)
    taken = [value for value in given if room.accept(position(value))]
    even: list[Decimal] | None = None
    for step in islice(round_steps(zoom.start), _MOST_STEPS):
        if float(step) < 0.5 * zoom.finest:  # half: 1-2-5 steps do not all hold each other's multiples
            break
        values = candidates(step)
        if not values:
            continue
        distances = [right - left for left, right in pairwise(sorted(map(position, values)))]
        if not distances or min(distances) >= zoom.gap:
            even = values
            continue
        taken += [value for value in even or () if room.accept(position(value))]
        even = None
        taken += [value for value in values if zoom.allows(value) and room.accept(position(value))]
    return taken + [value for value in even or () if room.accept(position(value))]


def built(
    taken: Sequence[Decimal],
    labels: Callable[[list[Decimal]], list[str]],
    between: Callable[[Decimal, Decimal], Iterator[list[Decimal]]],
    position: Position,
    *,
    visible: tuple[float, float],
    minor_gap: float,
) -> list[Tick]:
    """Make the visible ticks, ascending: the labelled ones and, where there is room, round values between.

    `labels` writes the visible ones of `taken` all at once; `between` gives the subdivisions of an interval
    from the finest to the coarsest, of which the first that fits is used.
    """
    low, high = visible
    slack = 1e-9 * (high - low)
    inside = [value for value in sorted(taken) if low - slack <= position(value) <= high + slack]
    ticks = [Tick(position(value), label, True) for value, label in zip(inside, labels(inside), strict=True)]
    for first, last in pairwise(sorted(taken)):
        if position(last) < low or position(first) > high:
            continue
        for values in between(first, last):
            where = [position(value) for value in (first, *values, last)]
            if all(right - left >= minor_gap for left, right in pairwise(where)):
                ticks += [Tick(place, "", False) for place in where[1:-1] if low <= place <= high]
                break
    return sorted(ticks, key=lambda tick: tick.position)


def between_values(first: Decimal, last: Decimal) -> Iterator[list[Decimal]]:
    """Give subdivisions of an interval: decades where it is wide, 2 to 9 inside a decade, else even steps."""
    if first > 0 and last > 10 * first:
        decades, value = [], first * 10
        while value < last:
            decades.append(value)
            value *= 10
        yield decades
    elif first > 0 and last == 10 * first:
        yield [first * digit for digit in range(2, 10)]
        yield [first * 2, first * 5]
    else:
        step = round_step_of_at_least(float(last - first) / 10.0)
        for size in (step, *(_next_steps(step))):
            if first % size == 0 and last % size == 0:
                yield multiples(size, float(first), float(last))[1:-1]


def between_percents(first: Decimal, last: Decimal) -> Iterator[list[Decimal]]:
    """Give subdivisions of an interval of percents, which beyond 50 % mirror those below."""
    if first < 50:
        yield from between_values(first, last)
    else:
        for complements in between_values(100 - last, 100 - first):
            yield [100 - complement for complement in reversed(complements)]


def _next_steps(step: Decimal) -> tuple[Decimal, Decimal]:
    """Return the two round steps above `step`."""
    second = round_step_of_at_least(float(step) * 1.5)
    return second, round_step_of_at_least(float(second) * 1.5)


def percent_labels(percents: Sequence[Decimal]) -> list[str]:
    """Write percents: 10, 0.1, 99.9, and as powers of ten below 0.0001."""
    return [power_text(p) if p < _LEAST_PLAIN_PERCENT else plain_text(p) for p in percents]


def age_labels(ages: Sequence[Decimal], *, decimals: int | None = None) -> list[str]:
    """Write the ages of one axis alike: plainly, or all as powers of ten where ages are large or tiny.

    With `decimals` every plain age has that many places, as fits an even step.
    """
    plain = [plain_text(age, decimals if age else 0) for age in ages]
    sizes = [abs(age) for age in ages if age != 0]
    least, largest = _PLAIN_AGES
    if not sizes or (max(sizes) <= largest and min(sizes) >= least):
        return plain
    powers = [power_text(age) for age in ages]
    return powers if max(map(len, powers)) < max(map(len, plain)) else plain
