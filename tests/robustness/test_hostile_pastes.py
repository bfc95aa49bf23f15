"""Hostile and nonsensical input to the grid: nothing raises, nothing is lost, nothing takes long."""

from __future__ import annotations

import re
import time

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reliability_app.session.date_columns import END_DATE, START_DATE
from reliability_app.session.date_lives import DATE_UNITS
from reliability_app.session.dates import DayOrder
from reliability_app.session.numbers import DecimalMark
from reliability_app.session.pasted_text import plain_block, reread, understand
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, NothingToAnalyse, UnitTable

# Words that mean nothing to the reader, so that they must come back as they are.
WORD = st.from_regex(r"zq[0-9]{2}x", fullmatch=True)
SEPARATOR = st.sampled_from(
    ["\t", ",", ";", "|", " ", "  ", "\n", "\r\n", "\r", '"', "'", "\u00a0", "\u2028", "\x0b", "\0"]
)
CELL = st.one_of(
    WORD,
    st.sampled_from(["812", "53,2", "1.401,40", "1,234", "-5", "0", "NaN", "inf", "1e999", "1_000", "١٢", "1500+"]),
    st.sampled_from([">1500", "<200", "200-400", "400-200", "failed", "ok", "yes", "0", "1", "2", "n/a", "", "+", "-"]),
    st.sampled_from(["Life (h)", "State", "Unit", "Qty", "Failed?", "lower", "upper", "Temp", "Life", "=1+1", "###"]),
    st.sampled_from(["2025-04-03", "03/04/2025", "13.4.25", "04/13/2025 2:30 PM", "2025-13-45", "20250403", "#DIV/0!"]),
    st.sampled_from(["Start", "End", "Installed", "Failed on", "Removed", "Date", "still running", "1 Jan 0001"]),
)
NUMBER_LIKE = st.from_regex(r"[<>]?-?[0-9.,' ]{0,9}[0-9]([eE]-?[0-9])?[+]?(-[0-9]{1,4})?", fullmatch=True)
COMMON = settings(max_examples=100, deadline=None)


def everything_in(text: str) -> str:
    """Return all that was understood of `text` as one string."""
    understood = understand(text)
    cells = [cell for row in understood.rows for cell in row.values()]
    return "\n".join([*cells, *understood.headings, *understood.extra_columns])


@COMMON
@given(st.lists(st.one_of(WORD, SEPARATOR), max_size=40).map("".join))
def test_no_word_is_lost_however_it_is_separated_and_quoted(text: str) -> None:
    kept = everything_in(text)
    for word in re.findall("zq[0-9]{2}x", text):
        assert word in kept


@COMMON
@given(st.lists(st.lists(CELL, max_size=6), max_size=8), st.sampled_from(["\t", ",", ";", " "]))
def test_nonsense_tables_lose_no_word_and_agree_with_the_unit_table(rows: list[list[str]], separator: str) -> None:
    text = "\n".join(separator.join(row) for row in rows)
    understood = understand(text)
    kept = everything_in(text)
    assert all(cell in kept for row in rows for cell in row if cell.startswith("zq"))
    table = UnitTable.from_rows(understood.rows, understood.extra_columns)
    assert table.rows() == understood.rows
    assert table.counts().unread == understood.faulty
    assert understood.sentence.endswith(".")
    assert all(note.endswith(".") for note in understood.notes)


@COMMON
@given(st.text(max_size=60), st.one_of(st.none(), st.text(max_size=60)))
def test_any_text_is_understood_without_an_error(text: str, html: str | None) -> None:
    understood = understand(text, html)
    assert understood.faulty <= len(understood.rows)
    plain_block(text, html, columns=["life", "state"])


@COMMON
@given(
    st.lists(st.lists(CELL, min_size=1, max_size=4), min_size=1, max_size=5),
    st.dictionaries(
        st.integers(-1, 5), st.one_of(st.none(), st.sampled_from([*BUILT_IN_COLUMNS, START_DATE, END_DATE]))
    ),
    st.sampled_from([None, *DecimalMark]),
    st.sampled_from([None, "failed", "running"]),
    st.sampled_from([None, True, False]),
    st.sampled_from([None, *DayOrder]),
    st.sampled_from([None, "", "2025-04-03", "03/04/2025", "9999-12-31", "soon"]),
    st.sampled_from([None, *DATE_UNITS, "months"]),
)
def test_any_choice_by_hand_is_carried_out_without_loss(
    rows: list[list[str]],
    columns: dict[int, str | None],
    mark: DecimalMark | None,
    yes_means: str | None,
    headings: bool | None,
    day_order: DayOrder | None,
    data_date: str | None,
    date_unit: str | None,
) -> None:
    text = "\n".join("\t".join(row) for row in rows)
    once = reread(understand(text), columns=columns, mark=mark, yes_means=yes_means, headings=headings)
    dates = {"day_order": day_order, "data_date": data_date, "date_unit": date_unit, "end_means": yes_means}
    assigned = {"zq00x": "failed", "813": "running"}
    again = reread(once, states=assigned, **dates)
    assert again.sentence.endswith(".")
    for question in again.questions:
        for option in question.options:
            reread(again, **option.choice)
    cells = [cell for row in again.rows for cell in row.values()]
    kept = "\n".join([*cells, *again.headings])
    # A word that the user said means a state is written as that state.
    assert all(word in kept for word in re.findall("zq[0-9]{2}x", text) if word not in assigned)
    keys = [key for key in again.columns if key]
    assert len(set(keys)) == len(keys)


