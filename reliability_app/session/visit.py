"""A visit as the session holds it: what it recorded, as read and as it stands in the file."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from datetime import datetime
from functools import cached_property
from typing import Any

import msgspec

from reliability_app.session.document import ASK_NAMES, Ask, Basis, UnitSet
from reliability_app.session.json_schema_types import (
    BasisOfSet,
    ReadingAsked,
    ReadingTaken,
    SetAtVisit,
    VisitRecord,
)
from reliability_app.session.json_write import JsonText, lines_of, object_lines, one_line
from reliability_app.session.packed_units import unpacked
from reliability_app.session.unit_table import Counts

_DECODER = msgspec.json.Decoder(VisitRecord)
_KINDS: Mapping[str, type[Ask]] = {name: kind for kind, name in ASK_NAMES.items()}
_LEVEL = 2  # of a visit: it stands in a list of the file's own object


@dataclass(frozen=True, eq=False)
class Visit:
    """A dated record of the units and readings of a session.

    Attributes
    ----------
    record : VisitRecord
        What it says.
    content : dict
        The same as it stands in the file: numbers with the digits they were written with, unknown keys too.
    """

    record: VisitRecord
    content: Mapping[str, Any]

    @classmethod
    def of(cls, content: Mapping[str, Any]) -> Visit:
        """Make a visit from what is to stand in the file."""
        return cls(_DECODER.decode(one_line(content)), content)

    @property
    def at(self) -> datetime:
        """When it was recorded, with its zone."""
        return self.record.at

    @property
    def label(self) -> str:
        """What the user called it."""
        return self.record.label

    @property
    def title(self) -> str:
        """Its label and its day: week 6 (2026-03-02)."""
        day = f"{self.at:%Y-%m-%d}"
        return f"{self.label} ({day})" if self.label else day

    def set_named(self, name: str, *, of: int = 1) -> SetAtVisit | None:
        """Give what it recorded of a set; the only set of a session of one (`of`) may have been renamed since."""
        sets = self.record.sets
        alone = sets[0] if len(sets) == of == 1 else None
        return next((one for one in sets if one.name == name), alone)

    def relabelled(self, label: str) -> Visit:
        """Give the same visit under another label."""
        return Visit(msgspec.structs.replace(self.record, label=label), {**self.content, "label": label})

    @cached_property
    def text(self) -> JsonText:
        """The visit in the text of the file: one line, or, with units, a line for each of them."""
        sets = self.content.get("sets", [])
        if not any("units" in one for one in sets):
            return JsonText(one_line(self.content))
        listed = lines_of((_set_text(one) for one in sets), level=_LEVEL + 1)
        return object_lines({**self.content, "sets": listed}, level=_LEVEL)


def _set_text(content: Mapping[str, Any]) -> JsonText:
    units = content.get("units", {})
    if "rows" in units:
        rows = lines_of(map(one_line, units["rows"]), level=_LEVEL + 4)
        content = {**content, "units": object_lines({**units, "rows": rows}, level=_LEVEL + 3)}
    return object_lines(content, level=_LEVEL + 2)


# What a record says, in the words of the document


def basis_of(known: BasisOfSet) -> Basis:
    """Give the basis that a record names."""
    return Basis(**msgspec.structs.asdict(known))


def counts_of(recorded: SetAtVisit) -> Counts:
    """Give the counts that a record names."""
    return Counts(**msgspec.structs.asdict(recorded.counts))


def ask_of(reading: ReadingAsked | ReadingTaken) -> Ask:
    """Give what was asked for."""
    kind = _KINDS[str(reading.__struct_config__.tag)]
    return kind(**{name: getattr(reading, name) for name in kind.__dataclass_fields__})


def asks_of(visit: Visit) -> tuple[Ask, ...]:
    """Give the readings that a visit recorded, in their order."""
    return tuple(dict.fromkeys(_each_ask(visit)))


def _each_ask(visit: Visit) -> Iterator[Ask]:
    for recorded in visit.record.sets:
        yield from map(ask_of, recorded.readings)


def unit_sets_of(visit: Visit) -> list[UnitSet]:
    """Give the sets as they stood at a visit, to be shown beside today; changes in them change no visit."""
    return [
        UnitSet(name=one.name, table=unpacked(one.units), basis=basis_of(one.basis), colour=colour)
        for colour, one in enumerate(visit.record.sets)
    ]
