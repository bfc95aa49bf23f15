"""Every sample set that ships opens cleanly, says where its data come from, and can be analysed."""

import csv
import re

import pytest

from reliability_app.engine import fit
from reliability_app.session import json_format
from reliability_app.session.shipped import shipped
from reliability_app.session.table_files import read_table
from reliability_app.session.unit_table import UnitTable

SESSIONS = sorted(shipped("sample_sets").glob("*.json"))
TABLES = sorted(shipped("sample_sets").glob("*.csv"))
every_sample = pytest.mark.parametrize("path", SESSIONS, ids=lambda path: path.stem)


def opened(path):
    return json_format.from_text(path.read_text(encoding="utf-8"), source=path.name)


def named(stem):
    return opened(shipped("sample_sets") / f"{stem}.json")


def lives(session, state):
    table = session.sets[0].table
    rows = [table.row(row) for row in range(table.row_count)]
    return [float(row["life"]) for row in rows if row["state"] == state for _ in range(int(row.get("quantity", "1")))]


def test_four_invented_and_three_open_sets_ship():
    invented = [path for path in SESSIONS if opened(path).notes.startswith("Invented data")]
    assert len(invented) == 4
    assert len(SESSIONS) == 7


@every_sample
def test_a_sample_says_that_it_is_invented_or_names_source_and_licence(path):
    notes = opened(path).notes
    assert notes.startswith("Invented data: ") or ("Source: " in notes and "Licence: " in notes)


@every_sample
def test_a_sample_has_a_title_a_life_unit_and_readings(path):
    session = opened(path)
    assert session.title
    assert session.life_unit in {"h", "thousand cycles"}
    assert session.asks


@every_sample
def test_a_sample_has_no_unread_row(path):
    for unit_set in opened(path).sets:
        assert unit_set.table.faults() == []
        assert unit_set.table.counts().unread == 0
        assert unit_set.table.counts().failed >= 5


@every_sample
@pytest.mark.parametrize("family", ["lognormal", "weibull"])
def test_a_sample_can_be_fitted(path, family):
    for unit_set in opened(path).sets:
        fitted = fit(unit_set.table.life_data(), family)
        assert fitted.converged
        assert 0 < fitted.life(0.10) < fitted.life(0.50)


@every_sample
def test_a_sample_is_stored_exactly_as_the_program_saves_it(path):
    saved_by = re.compile(r'"saved_by": "[^"]*"')
    stored, saved = path.read_text(encoding="utf-8"), json_format.to_text(opened(path))
    assert saved_by.sub("", saved) == saved_by.sub("", stored)


def test_the_handbook_set_8_4_1_3_gives_the_handbook_s_estimates():
    # NIST/SEMATECH e-Handbook, section 8.4.1.3: shape 1.7208, scale 606.528, log-likelihood -75.135.
    session = named("nist_handbook_8_4_1_3")
    fitted = fit(session.sets[0].table.life_data(), session.sets[0].basis.family)
    assert fitted.parameters["shape"] == pytest.approx(1.7208, abs=5e-5)
    assert fitted.parameters["scale"] == pytest.approx(606.528, abs=5e-3)
    assert fitted.log_likelihood == pytest.approx(-75.135, abs=5e-4)


def test_the_handbook_set_8_2_1_5_has_the_handbook_s_units():
    # NIST/SEMATECH e-Handbook, section 8.2.1.5: 20 units, failures and withdrawals as listed there.
    session = named("nist_handbook_8_2_1_5")
    assert sorted(lives(session, "failed")) == [10, 32, 56, 98, 122, 181]
    assert sorted(lives(session, "running")) == [50, 100, 125, 150] + [200] * 10


def test_the_handbook_set_1_4_2_9_has_the_handbook_s_summary():
    # NIST/SEMATECH e-Handbook, section 1.4.2.9: 101 lives from 370 to 2440; the mean 1400.91 is from memory.
    values = lives(named("nist_handbook_1_4_2_9"), "failed")
    assert len(values) == 101
    assert (min(values), max(values)) == (370, 2440)
    assert sum(values) / len(values) == pytest.approx(1400.91, abs=0.005)


@pytest.mark.parametrize("path", TABLES, ids=lambda path: path.stem)
def test_a_sample_table_is_read_whole(path):
    understood = read_table(path)
    table = UnitTable.from_rows(understood.rows, understood.extra_columns)
    with path.open(encoding="utf-8", newline="") as file:
        assert table.row_count == len(list(csv.reader(file))) - 1
    assert table.faults() == []


def test_the_rig_s_table_holds_the_pumps_of_the_second_session():
    understood = read_table(shipped("sample_sets") / "coolant_pumps_rig_2.csv")
    table = UnitTable.from_rows(understood.rows, understood.extra_columns)
    kept = ("unit", "life", "state")
    session_table = named("coolant_pumps_2_stopped_at_2000_h").sets[0].table
    assert [[table.text(row, column) for column in kept] for row in range(table.row_count)] == [
        [session_table.text(row, column) for column in kept] for row in range(session_table.row_count)
    ]
