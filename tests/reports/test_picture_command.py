"""`rigpaper picture` draws a page without a screen, and refuses in sentences."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest
from PySide6.QtGui import QImage

from reliability_app.command_line import main
from reliability_app.session.json_file import load, save
from reliability_app.session.shipped import shipped
from reliability_app.system_libraries import Missing

NIST = shipped("sample_sets") / "nist_handbook_8_4_1_3.json"
# A bound that is there at once.
QUICK = ("--bound", "likelihood")


def test_a_page_is_drawn_on_a_machine_without_a_screen(tmp_path: Path) -> None:
    # A process of its own, since this one has an application already.
    bare = {name: value for name, value in os.environ.items() if name not in ("DISPLAY", "QT_QPA_PLATFORM")}
    path = tmp_path / "page.pdf"
    words = ["picture", str(NIST), "--page", "hazard", "--out", str(path), *QUICK]
    run = subprocess.run(
        [sys.executable, "-m", "reliability_app", *words],
        env=bare, capture_output=True, text=True, timeout=60, check=False,
    )  # fmt: skip
    assert (run.returncode, run.stdout, run.stderr) == (0, "", "")
    assert path.read_bytes().startswith(b"%PDF-1.")


def test_reading_basis_and_size_are_as_asked(tmp_path: Path) -> None:
    path = tmp_path / "page.png"
    words = ["--family", "weibull", "--percent", "5", "--side", "two", "--size", "100x80", "--dpi", "127"]
    assert main(["picture", str(NIST), "--out", str(path), *words, *QUICK]) == 0
    image = QImage(str(path))
    assert image.width() == 500
    said = image.text("Description")
    assert "B5 life" in said
    assert "between" in said
    assert "Weibull paper" in image.text("Title")


def test_a_hidden_set_is_drawn_only_where_it_is_asked_for(tmp_path: Path) -> None:
    session = load(shipped("sample_sets") / "fans_eight_visits.json")
    session.sets[1].hidden = True
    save(session, tmp_path / "fans.json")
    said = []
    for place, words in enumerate(([], ["--set", session.sets[1].name])):
        out = tmp_path / f"{place}.png"
        assert main(["picture", str(tmp_path / "fans.json"), "--out", str(out), *words, *QUICK]) == 0
        said.append(QImage(str(out)).text("Description"))
    assert session.sets[1].name not in said[0]
    assert session.sets[1].name in said[1]


@pytest.mark.parametrize(
    ("words", "status", "said"),
    [
        (["--out", "page.gif"], 2, ".svg, .pdf or .png"),
        (["--out", "page.svg", "--size", "10x10"], 2, "between 40 and 1200 mm"),
        (["--out", "page.png", "--dpi", "0"], 2, "between 50 and 1200"),
        (["--out", "page.png", "--set", "nonesuch"], 2, "The sets are"),
        (["--out", "no folder/page.png", *QUICK], 1, "no such file or folder"),
    ],
)
def test_what_cannot_be_drawn_is_refused(
    words: list[str], status: int, said: str, tmp_path: Path, capsys: pytest.CaptureFixture[str],
    monkeypatch: pytest.MonkeyPatch,
) -> None:  # fmt: skip
    monkeypatch.chdir(tmp_path)
    assert main(["picture", str(NIST), *words]) == status
    captured = capsys.readouterr()
    assert said in captured.err
    assert captured.err.startswith("rigpaper picture: ")
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(
    ("lacks", "answer", "said"),
    [
        ("find_missing", Missing(("libGL.so.1",), ("libgl1",)), "sudo apt-get install -y libgl1"),
        ("_pyside_is_installed", False, "pip install PySide6-Essentials"),
    ],
)
def test_what_the_machine_lacks_is_said_with_the_remedy(
    lacks: str, answer: object, said: str, tmp_path: Path, capsys: pytest.CaptureFixture[str],
    monkeypatch: pytest.MonkeyPatch,
) -> None:  # fmt: skip
    monkeypatch.setattr(f"reliability_app.system_libraries.{lacks}", lambda *_: answer)
    assert main(["picture", str(NIST), "--out", str(tmp_path / "page.svg")]) == 1
    assert said in capsys.readouterr().err


def test_a_size_that_is_none_ends_with_two(capsys: pytest.CaptureFixture[str]) -> None:
    with pytest.raises(SystemExit) as ended:
        main(["picture", str(NIST), "--out", "page.svg", "--size", "160"])
    assert ended.value.code == 2
    assert "give width and height in mm, as 160x110" in capsys.readouterr().err


def test_a_table_without_a_unit_says_so(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    table = tmp_path / "units.csv"
    table.write_text("Life,State\nunknown,failed\n")
    assert main(["picture", str(table), "--out", str(tmp_path / "page.svg")]) == 1
    assert "nothing to draw" in capsys.readouterr().err
    assert not (tmp_path / "page.svg").exists()
