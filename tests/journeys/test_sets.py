"""Several sets in one window: named, hidden, moved and split by hand, drawn over each other, never out of date."""

from __future__ import annotations

from pathlib import Path

import openpyxl
import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QMenu

from reliability_app.reports.figure import Line
from reliability_app.reports.series_looks import print_look
from reliability_app.session.analysis import Question, SetAnalysis
from reliability_app.session.document import Basis
from reliability_app.session.edits import ChangeBasis
from reliability_app.session.json_file import load, save
from reliability_app.session.table_contents import NO_TEST_OF_DIFFERENCE
from reliability_app.windows import background
from reliability_app.windows.picture_commands import NOT_YET
from reliability_app.windows.set_commands import SetCommands
from reliability_app.windows.table_commands import NOT_YET as NO_TABLE_YET
from tests.journeys.conftest import CONTROL, Desk, Dialogs

SHIFT, ALT = Qt.KeyboardModifier.ShiftModifier, Qt.KeyboardModifier.AltModifier
# Invented: hours of pumps of two lots.
UNITS = (
    "Unit\tLife\tState\tLot\nP-1\t812\tfailed\tA\nP-2\t1230\tfailed\tA\nP-3\t1410\tfailed\tA\nP-4\t1500\trunning\tA\n"
    "P-5\t2640\tfailed\tB\nP-6\t3890\tfailed\tB\nP-7\t4400\tfailed\tB\nP-8\t5100\trunning\tB\n"
)


def commands(desk: Desk) -> SetCommands:
    return desk.window.contents.set_bar.commands


def names(desk: Desk) -> list[str]:
    return [one.name for one in desk.window.session.sets]


def drawn(desk: Desk) -> list[str]:
    return [picture.name for picture in desk.window.contents.paper._pictures]


def choose(menu: QMenu, text: str) -> None:
    """Open a menu, and trigger the entry that begins with `text`."""
    menu.aboutToShow.emit()
    next(action for action in menu.actions() if action.text().startswith(text)).trigger()


@pytest.fixture
def two(desk: Desk) -> Desk:
    """A set split into its lots A and B, of which A is shown."""
    desk.paste(UNITS)
    choose(commands(desk).split_menu, "Lot")
    desk.wait_for_answer()
    return desk


@pytest.fixture
def analysed(monkeypatch: pytest.MonkeyPatch) -> list[str]:
    """The names of the sets that are analysed from here on."""
    seen: list[str] = []
    real = background.analyse

    def noted(question: Question, **others: object) -> SetAnalysis:
        seen.append(question.name)
        return real(question, **others)

    monkeypatch.setattr(background, "analyse", noted)
    return seen


def test_a_set_is_split_and_its_parts_are_drawn_over_each_other_with_a_legend(two: Desk) -> None:
    assert names(two) == ["Set 1", "Set 1, A", "Set 1, B"]
    assert two.window.shown_set == 1
    assert two.counts.startswith("3 failed, 1 running")
    assert drawn(two) == ["Set 1, A", "Set 1, B"]
    paper = two.window.contents.paper
    assert paper._legend.names == ("Set 1, A", "Set 1, B")
    assert paper.current is not None
    assert paper.current.name == "Set 1, A"
    two.key(Qt.Key.Key_Z, CONTROL)
    two.wait_for_answer()
    assert names(two) == ["Set 1"]
    assert not two.window.session.sets[0].hidden
    assert two.counts.startswith("6 failed, 2 running")
    assert drawn(two) == ["Set 1"]


def test_sets_are_named_copied_moved_hidden_and_coloured_by_keyboard_and_come_back(two: Desk) -> None:
    two.key(Qt.Key.Key_F6)
    two.type("Lot A")
    two.key(Qt.Key.Key_Return)
    two.key(Qt.Key.Key_D, CONTROL | SHIFT)
    assert names(two) == ["Set 1", "Lot A", "Lot A copy", "Set 1, B"]
    two.key(Qt.Key.Key_PageDown, CONTROL | SHIFT)
    assert names(two) == ["Set 1", "Lot A", "Set 1, B", "Lot A copy"]
    assert two.window.shown_set == 3
    two.key(Qt.Key.Key_H, CONTROL | SHIFT)
    choose(commands(two).colour_menu, "Hexagon")
    two.key(Qt.Key.Key_PageUp, CONTROL)
    two.wait_for_answer()
    assert two.window.shown_set == 2
    assert drawn(two) == ["Lot A", "Set 1, B"]
    save(two.window.session, two.folder / "sets.json")
    again = load(two.folder / "sets.json").sets
    assert [(one.name, one.hidden) for one in again] == [
        ("Set 1", True),
        ("Lot A", False),
        ("Set 1, B", False),
        ("Lot A copy", True),
    ]
    assert again[3].colour == 6
    for _ in range(6):  # colour, hiding, moving, copying, naming, split
        two.key(Qt.Key.Key_Z, CONTROL)
    assert names(two) == ["Set 1"]


