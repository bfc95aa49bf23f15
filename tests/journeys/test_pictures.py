"""Pictures out of the window: exported and copied by key, with what they rest on, and never of stale numbers."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest
from PySide6.QtCore import QSettings, Qt, QTimer
from PySide6.QtGui import QGuiApplication, QImage
from PySide6.QtWidgets import QApplication, QPushButton

from reliability_app.windows.charts.copied_picture import SVG_TYPE
from reliability_app.windows.picture_commands import NO_PICTURE, NOT_YET
from reliability_app.windows.picture_dialog import PictureDialog
from reliability_app.windows.settings import PictureChoice, WindowSettings
from tests.journeys.conftest import ANSWER_WITHIN_MS, CONTROL, Desk, Dialogs

SHIFT = Qt.KeyboardModifier.ShiftModifier
# Invented: hours of coolant pumps on a rig.
UNITS = (
    "Life\tState\n812\tfailed\n1230\tfailed\n1410\tfailed\n1500\trunning\n1640\tfailed\n1890\tfailed\n2400\tfailed\n"
)


def choose(act: Callable[[PictureDialog], None], path: Path | None = None) -> None:
    """Have the next export dialog answered, and the file dialog after it."""

    def answer() -> None:
        dialog = QApplication.activeModalWidget()
        assert isinstance(dialog, PictureDialog)
        act(dialog)
        if path is None:
            dialog.reject()
            return
        Dialogs.choose_file(path)
        accept = next(button for button in dialog.findChildren(QPushButton) if "file" in button.text())
        accept.click()

    QTimer.singleShot(200, answer)


def as_svg(dialog: PictureDialog) -> None:
    dialog.format.setCurrentIndex(dialog.format.findData(".svg"))
    dialog.width_mm.setValue(120.0)
    dialog.height_mm.setValue(90.0)


def as_png(dialog: PictureDialog) -> None:
    assert (dialog.choice.suffix, dialog.choice.width) == (".svg", 120.0)
    assert not dialog.dpi.isEnabled()
    dialog.format.setCurrentIndex(dialog.format.findData(".png"))
    dialog.dpi.setValue(100)
    assert dialog.dpi.isEnabled()
    assert "pixels" in dialog.hint.text()


def test_a_page_is_exported_by_key_and_the_choice_remembered(desk: Desk, tmp_path: Path) -> None:
    desk.paste(UNITS)
    choose(as_svg, tmp_path / "paper")
    desk.key(Qt.Key.Key_E, CONTROL)
    svg = (tmp_path / "paper.svg").read_text("utf-8")
    assert "Set 1: B10 life" in svg
    assert "<image" not in svg
    # Another page in another format: the dialog begins with what was chosen last, and so does the next start.
    with desk.qtbot.waitActive(desk.window):
        desk.window.activateWindow()
    desk.key(Qt.Key.Key_3, CONTROL)
    choose(as_png, tmp_path / "survival.png")
    desk.key(Qt.Key.Key_E, CONTROL)
    image = QImage(str(tmp_path / "survival.png"))
    assert image.width() == round(120 / 25.4 * 100)
    assert "Survival" in image.text("Title")
    kept = WindowSettings(QSettings(str(desk.folder / "window.ini"), QSettings.Format.IniFormat))
    desk.window.settings._store.sync()
    assert kept.picture == PictureChoice(".png", 120.0, 90.0, 100)


def test_every_page_has_a_picture(desk: Desk) -> None:
    desk.paste(UNITS)
    tabs = desk.window.contents.tabs
    for place in range(tabs.count()):
        tabs.setCurrentIndex(place)
        desk.qtbot.waitUntil(lambda: tabs.currentWidget().figure() is not None, timeout=ANSWER_WITHIN_MS)
        figure = tabs.currentWidget().figure()
        assert figure.parts, tabs.tabText(place)


def test_a_cancelled_export_writes_nothing_and_forgets_the_choice(desk: Desk, tmp_path: Path) -> None:
    desk.paste(UNITS)
    before = set(tmp_path.iterdir())
    choose(as_svg)
    desk.key(Qt.Key.Key_E, CONTROL)
    assert set(tmp_path.iterdir()) == before
    assert desk.window.settings.picture == PictureChoice()


def test_a_copied_picture_is_an_image_and_a_drawing_with_its_statement(desk: Desk) -> None:
    desk.paste(UNITS)
    desk.key(Qt.Key.Key_E, CONTROL | SHIFT)
    copied = QGuiApplication.clipboard().mimeData()
    assert copied.imageData().width() == round(160 / 25.4 * 200)
    svg = copied.data(SVG_TYPE).data().decode()
    assert "Set 1: B10 life" in svg
    assert "responsible, qualified engineer" in svg


def test_the_menu_of_a_chart_copies_the_same(desk: Desk) -> None:
    desk.paste(UNITS)
    desk.window.contents.paper.copy_action.trigger()
    assert QGuiApplication.clipboard().mimeData().hasFormat(SVG_TYPE)


def test_no_picture_is_made_of_numbers_that_are_no_longer_true(desk: Desk) -> None:
    desk.paste(UNITS)
    QGuiApplication.clipboard().setText("earlier")
    desk.go(0, "life")
    desk.type("99")  # not entered yet: taking the picture enters it
    desk.window.pictures.copy()
    assert desk.message == NOT_YET
    assert QGuiApplication.clipboard().text() == "earlier"
    desk.wait_for_answer()
    desk.window.pictures.copy()
    assert QGuiApplication.clipboard().mimeData().hasImage()


def test_an_empty_page_says_that_there_is_nothing(desk: Desk) -> None:
    desk.window.pictures.export()
    assert desk.message == NO_PICTURE


@pytest.mark.parametrize("name", ["no folder/paper.svg", "paper.gif"])
def test_what_cannot_be_written_is_said(desk: Desk, tmp_path: Path, name: str) -> None:
    desk.paste(UNITS)
    figure = desk.window.contents.paper.figure()
    assert figure is not None
    desk.window.pictures._write(figure, tmp_path / name, PictureChoice())
    assert "paper." in desk.message
    assert not (tmp_path / name).exists()
