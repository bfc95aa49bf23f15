"""Ticks of a scale: which round numbers are labelled, what stands between them, and how they are written."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
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

_REFINING_STEPS = 60  # twenty decades of 1-2-5 steps: more than a float can tell apart
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


def refined(
    candidates: Callable[[Decimal], list[Decimal]],
    position: Position,
    *,
    start: float,
    gap: float,
) -> list[Decimal]:
    """Choose multiples of round steps: all of the finest even step that has room, then finer ones where they fit.

    Parameters
    ----------
    candidates : callable
        Gives the values to try for a step.
    position : callable
        Where a value stands on the scale.
    start : float
        The span of the values; no step is larger.
    gap : float
        The least distance between two positions.
    """
    room = Room(gap)
    taken: list[Decimal] = []
    even: list[Decimal] | None = None
    for step in islice(round_steps(start), _REFINING_STEPS):
        values = candidates(step)
        distances = [right - left for left, right in pairwise(sorted(map(position, values)))]
        if distances and max(distances) < gap:
            break
        if not distances or min(distances) >= gap:
            even = values
            continue
        taken += [value for value in even or () if room.accept(position(value))]
        even = None
        taken += [value for value in values if room.accept(position(value))]
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
    """Make the visible ticks, ascending: the labelled ones and, where they have room, round values between them.

    `labels` writes the visible ones of `taken` all at once; `between` gives the subdivisions of an interval from the
    finest to the coarsest, of which the first that fits is used.
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
    """Give subdivisions of an interval of ages: decades over a wide one, 2 to 9 in a decade, else even steps."""
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
    """Write the ages of one axis alike: plainly, or all as powers of ten where that is shorter for large or tiny ones.

    With `decimals` every plain age has that many places, as fits an even step.
    """
    plain = [plain_text(age, decimals) for age in ages]
    sizes = [abs(age) for age in ages if age != 0]
    least, largest = _PLAIN_AGES
    if not sizes or (max(sizes) <= largest and min(sizes) >= least):
        return plain
    powers = [power_text(age) for age in ages]
    return powers if max(map(len, powers)) <= max(map(len, plain)) else plain