def test_a_name_that_is_taken_is_refused_and_escape_leaves_the_old_one(two: Desk) -> None:
    two.key(Qt.Key.Key_F6)
    two.type("Set 1")
    two.key(Qt.Key.Key_Return)
    assert "already" in two.message
    two.key(Qt.Key.Key_F6)
    two.type("other")
    two.key(Qt.Key.Key_Escape)
    assert names(two) == ["Set 1", "Set 1, A", "Set 1, B"]


def test_a_removed_set_leaves_the_others_and_the_last_one_stays(two: Desk) -> None:
    for _ in range(3):
        commands(two).remove()
    two.wait_for_answer()
    assert len(names(two)) == 1
    assert "only set" in two.message


def test_an_edit_of_one_set_analyses_that_set_alone(two: Desk, analysed: list[str]) -> None:
    other = two.window.contents.paper._pictures[1]
    two.go(0, "life")
    two.type("700")
    two.key(Qt.Key.Key_Return)
    two.wait_for_answer()
    assert set(analysed) == {"Set 1, A"}
    assert two.window.contents.paper._pictures[1] is other
    # Another set in front, another colour, another name: nothing is analysed, all is shown.
    analysed.clear()
    commands(two).step(1)
    commands(two)._recolour(5)
    two.wait_for_answer()
    assert analysed == []
    assert two.counts.startswith("3 failed, 1 running")
    assert two.window.contents.paper.current.colour == 5
    assert "B10 life 2" in two.sentence


def test_a_set_whose_units_changed_is_drawn_only_when_analysed_anew(two: Desk) -> None:
    window = two.window
    window.analyst.close()  # nothing is answered any more
    basis = window.session.sets[2].basis
    window.push_edit(ChangeBasis(2, basis, Basis(family="weibull", bound="likelihood")))
    window.answering.ask(1)
    assert drawn(two) == ["Set 1, A"]
    window.pictures.copy()
    assert two.message == NOT_YET
    window.tables.copy("side by side")
    assert two.message == NO_TABLE_YET


def test_readings_stand_side_by_side_and_are_copied_with_what_they_rest_on(two: Desk) -> None:
    readings = two.window.contents.reading.readings
    two.key(Qt.Key.Key_S, CONTROL | ALT)
    assert readings.table.isVisible()
    assert readings.note.text() == NO_TEST_OF_DIFFERENCE
    # The sentence stays about the set in front.
    assert two.sentence.startswith("B10 life")
    shown = [readings.table.item(0, column).text() for column in (0, 1, 3)]
    assert shown[0] == "B10 life"
    assert shown[1].endswith(" h")
    assert shown[1] != shown[2]
    last = readings.table.rowCount() - 1
    assert "95 %, lower bound" in readings.table.item(last, 3).text()
    readings.table.setFocus()
    two.key(Qt.Key.Key_C, CONTROL)
    copied = QGuiApplication.clipboard().mimeData()
    rows = [line.split("\t") for line in copied.text().split("\n")]
    assert rows[0][:3] == ["Reading", "Set 1, A: estimate", "Set 1, A: lower"]
    assert shown[1].removesuffix(" h").removeprefix("! ") == rows[1][1]
    assert ["Note", NO_TEST_OF_DIFFERENCE] in rows
    assert "<table>" in copied.html()
    two.key(Qt.Key.Key_S, CONTROL | ALT)
    assert not readings.table.isVisible()


def test_a_picture_of_several_sets_states_the_reading_of_each(two: Desk) -> None:
    figure = two.window.contents.paper.figure()
    assert figure is not None
    said = "\n".join(figure.foot)
    assert "Set 1, A: B10 life" in said
    assert "Set 1, B: B10 life" in said
    assert len(figure.legend) == 2


def test_tables_are_saved_by_menu_with_all_their_digits(two: Desk, tmp_path: Path) -> None:
    Dialogs.choose_file(tmp_path / "readings.xlsx")
    two.key(Qt.Key.Key_E, CONTROL | ALT)
    sheet = openpyxl.load_workbook(tmp_path / "readings.xlsx").active
    assert sheet["C2"].value == pytest.approx(two.life(), rel=1e-15)
    Dialogs.choose_file(tmp_path / "units.csv")
    two.window.tables.save("units")
    assert (tmp_path / "units.csv").read_text("utf-8-sig").splitlines()[1] == "P-1,812,failed,A"


def test_the_set_in_front_lies_above_the_others(two: Desk) -> None:
    paper = two.window.contents.paper

    def depths() -> list[float]:
        return [drawing.fit.line.zValue() for drawing in paper._drawings]

    first, second = depths()
    assert first > second
    commands(two).step(1)
    assert depths() == [second, first]
    figure = paper.figure()
    assert figure is not None
    lines = [part for part in figure.parts if isinstance(part, Line) and part.dash != "solid" and part.width > 1.5]
    assert [line.colour for line in lines] == [print_look(1).colour, print_look(2).colour]
