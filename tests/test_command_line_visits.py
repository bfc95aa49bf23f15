"""The commands about visits and newer tables: what they print, what they write, and their exit status."""

import json

import pytest

from reliability_app.command_line import main
from reliability_app.session.document import Basis, LifeAsk, Session, UnitSet
from reliability_app.session.file_lock import FileLock
from reliability_app.session.json_file import backup_of, load, save
from reliability_app.session.unit_table import UnitTable
from tests.session.test_visit_history import TABLES, WEIBULL, text

__all__ = ["text"]  # the session of two visits

NEWER = "Unit,Life (h),State\n" + "\n".join(
    ["A-1,500,failed", "A-2,900,running", "A-3,650,failed", "A-4,700,running", "A-5,100,running"]
)


@pytest.fixture
def visited(tmp_path, text):
    path = tmp_path / "rig.json"
    path.write_text(text, encoding="utf-8")
    return path


@pytest.fixture
def plain(tmp_path):
    rows = [
        {"unit": "A-1", "life": "500", "state": "failed"},
        {"unit": "A-2", "life": "600", "state": "running"},
        {"unit": "A-3", "life": "600", "state": "running"},
        {"unit": "A-4", "life": "800", "state": "failed"},
    ]
    path = tmp_path / "plain.json"
    save(Session(sets=[UnitSet("Set 1", UnitTable.from_rows(rows))]), path)
    (tmp_path / "newer.csv").write_text(NEWER, encoding="utf-8")
    return path


def run(capsys, *words):
    status = main([str(word) for word in words])
    said = capsys.readouterr()
    return status, said.out, said.err


def test_visits_are_listed_with_drift_changes_and_agreement(visited, capsys):
    status, out, _ = run(capsys, "visits", visited)
    assert status == 0
    assert "  1. week 0 (2026-03-02): 8 failed of 20. B10 life " in out
    assert "Since the visit before: 3 newly failed, 9 still running and older, 1 no longer read." in out
    assert "3 failed: in agreement." in out
    assert "look for a new cause, lot or duty." in out
    assert "family from Weibull to Lognormal" in out


def test_visits_as_json_hold_the_same_numbers(visited, capsys):
    status, out, _ = run(capsys, "visits", visited, "--json")
    found = json.loads(out)
    assert status == 0
    assert [one["label"] for one in found["visits"]] == ["week 0", "week 1"]
    points = found["sets"][0]["points"]
    recorded = load(visited).visits[1].record.sets[0].readings[0]
    assert (points[1]["estimate"], points[1]["lower"]) == (recorded.estimate, recorded.lower)
    told = points[2]["agreement"]
    assert (told["found"], told["agrees"], len(told["units"])) == (8, False, 9)
    assert told["mid_p"] < 0.001


def test_a_session_without_visits_and_a_table_are_told_apart(plain, tmp_path, capsys):
    assert run(capsys, "visits", plain)[0] == 1
    status, _, err = run(capsys, "visits", tmp_path / "newer.csv")
    assert status == 2
    assert "visits are kept in sessions" in err


@pytest.mark.parametrize("name", ["week 1", "2"])
def test_read_gives_the_numbers_of_a_visit_to_the_last_digit(visited, capsys, name):
    status, out, err = run(capsys, "read", visited, "--visit", name, "--json")
    found = json.loads(out)["sets"][0]
    recorded = load(visited).visits[1].record.sets[0]
    assert (status, err) == (0, "")
    assert found["parameters"] == recorded.parameters
    assert found["log_likelihood"] == recorded.log_likelihood
    assert (found["readings"][0]["estimate"], found["readings"][0]["lower"]) == (
        recorded.readings[0].estimate,
        recorded.readings[0].lower,
    )
    anew = Session(sets=[UnitSet("A", TABLES[1], WEIBULL)], asks=(LifeAsk(10.0),))
    assert (found["failed"], found["unread"]) == (anew.sets[0].table.counts().failed, 1)


