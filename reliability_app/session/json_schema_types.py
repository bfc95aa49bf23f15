"""The shape of a session file: the definitions that validate it and give its JSON Schema."""

from __future__ import annotations

import json
from datetime import datetime
from typing import Annotated, Literal

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
Share = Annotated[float, Meta(gt=0, lt=1)]
Percent = Annotated[float, Meta(gt=0, lt=100)]
Instant = Annotated[datetime, Meta(tz=True, description="ISO 8601, with its zone.")]


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
    confidence: Share = _USUAL.confidence
    side: Side = _USUAL.side
    threshold: Annotated[
        bool, Meta(description="True where a threshold, below which no unit fails, is estimated too.")
    ] = _USUAL.threshold
    shape: Annotated[
        Annotated[float, Meta(gt=0)] | None, Meta(description="A Weibull shape that is held; null: it is estimated.")
    ] = _USUAL.shape


class SetOfUnits(Struct):
    """Units analysed together."""

    name: str
    colour: Annotated[int, Meta(ge=0, description="Place in the program's palette.")] = 0
    extra_columns: Annotated[
        list[str], Meta(description="The names of the columns after the built-in ones, in their order.")
    ] = []
    units: list[UnitRow] = []
    basis: BasisOfSet = msgspec.field(default_factory=BasisOfSet)
    hidden: Annotated[bool, Meta(description="True where pages draw the set only while it is chosen.")] = False


class LifeReading(Struct, tag_field="ask", tag="life"):
    """The age by which `percent` % of the units have failed."""

    percent: Percent


class ReliabilityReading(Struct, tag_field="ask", tag="reliability"):
    """The share of units still running at an age."""

    age: Age


class HazardReading(Struct, tag_field="ask", tag="hazard"):
    """The hazard rate at an age."""

    age: Age


class ConditionalReliabilityReading(Struct, tag_field="ask", tag="conditional_reliability"):
    """The share of the units running at the age `given` that are still running at `age`."""

    age: Age
    given: Age


class ResidualLifeReading(Struct, tag_field="ask", tag="residual_life"):
    """The mean life that units running at an age still have before them."""

    age: Age


class MeanLifeReading(Struct, tag_field="ask", tag="mean_life"):
    """The mean life; never the main reading."""


class ModeReading(Struct, tag_field="ask", tag="mode"):
    """The mode: the age around which most units fail."""


class AgeAtHazardReading(Struct, tag_field="ask", tag="age_at_hazard"):
    """The first age at which the hazard rate reaches `hazard`, failures per unit and life unit."""

    hazard: Annotated[float, Meta(gt=0)]


ReadingAsked = (
    LifeReading
    | ReliabilityReading
    | HazardReading
    | ConditionalReliabilityReading
    | ResidualLifeReading
    | MeanLifeReading
    | ModeReading
    | AgeAtHazardReading
)


class RequiredLife(Struct, tag_field="ask", tag="life"):
    """A life at a percent that is required to be at least so long."""

    percent: Percent
    at_least: Annotated[float, Meta(gt=0)]
    confidence: Share
    set_at: Instant
    looks: Annotated[int, Meta(ge=0, description="Visits that have judged it so far.")] = 0
    adjusted: Annotated[bool, Meta(description="True where it is judged with a bound adjusted for looks.")] = False


class RequiredReliability(Struct, tag_field="ask", tag="reliability"):
    """A reliability at an age that is required to be at least so much."""

    age: Age
    at_least: Share
    confidence: Share
    set_at: Instant
    looks: Annotated[int, Meta(ge=0, description="Visits that have judged it so far.")] = 0
    adjusted: Annotated[bool, Meta(description="True where it is judged with a bound adjusted for looks.")] = False


Required = RequiredLife | RequiredReliability


class RequirementChanged(Struct):
    """A change of the requirement: what was required before, and after; null: nothing."""

    at: Instant
    was: Required | None = None
    became: Required | None = None


