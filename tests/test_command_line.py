"""The command reads sessions and tables without a window, for people and for scripts."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from reliability_app.command_line import main
from reliability_app.session.shipped import shipped

NIST = shipped("sample_sets") / "nist_handbook_8_4_1_3.json"


def read_json(capsys: pytest.CaptureFixture[str], *words: str) -> tuple[int, dict[str, object]]:
    status = main(["read", *words, "--json"])
    return status, json.loads(capsys.readouterr().out)


def test_nist_handbook_8_4_1_3_through_the_command_line(capsys: pytest.CaptureFixture[str]) -> None:
    status, answer = read_json(capsys, str(NIST), "--family", "weibull", "--percent", "10", "--side", "two")
    (found,) = answer["sets"]
    assert status == 0
    # NIST/SEMATECH e-Handbook sec. 8.4.1.3 prints shape 1.7208, scale 606.528, log-likelihood -75.135.
    assert found["parameters"] == pytest.approx({"shape": 1.7208, "scale": 606.53}, rel=3e-5)
    assert found["log_likelihood"] == pytest.approx(-75.135, abs=5e-4)
    # B10 and its likelihood limits: recomputed independently from the Handbook's data.
    (life,) = found["readings"]
    assert (life["estimate"], life["lower"], life["upper"]) == pytest.approx((164.0224, 59.8546, 271.9495), rel=1e-6)
    assert (life["ask"], life["percent"], life["side"], life["confidence"], life["bound"]) == (
        "life", 10, "two", 0.95, "likelihood",
    )  # fmt: skip


def test_the_answer_names_counts_and_cautions(capsys: pytest.CaptureFixture[str]) -> None:
    _, answer = read_json(capsys, str(NIST), "--age", "300")
    (found,) = answer["sets"]
    assert (found["failed"], found["running"], found["found_failed"], found["unread"]) == (10, 10, 0, 0)
    assert found["readings"][0]["ask"] == "reliability"
    assert {"code", "severity", "text"} == set(found["cautions"][0])
    assert found["cautions"][-1]["code"] == "responsible-engineer"


def test_sentences_for_people(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["read", str(NIST), "--percent", "10"]) == 0
    out = capsys.readouterr().out
    assert "B10 life 164 h. With 95 % confidence between 59.8 h and 272 h" in out
    assert "10 failed of 20" in out


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--family", "nonesuch"], "lognormal, weibull, exponential"),
        (["--bound", "nonesuch"], "automatic, calibrated, likelihood, wald, exact"),
        (["--side", "left"], "lower, upper, two"),
        (["--confidence", "95"], "0.95"),
        (["--percent", "0"], "between 0 and 100"),
        (["--age", "-4"], "positive"),
        (["--set", "nonesuch"], "The sets are"),
    ],
)
def test_wrong_usage_is_refused_by_name(capsys: pytest.CaptureFixture[str], words: list[str], said: str) -> None:
    assert main(["read", str(NIST), *words]) == 2
    captured = capsys.readouterr()
    assert said in captured.err
    assert captured.out == ""


def test_words_nobody_knows_end_with_two() -> None:
    with pytest.raises(SystemExit) as ended:
        main(["read", str(NIST), "--nonesuch"])
    assert ended.value.code == 2


def test_units_without_a_failure_give_status_one_and_the_reason(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    table = tmp_path / "rig.csv"
    table.write_text("life,state\n100,running\n200,running\n", encoding="utf-8")
    status = main(["read", str(table), "--json"])
    captured = capsys.readouterr()
    assert status == 1
    assert "No unit has failed" in captured.err
    (found,) = json.loads(captured.out)["sets"]
    assert found["converged"] is False
    assert found["parameters"] == {"mu": None, "sigma": None}
    assert all(reading["estimate"] is None for reading in found["readings"])


def test_a_table_is_read_like_a_paste(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    table = tmp_path / "rig.csv"
    table.write_text(
        'Serial;Hours;Result\nP1;"812,5";ok\nP2;1.401,40;broken\nP3;n/a;broken\nP4;600,1;failed\n', "utf-8"
    )
    status, answer = read_json(capsys, str(table))
    (found,) = answer["sets"]
    assert status == 0
    assert (found["failed"], found["running"], found["unread"]) == (2, 1, 1)


@pytest.mark.parametrize("content", ["", "{", '{"format": "else"}', '{"format": "rigpaper-session", "version": 99}'])
def test_a_file_that_cannot_be_opened_is_refused_with_its_name(
    tmp_path: Path, capsys: pytest.CaptureFixture[str], content: str
) -> None:
    broken = tmp_path / "broken.json"
    broken.write_text(content, encoding="utf-8")
    assert main(["read", str(broken)]) == 1
    assert "broken.json" in capsys.readouterr().err
    assert broken.read_text(encoding="utf-8") == content


def run_without_screen(*words: str) -> subprocess.CompletedProcess[str]:
    environment = {"PATH": "/usr/bin:/bin", "HOME": "/nonexistent"}
    return subprocess.run(
        [sys.executable, "-m", "reliability_app", *words],
        env=environment, capture_output=True, text=True, check=False, timeout=60,
    )  # fmt: skip


@pytest.mark.skipif(sys.platform != "linux", reason="other systems always have a screen")
def test_without_a_screen_the_readings_are_printed_and_the_reason_given() -> None:
    ended = run_without_screen(str(NIST))
    assert ended.returncode == 0
    assert "B10 life 164 h" in ended.stdout
    assert "No window" in ended.stderr


@pytest.mark.skipif(sys.platform != "linux", reason="other systems always have a screen")
def test_without_a_screen_and_a_file_there_is_nothing_to_do() -> None:
    ended = run_without_screen()
    assert ended.returncode == 1
    assert "rigpaper read FILE" in ended.stderr


def test_reading_imports_neither_qt_nor_pandas() -> None:
    table = shipped("sample_sets") / "coolant_pumps_rig_2.csv"
    script = (
        "import sys\nfrom reliability_app.command_line import main\n"
        f"assert main(['read', {str(NIST)!r}]) == 0\nassert main(['read', {str(table)!r}]) == 0\n"
        "heavy = {'PySide6', 'pyqtgraph', 'pandas', 'scipy.stats'} & set(sys.modules)\nassert not heavy, heavy"
    )
    ended = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=False, timeout=60)
    assert ended.returncode == 0, ended.stderr
