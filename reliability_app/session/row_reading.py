"""What the cells of one row mean: canonical text on entry, and the faults that keep a row unread."""

from __future__ import annotations

import re
from dataclasses import dataclass

from reliability_app.session.numbers import DecimalMark, UnreadableNumber, plain_number, quoted, read_number
from reliability_app.session.states import FAILED, FOUND_FAILED, RUNNING, STATES, read_state

BUILT_IN_COLUMNS: tuple[str, ...] = ("unit", "life", "until", "state", "quantity", "entered", "cause", "note")
HEADINGS: dict[str, str] = {
    "unit": "Unit",
    "life": "Life",
    "until": "Until",
    "state": "State",
    "quantity": "Qty",
    "entered": "Entered",
    "cause": "Cause",
    "note": "Note",
}
NUMBER_COLUMNS: tuple[str, ...] = ("life", "until", "quantity", "entered")
MOST_UNITS = 1e9
READ_COLUMNS: tuple[str, ...] = ("life", "until", "state", "quantity", "entered")

_NUMBER = r"([0-9](?:[0-9.,' \u00a0\u202f\u2019]*[0-9])?(?:[eE][+-]?[0-9]+)?)"
_STILL_RUNNING = re.compile(rf"(?:[>\u2265]\s*=?\s*{_NUMBER}|{_NUMBER}\s*\+)")
_FAILED_BEFORE = re.compile(rf"[<\u2264]\s*=?\s*{_NUMBER}")
_FAILED_BETWEEN = re.compile(
    rf"[(\[]?\s*{_NUMBER}\s*(?:[-\u2013\u2014\u2026;]|\.\.+|to|bis)\s*{_NUMBER}\s*[)\]]?", re.IGNORECASE
)

# A quick look for one of the signs above, since most texts have none.
_HAS_SIGN = re.compile(
    r"^[<>\u2264\u2265(\[]|\+$|[0-9)\]]\s*(?:[-\u2013\u2014\u2026;]|\.\.|to|bis)", re.IGNORECASE
).search


@dataclass(frozen=True)
class LifeEntry:
    """A life cell that says more than an age: plain texts for the Life, Until and State cells."""

    life: str
    until: str
    state: str


def read_life_entry(text: str, mark: DecimalMark | None = None) -> LifeEntry | None:
    """Read "1500+", ">1500" (running), "<200" and "200-400" (found failed); None for any other text.

    "<200" is a life above 0, as every life in a table is, and so the interval from 0 to 200: its probability is
    F(200) - F(0), which for a family of ln life is F(200). Where the unit entered at a later age, it begins there
    (`LifeData`). Lives of which not even that is known have their place in `LifeData` (lower = -inf), not in a table.
    """
    if not _HAS_SIGN(text):
        return None
    try:
        if match := _STILL_RUNNING.fullmatch(text):
            return LifeEntry(plain_number(match[1] or match[2], mark), "", RUNNING)
        if match := _FAILED_BEFORE.fullmatch(text):
            return LifeEntry("0", plain_number(match[1], mark), FOUND_FAILED)
        if match := _FAILED_BETWEEN.fullmatch(text):
            return LifeEntry(plain_number(match[1], mark), plain_number(match[2], mark), FOUND_FAILED)
    except UnreadableNumber:
        pass
    return None


def life_entry_of_row(life: str, until: str, state: str) -> LifeEntry | None:
    """Read the life cell as `read_life_entry`; None also if the row's Until or State says something else."""
    entry = read_life_entry(life)
    if entry is None or _runs_backwards(entry):
        return None
    if until and (not entry.until or _number_or_none(until) != float(entry.until)):
        return None
    # "failed" beside "200-400" is no contradiction: it failed, between these ages.
    agreeing = ("", RUNNING) if entry.state == RUNNING else ("", FAILED, FOUND_FAILED)
    return entry if state in agreeing else None


def canonical_cell(column: str, text: str) -> str:
    """Return the text to store for a cell: a plain number, our own word for a state, else as typed."""
    if column == "state":
        return read_state(text) or text
    if column in NUMBER_COLUMNS and text and not (column == "life" and read_life_entry(text)):
        try:
            return plain_number(text)
        except UnreadableNumber:
            return text
    return text


