"""Writes JSON as people and git like to read it: one key or row on a line, numbers as they were entered."""

from __future__ import annotations

import json
from collections.abc import Iterable, Mapping
from json.encoder import encode_basestring as quoted
from math import isfinite

from msgspec import Struct

from reliability_app.session.numbers import is_plain

__all__ = ["JsonText", "as_number", "is_number", "lines_of", "object_lines", "one_line", "quoted", "unknown_keys"]


class JsonText(str):
    """A piece of JSON to be written as it is: a number as entered, or the value of an unknown key."""

    __slots__ = ()


def is_number(text: str) -> bool:
    """Say whether `text` can stand in JSON as a number as it is ("1401.40"; not "0012", "+5" or "1e999")."""
    return is_plain(text) is not None and isfinite(float(text))


def as_number(value: float) -> JsonText:
    """Give the shortest JSON number that reads as `value` again; a whole number has no point.

    Raises
    ------
    ValueError
        When `value` is not finite: JSON has no such number.
    """
    text = json.dumps(value, allow_nan=False)
    return JsonText(text.removesuffix(".0"))


def one_line(value: object) -> str:
    """Give `value` (of dicts, lists, texts, numbers, booleans, None and `JsonText`) as JSON on one line."""
    if isinstance(value, JsonText):
        return value
    if isinstance(value, str):
        return quoted(value)
    if isinstance(value, Mapping):
        return "{" + ", ".join([f"{quoted(key)}: {one_line(item)}" for key, item in value.items()]) + "}"
    if isinstance(value, list | tuple):
        return "[" + ", ".join([one_line(item) for item in value]) + "]"
    return json.dumps(value, allow_nan=False)


def unknown_keys(content: Mapping[str, object], known: type[Struct], *more: str) -> dict[str, object]:
    """Give what `content` says under keys that `known` and `more` do not name, to be written back as it is."""
    names = {*known.__struct_fields__, *more}
    return {key: JsonText(one_line(value)) for key, value in content.items() if key not in names}


def lines_of(items: Iterable[str], *, level: int) -> JsonText:
    """Give a list with each of `items` (pieces of JSON) on a line of its own, inside something at `level`."""
    return _lines("[", items, "]", level=level)


def object_lines(entries: Mapping[str, object], *, level: int) -> JsonText:
    """Give an object with each of `entries` on a line of its own, inside something at `level`."""
    items = [f"{quoted(key)}: {one_line(value)}" for key, value in entries.items()]
    return _lines("{", items, "}", level=level)


def _lines(opening: str, items: Iterable[str], closing: str, *, level: int) -> JsonText:
    break_inside = "\n" + "  " * (level + 1)
    inside = f",{break_inside}".join(items)
    if not inside:
        return JsonText(opening + closing)
    return JsonText(opening + break_inside + inside + "\n" + "  " * level + closing)