def test_read_says_where_a_visit_was_computed_otherwise(visited, capsys):
    lower = load(visited).visits[0].record.sets[0].readings[0].lower
    visited.write_text(visited.read_text(encoding="utf-8").replace(str(lower), "77.5"), encoding="utf-8")
    status, _, err = run(capsys, "read", visited, "--visit", "1")
    assert status == 0
    assert "gives other numbers" in err


def test_a_visit_that_is_not_there_is_wrong_usage(visited, capsys):
    status, _, err = run(capsys, "read", visited, "--visit", "week 9")
    assert status == 2
    assert "The visits are: 1: week 0 (2026-03-02); 2: week 1 (2026-03-09)." in err


def test_update_tells_what_would_change_and_writes_nothing(plain, tmp_path, capsys):
    before = plain.read_bytes()
    status, out, _ = run(capsys, "update", plain, tmp_path / "newer.csv")
    assert status == 0
    assert out.startswith(
        "Set 1: 1 newly failed, 1 still running and older, 1 new, 1 unchanged, 1 went from failed back to running.\n"
    )
    assert "A-3   newly failed             running at 600  failed at 650\n" in out
    assert "? A-4: A-4 was failed at 800, and is now running at 700: is that right?" in out
    assert out.endswith("Nothing was written: say --write to save this in the session.\n")
    assert plain.read_bytes() == before


def test_update_writes_when_told_to_and_keeps_the_state_before(plain, tmp_path, capsys):
    before = plain.read_bytes()
    status, out, _ = run(capsys, "update", plain, tmp_path / "newer.csv", "--write", "--take", "A-4")
    assert status == 0
    assert f"Saved in {plain}" in out
    rows = load(plain).sets[0].table.rows()
    assert [(row["unit"], row["life"], row["state"]) for row in rows] == [
        ("A-1", "500", "failed"),
        ("A-2", "900", "running"),
        ("A-3", "650", "failed"),
        ("A-4", "700", "running"),
        ("A-5", "100", "running"),
    ]
    assert backup_of(plain).read_bytes() == before
    status, out, _ = run(capsys, "update", plain, tmp_path / "newer.csv", "--write")
    assert status == 1
    assert out.endswith("Nothing changes.\n")


def test_a_session_open_elsewhere_is_refused_and_stays_as_it_was(plain, tmp_path, capsys):
    before = plain.read_bytes()
    with FileLock(plain):
        status, _, err = run(capsys, "update", plain, tmp_path / "newer.csv", "--write")
    assert status == 1
    assert "is open in another window already" in err
    assert plain.read_bytes() == before


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (("{plain}", "{newer}", "--take", "A-9"), "Nothing is asked about 'A-9'. What is asked about: A-4."),
        (("{plain}", "{newer}", "--set", "B"), "There is no set called 'B'"),
        (("{newer}", "{newer}"), "is no session"),
        (("{plain}", "{plain}"), "is a session: give the table"),
    ],
)
def test_what_update_cannot_do_is_wrong_usage(plain, tmp_path, capsys, words, said):
    places = {"plain": plain, "newer": tmp_path / "newer.csv"}
    status, _, err = run(capsys, "update", *(word.format(**places) for word in words))
    assert status == 2
    assert said in err


def test_update_needs_to_know_the_set_and_the_unit_of_lives(plain, tmp_path, capsys):
    session = load(plain)
    session.sets.append(UnitSet("Set 2", UnitTable(), Basis()))
    save(session, plain)
    newer = tmp_path / "newer.csv"
    assert "say with --set which one" in run(capsys, "update", plain, newer)[2]
    newer.write_text(NEWER.replace("(h)", "(km)"), encoding="utf-8")
    status, _, err = run(capsys, "update", plain, newer, "--set", "Set 1")
    assert status == 2
    assert "gives lives in km, the session in h" in err
