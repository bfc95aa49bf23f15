"""A session becomes readable text and comes back without loss: numbers as entered, texts exactly, nothing dropped."""

import json
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from reliability_app import __version__
from reliability_app.session.document import (
    USUAL_ASKS,
    Basis,
    HazardAsk,
    LifeAsk,
    ReliabilityAsk,
    Session,
    UnitSet,
)
from reliability_app.session.json_format import from_text, to_text
from reliability_app.session.session_errors import SessionUnreadable
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, UnitTable

SAMPLE = (Path(__file__).parent / "old_versions" / "version_1.json").read_text(encoding="utf-8")


def session_of(*rows, extra_columns=()):
    return Session(sets=[UnitSet("Set 1", UnitTable.from_rows(rows, extra_columns=extra_columns))])


def rows_of(session, set_index=0):
    table = session.sets[set_index].table
    return [table.row(row) for row in range(table.row_count)]


def written_rows(session):
    return json.loads(to_text(session))["sets"][0]["units"]


def reopened(session):
    return from_text(to_text(session))


def edited(**changes):
    """The smallest session file, with some keys changed or added."""
    return json.dumps({"format": "rigpaper-session", "version": 1, "sets": [{"name": "A"}], **changes})


def test_the_file_reads_as_designed():
    table = UnitTable.from_rows(
        [
            {"unit": "P-01", "life": "812", "state": "failed", "quantity": "1"},
            {"unit": "P-03", "life": "400", "until": "600", "state": "found failed"},
            {"unit": "P-04", "life": "n/a", "state": "failed", "rig": "Süd"},
        ],
        extra_columns=["rig"],
    )
    session = Session(title="Pumps", sets=[UnitSet("Design A", table)], asks=(LifeAsk(10.0), HazardAsk(0.5)))

    assert to_text(session) == (
        "{\n"
        '  "format": "rigpaper-session",\n'
        '  "version": 1,\n'
        f'  "saved_by": "{__version__}",\n'
        '  "title": "Pumps",\n'
        '  "notes": "",\n'
        '  "life_unit": "h",\n'
        '  "sets": [\n'
        "    {\n"
        '      "name": "Design A",\n'
        '      "colour": 0,\n'
        '      "extra_columns": ["rig"],\n'
        '      "units": [\n'
        '        {"unit": "P-01", "life": 812, "state": "failed", "quantity": 1},\n'
        '        {"unit": "P-03", "life": 400, "until": 600, "state": "found failed"},\n'
        '        {"unit": "P-04", "life": "n/a", "state": "failed", "rig": "Süd"}\n'
        "      ],\n"
        '      "basis": {"family": "lognormal", "fit": "maximum likelihood", "bound": "automatic", '
        '"confidence": 0.95, "side": "lower"}\n'
        "    }\n"
        "  ],\n"
        '  "readings": [\n'
        '    {"ask": "life", "percent": 10},\n'
        '    {"ask": "hazard", "age": 0.5}\n'
        "  ],\n"
        '  "visits": []\n'
        "}\n"
    )


def test_everything_of_a_session_comes_back():
    session = from_text(SAMPLE)

    assert (session.title, session.notes, session.life_unit) == (
        "Coolant pumps",
        "Invented data.\nTwo lines.",
        "h",
    )
    assert session.asks == (LifeAsk(10.0), ReliabilityAsk(1000.0), HazardAsk(500.5))
    (visit,) = session.visits
    assert (visit.at.isoformat(), visit.label) == ("2025-01-31T14:05:00+01:00", "week 6")
    assert [(one.name, one.parameters) for one in visit.record.sets] == [("Design A", {"shape": 1.5})]
    first, second = session.sets
    assert (first.name, first.colour, second.name, second.colour) == ("Design A", 0, "Design B", 1)
    assert first.basis == Basis(family="weibull", bound="wald", confidence=0.9, side="two")
    assert second.table.row_count == 0
    assert first.table.extra_columns == ("lot", "coolant °C", "checked")
    assert rows_of(session)[1:5] == [
        {
            "unit": "P-02",
            "life": "1500",
            "state": "running",
            "quantity": "3",
            "lot": "1200",
            "coolant °C": "90",
        },
        {},
        {"unit": "P-03", "life": "400", "until": "6.0e2", "state": "found failed", "checked": "null"},
        {"unit": "P-04", "life": "n/a", "state": "failed", "note": 'log lost: "see rig 3"'},
    ]


