"""Reads numbers as people and spreadsheets write them: decimal point or comma, thousands separators."""

from __future__ import annotations

import enum
import math
import re
from collections.abc import Iterable, Sequence


class DecimalMark(enum.Enum):
    """Which sign stands between whole and fraction; AMBIGUOUS: each number must speak for itself."""

    POINT = "."
    COMMA = ","
    AMBIGUOUS = "?"


class UnreadableNumber(ValueError):
    """A text that is no usable number; its text is a sentence that says why and what to type."""


# What is stored for a number that was understood: exactly the numbers of JSON, so files hold them as typed.
_PLAIN = re.compile(r"-?(?:0|[1-9][0-9]*)(?:\.[0-9]+)?(?:[eE][+-]?[0-9]+)?")
is_plain = _PLAIN.fullmatch
_is_plain_or_empty = re.compile(f"(?:{_PLAIN.pattern})?").fullmatch

# Usual ways to say in a cell that there is nothing.
_MISSING = re.compile(r"|[-\u2013\u2014?.]+|n/?a|nan|none|null|#n/?a", re.IGNORECASE)

_LOOKALIKES = str.maketrans(
    {
        "\u2212": "-",  # minus sign
        "\u2013": "-",  # en dash
        "\u00a0": " ",  # no-break space
        "\u202f": " ",  # narrow no-break space
        "\u2009": " ",  # thin space
        "\u2007": " ",  # figure space
        "\u2019": "'",  # typographic apostrophe, thousands separator in Switzerland
    }
)


def _number_patterns(decimal: str, grouping: str) -> tuple[str, str]:
    """Return patterns of the numbers that prove this decimal mark, and of all that can be read with it."""
    d, g = re.escape(decimal), re.escape(grouping)
    grouped_by_space = r"[1-9][0-9]{0,2}(?:(?: [0-9]{3})+|(?:'[0-9]{3})+)"
    grouped_by_mark = rf"[1-9][0-9]{{0,2}}(?:{g}[0-9]{{3}})"
    evidence = (
        rf"(?:{grouped_by_mark}+{d}[0-9]+"  # 1.401,40
        rf"|{grouped_by_mark}{{2,}}"  # 1.234.567
        rf"|{grouped_by_space}{d}[0-9]+"  # 1 234,5
        rf"|[0-9]*{d}(?:[0-9]{{1,2}}|[0-9]{{4,}})"  # 53,2
        rf"|(?:0[0-9]*|[0-9]{{4,}})?{d}[0-9]{{3}})"  # 0,234 and 1234,567
    )
    whole = rf"(?:[0-9]+|{grouped_by_mark}+|{grouped_by_space})"
    anything = rf"(?P<whole>{whole})?(?:{d}(?P<fraction>[0-9]*))?"
    return evidence, anything


_EXPONENT = r"(?:[eE][+-]?[0-9]+)?"
_USUAL_WHOLE = r"-?(?:0|[1-9][0-9]{0,2}(?:%s[0-9]{3})+|[1-9][0-9]*)"
# The usual numbers of a column whose mark is known: all that is needed to read them is to replace two signs.
_USUAL = {
    DecimalMark.POINT: re.compile(rf"{_USUAL_WHOLE % ','}(?:\.[0-9]+)?{_EXPONENT}"),
    DecimalMark.COMMA: re.compile(rf"{_USUAL_WHOLE % '[.]'}(?:,[0-9]+)?{_EXPONENT}"),
}
_COMMA_EVIDENCE, _COMMA_NUMBER = _number_patterns(",", ".")
_POINT_EVIDENCE, _POINT_NUMBER = _number_patterns(".", ",")
_DOUBTFUL = r"[1-9][0-9]{0,2},[0-9]{3}"  # 1,234

