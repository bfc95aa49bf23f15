"""The command reads spreadsheet files and dates, says which sheet it took, and refuses one that is not there."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from reliability_app.command_line import main
from tests.session.spreadsheet_samples import write_ods, write_xlsx

COVER = [["Fatigue test, invented data"], ["Page", "of"]]
RIG = [["Unit", "Life (h)", "State"], ["A-1", 812, "failed"], ["A-2", 1230, "failed"], ["A-3", 1500, "running"]]
DATES = [["Unit", "Start", "Failed on"], ["B-1", "2024-01-01", "2024-03-01"], ["B-2", "2024-01-11", "2024-06-30"]]


def read(capsys: pytest.CaptureFixture[str], path: Path, *words: str) -> tuple[int, dict[str, object], str]:
    status = main(["read", str(path), "--bound", "likelihood", "--json", *words])
    streams = capsys.readouterr()
    return status, json.loads(streams.out) if streams.out else {}, streams.err


@pytest.mark.parametrize("write", [write_xlsx, write_ods])
def test_the_first_sheet_that_reads_as_units_is_read_and_named(
    write, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = write(tmp_path / f"rig.{write.__name__[6:]}", {"Cover": COVER, "A": RIG, "B": DATES})
    status, answer, said = read(capsys, path)
    assert status == 0
    assert answer["life_unit"] == "h"
    assert (answer["sets"][0]["failed"], answer["sets"][0]["running"]) == (2, 1)
    assert "Sheet 'A': 3 rows" in said
    assert "other sheets, which were not read: 'Cover', 'B'" in said


def test_a_sheet_is_named(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = write_xlsx(tmp_path / "rig.xlsx", {"A": RIG, "B": DATES})
    status, answer, said = read(capsys, path, "--sheet", "B")
    assert status == 0
    assert answer["life_unit"] == "days"
    assert answer["sets"][0]["failed"] == 2
    assert "life in days from the dates" in said


def test_a_sheet_that_is_not_there_is_wrong_usage(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = write_xlsx(tmp_path / "rig.xlsx", {"A": RIG, "B": DATES})
    assert read(capsys, path, "--sheet", "C") == (
        2,
        {},
        f"rigpaper read: {path} has no sheet 'C'. Its sheets are: 'A', 'B'.\n",
    )
    text = tmp_path / "rig.csv"
    text.write_text("Life\n5\n6\n", encoding="utf-8")
    status, _, said = read(capsys, text, "--sheet", "A")
    assert (status, "is a text file, which has no sheet 'A'" in said) == (2, True)


def test_dates_in_doubt_give_no_reading_and_the_reason(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = tmp_path / "rig.csv"
    path.write_text("Start,End,State\n03/04/2025,05/06/2025,failed\n04/05/2025,06/07/2025,failed\n", encoding="utf-8")
    status, _, said = read(capsys, path)
    assert status == 1
    assert "'03/04/2025' may be 3 April 2025 or 4 March 2025: say which, or write dates like 2025-04-03." in said