def test_opening_and_saving_changes_no_byte():
    text = SAMPLE.replace('"saved_by": "0.1.0"', f'"saved_by": "{__version__}"')
    assert to_text(from_text(text)) == text


PLACES = {
    "$": ('{"format": "rigpaper-session",', lambda content: content),
    "sets": ('{"name": "A",', lambda content: content["sets"][0]),
    "units": ('{"unit": "P-01",', lambda content: content["sets"][0]["units"][0]),
    "basis": ('"basis": {"side": "two",', lambda content: content["sets"][0]["basis"]),
    "readings": ('{"ask": "life",', lambda content: content["readings"][0]),
    "visits": ('{"at": "2025-01-31T14:05:00Z",', lambda content: content["visits"][0]),
}


@pytest.mark.parametrize(
    ("place", "unknown"),
    [
        ("$", '"x": {"deep": [1.50, "a", null, true, {"b": 1E5}]}'),
        ("sets", '"x": [0.10]'),
        ("units", '"x": "text"'),
        ("units", '"x": 7.50'),
        ("units", '"x": false'),
        ("units", '"x": null'),
        ("units", '"x": {"a": [1.0, 2]}'),
        ("basis", '"x": {"seed": 12345678901234567890}'),
        ("readings", '"x": "why"'),
        ("visits", '"x": [1.25, null]'),
    ],
)
def test_unknown_keys_are_kept_at_every_level_as_they_were_written(place, unknown):
    text = (
        '{"format": "rigpaper-session", "version": 1, "sets": [{"name": "A", "units": [{"unit": "P-01", '
        '"life": 5}], "basis": {"side": "two", "confidence": 0.9}}], "readings": [{"ask": "life", '
        '"percent": 10}], "visits": [{"at": "2025-01-31T14:05:00Z", "label": ""}]}'
    )
    beginning, object_of = PLACES[place]
    assert text.count(beginning) == 1

    saved = to_text(from_text(text.replace(beginning, f"{beginning} {unknown},")))

    assert unknown in saved
    assert object_of(json.loads(saved))["x"] == json.loads(f"{{{unknown}}}")["x"]
    assert to_text(from_text(saved)) == saved


@pytest.mark.parametrize("typed", ["1401.40", "812", "0.50", "1e3", "1.0E-2", "-5", "1" * 300, "0", "1e-999"])
def test_numbers_are_written_as_they_were_entered(typed):
    session = session_of({"unit": "P-01", "life": typed, "quantity": typed})
    assert f'"life": {typed}, "quantity": {typed}}}' in to_text(session)
    assert rows_of(reopened(session)) == rows_of(session)


@pytest.mark.parametrize("typed", ["n/a", "1e999", "9" * 400, "812 h", "1_000", "NaN", "٣", "1,234", "-"])
def test_a_cell_that_is_no_json_number_is_written_as_text(typed):
    session = session_of({"unit": "P-01", "life": typed, "state": "failed"})
    assert written_rows(session) == [{"unit": "P-01", "life": typed, "state": "failed"}]
    assert rows_of(reopened(session)) == rows_of(session)


def test_texts_come_back_exactly():
    texts = ["0012", "true", 'a "quoted" \\ one', "two\nlines", "tab\there", "\x00", "日本 \u2028 😀", "=1+1", "1e5"]
    rows = [{"unit": text, "cause": text, "note": text, "lot": text} for text in texts]
    session = session_of(*rows, extra_columns=["lot"])
    assert rows_of(reopened(session)) == rows_of(session) == rows
    assert [row["unit"] for row in written_rows(session)] == texts


def test_half_a_character_does_not_make_the_file_unreadable():
    session = session_of({"unit": "a\ud800b"})
    assert rows_of(reopened(session)) == [{"unit": "a\ufffdb"}]


