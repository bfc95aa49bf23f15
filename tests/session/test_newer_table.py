"""A pasted table is taken for a newer one of the same units only where most of its names are known."""

from __future__ import annotations

import pytest

from reliability_app.session.newer_table import in_common
from reliability_app.session.unit_table import UnitTable

TABLE = UnitTable.from_rows({"unit": name, "life": "10", "state": "running"} for name in ("P-1", "P-2", "P-3", "P-4"))


@pytest.mark.parametrize(
    ("names", "known", "is_newer"),
    [
        (["P-1", "P-2", "P-3"], 3, True),
        (["P-1", "P-2", "Q-1"], 2, True),
        (["P-1", "P-2", "Q-1", "Q-2"], 2, False),  # half of them is not most
        (["P-1"], 1, False),  # one alone may be a chance
        (["P-1", "P-1", "P-1"], 1, False),
        (["", ""], 0, False),
    ],
)
def test_most_names_must_be_known(names: list[str], known: int, is_newer: bool) -> None:
    found = in_common(TABLE, [{"unit": name, "life": "20", "state": "running"} for name in names])
    assert found.known == known
    assert found.is_newer_table is is_newer


def test_the_sentence_says_how_many_and_that_nothing_was_done() -> None:
    some = in_common(TABLE, [{"unit": name} for name in ("P-1", "P-2", "Q-1")])
    assert some.sentence.startswith("2 of its 3 units are in the table already")
    assert "nothing has been pasted yet" in some.sentence
    assert in_common(TABLE, [{"unit": "P-1"}, {"unit": "P-2"}]).sentence.startswith("All of its 2 units")
