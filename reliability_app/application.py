"""The composition root: start order, the last-resort handler, and the window on a session.

Start order: application object, colours, the frame of the window painted; then the numerical and chart libraries in
a thread, so that the frame stays alive; then the contents; then the file named on the command line, or unsaved work.
"""

from __future__ import annotations

import sys
import threading
import traceback
from functools import partial
from importlib import import_module
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer
from PySide6.QtWidgets import QApplication, QMessageBox, QWidget

from reliability_app.session.number_style import choose_number_style
from reliability_app.windows.collecting import Collector
from reliability_app.windows.main_window import APPLICATION_TITLE, MainWindow
from reliability_app.windows.settings import WindowSettings
from reliability_app.windows.text_size import apply_text_step
from reliability_app.windows.theme import apply_scheme

if TYPE_CHECKING:  # what costs time to import comes with the contents, after the first paint
    from reliability_app.windows.file_commands import FileCommands

HEAVY_LIBRARIES = ("numpy", "scipy.special", "scipy.optimize", "pyqtgraph")
_LOOK_AGAIN_MS = 10


def run_window(file: Path | None) -> int:
    """Open the window, on a file if one is named, and return the exit status when it is closed."""
    application = QApplication(sys.argv[:1])
    application.setApplicationName("rigpaper")
    application.setApplicationDisplayName(APPLICATION_TITLE)
    application.setDesktopFileName("rigpaper")
    settings = WindowSettings()
    apply_scheme(application, settings.scheme)
    apply_text_step(settings.text_step)
    choose_number_style(settings.number_style)
    window = MainWindow(settings)
    window.show()
    Collector(application)
    start = Start(window, file)
    QTimer.singleShot(0, start.begin)
    return application.exec()


class Start(QObject):
    """Brings in the heavy libraries beside the painted frame, then fills the window."""

    def __init__(self, window: MainWindow, file: Path | None) -> None:
        super().__init__(window)
        self._window, self._file = window, file
        self._imports = threading.Thread(target=_import_heavy_libraries, name="imports", daemon=True)

    def begin(self) -> None:
        """Start importing; the contents follow when that is done."""
        self._imports.start()
        self._look()

    def _look(self) -> None:
        if self._imports.is_alive():
            QTimer.singleShot(_LOOK_AGAIN_MS, self._look)
            return
        try:
            self._fill()
        except Exception as trouble:  # nobody else could say it yet, and the frame would wait for ever
            traceback.print_exception(trouble)
            self._window.say_why_empty(f"Rigpaper cannot start ({type(trouble).__name__}: {trouble}): install it anew.")

    def _fill(self) -> None:
        from reliability_app.session.messages import Messages
        from reliability_app.windows.crash import install_last_resort

        window = self._window
        window.fill(window.settings.new_session(), Messages())
        install_last_resort(partial(rescue, window.files), window.messages)
        if not self._recovered() and self._file is not None:
            window.files.open(self._file)

    def _recovered(self) -> bool:
        """Offer the unsaved work of windows that ended without closing; True when some was taken over."""
        from reliability_app.session.recovery import found_copies

        for copy in found_copies():
            if self._file is not None and copy.original not in (None, self._file.absolute()):
                continue
            answer = ask_about_recovery(self._window, copy.original, f"{copy.written:%Y-%m-%d %H:%M}")
            if answer == "open" and self._window.files.recover(copy):
                return True
            if answer == "delete":
                copy.remove()
        return False


def rescue(files: FileCommands) -> str:
    """Keep the unsaved work after a fault of the program, and say what was kept."""
    if not files.has_unsaved_work:
        return "All your work is saved; start Rigpaper anew if anything looks wrong."
    if files.keep_recovery_copy():
        return "Your work was kept in a recovery copy: save it, and start Rigpaper anew."
    return "Your work could not be kept in a recovery copy: save it now, and start Rigpaper anew."


def ask_about_recovery(window: QWidget, original: Path | None, written: str) -> str:
    """Ask what to do with unsaved work that was found: "open", "delete", or "later", which Escape means too."""
    what = original.name if original else "a session that was never saved"
    box = QMessageBox(
        QMessageBox.Icon.Question,
        "Unsaved work found",
        f"Rigpaper ended without closing {what}. Its unsaved work of {written} was kept.",
        parent=window,
    )
    open_it = box.addButton("&Open it", QMessageBox.ButtonRole.AcceptRole)
    later = box.addButton("&Later", QMessageBox.ButtonRole.RejectRole)
    delete = box.addButton("&Delete it", QMessageBox.ButtonRole.DestructiveRole)
    box.setDefaultButton(open_it)
    box.setEscapeButton(later)
    box.exec()
    clicked = box.clickedButton()
    return "open" if clicked is open_it else "delete" if clicked is delete else "later"


def _import_heavy_libraries() -> None:
    for name in HEAVY_LIBRARIES:
        import_module(name)