@pytest.mark.parametrize(
    ("cells", "written"),
    [
        (["85", "90.50", "", "-4"], [85, 90.50, -4]),
        (["0012", "1200"], ["0012", "1200"]),
        (["85", "hot"], ["85", "hot"]),
        (["12345678901234567890", "1"], ["12345678901234567890", "1"]),
        (["1e5"], ["1e5"]),
    ],
)
def test_a_further_column_holds_numbers_only_if_all_its_cells_are_plain_numbers(cells, written):
    session = session_of(*({"unit": str(i), "rig": cell} for i, cell in enumerate(cells)), extra_columns=["rig"])
    assert [row["rig"] for row in written_rows(session) if "rig" in row] == written
    assert rows_of(reopened(session)) == rows_of(session)


@pytest.mark.parametrize("typed", ["[" * 20 + "]" * 20, "[NaN]", '{"a":1}', "{", "[1, 2", '{"a": 1, "a": 2}', "truely"])
def test_text_that_only_resembles_json_stays_text(typed):
    session = session_of({"unit": "1", "rig": typed}, extra_columns=["rig"])
    assert written_rows(session)[0]["rig"] == typed
    assert rows_of(reopened(session)) == rows_of(session)


def test_a_blank_quantity_is_left_out_and_a_typed_one_is_written():
    session = session_of({"life": "5", "state": "failed"}, {"life": "6", "state": "failed", "quantity": "1"})
    assert ["quantity" in row for row in written_rows(session)] == [False, True]


def test_empty_rows_between_units_keep_their_place():
    session = session_of({"unit": "1"}, {}, {"unit": "2"})
    assert rows_of(reopened(session)) == [{"unit": "1"}, {}, {"unit": "2"}]


def test_what_is_left_out_of_a_file_has_its_usual_value():
    session = from_text(edited())
    assert (session.title, session.life_unit, session.asks, session.visits) == ("", "h", USUAL_ASKS, [])
    assert (session.sets[0].basis, session.sets[0].colour) == (Basis(), 0)


def test_a_file_without_sets_opens_with_an_empty_one():
    assert [unit_set.table.row_count for unit_set in from_text(edited(sets=[])).sets] == [0]


def test_no_readings_asked_for_stays_so():
    assert reopened(Session(asks=())).asks == ()


def test_the_version_of_the_program_that_saves_is_written():
    session = from_text(edited(saved_by="0.0.1"))
    assert json.loads(to_text(session))["saved_by"] == __version__


def test_a_column_name_that_is_taken_is_refused_with_its_place():
    with pytest.raises(SessionUnreadable, match=r"'note'.*\$\.sets\[0\]"):
        from_text(edited(sets=[{"name": "A", "extra_columns": ["note"]}]))


def test_a_number_that_json_does_not_have_is_never_written():
    with pytest.raises(ValueError, match="not JSON compliant"):
        to_text(Session(asks=(LifeAsk(float("nan")),)))


cell_texts = st.text(max_size=12) | st.sampled_from(
    ["812", "1401.40", "53,2", "1500+", "<200", "200-400", "failed", "ok", "0012", "1e5", "true", "[1]", "n/a"]
)
blocks = st.tuples(
    st.integers(0, 4),
    st.lists(st.sampled_from([*BUILT_IN_COLUMNS, "lot", "rig"]), min_size=1, unique=True),
    st.lists(st.lists(cell_texts, min_size=10, max_size=10), min_size=1, max_size=4),
)


@settings(max_examples=150, deadline=None, derandomize=True)
@given(st.lists(blocks, max_size=5), st.text(max_size=20))
def test_whatever_was_typed_comes_back_and_saves_to_the_same_bytes(typed, title):
    table = UnitTable.from_rows([], extra_columns=["lot", "rig"])
    for row, columns, cells in typed:
        table.set_block(row, columns, [line[: len(columns)] for line in cells])
    session = Session(title=title, sets=[UnitSet("A", table)])

    text = to_text(session)

    again = from_text(text)
    assert to_text(again) == text
    assert again.title == title
    assert rows_of(again) == rows_of(session)
