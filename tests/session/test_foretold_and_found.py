"""What failed since an earlier visit, held against what its fit foretold."""

import pytest

from reliability_app.engine import fit
from reliability_app.engine.errors import BoundUnavailable
from reliability_app.session.foretold_and_found import agreement, what_became
from reliability_app.session.unit_table import UnitTable

# Invented: 8 failures and 12 units running at 700 h.
FAILED = {f"F-{number}": life for number, life in enumerate((112, 205, 330, 412, 480, 533, 610, 689))}


def table(failed, running) -> UnitTable:
    rows = [{"unit": name, "life": str(life), "state": "failed"} for name, life in failed.items()]
    rows += [{"unit": name, "life": str(life), "state": "running"} for name, life in running.items()]
    return UnitTable.from_rows(rows)


THEN = table(FAILED, {f"R-{number}": 700 for number in range(12)})


def now(lives, running_at=900) -> UnitTable:
    """The twelve units later: failed at `lives`, the others running."""
    failed = {f"R-{number}": life for number, life in enumerate(lives)}
    running = {f"R-{number}": running_at for number in range(len(lives), 12)}
    return table({**FAILED, **failed}, running)


def test_as_many_failures_as_foretold_are_in_agreement():
    held = agreement(fit(THEN.life_data(), "weibull"), THEN, now([720, 790, 860]))
    assert (held.found, held.agrees) == (3, True)
    least, most = held.limits
    assert held.sentence == (
        f"Of the 12 units then running {least} to {most} failures were to be expected, and 3 failed: in agreement."
    )
    assert held.mid_p > 0.2
    assert len(held.chances) == 12


def test_many_more_failures_are_not_what_was_foretold():
    many = [701, 703, 706, 708, 709, 711, 712, 714, 715, 717]
    held = agreement(fit(THEN.life_data(), "weibull"), THEN, now(many, running_at=720))
    assert not held.agrees
    assert held.mid_p < 0.001
    assert held.sentence.endswith(
        "and 10 failed: later failures are not what the earlier fit foretold; look for a new cause, lot or duty."
    )


def test_no_failure_where_many_were_foretold_is_said_so_too():
    held = agreement(fit(THEN.life_data(), "weibull"), THEN, now([], running_at=5000))
    assert held.found == 0
    assert "fewer than the earlier fit foretold" in held.sentence


def test_a_failed_unit_is_taken_to_have_aged_like_the_running_ones():
    then = table({}, {"A": 100, "B": 300, "C": 500})
    later = table({"A": 150}, {"B": 550, "C": 750})
    since = what_became(then, later)
    assert {row.unit: (row.then, row.reached, row.failed) for row in since.followed} == {
        "A": (100, 350, 1),
        "B": (300, 550, 0),
        "C": (500, 750, 0),
    }
    assert "aged like those still running" in since.assumption


def test_where_the_running_units_stand_at_one_age_the_failed_ones_would_too():
    since = what_became(table({}, {"A": 100, "B": 300, "C": 500}), table({"A": 150}, {"B": 800, "C": 800}))
    assert since.followed[0].reached == 800


def test_where_ages_differ_the_median_gain_is_taken_and_no_failure_lies_beyond_it():
    since = what_became(
        table({}, {"A": 100, "B": 100, "C": 100, "D": 100}), table({"A": 480}, {"B": 200, "C": 300, "D": 600})
    )
    assert since.followed[0].reached == 480
    assert "median" in since.assumption


def test_a_unit_that_has_not_aged_could_not_fail_and_does_not_count():
    then = table({}, {"A": 100, "B": 300, "C": 500, "D": 300})
    since = what_became(then, table({"A": 150}, {"B": 550, "C": 750, "D": 300}))
    assert since.unaged == ("D",)
    assert [(row.unit, row.reached) for row in since.followed] == [("A", 350), ("B", 550), ("C", 750)]
    with pytest.raises(BoundUnavailable, match="has aged since"):
        agreement(fit(THEN.life_data(), "weibull"), THEN, THEN)


def test_units_that_cannot_be_followed_are_named():
    then = UnitTable.from_rows(
        [
            *({"unit": name, "life": "100", "state": "running"} for name in "ABC"),
            {"life": "50", "state": "running", "quantity": "4"},
        ]
    )
    since = what_became(then, table({"A": 90}, {"B": 150}))
    assert since.lost == ("A", "C")  # A failed before the age at which it was seen running; C is not told of
    assert since.nameless == 4
    assert [row.unit for row in since.followed] == ["B"]


def test_several_units_of_one_name_are_followed_where_their_number_is_the_same():
    then = UnitTable.from_rows([{"unit": "lot 7", "life": "100", "state": "running", "quantity": "5"}])
    later = UnitTable.from_rows(
        [
            {"unit": "lot 7", "life": "140", "state": "failed", "quantity": "2"},
            {"unit": "lot 7", "life": "180", "state": "running", "quantity": "3"},
        ]
    )
    rows = what_became(then, later).followed
    assert [(row.quantity, row.failed, row.reached) for row in rows] == [(2, 2, 180), (3, 0, 180)]


def test_without_names_nothing_can_be_held_against_the_visit():
    nameless = UnitTable.from_rows([{"life": "700", "state": "running"}])
    with pytest.raises(BoundUnavailable, match="give the units names"):
        agreement(fit(THEN.life_data(), "weibull"), nameless, nameless)
