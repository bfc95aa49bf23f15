"""The whole window on an empty session, as the program opens it, with hands that type, paste and look."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

import pytest
from PySide6.QtCore import QMimeData, QSettings, Qt, QTimer
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QFileDialog, QLineEdit, QMessageBox
from pytestqt.qtbot import QtBot

from reliability_app.session.document import Basis, Session, UnitSet
from reliability_app.session.messages import Messages
from reliability_app.session.recovery import RecoveryCopy
from reliability_app.windows.main_window import MainWindow
from reliability_app.windows.settings import WindowSettings
from tests.windows.conftest import nothing_left_behind, standing_objects_set_aside

__all__ = ["nothing_left_behind", "standing_objects_set_aside"]

CONTROL = Qt.KeyboardModifier.ControlModifier
ANSWER_WITHIN_MS = 60_000  # a bound for a machine under load, not an expectation


def pytest_collection_modifyitems(items: list[pytest.Item]) -> None:
    for item in items:
        if "journeys" in item.path.parts:
            # Said at every window by the platform without a screen; it is no fault of the program.
            item.add_marker(pytest.mark.qt_log_ignore("This plugin does not support", extend=True))


@dataclass
class Desk:
    """The window, and hands for it."""

    qtbot: QtBot
    window: MainWindow
    folder: Path

    def wait_for_answer(self) -> None:
        """Wait until the pages show the answer to the session as it stands."""
        self.qtbot.waitUntil(lambda: not self.window.analyst.is_busy, timeout=ANSWER_WITHIN_MS)

    def key(self, key: Qt.Key, modifiers: Qt.KeyboardModifier = Qt.KeyboardModifier.NoModifier) -> None:
        self.qtbot.keyClick(
            QApplication.activePopupWidget() or QApplication.focusWidget() or self.window, key, modifiers
        )

    def type(self, text: str) -> None:
        for character in text:
            self.qtbot.keyClick(QApplication.focusWidget(), character)

    def go(self, row: int, column: str) -> None:
        grid = self.window.contents.grid
        grid.view.setFocus()
        grid.view.go_to(row, grid.model.columns.index(column))

    def paste(self, text: str, html: str | None = None) -> None:
        mime = QMimeData()
        mime.setText(text)
        if html is not None:
            mime.setHtml(html)
        QGuiApplication.clipboard().setMimeData(mime)
        self.key(Qt.Key.Key_V, CONTROL)
        self.wait_for_answer()

    def choose_family(self, title: str) -> None:
        """Choose by keyboard: focus, then the first letter of the family."""
        box = self.window.contents.basis.family
        box.setFocus()
        # A letter is the first of a name again, however soon after another it is typed.
        QApplication.setKeyboardInputInterval(0)
        self.qtbot.wait(2)
        self.qtbot.keyClick(box, title[0])
        self.wait_for_answer()

    @property
    def sentence(self) -> str:
        return self.window.contents.reading.sentence.text().replace("\u00a0", " ")

    @property
    def counts(self) -> str:
        return self.window.contents.grid.counts_line.counts_text

    @property
    def message(self) -> str:
        return self.window.contents.message_bar.text()

    def life(self) -> float:
        """The estimate behind the sentence."""
        analysis = self.window.analysis
        assert analysis is not None
        assert analysis.main is not None
        return float(analysis.main.estimate)


def new_window(qtbot: QtBot, folder: Path) -> MainWindow:
    store = QSettings(str(folder / "window.ini"), QSettings.Format.IniFormat)
    window = MainWindow(WindowSettings(store))
    qtbot.addWidget(window, before_close_func=lambda window: window.undo.setClean())
    window.resize(1240, 780)
    window.show()
    # A bound that is there at once, so that a journey need not wait for calibrations; one journey is about those.
    first = UnitSet(name="Set 1", basis=Basis(bound="likelihood"))
    window.fill(Session(sets=[first]), Messages(), recovery=RecoveryCopy(folder / "recovery"))
    window.activateWindow()
    with qtbot.waitActive(window):
        pass
    return window


@pytest.fixture
def desk(qtbot: QtBot, tmp_path: Path) -> Iterator[Desk]:
    QGuiApplication.clipboard().clear()
    desk = Desk(qtbot, new_window(qtbot, tmp_path), tmp_path)
    desk.wait_for_answer()
    desk.go(0, "unit")
    yield desk
    desk.window.undo.setClean()
    desk.window.close()


class Dialogs:
    """Answers the modal dialog that the next step opens."""

    @staticmethod
    def press(button: QMessageBox.StandardButton) -> None:
        def act() -> None:
            box = QApplication.activeModalWidget()
            assert isinstance(box, QMessageBox)
            box.button(button).click()

        QTimer.singleShot(200, act)

    @staticmethod
    def choose_file(path: Path) -> None:
        def act() -> None:
            dialog = QApplication.activeModalWidget()
            assert isinstance(dialog, QFileDialog)
            line = dialog.findChild(QLineEdit, "fileNameEdit")
            assert line is not None
            line.setText(str(path))
            dialog.accept()

        QTimer.singleShot(200, act)
