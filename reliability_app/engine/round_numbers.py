"""Round numbers for scales: 1-2-5 steps, multiples, their text, and choosing those that have room."""

from __future__ import annotations

from bisect import bisect_left, insort
from collections.abc import Iterable, Iterator, Sequence
from decimal import Decimal
from math import ceil, floor, log10

THOUSANDS = "\u202f"  # narrow no-break space, the separator of ISO 80000-1
_GROUPED_FROM = 10_000  # four figures are read at a glance
_SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")
_MOST_MULTIPLES = 4000


def round_steps(start: float) -> Iterator[Decimal]:
    """Give the round steps 5, 2, 1 times powers of ten downwards from the largest that is at most `start`."""
    exponent = floor(log10(start)) if start > 0.0 else 0
    while True:
        for digit in (5, 2, 1):
            step = Decimal(digit).scaleb(exponent)
            if float(step) <= start:
                yield step
        exponent -= 1


def round_step_of_at_least(size: float) -> Decimal:
    """Return the smallest round step (1, 2 or 5 times a power of ten) that is not below `size` > 0."""
    exponent = floor(log10(size))
    for shift in (0, 1):
        for digit in (1, 2, 5):
            step = Decimal(digit).scaleb(exponent + shift)
            if float(step) >= size * (1.0 - 1e-12):
                return step
    raise ArithmeticError(f"No round step of at least {size!r}.")


def multiples(step: Decimal, low: float, high: float) -> list[Decimal]:
    """Return the multiples of `step` in [low, high] exactly, or none where they would be too many to use."""
    size = float(step)
    if not size > 0.0 or (high - low) / size > _MOST_MULTIPLES:
        return []
    slack = 1e-9 * (high - low) / size
    first, last = ceil(low / size - slack), floor(high / size + slack)
    return [step * count for count in range(first, last + 1)]


class Room:
    """Accepts positions along a scale that keep `gap` between each other."""

    def __init__(self, gap: float) -> None:
        self._gap = gap * (1.0 - 1e-9)
        self._taken: list[float] = []

    def accept(self, position: float) -> bool:
        """Take `position` if there is room for it."""
        at = bisect_left(self._taken, position)
        if at > 0 and position - self._taken[at - 1] < self._gap:
            return False
        if at < len(self._taken) and self._taken[at] - position < self._gap:
            return False
        insort(self._taken, position)
        return True

    def accept_all(self, positions: Sequence[float]) -> bool:
        """Take all of `positions` or none of them."""
        before = list(self._taken)
        if all(self.accept(position) for position in positions):
            return True
        self._taken = before
        return False


def plain_text(value: Decimal, decimals: int | None = None) -> str:
    """Write a number, from 10 000 with thousands apart: with `decimals` places, or with as many as it has."""
    if decimals is None:
        value = value.normalize()
        decimals = max(0, -_exponent(value))
    text = f"{value:,.{decimals}f}" if abs(value) >= _GROUPED_FROM else f"{value:.{decimals}f}"
    return text.replace(",", THOUSANDS).replace("-", "\u2212")


def power_text(value: Decimal) -> str:
    """Write a number as a power of ten: 10⁶, 2×10⁻³, 1.25×10⁷; 1 and 10 stay as they are."""
    value = value.normalize()
    if value == 0:
        return "0"
    exponent = value.adjusted()
    if exponent in (0, 1) and len(value.as_tuple().digits) == 1:
        return plain_text(value)
    mantissa = value.scaleb(-exponent)
    power = "10" + str(exponent).translate(_SUPERSCRIPTS)
    return power if mantissa == 1 else f"{plain_text(mantissa)}×{power}"


def decimals_of(values: Iterable[Decimal]) -> int:
    """Return the decimal places that write every one of `values` exactly."""
    return max((max(0, -_exponent(value.normalize())) for value in values), default=0)


def _exponent(value: Decimal) -> int:
    exponent = value.as_tuple().exponent
    if not isinstance(exponent, int):
        raise ValueError(f"{value} is not a finite number.")
    return exponent
