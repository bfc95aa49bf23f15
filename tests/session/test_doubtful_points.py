"""Lives like "1.250" are read by what speaks for one of their two meanings, else asked about; all data invented."""

from __future__ import annotations

import pytest

from reliability_app.session.numbers import DecimalMark
from reliability_app.session.pasted_text import reread, understand
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import UnitTable


def lives(understood: Understanding) -> list[float]:
    return [float(row["life"]) for row in understood.rows]


@pytest.mark.parametrize(
    ("text", "told"),
    [
        ("Nr;Life h;Status\n1;1.250;failed\n2;1.500;ok", "the cells are separated by semicolons"),
        ("Unit\tLife\tState\n1\t1.250\tfailed\n2\t1.500+\t\n3\t850\tfailed", "'850' stands beside it"),
        ("Unit\tLaufzeit\tState\n1\t1.250\tfailed\n2\t1.500\tok", "'Laufzeit' is German"),
        ("Unit\tLife\tState\n1\t1.250\tausgefallen\n2\t1.500\tok", "'ausgefallen' is German"),
    ],
)
def test_points_set_off_thousands_where_something_says_so(text: str, told: str) -> None:
    understood = understand(text)
    assert [row["life"] for row in understood.rows][:2] == ["1250", "1500"]
    note = f"Life '1.250' was read as 1250: the point sets off thousands, since {told}; change it under Numbers."
    assert note in understood.notes
    assert understood.questions == ()
    assert understood.mark is DecimalMark.COMMA
    assert lives(reread(understood, mark=DecimalMark.POINT))[:2] == [1.25, 1.5]


def test_a_decimal_comma_in_another_column_says_thousands() -> None:
    understood = understand("Unit\tLife\tState\tTemp\n1\t1.250\tfailed\t80,5\n2\t1.500\tok\t90,5")
    assert lives(understood) == [1250, 1500]
    assert "Life is written with decimal commas: '1.250' was read as 1250." in understood.notes
    assert understood.questions == ()


@pytest.mark.parametrize(
    "text",
    [
        "Unit\tLife\tState\n1\t1.250\tfailed\n2\t1.500\tok",
        "Unit,Life,State\n1,1.250,failed\n2,1.500,ok",
        "Unit\tLife\tState\n1\t1.250\tfailed\n2\t812.125\tok\n3\t850\tfailed",
        "Unit\tLife\tState\tTemp\n1\t1.250\tfailed\t80.5\n2\t1.500\tok\t90.5\n3\t850\tfailed\t80.5",
    ],
)
def test_what_nothing_or_too_much_tells_is_asked(text: str) -> None:
    understood = understand(text)
    (question,) = understood.questions
    assert question.sentence == "Life '1.250': which number is it?"
    assert [option.label for option in question.options] == ["1250", "1.25"]
    assert any(note.startswith("Life '1.250' was read as 1.25 but may mean 1250") for note in understood.notes)
    answers = [reread(understood, **option.choice) for option in question.options]
    assert [lives(answer)[0] for answer in answers] == [1250, 1.25]
    assert all(answer.questions == () for answer in answers)


def test_decimal_points_elsewhere_settle_it_and_are_named() -> None:
    understood = understand("Unit\tLife\tState\tTemp\n1\t1.250\tfailed\t80.5\n2\t1.500\tok\t90.5")
    assert lives(understood) == [1.25, 1.5]
    assert understood.questions == ()
    assert any(note.startswith("Life '1.250' was read as 1.25: other columns have") for note in understood.notes)


@pytest.mark.parametrize("life", ["0.250", "12.5", "1250.125", "3.1416"])
def test_one_number_that_has_but_one_meaning_settles_the_column(life: str) -> None:
    understood = understand(f"Unit;Life;State\n1;1.250;failed\n2;{life};ok")
    assert lives(understood) == [1.25, float(life)]
    assert (understood.questions, understood.notes) == ((), ())


def test_true_numbers_of_a_spreadsheet_and_cells_of_our_own_grid_are_in_no_doubt() -> None:
    values = "".join(f'<tr><td>{n}</td><td x:num="{n}.250">{n}.250</td><td>ok</td></tr>' for n in (1, 2))
    pasted = understand("1\t1.250\tok\n2\t2.250\tok", f"<table>{values}</table>")
    own = understand("P-1\t1.250\t\tfailed\nP-2\t1.500\t\trunning")
    for understood in (pasted, own):
        assert lives(understood)[0] == 1.25
        assert understood.questions == ()
        assert not any("1.250" in note for note in understood.notes)


@pytest.mark.parametrize(
    ("others", "typed", "stored"),
    [
        (["812", "900"], "1.250", "1.250?"),
        (["1.012,9"], "1.250", "1.250?"),
        (["812", "", "n/a"], "12.500", "12.500?"),
        (["812", "900"], "1.25", "1.25"),
        (["812", "900"], "850.125", "850.125"),
        (["812", "53.2"], "1.250", "1.250"),
        (["8", "9"], "1.250", "1.250"),
        ([], "1.250", "1.250"),
    ],
)
def test_a_life_typed_among_thousands_is_kept_and_asks(others: list[str], typed: str, stored: str) -> None:
    table = UnitTable.from_rows([{"life": life, "state": "failed"} for life in (*others, "400")])
    row = len(others)
    table.set_block(row, ["life"], [[typed]])
    assert table.text(row, "life") == stored
    if stored.endswith("?"):
        whole, fraction = typed.replace(".", ""), typed.rstrip("0")
        reason = f"Life '{stored}' may mean {whole} or {fraction}: type it in one of these two ways."
        assert table.fault(row, "life") == reason
        assert table.counts().unread == 1 + others.count("n/a") + others.count("")
        table.set_block(row, ["life"], [[fraction]])
    assert table.row_is_read(row)


def test_whole_blocks_and_cells_typed_over_with_the_same_are_not_asked_about() -> None:
    table = UnitTable.from_rows([{"life": "1.250", "state": "failed"}, {"life": "812", "state": "failed"}])
    table.set_block(0, ["life"], [["1.250"]])
    table.set_block(2, ["life", "state"], [["1.250", "failed"]])
    assert [table.text(row, "life") for row in range(3)] == ["1.250", "812", "1.250"]