def row_faults(life: str, until: str, state: str, quantity: str, entered: str) -> dict[str, str]:
    """Return a sentence for each faulty cell of a row by column; an empty dict for a row that can be read.

    The rules are those of `bulk_reading.read_rows`, which is quick but gives no reasons.
    """
    faults: dict[str, str] = {}
    found = state == FOUND_FAILED or (not state and bool(until))
    if reason := _life_fault(life, until, state, found=found):
        faults["life"] = reason
    if reason := _until_fault(life, until, state, found=found):
        faults["until"] = reason
    if reason := _state_fault(state, found=found):
        faults["state"] = reason
    if reason := _quantity_fault(quantity):
        faults["quantity"] = reason
    if reason := _entered_fault(entered, life, until if found else ""):
        faults["entered"] = reason
    return faults


def _life_fault(life: str, until: str, state: str, *, found: bool) -> str | None:
    if not life:
        if found:
            return "Life is empty: type the last age at which the unit was known to run, or 0."
        return "Life is empty: type the age at failure, or the age reached so far."
    if entry := read_life_entry(life):
        return _life_entry_fault(life, until, state, entry)
    try:
        age = read_number(life)
    except UnreadableNumber as reason:
        return f"Life {reason}"
    if age < 0:
        return f"Life {quoted(life)} is negative: type an age above 0."
    if age == 0 and not found:
        return "Life is 0: type an age above 0 (0 is for a unit found failed, with Until)."
    return None


def _life_entry_fault(life: str, until: str, state: str, entry: LifeEntry) -> str:
    if _runs_backwards(entry):
        return f"Life {quoted(life)} runs backwards: type the lower age first."
    if entry.state == RUNNING:
        rest = f"State says {quoted(state)}" if state else f"Until says {quoted(until)}"
        return f"Life {quoted(life)} means still running, but {rest}: correct one of the two."
    rest = f"Until says {quoted(until)}" if until else f"State says {quoted(state)}"
    return f"Life {quoted(life)} means failed between two ages, but {rest}: correct one of the two."


def _until_fault(life: str, until: str, state: str, *, found: bool) -> str | None:
    if not until:
        return "Until is empty: type the age at which the unit was found failed." if found else None
    try:
        age = read_number(until)
    except UnreadableNumber as reason:
        return f"Until {reason}"
    if not found and state in STATES:
        return f"Until is only for a unit found failed, but State says {state}: clear Until or change State."
    start = _number_or_none(life)
    if start is not None and age <= start:
        return f"Until {quoted(until)} is not above Life {quoted(life)}: type when it was found failed."
    if age <= 0:
        return f"Until {quoted(until)} is not above 0: type the age at which the unit was found failed."
    return None


def _state_fault(state: str, *, found: bool) -> str | None:
    if state in STATES or (not state and found):
        return None
    if not state:
        return "State is empty: type failed or running."
    return f"State {quoted(state)} is not known: type failed, running or found failed."


def _quantity_fault(quantity: str) -> str | None:
    if not quantity:
        return None
    try:
        count = read_number(quantity)
    except UnreadableNumber as reason:
        return f"Qty {reason}"
    if count < 1 or count != int(count):
        return f"Qty {quoted(quantity)} is not a whole number of units: type 1, 2, 3 or more."
    if count > MOST_UNITS:
        return f"Qty {quoted(quantity)} is more than a thousand million units: check the number."
    return None


def _entered_fault(entered: str, life: str, until: str) -> str | None:
    """Say what is wrong with an entry age; `until` is given for a unit found failed only."""
    if not entered:
        return None
    try:
        age = read_number(entered)
    except UnreadableNumber as reason:
        return f"Entered {reason}"
    if age < 0:
        return f"Entered {quoted(entered)} is negative: type the age at which the unit came under observation."
    if age == 0:
        return None
    end, found = _number_or_none(life), _number_or_none(until)
    if found is not None and age >= found:
        return (
            f"Entered {quoted(entered)} is not below Until {quoted(until)}: a unit that had failed when observation "
            "began says nothing, so leave the row out, or correct one of the two."
        )
    # Of a unit found failed nothing need be known before it came under observation (Life 0, or the same age).
    if found is not None and end in (0.0, age):
        return None
    if end is not None and age >= end:
        return f"Entered {quoted(entered)} is not below Life {quoted(life)}: type when observation began."
    return None


def _runs_backwards(entry: LifeEntry) -> bool:
    return bool(entry.until) and float(entry.life) >= float(entry.until)


def _number_or_none(text: str) -> float | None:
    try:
        return read_number(text)
    except UnreadableNumber:
        return None
