"""The unit of the lives is taken from brackets in their heading, or from a column that names it; all data invented."""

from __future__ import annotations

import pytest

from reliability_app.session.pasted_text import reread, understand


@pytest.mark.parametrize(
    ("heading", "unit"), [("Laufstrecke [km]", "km"), ("Life (min)", "min"), ("Weg [km]", "km"), ("Weg [bar]", None)]
)
def test_brackets_in_the_heading_of_the_lives_name_their_unit(heading: str, unit: str | None) -> None:
    understood = understand(f"Pruefling;{heading};Status\n1;850,5;defekt\n2;1500,1;ok")
    assert understood.columns == ("unit", "life", "state")
    assert understood.life_unit == unit


@pytest.mark.parametrize("name", ["Prüfling", "Nr", "Kennung"])
def test_a_column_of_one_unit_of_measure_names_the_unit_of_the_lives(name: str) -> None:
    understood = understand(f"{name};Laufzeit;Einheit;Status\nW1;850,5;min;defekt\nW2;1500,1;Min.;ok\nW3;90,5;;ok")
    assert understood.life_unit == "min"
    assert understood.columns[1:] == ("life", "Einheit", "state")
    assert understood.columns[0] == ("Kennung" if name == "Kennung" else "unit")
    assert "Lives are in min: the column 'Einheit' says so." in understood.notes
    by_hand = reread(understood, columns={2: "unit"})
    assert (by_hand.columns[2], by_hand.life_unit) == ("unit", None)


@pytest.mark.parametrize("cells", [("h", "min"), ("P-1", "P-2"), ("h", "P-2"), ("S", "")])
def test_names_of_units_stay_names(cells: tuple[str, str]) -> None:
    understood = understand(f"Einheit;Laufzeit;Status\n{cells[0]};850,5;defekt\n{cells[1]};1500,1;ok")
    assert understood.columns == ("unit", "life", "state")
    assert understood.life_unit is None


def test_the_heading_of_the_lives_goes_before_a_column_beside() -> None:
    understood = understand("Nr;Laufzeit [h];Einheit;Status\n1;850,5;km;defekt\n2;1500,1;km;ok")
    assert understood.life_unit == "h"
