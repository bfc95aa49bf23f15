"""The menus of the main window: every action, its keys, and what it calls."""

from __future__ import annotations

from collections.abc import Callable
from functools import partial
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject
from PySide6.QtGui import QAction, QActionGroup, QGuiApplication, QIcon, QKeySequence
from PySide6.QtWidgets import QApplication, QMenu, QMessageBox

from reliability_app import __version__
from reliability_app.session.shipped import shipped
from reliability_app.session.wording import STANDING_CAUTION
from reliability_app.windows.command_search import WHY_PROPERTY
from reliability_app.windows.first_page import sample_sets
from reliability_app.windows.settings import SCHEMES
from reliability_app.windows.table_commands import TITLES, TableName
from reliability_app.windows.theme import Scheme, apply_scheme

if TYPE_CHECKING:
    from reliability_app.windows.main_window import MainWindow

KEYS = """<table cellpadding='3'>
<tr><td><b>Everywhere</b></td><td></td></tr>
<tr><td>F9</td><td>all commands: type a word of what you want to do</td></tr>
<tr><td>F1, Shift + F1, Ctrl + F1</td><td>explain what has the focus, what you click on, all terms</td></tr>
<tr><td>Ctrl + comma</td><td>preferences</td></tr>
<tr><td>Ctrl + Alt + plus, Ctrl + Alt + minus</td><td>larger and smaller text</td></tr>
<tr><td><b>On a chart</b></td><td></td></tr>
<tr><td>Drag the reading line</td><td>read another percent</td></tr>
<tr><td>Alt + arrow, Shift + arrow</td><td>move the reading to the next usual percent, or by a little</td></tr>
<tr><td>Enter, double click on the reading</td><td>type a percent or an age to read at</td></tr>
<tr><td>Drag an end of the bracket</td><td>read at the percent whose bound is that age</td></tr>
<tr><td>Click on a mark, Shift + drag a frame</td><td>select the units in the table; Ctrl adds to them</td></tr>
<tr><td>Arrows, drag with the left button</td><td>move the view</td></tr>
<tr><td>+ and −, mouse wheel</td><td>zoom</td></tr>
<tr><td>Home or 0</td><td>show all again</td></tr>
<tr><td>Double click on an axis</td><td>type its range</td></tr>
<tr><td>Right button, or the menu key</td><td>reset, log or linear age, copy the picture</td></tr>
<tr><td>Ctrl + E, Ctrl + Shift + E</td><td>export the page as a picture, copy it</td></tr>
<tr><td><b>In the table of units</b></td><td></td></tr>
<tr><td>Ctrl + V</td><td>paste a table or a block</td></tr>
<tr><td>F2, Enter, Tab</td><td>edit, go down, go right; Shift reverses</td></tr>
<tr><td>Ctrl + D</td><td>fill down</td></tr>
<tr><td>Ctrl + F, F3, Shift + F3, Ctrl + H</td><td>find, next, previous, replace</td></tr>
<tr><td>Ctrl + A, Shift + Space, Ctrl + Space</td><td>select all, the row, the column</td></tr>
<tr><td>Ctrl + Shift + K</td><td>hide the columns selected; the menu of a heading shows them again</td></tr>
<tr><td>Ctrl + Shift + I, Ctrl + Delete</td><td>insert and delete rows</td></tr>
<tr><td>F8, Shift + F8</td><td>go to the next row that cannot be read, list all such cells</td></tr>
<tr><td>Ctrl + Tab</td><td>leave the table</td></tr>
<tr><td><b>Sets</b></td><td></td></tr>
<tr><td>Ctrl + Page Down, Ctrl + Page Up</td><td>next and previous set; with Shift the set changes places</td></tr>
<tr><td>F6, Ctrl + Shift + H</td><td>rename the set, hide it on the pages or show it again</td></tr>
<tr><td>Ctrl + Alt + S</td><td>readings of all sets side by side</td></tr>
<tr><td><b>Visits</b></td><td></td></tr>
<tr><td>Ctrl + B, Ctrl + R</td><td>bring in a newer table of the same units, record a visit</td></tr>
<tr><td>Enter, F2, Delete on a visit</td><td>show it as it stood, change its label, delete it</td></tr>
<tr><td><b>In the table of readings</b></td><td></td></tr>
<tr><td>Enter or a double click</td><td>read this one on the chart and in the sentence</td></tr>
<tr><td>Delete</td><td>remove a reading</td></tr>
</table>"""


