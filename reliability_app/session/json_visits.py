"""Reads and writes the parts of a session file that outlast a day: the visits, the requirement and its log."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import asdict
from datetime import datetime
from typing import Any

from reliability_app.engine.errors import DataError
from reliability_app.session.document import ASK_NAMES, LifeAsk, ReliabilityAsk, Session
from reliability_app.session.held_requirement import HeldRequirement, RequirementChange
from reliability_app.session.json_read import BadJson
from reliability_app.session.json_schema_types import (
    Required,
    RequiredLife,
    RequirementChanged,
    SessionFile,
    SetAtVisit,
    VisitRecord,
)
from reliability_app.session.json_write import as_number, lines_of, one_line, unknown_keys
from reliability_app.session.packed_units import MOST_ROWS, NoUnits, check_units
from reliability_app.session.requirement import Requirement
from reliability_app.session.visit import Visit

# Writing


def lasting_entries(session: Session) -> Iterator[tuple[str, object]]:
    """Give the entries of a session's file: a requirement and its log where there are any, and the visits."""
    if session.requirement is not None:
        yield "requirement", required_entries(session.requirement)
    if session.requirement_log:
        yield "requirement_log", lines_of((one_line(_change_entries(one)) for one in session.requirement_log), level=1)
    yield "visits", lines_of((visit.text for visit in session.visits), level=1)


def required_entries(held: HeldRequirement) -> dict[str, object]:
    """Give a requirement as it stands in a file."""
    required = held.requirement
    asked = {name: as_number(value) for name, value in asdict(required.ask).items()}
    return {
        "ask": ASK_NAMES[type(required.ask)],
        **asked,
        "at_least": as_number(required.at_least),
        "confidence": as_number(required.confidence),
        "set_at": instant_text(held.set_at),
        "looks": held.looks,
        "adjusted": held.adjusted,
        **held.kept,
    }


def instant_text(at: datetime) -> str:
    """Give a moment as ISO 8601 with its zone, to the second unless it is known more finely."""
    return at.isoformat(timespec="seconds" if at.microsecond == 0 else "microseconds")


def _change_entries(change: RequirementChange) -> dict[str, object]:
    was, became = (None if held is None else required_entries(held) for held in (change.was, change.became))
    return {"at": instant_text(change.at), "was": was, "became": became, **change.kept}


# Reading


def visits_of(file: SessionFile, content: Mapping[str, Any]) -> list[Visit]:
    """Give the visits of a file.

    Raises
    ------
    BadJson
        For units that make no table, with the place.
    """
    found, rows = [], 0
    for index, (record, raw) in enumerate(zip(file.visits, content.get("visits", []), strict=True)):
        held_at(record, f"$.visits[{index}].requirement")
        for place, (known, said) in enumerate(zip(record.sets, raw.get("sets", []), strict=True)):
            rows += _checked(known, f"$.visits[{index}].sets[{place}].units")
            if rows > MOST_ROWS:
                raise BadJson(f"the visits hold more than {MOST_ROWS:,} rows of units", f"$.visits[{index}]")
            if known.units.rows:
                known.units.rows = said["units"]["rows"]  # the same texts are not held twice
        found.append(Visit(record, raw))
    return found


def _checked(known: SetAtVisit, place: str) -> int:
    try:
        return check_units(known.units)
    except NoUnits as error:
        raise BadJson(error.reason, f"{place}{error.place}") from None


def requirement_of(file: SessionFile, content: Mapping[str, Any]) -> HeldRequirement | None:
    """Give the requirement of a file."""
    if file.requirement is None:
        return None
    return _held(file.requirement, content["requirement"], "$.requirement")


def log_of(file: SessionFile, content: Mapping[str, Any]) -> tuple[RequirementChange, ...]:
    """Give the log of the requirement of a file."""
    raw_log = content.get("requirement_log", [])
    return tuple(
        _logged(known, raw, f"$.requirement_log[{index}]")
        for index, (known, raw) in enumerate(zip(file.requirement_log, raw_log, strict=True))
    )


def held_at(record: VisitRecord, place: str = "$") -> HeldRequirement | None:
    """Give the requirement that a visit was held against."""
    return None if record.requirement is None else _held(record.requirement, {}, place)


def _logged(known: RequirementChanged, raw: Mapping[str, Any], place: str) -> RequirementChange:
    was = None if known.was is None else _held(known.was, raw["was"], f"{place}.was")
    became = None if known.became is None else _held(known.became, raw["became"], f"{place}.became")
    return RequirementChange(known.at, was, became, unknown_keys(raw, RequirementChanged))


def _held(known: Required, raw: Mapping[str, Any], place: str) -> HeldRequirement:
    try:
        required = Requirement(_asked(known), known.at_least, known.confidence)
    except DataError as error:
        raise BadJson(str(error).rstrip("."), place) from None
    return HeldRequirement(required, known.set_at, known.looks, known.adjusted, unknown_keys(raw, type(known), "ask"))


def _asked(known: Required) -> LifeAsk | ReliabilityAsk:
    return LifeAsk(known.percent) if isinstance(known, RequiredLife) else ReliabilityAsk(known.age)