@COMMON
@given(
    st.lists(
        st.fixed_dictionaries(
            {
                "life": st.one_of(NUMBER_LIKE, CELL),
                "until": st.one_of(st.just(""), NUMBER_LIKE),
                "state": st.sampled_from(["", "failed", "ok", "found failed", "who"]),
                "quantity": st.one_of(st.just(""), NUMBER_LIKE),
                "entered": st.one_of(st.just(""), NUMBER_LIKE),
                "note": st.text(max_size=5),
            }
        ),
        max_size=6,
    )
)
def test_whatever_is_typed_the_engine_gets_only_lives_it_accepts(rows: list[dict[str, str]]) -> None:
    table = UnitTable.from_rows(rows)
    again = UnitTable.from_rows(table.rows())
    assert again.rows() == table.rows()
    counts = table.counts()
    assert len(table.faults()) >= counts.unread
    try:
        data = table.life_data()
    except NothingToAnalyse:
        assert not table.read_units().rows
        return
    assert data.unit_count == counts.failed + counts.running + counts.found_failed


@COMMON
@given(st.lists(st.lists(st.text(max_size=8), min_size=2, max_size=2), max_size=4), st.integers(0, 3))
def test_any_texts_can_be_written_and_are_kept(cells: list[list[str]], row: int) -> None:
    table = UnitTable()
    change = table.set_block(row, ["unit", "life"], cells)
    for place, (unit, _) in enumerate(cells):
        assert table.text(row + place, "unit") == unit.strip()
    table.revert(change)
    assert table.row_count == 0


BIG = {
    "lone quotes": '"\n' * 100_000,
    "quote at the start of every cell": '"a\t"b\n' * 50_000,
    "one endless cell": "x" * 2_000_000,
    "one endless number": "9" * 200_000,
    "one endless quoted cell": '"' + "x\n" * 200_000 + '"',
    "one line of very many columns": "812\t" * 200_000,
    "very many separators": ",;|\t " * 100_000,
    "very many blank lines": "\n" * 1_000_000,
    "digits and dashes": "1-" * 200_000,
    "digits and spaces": "1 " * 200_000 + "x",
    "spaces": "1" + " " * 500_000 + "x",
    "signs": "<>+" * 200_000,
    "brackets": "Life (" * 50_000 + "\n812",
    "distinct unknown states": "Life\tState\n" + "".join(f"{n + 1}\tlimbo{n}\n" for n in range(50_000)),
    "numbers in doubt": "Life\tState\n" + "1,234\tF\n" * 50_000,
    "one wide row in a long table": "\t".join("abc" for _ in range(5000)) + "\n" + "812\tfailed\n" * 50_000,
    "dates in doubt": "Start\tEnd\n" + "".join(f"0{n % 9 + 1}/04/2025\t0{n % 8 + 1}/05/2025\n" for n in range(50_000)),
    "dates that all differ": "Start\tEnd\n"
    + "".join(f"20{n % 60 + 10}-{n % 12 + 1:02}-{n % 28 + 1:02} {n % 24}:{n % 60:02}\t\n" for n in range(50_000)),
    "almost dates": "2025-04-" * 200_000,
    "combining signs": "e\u0301" * 200_000,
}


@pytest.mark.parametrize("name", BIG)
def test_huge_nonsense_is_understood_in_bounded_time(name: str) -> None:
    start = time.perf_counter()
    understood = understand(BIG[name])
    plain_block(BIG[name][:200_000], columns=["life"])
    # A few tenths of a second as measured; anything that grows with the square of the length takes minutes.
    assert time.perf_counter() - start < 10
    assert understood.sentence


def test_a_hundred_thousand_faulty_rows_stay_as_typed_and_are_counted() -> None:
    text = "Unit\tLife\tState\tQty\n" + "".join(f"P-{n}\tabc{n}\tfailed\t2.5\n" for n in range(100_000))
    understood = understand(text)
    assert understood.faulty == 100_000
    assert understood.rows[-1] == {"unit": "P-99999", "life": "abc99999", "state": "failed", "quantity": "2.5"}
