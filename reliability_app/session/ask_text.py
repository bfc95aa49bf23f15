"""Reads what a user types to ask for a reading, and offers every kind of reading as a text to be completed."""

from __future__ import annotations

import re
from dataclasses import dataclass

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import (
    AgeAtHazardAsk,
    Ask,
    ConditionalReliabilityAsk,
    HazardAsk,
    LifeAsk,
    MeanLifeAsk,
    ModeAsk,
    ReliabilityAsk,
    ResidualLifeAsk,
)
from reliability_app.session.numbers import UnreadableNumber, read_number

_BLIFE = re.compile(r"b\s*(?P<number>[\d.,]+)(\s*life)?", re.IGNORECASE)
_PERCENT = re.compile(r"(?P<number>.+?)\s*(%|percent)", re.IGNORECASE)
_MEAN = re.compile(r"(the\s+)?mean(\s+life)?", re.IGNORECASE)
_MODE = re.compile(r"(the\s+)?mode(\s+of\s+the\s+lives)?", re.IGNORECASE)
_RESIDUAL = re.compile(r"(mean\s+)?residual(\s+life)?(\s+at)?\s+(?P<age>.+)", re.IGNORECASE)
_GIVEN = re.compile(r"((reliability|r)(\s+at)?\s+)?(?P<age>.+?)[\s,]+given\s+(?P<given>.+)", re.IGNORECASE)
_AT_HAZARD = re.compile(
    r"(age\s+at\s+(the\s+)?(hazard(\s+rate)?|rate)(\s+of)?\s+|(hazard(\s+rate)?|rate)\s*=\s*)(?P<rate>.+?)"
    r"(\s*(per\s|/).*)?",
    re.IGNORECASE,
)
_HAZARD = re.compile(r"(hazard|rate)(\s+rate)?(\s+at)?\s+(?P<age>.+)", re.IGNORECASE)
_RELIABILITY = re.compile(r"((reliability|r)(\s+at)?\s+)?(?P<age>.+)", re.IGNORECASE)
_PLAIN = re.compile(r"[\d.,\s]+")

_USUAL_AGE, _USUAL_HAZARD = 1500.0, 0.001


class AskUnreadable(RigpaperError):
    """Text that names no reading."""


@dataclass(frozen=True)
class Offer:
    """A kind of reading, as a text to be completed.

    Attributes
    ----------
    title : str
        What it is called.
    text : str
        What asks for it, with an example.
    example : str
        The part of the text to be replaced; empty where nothing is to be completed.
    """

    title: str
    text: str
    example: str = ""


def offers(life_unit: str, age: float | None = None) -> tuple[Offer, ...]:
    """Return an offer for every kind of reading; `age` serves as the example where it is known."""
    reached = _USUAL_AGE if age is None or age <= 0 else float(f"{age:.2g}")
    there, half = f"{reached:.12g}", f"{0.5 * reached:.12g}"
    rate = f"{(_USUAL_HAZARD if age is None or age <= 0 else float(f'{1.0 / reached:.1g}')):.12g}"
    at, per = f" {life_unit}".rstrip(), f" per {life_unit}" if life_unit else ""
    return (
        Offer("B-life at a percent", "20 %", "20"),
        Offer("Reliability at an age", f"reliability at {there}{at}", there),
        Offer("Reliability at an age, given an age reached", f"reliability at {there}{at}, given {half}{at}", there),
        Offer("Mean residual life at an age", f"mean residual life at {half}{at}", half),
        Offer("Hazard rate at an age", f"hazard rate at {there}{at}", there),
        Offer("Age at a given hazard rate", f"age at hazard rate {rate}{per}", rate),
        Offer("Mode of the lives", "mode"),
        Offer("Mean life", "mean life"),
    )


def read_ask(text: str, life_unit: str) -> Ask:
    """Return the reading that `text` asks for.

    "20 %" or "B20"; "1500 h" or "reliability at 1500 h"; "1500 h, given 1000 h"; "hazard 1500 h"; "residual life at
    1000 h"; "age at hazard 0.001"; "mode"; "mean life".

    Raises
    ------
    AskUnreadable
        With a sentence that says what can be typed.
    """
    asked = text.strip()
    reader = _Reader(text, life_unit)
    for pattern in (_BLIFE, _PERCENT):
        if match := pattern.fullmatch(asked):
            return LifeAsk(reader.percent(match["number"]))
    if _MEAN.fullmatch(asked):
        return MeanLifeAsk()
    if _MODE.fullmatch(asked):
        return ModeAsk()
    if match := _RESIDUAL.fullmatch(asked):
        return ResidualLifeAsk(reader.age(match["age"]))
    if match := _GIVEN.fullmatch(asked):
        return reader.conditional(match["age"], match["given"])
    if match := _AT_HAZARD.fullmatch(asked):
        return AgeAtHazardAsk(reader.positive(match["rate"], "a hazard rate"))
    if match := _HAZARD.fullmatch(asked):
        return HazardAsk(reader.age(match["age"]))
    if _PLAIN.fullmatch(asked):
        raise AskUnreadable(f"{text!r} may be a percent or an age: type {asked} % or {asked} {life_unit}.".rstrip())
    match = _RELIABILITY.fullmatch(asked)
    return ReliabilityAsk(reader.age(match["age"] if match else ""))


@dataclass(frozen=True)
class _Reader:
    """Reads the numbers of one text, or says what is wrong with it."""

    text: str
    life_unit: str

    def percent(self, number: str) -> float:
        percent = self._number(number)
        if not 0 < percent < 100:
            raise AskUnreadable(f"{self.text!r}: a percent must lie between 0 and 100, both excluded.")
        return percent

    def age(self, number: str) -> float:
        return self.positive(number, "an age")

    def positive(self, number: str, what: str) -> float:
        value = self._number(number.strip().removesuffix(self.life_unit).strip() if self.life_unit else number)
        if value <= 0:
            raise AskUnreadable(f"{self.text!r}: {what} must be positive.")
        return value

    def conditional(self, age: str, given: str) -> ConditionalReliabilityAsk:
        asked = ConditionalReliabilityAsk(self.age(age), self.age(given))
        if asked.age < asked.given:
            raise AskUnreadable(f"{self.text!r}: the age must not lie before the age reached.")
        return asked

    def _number(self, number: str) -> float:
        try:
            return read_number(number)
        except UnreadableNumber:
            example = f"1500 {self.life_unit}".strip()
            raise AskUnreadable(
                f"{self.text!r} cannot be read: type a percent (20 %), an age ({example}), or choose a kind of reading "
                "from the list beside."
            ) from None


def example_asks(life_unit: str) -> str:
    """Return what can be typed, by example."""
    example = f"1500 {life_unit}".strip()
    return f"Add: 20 %, reliability {example}, or hazard {example}"