_NUMBER = {
    DecimalMark.POINT: re.compile(rf"(?P<sign>[+-]?) ?{_POINT_NUMBER}(?P<exponent>{_EXPONENT})"),
    DecimalMark.COMMA: re.compile(rf"(?P<sign>[+-]?) ?{_COMMA_NUMBER}(?P<exponent>{_EXPONENT})"),
}
_PROVES_COMMA = re.compile(rf"[+-]?{_COMMA_EVIDENCE}{_EXPONENT}")
_PROVES_POINT = re.compile(rf"[+-]?{_POINT_EVIDENCE}{_EXPONENT}")
# How a number is kept whose point may set off thousands, so that it is asked about: "1.250?".
_ASKED_POINT = re.compile(r"([1-9][0-9]{0,2})\.([0-9]{3})\?").fullmatch
_SMALL_POINT = re.compile(r"[1-9][0-9]?\.[0-9]{3}").fullmatch
_IN_DOUBT = re.compile(rf"[+-]?{_DOUBTFUL}{_EXPONENT}")


def _line(pattern: str) -> re.Pattern[str]:
    """Find `pattern` as a whole line, between the marks of running units and of bounds (>, <, +)."""
    return re.compile(rf"^ *[<>\u2264\u2265]?=? *[+-]?{pattern}{_EXPONENT} *\+? *$", re.MULTILINE)


_COMMA_LINE, _POINT_LINE, _DOUBTFUL_LINE = _line(_COMMA_EVIDENCE), _line(_POINT_EVIDENCE), _line(_DOUBTFUL)


def are_plain(cells: Iterable[str]) -> bool:
    """Return whether all cells that hold anything are plain numbers; a quick way past all that is slow here."""
    return all(map(_is_plain_or_empty, cells))


def proven_mark(cells: Iterable[str]) -> DecimalMark | None:
    """Return the decimal mark that cells prove: by "53,2" or "1.401,40", by "53.2" or "1,401.40".

    AMBIGUOUS if they contradict each other, None if no cell proves anything; cells that are no numbers are passed over.
    """
    lines = _marked_lines(cells)
    comma = _COMMA_LINE.search(lines) is not None
    point = _POINT_LINE.search(lines) is not None
    if comma and point:
        return DecimalMark.AMBIGUOUS
    if comma:
        return DecimalMark.COMMA
    return DecimalMark.POINT if point else None


def decide_mark(cells: Sequence[str]) -> DecimalMark:
    """Return the decimal mark of a column from all its cells.

    Where none proves a mark, it is POINT, or AMBIGUOUS if there are commas, which are then all as in "1,234".
    """
    proven = proven_mark(cells)
    if proven is not None:
        return proven
    return DecimalMark.AMBIGUOUS if _DOUBTFUL_LINE.search(_marked_lines(cells)) else DecimalMark.POINT


def _marked_lines(cells: Iterable[str]) -> str:
    """Return the cells with a comma or point in them, one a line, with look-alike signs replaced."""
    marked = (cell.replace("\n", "\0") for cell in cells if "," in cell or "." in cell)
    return "\n".join(marked).translate(_LOOKALIKES)


def plain_number(text: str, mark: DecimalMark | None = None) -> str:
    """Return the number in `text` in plain form, all digits kept ("1.401,40": "1401.40").

    Parameters
    ----------
    text : str
        One cell.
    mark : DecimalMark, optional
        The decimal mark of its column. None and AMBIGUOUS: only numbers clear by themselves are read.

    Raises
    ------
    UnreadableNumber
        With a sentence that says why, and what to type instead.
    """
    if mark in _USUAL and _USUAL[mark].fullmatch(text):
        plain = text.replace(",", "") if mark is DecimalMark.POINT else text.replace(".", "").replace(",", ".")
    else:
        plain = text if mark is not DecimalMark.COMMA and is_plain(text) else _unravel(text, mark)
    if not math.isfinite(float(plain)):
        raise UnreadableNumber(f"{quoted(text)} is too large a number: type it in larger units.")
    return plain


