"""Reads the HTML that spreadsheets put on the clipboard, for the full precision that their plain text has lost."""

from __future__ import annotations

import html
import math
import re
from collections.abc import Sequence
from dataclasses import dataclass

from reliability_app.session.numbers import DecimalMark, UnreadableNumber, is_plain, read_number

# A pattern over tags reads this in about 0.2 s; whoever pastes more gets the values as displayed, and is told so.
LARGEST = 4_000_000
_MOST_SPANNED = 200

# No tag runs over another "<", so that text without closing brackets cannot make the search slow.
_TAG = re.compile(r"<(/?)(table|tr|td|th)\b([^<>]*)>", re.IGNORECASE)
_ANY_TAG = re.compile(r"<[^<>]*>")
_LINE_BREAK = re.compile(r"<(?:br|/p)\b[^<>]*>", re.IGNORECASE)
_VALUE = re.compile(r"""\b(?:sdval|x:num)\s*=\s*["']?([^"'\s>]+)""", re.IGNORECASE)
_SPAN = re.compile(r"""\bcolspan\s*=\s*["']?([0-9]{1,4})""", re.IGNORECASE)


@dataclass(frozen=True)
class HtmlCell:
    """One cell: the text displayed, and the number behind it in full, if the HTML holds it ("" if not)."""

    shown: str
    value: str = ""


def read_html_table(source: str) -> list[list[HtmlCell]] | None:
    """Return the cells of the first table in `source`; None if there is none, or it is longer than LARGEST."""
    if len(source) > LARGEST:
        return None
    rows: list[list[HtmlCell]] = []
    tags = list(_TAG.finditer(source))
    for place, tag in enumerate(tags):
        closing, name, attributes = tag[1], tag[2].lower(), tag[3]
        if name == "table" and closing and rows:
            break
        if name == "tr" and not closing:
            rows.append([])
        elif name in ("td", "th") and not closing:
            if not rows:
                rows.append([])
            end = tags[place + 1].start() if place + 1 < len(tags) else len(source)
            rows[-1].append(_cell(source[tag.end() : end], attributes))
            rows[-1].extend(HtmlCell("") for _ in range(_spanned(attributes) - 1))
    return rows or None


def _cell(content: str, attributes: str) -> HtmlCell:
    text = html.unescape(_ANY_TAG.sub("", _LINE_BREAK.sub(" ", content)))
    value = _VALUE.search(attributes)
    return HtmlCell(" ".join(text.split()), html.unescape(value[1]) if value else "")


def _spanned(attributes: str) -> int:
    span = _SPAN.search(attributes)
    return min(int(span[1]), _MOST_SPANNED) if span else 1


def has_full_values(source: str) -> bool:
    """Return whether the HTML holds numbers in full beside those displayed."""
    return _VALUE.search(source, 0, LARGEST) is not None


def with_full_precision(rows: Sequence[Sequence[str]], cells: Sequence[Sequence[HtmlCell]]) -> list[list[str]] | None:
    """Return the rows of the plain text with numbers in full where the HTML holds them.

    The plain text decides on rows and columns; None if the HTML does not show the very same cells. A value takes the
    place of a displayed number only if it rounds to it: the number behind a date, for one, means nothing here.
    """
    if len(rows) != len(cells):
        return None
    full = []
    for row, html_row in zip(rows, cells, strict=True):
        width = max(len(row), len(html_row))
        texts = [*row, *[""] * (width - len(row))]
        shown = [*html_row, *[HtmlCell("")] * (width - len(html_row))]
        if any(" ".join(text.split()) != cell.shown for text, cell in zip(texts, shown, strict=True)):
            return None
        full.append([cell.value if _is_in_full(cell) else text for text, cell in zip(texts, shown, strict=True)])
    return full


def _is_in_full(cell: HtmlCell) -> bool:
    """Return whether the number behind a cell is the one displayed, up to the rounding of the display."""
    if not is_plain(cell.value) or math.isinf(value := float(cell.value)):
        return False
    if cell.shown and not cell.shown.strip("#"):
        return True  # a column too narrow to display its numbers
    return any(_rounds_to(value, cell.shown, mark) for mark in (DecimalMark.POINT, DecimalMark.COMMA))


def _rounds_to(value: float, shown: str, mark: DecimalMark) -> bool:
    try:
        number = read_number(shown, mark)
    except UnreadableNumber:
        return False
    mantissa, _, exponent = re.sub(r"[^0-9eE.,+-]", "", shown).lower().partition("e")
    decimals = len(mantissa.rpartition(mark.value)[2]) if mark.value in mantissa else 0
    step = 10.0 ** (int(exponent or 0) - decimals)
    return abs(value - number) <= 0.5001 * step + 1e-12 * abs(value)
