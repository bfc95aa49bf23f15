"""Sessions of every version ever written open for ever; a newer version is refused."""

import json
from pathlib import Path

import pytest

from reliability_app.session.json_file import load
from reliability_app.session.json_format import from_text
from reliability_app.session.json_schema_types import VERSION
from reliability_app.session.json_write import JsonText
from reliability_app.session.migrations import STEPS, to_current
from reliability_app.session.session_errors import NewerVersion, SessionUnreadable

OLD_VERSIONS = Path(__file__).parent / "old_versions"


def test_each_version_before_the_current_one_has_its_step():
    assert list(STEPS) == list(range(1, VERSION))


@pytest.mark.parametrize("version", range(1, VERSION + 1))
def test_a_sample_of_each_version_opens_with_all_its_content(version):
    session = load(OLD_VERSIONS / f"version_{version}.json")

    assert session.title == "Coolant pumps"
    assert [unit_set.name for unit_set in session.sets] == ["Design A", "Design B"]
    table = session.sets[0].table
    assert [table.text(row, "life") for row in range(6)] == ["1401.40", "1500", "", "400", "n/a", "980"]
    assert session.sets[0].basis.family == "weibull"
    assert len(session.asks) == 3
    assert session.visits[0].label == "week 6"
    assert "later" in session.kept


def test_steps_are_taken_in_turn_from_the_files_version_up():
    steps = {
        1: lambda content: {**content, "title": content["name"] + " (1)"},
        2: lambda content: {**content, "title": content["title"] + " (2)"},
        3: lambda content: {**content, "title": content["title"] + " (3)"},
    }
    content = {"version": JsonText("2"), "name": "A", "title": "B", "unknown": JsonText("1.50")}

    current = to_current(content, steps=steps, current=4)

    assert current == {"version": 4, "name": "A", "title": "B (2) (3)", "unknown": "1.50"}
    assert content["version"] == "2"


def test_a_file_of_the_current_version_takes_no_step():
    content = {"version": JsonText(str(VERSION)), "sets": []}
    assert to_current(content, steps={VERSION: pytest.fail}) == content


def test_an_older_file_is_read_through_its_steps(monkeypatch):
    # As if the next version had come: "titel" was the old name of a key, and numbers must stay as entered.
    monkeypatch.setattr("reliability_app.session.json_format.VERSION", 2)
    monkeypatch.setattr(
        "reliability_app.session.json_format.to_current",
        lambda content: {**content, "version": 2, "title": content["titel"]},
    )
    old = {"format": "rigpaper-session", "version": 1, "titel": "Old", "sets": [{"name": "A", "units": []}]}
    text = json.dumps(old).replace("[]", '[{"life": 1.50}]')

    session = from_text(text)

    assert session.title == "Old"
    assert session.sets[0].table.text(0, "life") == "1.50"


def test_a_newer_version_is_refused_with_both_versions_and_what_to_do():
    text = json.dumps({"format": "rigpaper-session", "version": VERSION + 1, "saved_by": "9.1", "sets": 5})
    with pytest.raises(NewerVersion) as refusal:
        from_text(text, source="rig.json")
    assert str(refusal.value).startswith(f"rig.json cannot be opened: it is a session of file version {VERSION + 1}")
    assert "saved by Rigpaper 9.1" in str(refusal.value)
    assert str(refusal.value).endswith("Install the newer Rigpaper to open it.")


@pytest.mark.parametrize("version", ["0", "-1", "true", "1.0", '"1"', "null", "[1]"])
def test_a_version_that_never_was_is_refused(version):
    text = '{"format": "rigpaper-session", "sets": [], "version": ' + version + "}"
    with pytest.raises(SessionUnreadable, match=r"whole number from 1 up \(\$\.version\)"):
        from_text(text)
