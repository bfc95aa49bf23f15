"""What every window has beside its work: the list of commands, help, preferences, the first page, staying alive."""

from __future__ import annotations

import re
import sys
from collections.abc import Iterator
from functools import partial
from pathlib import Path

import pytest
from PySide6.QtCore import Qt, QTimer
from PySide6.QtGui import QFont, QGuiApplication
from PySide6.QtWidgets import QAbstractScrollArea, QAbstractSpinBox, QApplication, QComboBox, QMenu, QTabBar, QWidget

from reliability_app.application import rescue
from reliability_app.session.number_style import NumberStyle, choose_number_style
from reliability_app.windows.command_search import commands_of, matching
from reliability_app.windows.crash import install_last_resort
from reliability_app.windows.help_texts import Term
from reliability_app.windows.help_topics import TERMS, term_for, terms_holding
from reliability_app.windows.preferences import PreferencesDialog
from reliability_app.windows.units_grid.column_commands import ColumnNameDialog
from tests.journeys.conftest import CONTROL, Desk

Key = Qt.Key
SHIFT = Qt.KeyboardModifier.ShiftModifier
TABLE = "unit\tlife\tstate\nP-1\t812\tfailed\nP-2\t12500\trunning\nP-3\t1230\tfailed\nP-4\t2300\tfailed\n"


@pytest.fixture
def usual_looks(qapp: QApplication) -> Iterator[None]:
    font = QFont(qapp.font())
    yield
    choose_number_style(NumberStyle())
    qapp.setFont(font)


def in_preferences(act) -> None:  # type: ignore[no-untyped-def]  # a step of one test
    """Do something in the dialog of the preferences, which the next step opens, and close it."""

    def step() -> None:
        dialog = QApplication.activeModalWidget()
        assert isinstance(dialog, PreferencesDialog)
        act(dialog)
        dialog.reject()

    QTimer.singleShot(100, step)


def choose(box: QComboBox, data: object) -> None:
    box.setCurrentIndex(box.findData(data))
    box.activated.emit(box.currentIndex())


class TestCommands:
    def test_a_command_is_found_by_a_word_and_carried_out_by_enter(self, desk: Desk) -> None:
        desk.paste(TABLE)
        desk.go(1, "state")
        desk.key(Key.Key_F9)
        search = desk.window.habits.commands
        assert search.isVisible()
        desk.qtbot.keyClicks(search.wanted, "fill dow")
        assert search.titles()[0] == "Fill down"
        desk.qtbot.keyClick(search.wanted, Key.Key_Return)
        desk.qtbot.waitUntil(lambda: desk.window.session.sets[0].table.text(1, "state") == "failed")
        assert not search.isVisible()

    def test_a_command_that_cannot_be_carried_out_says_why_and_stays(self, desk: Desk) -> None:
        desk.window.habits.search_commands()
        search = desk.window.habits.commands
        search.wanted.setText("undo")
        assert search.titles()[0].startswith("Undo")
        assert search.why.text() == "Nothing has been done yet that could be undone."
        desk.qtbot.keyClick(search.wanted, Key.Key_Return)
        assert search.isVisible()
        search.hide()

    def test_every_command_of_the_menus_is_listed_once(self, desk: Desk) -> None:
        menus = [action.menu() for action in desk.window.menuBar().actions()]
        commands = commands_of([menu for menu in menus if isinstance(menu, QMenu)])
        named = [(command.title, command.path) for command in commands]
        assert len(named) == len(set(named))
        assert len(named) > 50
        assert {"Find …", "Preferences …", "Save", "Explain this"} <= {title for title, _ in named}
        assert matching(commands, "ctrl+d")[0].title == "Fill down"


