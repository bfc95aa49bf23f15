"""Numbers as people write them: each expected value follows from the notation itself."""

from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reliability_app.session.numbers import (
    DecimalMark,
    UnreadableNumber,
    are_plain,
    decide_mark,
    is_plain,
    looks_numeric,
    plain_number,
    quoted,
    read_number,
)


@pytest.mark.parametrize(
    ("typed", "plain"),
    [
        ("812", "812"),
        ("53.2", "53.2"),
        ("1.50", "1.50"),
        ("53,2", "53.2"),
        ("1.401,40", "1401.40"),
        ("1,401.40", "1401.40"),
        ("1.234.567", "1234567"),
        ("1,234,567", "1234567"),
        ("1 234,5", "1234.5"),
        ("1\u00a0234,5", "1234.5"),
        ("1\u202f234.5", "1234.5"),
        ("1'234.50", "1234.50"),
        ("1\u2019234", "1234"),
        ("1234,567", "1234.567"),
        ("0,234", "0.234"),
        (",5", "0.5"),
        (".5", "0.5"),
        ("5.", "5"),
        ("0012", "12"),
        ("+7", "7"),
        ("-5", "-5"),
        ("\u22125,5", "-5.5"),
        ("1,5E+03", "1.5E+03"),
        ("2e3", "2e3"),
        ("1.234", "1.234"),
    ],
)
def test_number_clear_by_itself_is_stored_in_plain_form(typed: str, plain: str) -> None:
    assert plain_number(typed) == plain
    assert is_plain(plain)
    assert read_number(typed) == float(plain)


@pytest.mark.parametrize(
    ("typed", "mark", "value"),
    [
        ("1,234", DecimalMark.POINT, 1234.0),
        ("1,234", DecimalMark.COMMA, 1.234),
        ("1.234", DecimalMark.POINT, 1.234),
        ("1.234", DecimalMark.COMMA, 1234.0),
        ("12", DecimalMark.COMMA, 12.0),
        ("1.234.567,5", DecimalMark.COMMA, 1234567.5),
        ("-1.234,5e2", DecimalMark.COMMA, -123450.0),
    ],
)
def test_mark_of_the_column_settles_what_a_number_leaves_open(typed: str, mark: DecimalMark, value: float) -> None:
    assert read_number(typed, mark) == value


@pytest.mark.parametrize(
    "typed",
    [
        "",
        " ",
        "abc",
        "nan",
        "NaN",
        "inf",
        "-inf",
        "Infinity",
        "1_000",
        "١٢٣",
        "１２",
        "1e999",
        "-",
        "+",
        ",",
        ".",
        "e5",
        "1,23,456",
        "1.23.456",
        "12.345.67",
        "1,,2",
        "1 23",
        "1'2",
        "1 234'567",
        "0x10",
        "1e",
        "5-",
        "--5",
        "1.2.3",
        "12,345.678,9",
        "812 h",
        "1/2",
        "50 %",
        "\u221e",
        "9" * 400,
        "true",
        "2024-01-05",
    ],
)
def test_what_is_no_finite_number_is_refused_with_a_whole_sentence(typed: str) -> None:
    with pytest.raises(UnreadableNumber) as refused:
        read_number(typed)
    reason = str(refused.value)
    assert reason.startswith("'")
    assert reason.endswith(".")
    assert ": type it" in reason or ": type an age" in reason
    assert len(reason) < 140


def test_number_with_two_meanings_is_refused_and_both_are_named() -> None:
    with pytest.raises(UnreadableNumber, match=r"'1,234' may mean 1234 or 1\.234"):
        plain_number("1,234")
    with pytest.raises(UnreadableNumber, match="may mean"):
        plain_number("1,234", DecimalMark.AMBIGUOUS)


def test_number_against_the_mark_of_its_column_is_refused() -> None:
    with pytest.raises(UnreadableNumber, match="decimal commas"):
        plain_number("53.2", DecimalMark.COMMA)
    with pytest.raises(UnreadableNumber, match="decimal points"):
        plain_number("53,2", DecimalMark.POINT)


@pytest.mark.parametrize(
    ("cells", "mark"),
    [
        ([], DecimalMark.POINT),
        (["812", "900"], DecimalMark.POINT),
        (["812", "53.2"], DecimalMark.POINT),
        (["812", "53,2"], DecimalMark.COMMA),
        (["1.234", "53,2"], DecimalMark.COMMA),
        (["1.234", "2.345"], DecimalMark.POINT),
        (["1,234", "53.2"], DecimalMark.POINT),
        (["1,234", "2,345"], DecimalMark.AMBIGUOUS),
        (["1,234", "812", ""], DecimalMark.AMBIGUOUS),
        (["1,234", "1,234,567"], DecimalMark.POINT),
        (["1,234", "0,234"], DecimalMark.COMMA),
        (["53,2", "53.2"], DecimalMark.AMBIGUOUS),
        (["1 234,567"], DecimalMark.COMMA),
        (["1\u00a0234,5+", "n/a"], DecimalMark.COMMA),
        ([">53,2"], DecimalMark.COMMA),
        (["see 53,2", "P-1,5"], DecimalMark.POINT),
        (["12\n53,2"], DecimalMark.POINT),
    ],
)
def test_mark_is_decided_from_all_cells(cells: list[str], mark: DecimalMark) -> None:
    assert decide_mark(cells) is mark
    assert decide_mark(list(reversed(cells))) is mark


def test_numbers_in_doubt_still_look_numeric() -> None:
    assert looks_numeric("1,234")
    assert looks_numeric("1.401,40")
    assert not looks_numeric("812 h")
    assert not looks_numeric("")
    assert are_plain(["1", "", "2.5"])
    assert not are_plain(["1", "2,5"])


def test_long_text_is_shortened_in_quotes() -> None:
    assert quoted("x" * 100) == "'" + "x" * 39 + "\u2026'"
    assert quoted("two\n lines") == "'two lines'"


@settings(max_examples=4000, deadline=None)
@given(
    st.floats(min_value=0, max_value=1e12, allow_nan=False),
    st.integers(min_value=0, max_value=4),
    st.sampled_from([("", "."), ("", ","), (",", "."), (".", ","), (" ", ","), ("'", "."), ("\u00a0", ",")]),
)
def test_any_number_written_out_is_read_back_under_its_mark(
    value: float, decimals: int, marks: tuple[str, str]
) -> None:
    grouping, decimal = marks
    written = f"{value:,.{decimals}f}".replace(",", "g").replace(".", decimal).replace("g", grouping)
    mark = DecimalMark.COMMA if decimal == "," else DecimalMark.POINT
    assert read_number(written, mark) == float(f"{value:.{decimals}f}")


@settings(max_examples=4000, deadline=None)
@given(st.text(max_size=30), st.sampled_from([None, *DecimalMark]))
def test_any_text_is_a_finite_number_or_refused(text: str, mark: DecimalMark | None) -> None:
    try:
        plain = plain_number(text, mark)
    except UnreadableNumber:
        return
    assert is_plain(plain)
    assert math.isfinite(float(plain))
    assert plain_number(plain, DecimalMark.POINT) == plain
