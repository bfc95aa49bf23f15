"""Pictures out of the window: the page that is seen, written to a file or put on the clipboard."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Protocol, cast

from PySide6.QtCore import QObject
from PySide6.QtWidgets import QFileDialog

from reliability_app.engine.cautions import Severity
from reliability_app.engine.errors import RigpaperError
from reliability_app.reports.figure import Figure
from reliability_app.reports.picture_file import FORMATS, write_picture
from reliability_app.windows.charts.copied_picture import copy_figure
from reliability_app.windows.picture_dialog import PictureDialog
from reliability_app.windows.settings import PictureChoice

if TYPE_CHECKING:
    from reliability_app.windows.main_window import MainWindow

NOT_YET = "The numbers are just being worked out anew: take the picture when they are there."
NO_PICTURE = "There is no picture here: choose a page that shows something."


class Pictured(Protocol):
    """A page that can be had as a picture."""

    def figure(self) -> Figure | None:
        """Return what is seen; None where nothing is."""


class PictureCommands(QObject):
    """Exports and copies what the page in front shows."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        self._folder: Path | None = None

    def copy(self) -> None:
        """Put the page on the clipboard in the size and resolution chosen last."""
        figure = self._figure()
        if figure is None:
            return
        chosen = self._window.settings.picture
        try:
            copy_figure(figure, size_mm=(chosen.width, chosen.height), dpi=chosen.dpi)
        except RigpaperError as trouble:
            self._say(str(trouble))

    def export(self) -> None:
        """Ask for format, size and file, and write the page there."""
        figure = self._figure()
        if figure is None:
            return
        dialog = PictureDialog(figure, self._window.settings.picture, self._window)
        accepted, chosen = dialog.exec(), dialog.choice
        dialog.deleteLater()
        if not accepted:
            return
        self._window.settings.picture = chosen
        path = self._ask_path(chosen)
        if path is not None:
            self._write(figure, path, chosen)

    def _write(self, figure: Figure, path: Path, chosen: PictureChoice) -> None:
        try:
            write_picture(figure, path, size_mm=(chosen.width, chosen.height), dpi=chosen.dpi)
        except RigpaperError as trouble:
            self._say(str(trouble))
            return
        self._folder = path.parent

    def _figure(self) -> Figure | None:
        """Return the picture of the page in front, or say why there is none."""
        window = self._window
        window.contents.grid.finish_entry()
        page = window.contents.tabs.currentWidget()
        figure = cast(Pictured, page).figure() if hasattr(page, "figure") else None
        if figure is None:
            self._say(NO_PICTURE)
            return None
        if not window.answering.is_current:
            self._say(NOT_YET)
            return None
        return figure.under(window.session.title)

    def _ask_path(self, chosen: PictureChoice) -> Path | None:
        window = self._window
        found = FORMATS[chosen.suffix]
        page = window.contents.tabs.tabText(window.contents.tabs.currentIndex()).replace("&", "").lower()
        beside = window.files.path
        stem = beside.stem if beside is not None else window.session.sets[window.shown_set].name
        folder = self._folder or (None if beside is None else beside.parent)
        dialog = QFileDialog(window, "Export picture", str(folder or ""), f"{found.title} (*{found.suffix})")
        dialog.setAcceptMode(QFileDialog.AcceptMode.AcceptSave)
        dialog.setDefaultSuffix(found.suffix)
        dialog.selectFile(f"{_plain(stem)} {page}{found.suffix}")
        accepted, files = dialog.exec(), dialog.selectedFiles()
        dialog.deleteLater()
        return Path(files[0]) if accepted and files else None

    def _say(self, text: str) -> None:
        self._window.messages.say(Severity.CAUTION, text)


def _plain(name: str) -> str:
    """Return a set's name as a file can be called."""
    return "".join(character if character.isalnum() or character in " -_.()" else "_" for character in name)