class TestHelp:
    def test_f1_explains_the_choice_that_has_the_focus(self, desk: Desk) -> None:
        basis = desk.window.contents.basis
        popup = desk.window.habits.popup
        for box, data, title in (
            (basis.side, "lower", "One-sided bound"),
            (basis.side, "two", "Both bounds (two-sided interval)"),
            (basis.bound, "wald", "Wald bound"),
            (basis.family, "weibull", "Weibull"),
            (basis.confidence, None, "Confidence"),
        ):
            if data is not None:
                box.setCurrentIndex(box.findData(data))
            box.setFocus()
            desk.key(Key.Key_F1)
            assert popup.title.text() == title
            popup.hide()

    def test_f1_in_the_units_explains_the_column_and_the_state(self, desk: Desk) -> None:
        desk.paste(TABLE)
        popup = desk.window.habits.popup
        for row, column, title in ((0, "entered", "Entered (late entry)"), (1, "state", "Running (right-censored)")):
            desk.go(row, column)
            desk.key(Key.Key_F1)
            assert popup.title.text() == title
            assert popup.isVisible()
            popup.hide()

    def test_f1_explains_the_reading_and_the_worst_caution(self, desk: Desk) -> None:
        desk.paste(TABLE)
        reading, popup = desk.window.contents.reading, desk.window.habits.popup
        reading.new_ask.setFocus()
        desk.type("mean life")
        desk.key(Key.Key_Return)
        desk.wait_for_answer()
        reading.table.setFocus()
        reading.table.selectRow(reading.table.model().rowCount() - 1)
        desk.key(Key.Key_F1)
        assert popup.title.text() == "Mean life"
        popup.hide()
        reading.cautions.setFocus()
        desk.window.habits.explain_focus()
        assert popup.title.text() == "Very few failures"
        popup.hide()

    def test_pointing_at_a_cell_explains_that_cell(self, desk: Desk) -> None:
        desk.paste(TABLE)
        desk.go(0, "unit")
        view, habits = desk.window.contents.grid.view, desk.window.habits
        habits.point()
        spot = view.visualRect(desk.window.contents.grid.model.index(1, 3)).center()
        desk.qtbot.mouseClick(view.viewport(), Qt.MouseButton.LeftButton, pos=spot)
        assert habits.popup.title.text() == "Running (right-censored)"
        assert view.current_cell() == (0, 0)
        habits.popup.hide()

    def test_pointing_explains_what_is_clicked_and_does_not_do_it(self, desk: Desk) -> None:
        habits, box = desk.window.habits, desk.window.contents.basis.threshold
        box.show()
        desk.key(Key.Key_F1, SHIFT)
        desk.qtbot.mouseClick(box, Qt.MouseButton.LeftButton)
        assert habits.popup.title.text() == "Threshold"
        assert not box.isChecked()
        assert not habits.pointer.is_waiting
        assert QGuiApplication.overrideCursor() is None
        habits.popup.hide()

    def test_escape_gives_up_pointing(self, desk: Desk) -> None:
        habits = desk.window.habits
        habits.point()
        desk.key(Key.Key_Escape)
        assert not habits.pointer.is_waiting
        assert not habits.popup.isVisible()

    def test_the_list_of_terms_is_searched_and_shows_their_text(self, desk: Desk) -> None:
        terms = desk.window.habits.terms
        desk.key(Key.Key_F1, CONTROL)
        assert terms.titles.count() == len(TERMS)
        terms.wanted.setText("b10")
        assert terms.titles.item(0).text() == "B-life"
        assert "10 % have failed" in terms.page.toPlainText()
        terms.wanted.setText("no such word")
        assert "No term holds this" in terms.page.toPlainText()
        terms.close()

    def test_every_page_and_every_choice_of_the_basis_is_explained(self, desk: Desk) -> None:
        contents = desk.window.contents
        tabs = contents.tabs
        unexplained = [
            tabs.tabText(place) for place in range(tabs.count()) if not isinstance(term_for(tabs.widget(place)), Term)
        ]
        boxes = contents.basis.findChildren(QComboBox)
        unexplained += [box.accessibleName() for box in boxes if term_for(box) is term_for(contents.basis)]
        assert unexplained == []
        assert len(boxes) >= 5

    def test_everything_on_the_right_page_and_in_the_basis_is_explained(self, desk: Desk) -> None:
        contents = desk.window.contents
        around = (contents.basis, contents.reading, contents.tabs)
        focusable = [
            widget
            for part in around
            for widget in part.findChildren(QWidget)
            if widget.focusPolicy() & Qt.FocusPolicy.TabFocus and not isinstance(widget.parentWidget(), QTabBar)
        ]
        first_page = desk.window.habits.first_page
        unexplained = {
            widget.accessibleName() or type(widget).__name__
            for widget in focusable
            if term_for(widget) is None and not first_page.isAncestorOf(widget)
        }
        assert len(focusable) > 30
        assert unexplained <= {"Copy the reading with its basis and cautions", "QTabBar"}

    def test_f1_on_the_tabs_explains_the_page_in_front(self, desk: Desk) -> None:
        tabs, popup = desk.window.contents.tabs, desk.window.habits.popup
        tabs.setCurrentIndex(1)
        tabs.tabBar().setFocus()
        desk.window.habits.explain_focus()
        assert popup.title.text() == "Hazard rate"
        popup.hide()