class Taken(Struct, kw_only=True):
    """What a visit recorded of a reading, whatever was asked."""

    estimate: float | Literal["infinite"] | None = None
    lower: float | None = None
    upper: float | None = None
    side: Side = _USUAL.side
    confidence: Share = _USUAL.confidence
    bound: str = _USUAL.bound
    bound_used: Annotated[str | None, Meta(description="The kind of bound given; null where there is none.")] = None


class LifeTaken(Taken, kw_only=True, tag_field="ask", tag="life"):
    """A life at a percent, as a visit recorded it."""

    percent: Percent


class ReliabilityTaken(Taken, kw_only=True, tag_field="ask", tag="reliability"):
    """A reliability, as a visit recorded it."""

    age: Age


class HazardTaken(Taken, kw_only=True, tag_field="ask", tag="hazard"):
    """A hazard rate, as a visit recorded it."""

    age: Age


class ConditionalReliabilityTaken(Taken, kw_only=True, tag_field="ask", tag="conditional_reliability"):
    """A conditional reliability, as a visit recorded it."""

    age: Age
    given: Age


class ResidualLifeTaken(Taken, kw_only=True, tag_field="ask", tag="residual_life"):
    """A mean residual life, as a visit recorded it."""

    age: Age


class MeanLifeTaken(Taken, kw_only=True, tag_field="ask", tag="mean_life"):
    """A mean life, as a visit recorded it."""


class ModeTaken(Taken, kw_only=True, tag_field="ask", tag="mode"):
    """A mode, as a visit recorded it."""


class AgeAtHazardTaken(Taken, kw_only=True, tag_field="ask", tag="age_at_hazard"):
    """The age at a hazard rate, as a visit recorded it."""

    hazard: Annotated[float, Meta(gt=0)]


ReadingTaken = (
    LifeTaken
    | ReliabilityTaken
    | HazardTaken
    | ConditionalReliabilityTaken
    | ResidualLifeTaken
    | MeanLifeTaken
    | ModeTaken
    | AgeAtHazardTaken
)


class UnitsAtVisit(Struct):
    """The table of units as it stood, unread rows and all: a text a row, its cells as entered between tabs.

    Inside a cell a tab is written as backslash t, a line break as backslash n, a backslash as two; empty cells at the
    end of a row are left out.
    """

    columns: list[str] = []
    rows: list[str] = []
    packed: Annotated[
        str | None,
        Meta(description="In the place of very many rows: a line each, compressed (RFC 1950), in base64 (RFC 4648)."),
    ] = None


class CountsAtVisit(Struct):
    """Units by state, quantities included, and the number of rows that could not be read."""

    failed: Annotated[int, Meta(ge=0)] = 0
    running: Annotated[int, Meta(ge=0)] = 0
    found_failed: Annotated[int, Meta(ge=0)] = 0
    unread: Annotated[int, Meta(ge=0)] = 0


class Judged(Struct):
    """How the requirement stood: the bounds on both sides and what they decide."""

    verdict: Literal["met", "not met", "cannot be told"]
    confidence: Share
    look: Annotated[int, Meta(ge=1)]
    lower: float | None = None
    upper: float | None = None
    bound_used: str = ""


class SetAtVisit(Struct):
    """One set as a visit found it, with what was computed of it, by which engine and with which seed."""

    name: str
    units: UnitsAtVisit = msgspec.field(default_factory=UnitsAtVisit)
    unread_rows: Annotated[list[int], Meta(description="Rows left out, counted from 1.")] = []
    counts: CountsAtVisit = msgspec.field(default_factory=CountsAtVisit)
    basis: BasisOfSet = msgspec.field(default_factory=BasisOfSet)
    parameters: dict[str, float | None] | None = None
    covariance: list[list[float]] | None = None
    covariance_of: list[str] | None = None
    log_likelihood: float | None = None
    readings: list[ReadingTaken] = []
    judged: Judged | None = None
    engine: str = ""
    seed: int | None = None


class VisitRecord(Struct):
    """A dated record of the session's units and readings."""

    at: Instant
    label: str = ""
    life_unit: str = "h"
    requirement: Required | None = None
    sets: list[SetAtVisit] = []


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
    requirement: Required | None = None
    requirement_log: list[RequirementChanged] = []
    visits: list[VisitRecord] = []


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