def asked_among(text: str, others: Iterable[str]) -> str:
    """Return "1.250" as "1.250?", which is no number and asks, where all other numbers are 100 or more.

    Parameters
    ----------
    text : str
        A number typed: with a point before just three digits and below 100, else it is returned as it is.
    others : iterable of str
        The texts of the other cells of its column; those that are no plain numbers are passed over.
    """
    if not _SMALL_POINT(text):
        return text
    least = min((float(other) for other in others if other and is_plain(other)), default=0.0)
    return f"{text}?" if least >= 100 else text


def read_number(text: str, mark: DecimalMark | None = None) -> float:
    """Return the number in `text` as a float; parameters and errors as in `plain_number`."""
    return float(plain_number(text, mark))


def looks_numeric(text: str) -> bool:
    """Return whether `text` is a number, be it plain, with a decimal comma, or in doubt like "1,234"."""
    if is_plain(text):
        return True
    clean = text.strip().translate(_LOOKALIKES)
    matches = (pattern.fullmatch(clean) for pattern in _NUMBER.values())
    return any(match and (match["whole"] or match["fraction"]) for match in matches)


def is_missing(cell: str) -> bool:
    """Return whether a cell is empty or says in a usual way that there is nothing ("n/a", "-")."""
    return _MISSING.fullmatch(cell) is not None


def quoted(text: str, most: int = 40) -> str:
    """Return `text` in quotes for a sentence, shortened to `most` characters and on one line."""
    flat = " ".join(text.split())
    return f"'{flat}'" if len(flat) <= most else f"'{flat[: most - 1]}\u2026'"


def _unravel(text: str, mark: DecimalMark | None) -> str:
    """Take separators and look-alike signs out of a number that is not written plainly."""
    clean = text.strip().translate(_LOOKALIKES).strip()
    match = _NUMBER[_mark_of(clean, mark, typed=text)].fullmatch(clean)
    if match is None or not (match["whole"] or match["fraction"]):
        raise UnreadableNumber(_why_not(text, clean, mark))
    whole = re.sub("[^0-9]", "", match["whole"] or "").lstrip("0") or "0"
    fraction = "." + match["fraction"] if match["fraction"] else ""
    sign = "-" if match["sign"] == "-" else ""
    return sign + whole + fraction + match["exponent"]


def _mark_of(clean: str, mark: DecimalMark | None, *, typed: str) -> DecimalMark:
    """Return the decimal mark to read one number with, or refuse what can be read in two ways."""
    if mark in (DecimalMark.POINT, DecimalMark.COMMA):
        return mark
    if _IN_DOUBT.fullmatch(clean):
        without, with_point = clean.replace(",", ""), clean.replace(",", ".")
        raise UnreadableNumber(f"{quoted(typed)} may mean {without} or {with_point}: type it in one of these two ways.")
    return DecimalMark.COMMA if _PROVES_COMMA.fullmatch(clean) else DecimalMark.POINT


def _why_not(text: str, clean: str, mark: DecimalMark | None) -> str:
    """Say why `text` is no number and what to type."""
    typed = quoted(text)
    if match := _ASKED_POINT(clean):
        whole, fraction = match[1] + match[2], f"{match[1]}.{match[2]}".rstrip("0").rstrip(".")
        if whole != fraction:
            return f"{typed} may mean {whole} or {fraction}: type it in one of these two ways."
    if clean.casefold().lstrip("+-") in ("inf", "infinity", "\u221e"):
        return f"{typed} is not a finite number: type an age in digits, such as 812 or 53.2."
    if mark is DecimalMark.COMMA and _PROVES_POINT.fullmatch(clean):
        return f"{typed} does not fit a column with decimal commas: type it with a comma."
    if mark is DecimalMark.POINT and _PROVES_COMMA.fullmatch(clean):
        return f"{typed} does not fit a column with decimal points: type it with a point."
    if not clean.isascii() and any(sign.isdigit() for sign in clean):
        return f"{typed} is not a number in the digits 0 to 9: type it with these."
    return f"{typed} is not a number: type it in digits, such as 812 or 53.2."
