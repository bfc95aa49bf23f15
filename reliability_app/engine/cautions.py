"""Cautions: what a reader must know before relying on a number, each with a code, a severity and one sentence."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum


class Severity(IntEnum):
    """How much a caution weighs; the worst are shown first."""

    NOTE = 0
    CAUTION = 1
    SERIOUS = 2


@dataclass(frozen=True)
class Caution:
    """One caution.

    Attributes
    ----------
    code : str
        Stable name in kebab-case, for scripts.
    severity : Severity
    text : str
        One sentence: the reason, and what would help.
    """

    code: str
    severity: Severity
    text: str


def worst_first(cautions: tuple[Caution, ...]) -> tuple[Caution, ...]:
    """Order cautions by severity, worst first, each code and text once."""
    unique = dict.fromkeys(cautions)
    return tuple(sorted(unique, key=lambda caution: -caution.severity))
