"""Cautions: what a reader must know before relying on a number, each with a code, a severity and one sentence."""

from __future__ import annotations

from collections.abc import Iterable
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
    subject : str
        What it is about, where `text` begins with it and a colon, so that like cautions can be said together.
    """

    code: str
    severity: Severity
    text: str
    subject: str = ""


def worst_first(cautions: tuple[Caution, ...]) -> tuple[Caution, ...]:
    """Order cautions by severity, worst first, each code and text once."""
    unique = dict.fromkeys(cautions)
    return tuple(sorted(unique, key=lambda caution: -caution.severity))


def together(cautions: Iterable[Caution]) -> tuple[Caution, ...]:
    """Say cautions that differ in their subject only as one, in the place of the first: "B1 life, B5 life: ..."."""
    groups: dict[tuple[str, Severity, str], list[str]] = {}
    for caution in cautions:
        rest = caution.text.removeprefix(f"{caution.subject}: ") if caution.subject else caution.text
        subjects = groups.setdefault((caution.code, caution.severity, rest), [])
        if caution.subject and caution.subject not in subjects:
            subjects.append(caution.subject)
    return tuple(
        Caution(code, severity, f"{', '.join(subjects)}: {rest}" if subjects else rest, ", ".join(subjects))
        for (code, severity, rest), subjects in groups.items()
    )
