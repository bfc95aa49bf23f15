"""Probability paper: the scales of probability and age, both ways, with round ticks at any magnification."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator
from decimal import Decimal
from math import exp, expm1, floor, isfinite, log, log10
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

from reliability_app.engine.families import family
from reliability_app.engine.round_numbers import Room, decimals_of, multiples, round_step_of_at_least
from reliability_app.engine.scale_ticks import (
    Tick,
    Zoom,
    age_labels,
    between_percents,
    between_values,
    built,
    fullest,
    percent_labels,
)

__all__ = ["AgeScale", "AgeScaleKind", "ProbabilityScale", "Tick"]

Array = NDArray[np.float64]
AgeScaleKind = Literal["log", "linear"]

_HUNDRED = Decimal(100)
_HALF = Decimal(50)
_LEAST_LABEL = Decimal("1e-8")
_LEAST_FAILED = 1e-290  # percent; below it a fraction nears the end of the normal floating-point numbers
_LEAST_RUNNING = 1e-10  # percent; the last label before 100 % is 99.9999999999
_MINOR_SHARE = 0.2  # an unlabelled tick needs a fifth of the room of a labelled one
_FEWEST = 3  # labels below which a scale is refined
_LOG_TEN = log(10.0)
_FIRST_FIGURES = frozenset(Decimal(tenths) / 10 for tenths in (10, 12, 15, 20, 25, 30, 35, 40, 45, 50, 60, 70, 80, 90))
_MANY = 100  # more labels than any chart has
_FEW_DECADES = 2.05 * _LOG_TEN  # up to here 1-2-5 may leave room for more labels
_DECADE_STEPS = (1, 2, 3, 5, 10, 20, 50, 100, 200, 500)


class ProbabilityScale:
    """The probability scale of a family's paper: z with F(z) = fraction for its standard distribution F.

    A family's own distribution function is straight on its paper over log age: z = (ln age - mu)/sigma.
    Lognormal paper uses the normal quantile, Weibull paper z = ln(-ln(1 - F)) (Nelson 1982, Applied Life Data
    Analysis, ch. 3; cited from memory). By common practice exponential paper has -ln(1 - F) over linear age;
    here the exponential is drawn as what it is among the Weibulls, on ln(-ln(1 - F)) over log age with slope
    one, so that the two compare at a glance.

    Parameters
    ----------
    family_name : str
        A name of the catalogue; UnknownName is raised for any other.

    Attributes
    ----------
    limits : (float, float)
        The z of 10^-8 % and of 99.99999999 %: between them every range wider than 10^-6 has ticks.
    """

    def __init__(self, family_name: str) -> None:
        self.family_name = family_name
        self._standard = family(family_name).standard
        self.limits = (self._position(_LEAST_LABEL), self._position(_HUNDRED - _LEAST_LABEL))

    def to_scale(self, fraction: ArrayLike) -> Array:
        """Return z for fractions failed (any shape, each in [0, 1]).

        0 and 1 give -inf and inf, NaN stays NaN; ValueError for anything outside.
        """
        values = np.asarray(fraction, dtype=float)
        if np.any((values < 0.0) | (values > 1.0)):
            raise ValueError("A fraction failed lies between 0 and 1; pass 0.1 for 10 %.")
        with np.errstate(divide="ignore"):
            return np.asarray(self._standard.quantile(values), dtype=float)

    def from_scale(self, z: ArrayLike) -> Array:
        """Return the fractions failed (any shape) at z; infinite z give 0 and 1."""
        with np.errstate(over="ignore", under="ignore"):
            return np.asarray(self._standard.cdf(np.asarray(z, dtype=float)), dtype=float)

    def ticks(self, z_low: float, z_high: float, most: int = 12) -> list[Tick]:
        """Return the ticks between two z, ascending: at most `most` labelled round percents and minor ones.

        The percents are 0.01 0.1 0.5 1 2 5 10 20 30 ... 90 95 99 99.9 and so on into both tails, thinned to
        those that keep 1/(most - 1) of the range apart; zoomed in, multiples of 1-2-5 steps replace them.
        """
        _check_range(z_low, z_high, most)
        gap, visible = (z_high - z_low) / (most - 1), (z_low, z_high)
        room = Room(gap)
        taken = [percent for percent in self._usual(z_low, z_high) if room.accept(self._position(percent))]
        zoom = self._zoom(z_low, z_high, gap)
        if zoom.seen(taken, self._position) < min(_FEWEST, most):

            def percents(step: Decimal, reach: float) -> list[Decimal]:
                return _percents(step, *self._around(z_low - reach, z_high + reach))

            taken = fullest(taken, percents, self._position, zoom)
        return built(
            taken,
            percent_labels,
            between_percents,
            self._position,
            visible=visible,
            minor_gap=_MINOR_SHARE * gap,
        )

    def _position(self, percent: Decimal) -> float:
        """Return z of a percent; beyond 50 % it is asked of the survival, where nothing cancels."""
        if percent <= _HALF:
            return float(self._standard.quantile(np.asarray(float(percent.scaleb(-2)))))
        return float(self._standard.survival_quantile(np.asarray(float((_HUNDRED - percent).scaleb(-2)))))

    def _failed(self, z: float) -> float:
        """Return the percent failed at z, not less than there are labels for."""
        with np.errstate(under="ignore"):
            return max(100.0 * float(self._standard.cdf(np.asarray(z))), _LEAST_FAILED)

    def _running(self, z: float) -> float:
        """Return the percent running at z, not less than there are labels for."""
        with np.errstate(over="ignore", under="ignore"):
            return max(100.0 * float(self._standard.survival(np.asarray(z))), _LEAST_RUNNING)

    def _usual(self, z_low: float, z_high: float) -> Iterator[Decimal]:
        """Give the usual percents from the most to the least wanted, each rank from the middle outwards."""
        failed, running = floor(log10(self._failed(z_low))), floor(log10(self._running(z_high)))
        outwards = range(1, min(failed, running, 1) - 1, -1)

        def both(digit: int, exponents: Iterable[int]) -> Iterator[Decimal]:
            for exponent in exponents:
                percent = Decimal(digit).scaleb(exponent)
                if exponent >= failed:
                    yield percent
                if exponent >= running:
                    yield _HUNDRED - percent

        yield _HALF
        yield from both(1, outwards)
        for digit, middles in ((5, (30, 70)), (2, (20, 80, 40, 60))):
            yield from map(Decimal, middles)
            yield from both(digit, outwards[1:])

    def _around(self, z_low: float, z_high: float) -> tuple[tuple[float, float], tuple[float, float]]:
        """Return the range of the percents failed up to 50, and that of those running up to 50."""
        failed = min(self._failed(z_low), 50.0), min(self._failed(z_high), 50.0)
        running = min(self._running(z_high), 50.0), min(self._running(z_low), 50.0)
        return failed, running

    def _zoom(self, z_low: float, z_high: float, gap: float) -> Zoom:
        """Return the range with the steps of percent that can serve it."""
        failed, running = self._around(z_low, z_high)
        steps = (
            self._failed(z_low + gap) - self._failed(z_low),
            self._running(z_high - gap) - self._running(z_high),
        )
        start = max(failed[1] - failed[0], running[1] - running[0])
        return Zoom(z_low, z_high, gap, start=start, finest=min(steps))


def _percents(step: Decimal, failed: tuple[float, float], running: tuple[float, float]) -> list[Decimal]:
    """Return the multiples of `step` in two ranges, each counted from its own end of the scale."""
    below = multiples(step, *failed) if failed[1] > failed[0] else []
    above = multiples(step, *running) if running[1] > running[0] else []
    return [p for p in below if 0 < p <= _HALF] + [_HUNDRED - c for c in above if 0 < c < _HALF]


class AgeScale:
    """The age scale: position = ln(age) ("log") or the age itself ("linear").

    Parameters
    ----------
    kind : {"log", "linear"}
    """

    def __init__(self, kind: AgeScaleKind) -> None:
        if kind not in ("log", "linear"):
            raise ValueError(f"An age scale is 'log' or 'linear', not {kind!r}.")
        self.kind: AgeScaleKind = kind

    def to_scale(self, age: ArrayLike) -> Array:
        """Return positions for ages (any shape); on a log scale age 0 gives -inf and a negative age NaN."""
        values = np.asarray(age, dtype=float)
        if self.kind == "linear":
            return values
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(np.log(values), dtype=float)

    def from_scale(self, position: ArrayLike) -> Array:
        """Return the ages (any shape) at positions."""
        values = np.asarray(position, dtype=float)
        if self.kind == "linear":
            return values
        with np.errstate(over="ignore", under="ignore"):
            return np.asarray(np.exp(values), dtype=float)

    def ticks(self, low: float, high: float, most: int = 10) -> list[Tick]:
        """Return the ticks between two positions, ascending: at most `most` labelled ages and minor ones.

        Linear: multiples of a 1-2-5 step. Log: 1-2-5 in each decade where that has room, else every decade,
        every second, third, ...; on two decades or less further round ages where they have room.
        """
        _check_range(low, high, most)
        gap, visible = (high - low) / (most - 1), (low, high)
        position: Callable[[Decimal], float] = _log_of if self.kind == "log" else float
        decimals = None
        if self.kind == "log":
            taken = _log_ages(visible, gap, most)
        else:
            taken = _even_ages(low, high, gap)
            decimals = decimals_of(taken)
        return built(
            taken,
            lambda ages: age_labels(ages, decimals=decimals),
            between_values,
            position,
            visible=visible,
            minor_gap=_MINOR_SHARE * gap,
        )


def _even_ages(low: float, high: float, gap: float) -> list[Decimal]:
    """Return the labelled ages of a linear scale, and the next ones just outside the range."""
    step = round_step_of_at_least(gap)
    taken = multiples(step, low - float(step), high + float(step))
    zoom = Zoom(low, high, gap, start=high - low, finest=gap)
    if zoom.seen(taken, float) >= 2:
        return taken
    return fullest(taken, lambda step, reach: multiples(step, low - reach, high + reach), float, zoom)


def _log_of(age: Decimal) -> float:
    return log(age)


def _log_ages(visible: tuple[float, float], gap: float, most: int) -> list[Decimal]:
    """Return the labelled ages of a log scale, and the next ones just outside the range."""
    low, high = visible
    room = Room(gap)
    every = next((n for n in _DECADE_STEPS if n * _LOG_TEN >= gap), _DECADE_STEPS[-1])
    first, last = floor(low / _LOG_TEN / every) * every, floor(high / _LOG_TEN) + every
    decades = [Decimal(1).scaleb(exponent) for exponent in range(first, last + 1, every)]
    taken = [age for age in decades if room.accept(_log_of(age))]
    between = [age * digit for age in decades for digit in (2, 5)]
    if every == 1 and room.accept_all([_log_of(age) for age in between]):
        taken += between
    least = exp(low)
    zoom = Zoom(low, high, gap, exp(high) - least, finest=least * expm1(gap), first_figures=_FIRST_FIGURES)
    if high - low >= _FEW_DECADES and zoom.seen(taken, _log_of) >= min(_FEWEST, most):
        return taken

    def ages(step: Decimal, reach: float) -> list[Decimal]:
        return _multiples_on_log(step, exp(low - reach), exp(high + reach))

    return fullest(taken, ages, _log_of, zoom)


def _multiples_on_log(step: Decimal, low: float, high: float) -> list[Decimal]:
    """Return the multiples of `step` in a range of ages; of very many, those that begin with a round figure."""
    if (high - low) / float(step) <= _MANY:
        return [age for age in multiples(step, low, high) if age > 0]
    exponents = range(floor(log10(low)), floor(log10(high)) + 1)
    ages = [figure.scaleb(exponent) for exponent in exponents for figure in _FIRST_FIGURES]
    return sorted(age for age in ages if low <= age <= high and age % step == 0)


def _check_range(low: float, high: float, most: int) -> None:
    if not (isfinite(low) and isfinite(high) and low < high):
        raise ValueError(f"A scale needs a finite range with its lower end first, not {low!r} to {high!r}.")
    if most < 2:
        raise ValueError(f"A scale needs room for at least two labels, not {most!r}.")
