"""The shape of a session file: the definitions that validate it and give its JSON Schema."""

from __future__ import annotations

import json
from typing import Annotated, Any

import msgspec
from msgspec import Meta, Struct

from reliability_app.session.document import Basis, Side

FORMAT = "rigpaper-session"
VERSION = 1

_USUAL = Basis()

Cell = Annotated[
    float | str,
    Meta(description="A number as it was entered, or the text of a cell that is not written as a number."),
]
Age = Annotated[float, Meta(gt=0, description="In the session's life unit.")]


class UnitRow(Struct):
    """One row of the Units grid; empty cells are left out, further columns stand under their names."""

    unit: str = ""
    life: Cell = ""
    until: Cell = ""
    state: str = ""
    quantity: Cell = ""
    entered: Cell = ""
    cause: str = ""
    note: str = ""


class BasisOfSet(Struct):
    """Everything the readings of a set rest on besides its units."""

    family: str = _USUAL.family
    fit: str = _USUAL.fit
    bound: str = _USUAL.bound
    confidence: Annotated[float, Meta(gt=0, lt=1)] = _USUAL.confidence
    side: Side = _USUAL.side


class SetOfUnits(Struct):
    """Units analysed together."""

    name: str
    colour: Annotated[int, Meta(ge=0, description="Place in the program's palette.")] = 0
    extra_columns: Annotated[
        list[str], Meta(description="The names of the columns after the built-in ones, in their order.")
    ] = []
    units: list[UnitRow] = []
    basis: BasisOfSet = msgspec.field(default_factory=BasisOfSet)


class LifeReading(Struct, tag_field="ask", tag="life"):
    """The age by which `percent` % of the units have failed."""

    percent: Annotated[float, Meta(gt=0, lt=100)]


class ReliabilityReading(Struct, tag_field="ask", tag="reliability"):
    """The share of units still running at an age."""

    age: Age


class HazardReading(Struct, tag_field="ask", tag="hazard"):
    """The hazard rate at an age."""

    age: Age


ReadingAsked = LifeReading | ReliabilityReading | HazardReading


class SessionFile(Struct):
    """A whole session. Keys that are not described here are kept and written back."""

    format: Annotated[str, Meta(extra_json_schema={"const": FORMAT})]
    version: Annotated[int, Meta(extra_json_schema={"const": VERSION})]
    sets: list[SetOfUnits]
    saved_by: Annotated[str, Meta(description="The version of the program that saved the file.")] = ""
    title: str = ""
    notes: str = ""
    life_unit: str = "h"
    readings: list[ReadingAsked] | msgspec.UnsetType = msgspec.UNSET
    visits: list[dict[str, Any]] = []


def schema_text() -> str:
    """Give the JSON Schema of the session file, as it stands in resources/session.schema.json."""
    schema = {
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "title": f"Rigpaper session, version {VERSION}",
        **msgspec.json.schema(SessionFile),
    }
    return json.dumps(schema, indent=2) + "\n"


if __name__ == "__main__":
    from reliability_app.session.shipped import shipped

    (shipped("resources") / "session.schema.json").write_text(schema_text(), encoding="utf-8")