def test_texts_are_short_and_each_is_found_by_its_title() -> None:
    assert len({term.key for term in TERMS}) == len(TERMS)
    for term in TERMS:
        sentences = re.split(r"(?<=[.?!”])\s", term.text)
        assert 1 <= len(sentences) <= 5, term.title
        assert term.text.endswith("."), term.title
        assert term in terms_holding(term.title)


def test_every_caution_of_the_program_has_a_text() -> None:
    folder = Path(rescue.__code__.co_filename).parent
    codes: set[str] = set()
    for path in (*folder.joinpath("engine").rglob("*.py"), *folder.joinpath("session").rglob("*.py")):
        source = path.read_text(encoding="utf-8")
        codes |= set(re.findall(r'Caution\(\s*"([a-z-]+)"', source))
        codes |= set(re.findall(r'_serious\("([a-z-]+)"', source))
        codes |= set(re.findall(r'\bcode(?:, \w+)* = "([a-z-]+)"', source))
    known = {term.key.removeprefix("caution ") for term in TERMS if term.key.startswith("caution ")}
    assert len(codes) > 20
    assert codes - known == set()


@pytest.mark.usefixtures("usual_looks")
class TestPreferences:
    def test_numbers_are_written_anew_at_once_and_remembered(self, desk: Desk) -> None:
        desk.paste(TABLE)
        before = desk.sentence
        digits = lambda text: len(re.sub(r"[^0-9]", "", text.split("life ")[1].split(" h")[0]).lstrip("0"))  # noqa: E731
        in_preferences(lambda dialog: dialog.digits.setValue(5))
        desk.window.habits.edit_preferences()
        desk.wait_for_answer()
        assert digits(before) == 3
        assert digits(desk.sentence) == 5
        assert desk.window.settings.number_style == NumberStyle(5)

    def test_text_grows_and_goes_back(self, desk: Desk, qapp: QApplication) -> None:
        usual = qapp.font().pointSizeF()
        habits = desk.window.habits
        habits.step_text(1)
        habits.step_text(1)
        assert qapp.font().pointSizeF() == usual + 2
        assert desk.window.settings.text_step == 2
        habits.step_text(0)
        assert qapp.font().pointSizeF() == usual

    def test_a_new_session_begins_with_the_confidence_and_side_preferred(self, desk: Desk) -> None:
        def act(dialog: PreferencesDialog) -> None:
            choose(dialog.confidence, 0.90)
            choose(dialog.side, "two")
            choose(dialog.age_scale, "linear")

        in_preferences(act)
        desk.window.habits.edit_preferences()
        assert {page.age_scale for page in desk.window.contents.pages} == {"linear"}
        assert desk.window.session.sets[0].basis.confidence == 0.95
        desk.window.files.new()
        basis = desk.window.session.sets[0].basis
        assert (basis.confidence, basis.side) == (0.90, "two")


