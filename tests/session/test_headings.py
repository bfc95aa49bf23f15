"""What headings mean."""

from __future__ import annotations

import pytest

from reliability_app.session.headings import NumberWithUnit, question, read_heading, read_life_unit, split_unit


@pytest.mark.parametrize(
    ("text", "key", "life_unit"),
    [
        ("Unit", "unit", None),
        ("Serial no.", "unit", None),
        ("Prüfling", "unit", None),
        ("Life", "life", None),
        ("Life (h)", "life", "h"),
        ("Life [10^3 km]", "life", "10^3 km"),
        ("Life / h", "life", "h"),
        ("life in cycles", "life", "cycles"),
        ("Hours to failure", "life", "h"),
        ("Hours", "life", "h"),
        ("Time to failure (hrs)", "life", "h"),
        ("Operating hours", "life", "h"),
        ("Cycles to first failure", "life", "cycles"),
        ("Betriebsstunden", "life", "h"),
        ("Zyklen bis Ausfall", "life", "cycles"),
        ("Durée de vie (h)", "life", "h"),
        ("Vida [ciclos]", "life", "cycles"),
        ("Ore", "life", "h"),
        ("State", "state", None),
        ("Failed?", "state", None),
        ("F/S", "state", None),
        ("Zustand", "state", None),
        ("Qty", "quantity", None),
        ("No. of units", "quantity", None),
        ("Stück", "quantity", None),
        ("Found failed at", "until", None),
        ("Age at entry", "entered", None),
        ("Failure mode", "cause", None),
        ("Remarks", "note", None),
    ],
)
def test_usual_headings_are_known(text: str, key: str, life_unit: str | None) -> None:
    heading = read_heading(text)
    assert heading is not None
    assert (heading.key, heading.life_unit) == (key, life_unit)


@pytest.mark.parametrize("text", ["", "Temperature", "812", "Load (kN)", "n/a", "P-01", "x" * 500])
def test_other_headings_are_left_to_the_user(text: str) -> None:
    assert read_heading(text) is None


def test_more_telling_heading_ranks_first() -> None:
    ranks = [read_heading(text) for text in ("Life", "Time to failure", "Age", "Time", "Hours")]
    assert [rank.rank for rank in ranks if rank] == sorted(rank.rank for rank in ranks if rank)
    assert len({rank.rank for rank in ranks if rank}) == 5


@pytest.mark.parametrize(
    ("text", "yes_means"),
    [
        ("Failed?", "failed"),
        ("failed (y/n)", "failed"),
        ("Is failed", "failed"),
        ("event", "failed"),
        ("Defekt", "failed"),
        ("Censored", "running"),
        ("censoring", "running"),
        ("Still running?", "running"),
        ("Suspended", "running"),
        ("status (1=running)", "running"),
        ("status (0 = running, 1 = failed)", "failed"),
        ("Censored (0=censored)", "failed"),
        ("State", None),
        ("Status", None),
        ("F/S", None),
        ("", None),
    ],
)
def test_heading_tells_what_a_yes_means(text: str, yes_means: str | None) -> None:
    assert question(text) == yes_means


@pytest.mark.parametrize(
    ("text", "unit"),
    [
        ("hrs", "h"),
        ("Cycles", "cycles"),
        ("10^3 km", "10^3 km"),
        ("thousand hours", "thousand hours"),
        ("pump A", None),
        ("", None),
        ("mm", None),
        ("°C", None),
    ],
)
def test_units_of_age_are_known(text: str, unit: str | None) -> None:
    assert read_life_unit(text) == unit


def test_number_with_its_unit_is_split() -> None:
    assert split_unit("812 hrs") == NumberWithUnit("812", "hrs", "h")
    assert split_unit("1.5h+") == NumberWithUnit("1.5+", "h", "h")
    assert split_unit("5 bearings") == NumberWithUnit("5", "bearings", None)
    assert split_unit("812") is None
    assert split_unit("abc") is None
    assert split_unit("left h") is None
