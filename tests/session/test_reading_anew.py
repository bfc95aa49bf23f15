"""A table read differently takes the place of its rows where they stand, and gives them back exactly."""

from __future__ import annotations

import pytest

from reliability_app.session.document import Session
from reliability_app.session.edits import BlockEdit, PasteRows
from reliability_app.session.reading_anew import ReadAnew

BEFORE = [{"unit": "P-1", "life": "5", "Lot": "A"}, {"unit": "P-2", "life": "6"}]
AFTER = [{"unit": "P-1", "life": "5", "Batch": "A"}, {"unit": "P-2"}, {"unit": "P-3", "life": "7"}]


@pytest.mark.parametrize("rows_below", [0, 2])
@pytest.mark.parametrize("life_unit", [None, "days"])
def test_rows_are_replaced_in_place_and_given_back_exactly(rows_below: int, life_unit: str | None) -> None:
    session = Session()
    table = session.sets[0].table
    BlockEdit(0, 0, ("unit", "life"), [["A", "1"]]).apply(session)
    PasteRows(0, BEFORE, ("Lot",)).apply(session)
    if rows_below:
        BlockEdit(0, 3, ("unit",), [["Z"]] * rows_below).apply(session)
    before, columns = table.rows(), table.columns
    edit = ReadAnew(0, AFTER, ("Batch",), life_unit=life_unit, first=1, count=2, former_extras=("Lot",))
    edit.apply(session)
    after = [{"unit": "A", "life": "1"}, *AFTER, *[{"unit": "Z"}] * rows_below]
    assert table.rows() == after
    assert table.extra_columns == ("Batch",)
    assert session.life_unit == (life_unit or "h")
    edit.revert(session)
    assert (table.rows(), table.columns, session.life_unit) == (before, columns, "h")
    edit.apply(session)
    assert table.rows() == after


def test_a_column_that_other_rows_use_stays() -> None:
    session = Session()
    PasteRows(0, [{"unit": "A", "Lot": "x"}], ("Lot",)).apply(session)
    PasteRows(0, BEFORE, ("Lot",)).apply(session)
    ReadAnew(0, AFTER, ("Batch",), first=1, count=2, former_extras=("Lot",)).apply(session)
    assert session.sets[0].table.extra_columns == ("Lot", "Batch")
    assert session.sets[0].table.text(0, "Lot") == "x"
