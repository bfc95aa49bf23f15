"""Reads JSON strictly and without loss: numbers keep their digits, and nothing is passed over in silence."""

from __future__ import annotations

import json
import re
from typing import Any, NoReturn

import msgspec

from reliability_app.session.json_write import JsonText

DEEPEST = 64
"""Levels of nesting that are read. A session needs about ten; the stack must never run out."""

_EXCERPT = 24


class BadJson(ValueError):
    """JSON that is not read: `reason` as a clause, and `place`, a line or a path, where it is known."""

    def __init__(self, reason: str, place: str = "") -> None:
        super().__init__(reason, place)
        self.reason = reason
        self.place = place


def parse(text: str, *, deepest: int = DEEPEST) -> Any:
    """Give the content of `text`, each number as the `JsonText` that was written.

    Raises
    ------
    BadJson
        When the text is no JSON, holds NaN or Infinity, a key twice in one object, or is nested too deeply.
    """
    try:
        content = json.loads(
            text,
            parse_int=JsonText,
            parse_float=JsonText,
            parse_constant=_refuse_constant,
            object_pairs_hook=_object,
        )
    except json.JSONDecodeError as error:
        raise BadJson(f"the JSON is malformed ({error.msg.lower()})", f"line {error.lineno}") from None
    except RecursionError:
        raise too_deep() from None
    except _DuplicateKey as error:
        raise BadJson(f'the key "{error}" stands twice here', _place_of_duplicate(text)) from None
    if _is_deeper(content, deepest):
        raise too_deep()
    return content


def malformed(error: msgspec.DecodeError, data: bytes) -> BadJson:
    """Say what is wrong with the syntax of `data`, and where, from what the validating library found."""
    found = re.search(r" \(byte (\d+)\)$", str(error))
    if found is not None:
        offset = int(found[1])
        why = str(error)[: found.start()].removeprefix("JSON is malformed: ")
        excerpt = data[offset : offset + _EXCERPT].decode("utf-8", "replace").partition("\n")[0]
        return BadJson(f"the JSON is malformed ({why}: {excerpt!r})", _line(data[:offset]))
    if "truncated" not in str(error):
        return BadJson(f"the JSON is malformed ({error})")
    return BadJson("the file breaks off in the middle", _line(data))


def _line(before: bytes) -> str:
    newlines = before.count(b"\n")
    return f"line {newlines + 1}"


def too_deep() -> BadJson:
    """Say that the nesting is deeper than a session ever needs."""
    return BadJson(f"it is nested deeper than {DEEPEST} levels, which no session is")


class _DuplicateKey(Exception):
    pass


def _object(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    content = dict(pairs)
    if len(content) < len(pairs):
        keys = [key for key, _ in pairs]
        raise _DuplicateKey(next(key for key in keys if keys.count(key) > 1))
    return content


def _refuse_constant(name: str) -> NoReturn:
    raise BadJson(f"{name} is no number that JSON knows")


def _is_deeper(content: Any, limit: int) -> bool:
    level = [content]
    for _ in range(limit):
        level = [
            child
            for item in level
            if isinstance(item, dict | list)
            for child in (item.values() if isinstance(item, dict) else item)
        ]
        if not level:
            return False
    return True


class _Pairs(list[tuple[str, Any]]):
    """An object with all its keys, the doubled ones too."""


def _place_of_duplicate(text: str) -> str:
    # The first reading knows no places; this second one is for the message alone.
    try:
        return _duplicate_in(json.loads(text, object_pairs_hook=_Pairs), "$") or "$"
    except RecursionError:
        return "$"


def _duplicate_in(value: Any, place: str) -> str | None:
    if isinstance(value, _Pairs):
        met = set()
        for key, _ in value:
            if key in met:
                return f"{place}.{key}"
            met.add(key)
        inside = [(f"{place}.{key}", item) for key, item in value]
    elif isinstance(value, list):
        inside = [(f"{place}[{index}]", item) for index, item in enumerate(value)]
    else:
        return None
    return next(filter(None, (_duplicate_in(item, at) for at, item in inside)), None)