class TestFirstPage:
    def test_it_is_there_while_the_session_is_empty_and_comes_back_with_undo(self, desk: Desk) -> None:
        page = desk.window.habits.first_page
        assert page.isVisible()
        desk.go(0, "life")
        desk.type("5")
        desk.key(Key.Key_Return)
        assert not page.isVisible()
        desk.window.undo.undo()
        assert page.isVisible()

    def test_its_button_pastes(self, desk: Desk) -> None:
        QGuiApplication.clipboard().setText(TABLE)
        page = desk.window.habits.first_page
        desk.qtbot.mouseClick(page.paste_button, Qt.MouseButton.LeftButton)
        assert desk.window.session.sets[0].table.row_count == 4
        assert not page.isVisible()

    def test_its_button_says_when_there_is_nothing_to_paste(self, desk: Desk) -> None:
        QGuiApplication.clipboard().clear()
        desk.window.habits.first_page.paste_button.click()
        assert desk.message.startswith("There is no text on the clipboard")

    def test_samples_and_recent_files_open_from_it(self, desk: Desk) -> None:
        page = desk.window.habits.first_page
        assert len(page.samples.buttons) >= 3
        table = desk.folder / "rig.csv"
        table.write_text("life,state\n5,failed\n6,failed\n9,running\n", encoding="utf-8")
        desk.window.files.open(table)
        desk.window.files.new()
        assert [button.text() for button in page.recent.buttons] == ["rig.csv"]
        page.recent.buttons[0].click()
        assert desk.window.session.sets[0].table.row_count == 3


def test_hidden_columns_are_remembered(desk: Desk) -> None:
    desk.window.contents.grid.shown_columns.set_hidden({"until", "entered"})
    assert desk.window.settings.hidden_columns == {"until", "entered"}


def test_a_slot_that_raises_leaves_a_recovery_copy_and_a_window_that_works(
    desk: Desk, capsys: pytest.CaptureFixture[str]
) -> None:
    desk.paste(TABLE)
    window = desk.window
    before = sys.excepthook
    install_last_resort(partial(rescue, window.files), window.messages)
    try:
        QTimer.singleShot(0, window, lambda: 1 / 0)
        desk.qtbot.waitUntil(lambda: "ZeroDivisionError" in desk.message)
    finally:
        sys.excepthook = before
    assert "kept in a recovery copy" in desk.message
    assert list((desk.folder / "recovery").iterdir())
    assert QApplication.activeModalWidget() is None
    desk.window.undo.undo()
    assert window.session.sets[0].table.row_count == 0
    capsys.readouterr()


def test_everything_that_takes_the_focus_or_a_click_has_a_name(desk: Desk) -> None:
    desk.paste(TABLE)
    tabs, nameless = desk.window.contents.tabs, set()
    for place in range(tabs.count()):
        tabs.setCurrentIndex(place)
        nameless |= {
            _path(widget) for widget in desk.window.findChildren(QWidget) if _takes_focus(widget) and not _name(widget)
        }
    assert nameless == set()


def test_everything_in_the_dialogs_has_a_name(desk: Desk) -> None:
    habits, grid = desk.window.habits, desk.window.contents.grid
    preferences = PreferencesDialog(desk.window.settings, desk.window)
    naming = ColumnNameDialog("New column", desk.window.session.sets[0].table, "", desk.window)
    grid.replace()
    seen = (habits.terms, habits.popup, habits.commands, preferences, naming, grid.find_strip)
    for top in seen:
        top.show()
    found = [widget for top in seen for widget in top.findChildren(QWidget) if _takes_focus(widget)]
    nameless = {_path(widget) for widget in found if not _name(widget) and not _is_inside_spin_box(widget)}
    for top in seen:
        top.hide()
    assert len(found) > 15
    assert nameless == set()


def _is_inside_spin_box(widget: QWidget) -> bool:
    return isinstance(widget.parentWidget(), QAbstractSpinBox)


def _takes_focus(widget: QWidget) -> bool:
    around = widget.parentWidget()
    # The inside of a scroll area is one with the area itself, which has the name.
    is_inside = isinstance(around, QAbstractScrollArea) and around.viewport() is widget
    return widget.isVisible() and widget.focusPolicy() != Qt.FocusPolicy.NoFocus and not is_inside


def _name(widget: QWidget) -> str:
    from PySide6.QtGui import QAccessible

    face = QAccessible.queryAccessibleInterface(widget)
    return face.text(QAccessible.Text.Name) or face.text(QAccessible.Text.Value)


def _path(widget: QWidget) -> str:
    return f"{type(widget.parentWidget()).__name__} > {type(widget).__name__}"
