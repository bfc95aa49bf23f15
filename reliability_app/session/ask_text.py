"""Reads what a user types to ask for a reading: a percent, an age, or a hazard at an age."""

from __future__ import annotations

import re

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import Ask, HazardAsk, LifeAsk, ReliabilityAsk
from reliability_app.session.numbers import UnreadableNumber, read_number

_BLIFE = re.compile(r"b\s*(?P<number>[\d.,]+)(\s*life)?", re.IGNORECASE)
_PERCENT = re.compile(r"(?P<number>.+?)\s*(%|percent)", re.IGNORECASE)
_HAZARD = re.compile(r"(hazard|rate)(\s+rate)?(\s+at)?\s+(?P<number>.+)", re.IGNORECASE)
_RELIABILITY = re.compile(r"((reliability|r)(\s+at)?\s+)?(?P<number>.+)", re.IGNORECASE)
_PLAIN = re.compile(r"[\d.,\s]+")


class AskUnreadable(RigpaperError):
    """Text that names no reading."""


def read_ask(text: str, life_unit: str) -> Ask:
    """Return the reading that `text` asks for: "20 %" or "B20", "1500" or "1500 h", "hazard 1500 h".

    Raises
    ------
    AskUnreadable
        With a sentence that says what can be typed.
    """
    asked = text.strip()
    for pattern in (_BLIFE, _PERCENT):
        if match := pattern.fullmatch(asked):
            percent = _number(match["number"], text, life_unit)
            if not 0 < percent < 100:
                raise AskUnreadable(f"{text!r}: a percent must lie between 0 and 100, both excluded.")
            return LifeAsk(percent)
    without_unit = asked.removesuffix(life_unit).strip() if life_unit else asked
    if match := _HAZARD.fullmatch(without_unit):
        return HazardAsk(_age(match["number"], text, life_unit))
    if asked == without_unit and _PLAIN.fullmatch(asked):
        raise AskUnreadable(f"{text!r} may be a percent or an age: type {asked} % or {asked} {life_unit}.".rstrip())
    match = _RELIABILITY.fullmatch(without_unit)
    return ReliabilityAsk(_age(match["number"] if match else "", text, life_unit))


def example_asks(life_unit: str) -> str:
    """Return what can be typed, by example."""
    example = f"1500 {life_unit}".strip()
    return f"Add: 20 %, reliability {example}, or hazard {example}"


def _age(number: str, text: str, life_unit: str) -> float:
    age = _number(number, text, life_unit)
    if age <= 0:
        raise AskUnreadable(f"{text!r}: an age must be positive.")
    return age


def _number(number: str, text: str, life_unit: str) -> float:
    try:
        return read_number(number)
    except UnreadableNumber:
        example = f"1500 {life_unit}".strip()
        raise AskUnreadable(
            f"{text!r} cannot be read: type a percent (20 %), an age ({example}), or hazard {example}."
        ) from None
