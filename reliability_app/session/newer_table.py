"""Tells whether a table of units is a newer one of units that a set has already."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from reliability_app.session.unit_table import UnitTable

_LEAST_IN_COMMON = 2


@dataclass(frozen=True)
class InCommon:
    """How many of the names of a table stand in the set already."""

    known: int
    named: int

    @property
    def is_newer_table(self) -> bool:
        """True where most of the names are known: adding the rows would bring the same units in twice."""
        return self.known >= _LEAST_IN_COMMON and 2 * self.known > self.named

    @property
    def sentence(self) -> str:
        """What was found, and the question."""
        what = "All of its" if self.known == self.named else f"{self.known} of its"
        return (
            f"{what} {self.named} units are in the table already, so that nothing has been pasted yet: "
            "is it a newer table of the same units?"
        )


def in_common(table: UnitTable, rows: Sequence[Mapping[str, str]]) -> InCommon:
    """Count which names of the rows of a table stand in the set already."""
    there = set(table.names().values())
    names = {row["unit"] for row in rows if row.get("unit")}
    return InCommon(len(names & there), len(names))