class Menus(QObject):
    """Builds the menu bar of a window whose contents exist."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        self._schemes: dict[Scheme, QAction] = {}
        bar = window.menuBar()
        bar.clear()
        self._build_file(bar.addMenu("&File"))
        self._build_edit(bar.addMenu("&Edit"))
        self._build_sets(bar.addMenu("&Sets"))
        self._build_view(bar.addMenu("&View"))
        self._build_help(bar.addMenu("&Help"))

    def _build_file(self, menu: QMenu) -> None:
        files = self._window.files
        self._add(menu, "&New session", "Ctrl+N", files.new, icon="new")
        self._add(menu, "&Open …", "Ctrl+O", files.open_by_dialog, icon="open")
        self._recent = menu.addMenu("Open &recent")
        self._recent.aboutToShow.connect(self._list_recent)
        self._samples = menu.addMenu("Sa&mple sets")
        self._list_samples()
        menu.addSeparator()
        self._add(menu, "&Save", "Ctrl+S", files.save, icon="save")
        self._add(menu, "Save &as …", "Ctrl+Shift+S", files.save_as)
        self._add(menu, "&Title and notes …", "Ctrl+I", self._window.edit_notes)
        menu.addSeparator()
        self._add(menu, "Bring &in new results …", "Ctrl+B", self._window.bringing_in.open)
        self._add(menu, "Record a &visit", "Ctrl+R", self._window.visits.record_by_key)
        menu.addSeparator()
        self._add(menu, "&Export picture …", "Ctrl+E", self._window.pictures.export)
        self._build_tables(menu.addMenu("Save a ta&ble"), self._window.tables.save, "Ctrl+Alt+E")
        menu.addSeparator()
        self._add(menu, "&Quit", "Ctrl+Q", self._window.close)

    def _build_tables(self, menu: QMenu, act: Callable[[TableName], None], keys: str) -> None:
        """List the tables that can leave the program; the keys are those of the first."""
        for place, (name, title) in enumerate(TITLES.items()):
            self._add(menu, title, "" if place else keys, partial(act, name))

    def _build_edit(self, menu: QMenu) -> None:
        why = ("Nothing has been done yet that could be undone.", "Nothing was undone.")
        for action, icon, reason in zip(
            self._window.undo.make_actions(self._window), ("undo", "redo"), why, strict=True
        ):
            action.setIcon(shipped_icon(icon))
            action.setProperty(WHY_PROPERTY, reason)
            menu.addAction(action)
        *groups, columns = self._window.contents.grid.actions_by_name.groups()
        for group in groups:
            menu.addSeparator()
            menu.addActions(group)
        menu.addMenu("Colu&mns").addActions(columns)
        menu.addSeparator()
        reading = self._window.contents.reading
        self._add(menu, "Copy the &reading with its cautions", "Ctrl+Shift+C", reading.copy_statement, icon="copy")
        self._add(menu, "Cop&y the picture", "Ctrl+Shift+E", self._window.pictures.copy, icon="copy")
        self._build_tables(menu.addMenu("Copy as a ta&ble"), self._window.tables.copy, "Ctrl+Alt+C")
        menu.addSeparator()
        # StandardKey.Preferences is empty on X11.
        self._add(menu, "Preferences …", "Ctrl+,", self._of_habits("edit_preferences"))

    def _build_sets(self, menu: QMenu) -> None:
        sets = self._window.contents.set_bar.commands
        sets.add_action.setIcon(shipped_icon("add_set"))
        menu.addAction(sets.add_action)
        self._add(menu, "Add sets from a &file …", "Ctrl+Shift+O", self._window.files.add_sets_by_dialog)
        menu.addSeparator()
        sets.fill(menu)
        menu.addSeparator()
        self._add(menu, "Simulate the &plan of the set", "Ctrl+Shift+P", self._window.contents.reading.plan.simulate)

    def _build_view(self, menu: QMenu) -> None:
        tabs = self._window.contents.tabs
        menu.addAction(self._window.contents.reading.readings.action)
        menu.addSeparator()
        for place in range(tabs.count()):
            self._add(menu, tabs.tabText(place), f"Ctrl+{place + 1}", partial(tabs.setCurrentIndex, place))
        menu.addAction(self._window.contents.paper.candidates_action)
        menu.addSeparator()
        group = QActionGroup(menu)
        for name, title in SCHEMES.items():
            action = self._add(menu, title, "", partial(self.choose_scheme, name))
            action.setCheckable(True)
            action.setChecked(self._window.settings.scheme == name)
            group.addAction(action)
            self._schemes[name] = action
        menu.addSeparator()
        for title, keys, by in (
            ("Lar&ger text", "Ctrl+Alt++", 1),
            ("S&maller text", "Ctrl+Alt+-", -1),
            ("Text as the s&ystem has it", "Ctrl+Alt+0", 0),
        ):
            action = self._add(menu, title, keys, partial(self._step_text, by))
            if by > 0:  # the plus without Shift, where it shares its key with the equals sign
                action.setShortcuts([QKeySequence(keys), QKeySequence("Ctrl+Alt+=")])

    def _build_help(self, menu: QMenu) -> None:
        self._add(menu, "&Explain this", "F1", self._of_habits("explain_focus"))
        self._add(menu, "&What is … (click on it)", "Shift+F1", self._of_habits("point"))
        self._add(menu, "What the &terms mean …", "Ctrl+F1", self._of_habits("list_terms"))
        menu.addSeparator()
        self._add(menu, "All &commands …", "F9", self._of_habits("search_commands"))
        self._add(menu, "&Keys and mouse", "Shift+F9", self._tell_keys)
        menu.addSeparator()
        self._add(menu, "&About Rigpaper", "", self._tell_about)

    def _add(self, menu: QMenu, text: str, keys: str, act: Callable[[], object], *, icon: str = "") -> QAction:
        action = QAction(text, self._window)
        if icon:
            action.setIcon(shipped_icon(icon))
        if keys:
            action.setShortcut(QKeySequence(keys))
        action.triggered.connect(lambda _=False: act())
        menu.addAction(action)
        return action

    def _list_recent(self) -> None:
        self._recent.clear()
        for path in self._window.settings.recent:
            self._add(self._recent, str(path), "", partial(self._window.files.open, path))
        if self._recent.isEmpty():
            self._recent.addAction("None yet").setEnabled(False)

    def _list_samples(self) -> None:
        for title, path in sample_sets():
            self._add(self._samples, title, "", partial(self._window.files.open_copy, path))

    def _of_habits(self, name: str) -> Callable[[], object]:
        # The habits come after the menus, whose commands they list.
        return lambda: getattr(self._window.habits, name)()

    def _step_text(self, by: int) -> None:
        self._window.habits.step_text(by)

    def choose_scheme(self, name: Scheme) -> None:
        """Show the program in this scheme of colours from now on."""
        self._window.settings.scheme = name
        self._schemes[name].setChecked(True)
        application = QGuiApplication.instance()
        if isinstance(application, QApplication):
            apply_scheme(application, name)

    def _tell_keys(self) -> None:
        QMessageBox.information(self._window, "Keys and mouse", KEYS)

    def _tell_about(self) -> None:
        QMessageBox.about(
            self._window,
            "About Rigpaper",
            f"<p><b>Rigpaper {__version__}</b></p><p>Life-data analysis for test rigs and field returns.</p>"
            f"<p>{STANDING_CAUTION.text}</p>",
        )


def shipped_icon(name: str) -> QIcon:
    """Return one of the program's own icons: theme icons are missing on a bare system."""
    return QIcon(str(shipped("resources") / "icons" / f"{name}.svg"))
