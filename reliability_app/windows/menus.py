"""The menus of the main window: every action, its keys, and what it calls."""

from __future__ import annotations

import json
from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject
from PySide6.QtGui import QAction, QActionGroup, QGuiApplication, QIcon, QKeySequence
from PySide6.QtWidgets import QApplication, QMenu, QMessageBox

from reliability_app import __version__
from reliability_app.session.shipped import shipped
from reliability_app.session.wording import STANDING_CAUTION
from reliability_app.windows.theme import Scheme, apply_scheme

if TYPE_CHECKING:
    from reliability_app.windows.main_window import MainWindow

KEYS = """<table cellpadding='3'>
<tr><td><b>On a chart</b></td><td></td></tr>
<tr><td>Drag the reading line</td><td>read another percent</td></tr>
<tr><td>Alt + arrow, Shift + arrow</td><td>move the reading to the next usual percent, or by a little</td></tr>
<tr><td>Arrows, drag with the left button</td><td>move the view</td></tr>
<tr><td>+ and −, mouse wheel</td><td>zoom</td></tr>
<tr><td>Home or 0</td><td>show all again</td></tr>
<tr><td>Right button, or the menu key</td><td>reset, log or linear age, copy the picture</td></tr>
<tr><td><b>In the table of units</b></td><td></td></tr>
<tr><td>Ctrl + V</td><td>paste a table or a block</td></tr>
<tr><td>F2, Enter, Tab</td><td>edit, go down, go right; Shift reverses</td></tr>
<tr><td>Ctrl + D</td><td>fill down</td></tr>
<tr><td>Ctrl + Shift + I, Ctrl + Delete</td><td>insert and delete rows</td></tr>
<tr><td>F8</td><td>go to the next row that cannot be read</td></tr>
<tr><td>Ctrl + Tab</td><td>leave the table</td></tr>
<tr><td><b>In the table of readings</b></td><td></td></tr>
<tr><td>Enter or a double click</td><td>read this one on the chart and in the sentence</td></tr>
<tr><td>Delete</td><td>remove a reading</td></tr>
</table>"""
SCHEMES: dict[Scheme, str] = {"system": "As the system", "light": "Light", "dark": "Dark"}


class Menus(QObject):
    """Builds the menu bar of a window whose contents exist."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
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
        self._add(menu, "&Quit", "Ctrl+Q", self._window.close)

    def _build_edit(self, menu: QMenu) -> None:
        for action, icon in zip(self._window.undo.make_actions(self._window), ("undo", "redo"), strict=True):
            action.setIcon(shipped_icon(icon))
            menu.addAction(action)
        menu.addSeparator()
        menu.addActions(self._window.contents.grid.actions_for_menu())
        menu.addSeparator()
        reading = self._window.contents.reading
        self._add(menu, "Copy the &reading with its cautions", "Ctrl+Shift+C", reading.copy_statement, icon="copy")
        self._add(menu, "Copy all readings as a &table", "Ctrl+Alt+C", reading.table.copy_all)

    def _build_sets(self, menu: QMenu) -> None:
        bar = self._window.contents.set_bar
        self._add(menu, "&Add a set", "Ctrl+Shift+N", bar.add_set, icon="add_set")
        self._add(menu, "Add sets from a &file …", "Ctrl+Shift+O", self._window.files.add_sets_by_dialog)
        self._add(menu, "&Rename the set …", "F6", bar.rename_set)
        self._add(menu, "Re&move the set", "", bar.remove_set)

    def _build_view(self, menu: QMenu) -> None:
        tabs = self._window.contents.tabs
        for place in range(tabs.count()):
            self._add(menu, tabs.tabText(place), f"Ctrl+{place + 1}", partial(tabs.setCurrentIndex, place))
        menu.addSeparator()
        group = QActionGroup(menu)
        for name, title in SCHEMES.items():
            action = self._add(menu, title, "", partial(self._choose_scheme, name))
            action.setCheckable(True)
            action.setChecked(self._window.settings.scheme == name)
            group.addAction(action)

    def _build_help(self, menu: QMenu) -> None:
        self._add(menu, "&Keys and mouse", "F1", self._tell_keys)
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
        for path in sorted(shipped("sample_sets").glob("*.json")):
            self._add(self._samples, _title_of(path), "", partial(self._window.files.open_copy, path))

    def _choose_scheme(self, name: Scheme) -> None:
        self._window.settings.scheme = name
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


def _title_of(path: Path) -> str:
    """Return a session's title without opening it whole."""
    return str(json.loads(path.read_text(encoding="utf-8")).get("title") or path.stem)
