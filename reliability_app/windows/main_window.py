"""The main window: its frame is painted first, its contents follow; `_connect` is where all signals are wired."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, QUrl, Signal
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QIcon
from PySide6.QtWidgets import QLabel, QMainWindow, QWidget

from reliability_app.windows.settings import WindowSettings

if TYPE_CHECKING:  # what costs time to import comes with the contents, after the first paint
    from reliability_app.session.analysis import SetAnalysis
    from reliability_app.session.document import Change, LifeAsk, Session
    from reliability_app.session.edits import Edit
    from reliability_app.session.messages import Messages
    from reliability_app.session.recovery import RecoveryCopy

APPLICATION_TITLE = "Rigpaper"


class MainWindow(QMainWindow):
    """One window on one session.

    `answer_shown` is emitted when the pages and the sentence show the answer to the session as it stands.
    """

    answer_shown = Signal()

    def __init__(self, settings: WindowSettings, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.settings = settings
        self.setWindowTitle(APPLICATION_TITLE)
        self.setAcceptDrops(True)
        if not self.restoreGeometry(settings.layout("window")):
            room = self.screen().availableGeometry().size()
            self.resize(min(1240, int(0.96 * room.width())), min(780, int(0.9 * room.height())))
        waiting = QLabel("Rigpaper is starting …")
        waiting.setAlignment(Qt.AlignmentFlag.AlignCenter)
        self.setCentralWidget(waiting)
        self._filled = False

    def fill(self, session: Session, messages: Messages, *, recovery: RecoveryCopy | None = None) -> None:
        """Build the contents and wire them; the heavy libraries are imported here."""
        from reliability_app.session.shipped import shipped
        from reliability_app.windows.background import Analyst
        from reliability_app.windows.contents import Contents
        from reliability_app.windows.file_commands import FileCommands
        from reliability_app.windows.menus import Menus
        from reliability_app.windows.session_bridge import SessionBridge
        from reliability_app.windows.undo import UndoStack

        self.setWindowIcon(QIcon(str(shipped("resources") / "rigpaper.svg")))
        self.session, self.messages = session, messages
        self.shown_set = 0
        self.analysis: SetAnalysis | None = None
        self._dragged_to: LifeAsk | None = None
        self.undo = UndoStack(self)
        self.bridge = SessionBridge(session, messages, self)
        self.analyst = Analyst(self)
        self.contents = Contents(session, self.push_edit, messages)
        self.files = FileCommands(
            session, self.undo, messages, self.settings, self, self.contents.grid.finish_entry, recovery
        )
        self.menus = Menus(self)
        self.setCentralWidget(self.contents)
        self._filled = True
        self._restore_layout()
        self._connect()
        self._show_everything()

    def push_edit(self, edit: Edit) -> None:
        """Apply an edit as one undo step."""
        self.undo.push_edit(self.session, edit)

    def _connect(self) -> None:
        contents = self.contents
        self.bridge.changed.connect(self._take_change)
        self.bridge.said.connect(contents.message_bar.show_message)
        self.analyst.answered.connect(self._show_answer)
        self.analyst.failed.connect(self._say_failure)
        self.analyst.advanced.connect(contents.reading.show_progress)
        contents.reading.stop_asked.connect(self.analyst.stop)
        self.undo.cleanChanged.connect(self._show_title)
        self.undo.retraced.connect(self._show_place_of)
        self.files.path_changed.connect(self._show_title)
        contents.set_bar.set_chosen.connect(self.show_set)
        contents.grid.undo_paste_asked.connect(self.undo.undo_if_latest)
        for page in contents.pages:
            page.percent_dragged.connect(self._read_while_dragging)
            page.percent_chosen.connect(self._choose_percent)
            page.age_scale_changed.connect(partial(self.settings.keep_age_scale, page.name))

    # What the session says

    def _take_change(self, change: Change) -> None:
        if change.kind == "everything":
            self.shown_set = 0
            self.analysis = None
            self._show_everything()
            return
        self.files.note_edit()
        self.contents.message_bar.put_away_notes()
        if change.kind == "sets":
            self.show_set(min(self.shown_set, len(self.session.sets) - 1))
            return
        if change.kind == "life_unit":
            self.contents.set_bar.refresh(self.shown_set)
        if change.kind == "title":
            self._show_title()
        self.contents.grid.refresh(change)
        if change.kind in ("title", "notes"):
            return
        if change.set_index in (None, self.shown_set):
            self.contents.basis.show_basis(self.shown_set, self.session.sets[self.shown_set].basis)
            self._ask()

    def show_set(self, place: int) -> None:
        """Show the set at `place`."""
        self.shown_set = place
        self.contents.set_bar.refresh(place)
        self.contents.grid.show_set(self.session, place)
        self.contents.basis.show_basis(place, self.session.sets[place].basis)
        self._ask()

    def _show_everything(self) -> None:
        self._show_title()
        self.show_set(0)

    def _show_place_of(self, edit: Edit) -> None:
        """Show the set in which a step was just undone or redone."""
        place = edit.change.set_index
        if place is not None and place != self.shown_set and place < len(self.session.sets):
            self.show_set(place)
        self.contents.grid.reveal(edit)

    def edit_notes(self) -> None:
        """Show title and notes for editing."""
        from reliability_app.windows.notes_dialog import NotesDialog

        dialog = NotesDialog(self.session, self)
        if dialog.exec():
            for edit in dialog.edits():
                self.push_edit(edit)

    # Questions and answers

    def _ask(self) -> None:
        from reliability_app.session.analysis import Question

        self.contents.reading.expect_newer()
        self.analyst.ask(Question.about(self.session, self.shown_set))

    def _show_answer(self, analysis: SetAnalysis) -> None:
        self.analysis = analysis
        self.contents.reading.show_analysis(analysis)
        self._show_pictures(analysis)
        self.answer_shown.emit()

    def _show_pictures(self, analysis: SetAnalysis) -> None:
        from reliability_app.session.plain_output import statement

        said = statement(analysis)
        for page in self.contents.pages:
            page.statement = said
            page.show_pictures([analysis.picture], current=0, life_unit=analysis.question.life_unit)

    def _say_failure(self, text: str) -> None:
        from reliability_app.engine.cautions import Severity

        self.contents.reading.show_failure()
        for page in self.contents.pages:
            page.show_pictures((), current=0, life_unit=self.session.life_unit)
        self.messages.say(Severity.SERIOUS, f"{text} Save your work, and undo the latest change to go on.")

    # The reading line

    def _read_while_dragging(self, percent: float) -> None:
        """Follow the line: the sentence and the bracket at once, the session when the line is let go."""
        from reliability_app.session.document import LifeAsk

        if self.analysis is not None and self.analysis.question.revision == self._revision_shown():
            self.analysis = self.analysis.with_main_ask(LifeAsk(percent))
            self.contents.reading.show_analysis(self.analysis)
            self._show_pictures(self.analysis)

    def _revision_shown(self) -> int:
        return self.session.sets[self.shown_set].table.revision

    def _choose_percent(self, percent: float) -> None:
        from reliability_app.session.document import LifeAsk
        from reliability_app.session.edits import ChangeAsks

        asks, chosen = self.session.asks, LifeAsk(percent)
        # A place the line was dragged to gives way to the next; readings the user asked for by name stay listed.
        left_behind = self._dragged_to if asks[:1] == (self._dragged_to,) else None
        others = tuple(ask for ask in asks if ask not in (chosen, left_behind))
        self._dragged_to = None if chosen in asks else chosen
        if asks[:1] != (chosen,):
            self.push_edit(ChangeAsks(asks, (chosen, *others)))

    # The frame

    def _show_title(self) -> None:
        self.setWindowTitle(f"{self.files.title}[*] — {APPLICATION_TITLE}")
        self.setWindowModified(not self.undo.isClean())

    def _restore_layout(self) -> None:
        self.contents.restoreState(self.settings.layout("spread"))
        self.contents.right.restoreState(self.settings.layout("right"))

        for page in self.contents.pages:
            kept = self.settings.age_scale(page.name)
            if kept is not None:
                page.set_age_scale(kept)

    def _keep_layout(self) -> None:
        self.settings.keep_layout("window", self.saveGeometry())
        self.settings.keep_layout("spread", self.contents.saveState())
        self.settings.keep_layout("right", self.contents.right.saveState())

    def closeEvent(self, event: QCloseEvent) -> None:
        """Close unless the user wants to keep unsaved work open."""
        if self._filled:
            if not self.files.may_drop_session():
                event.ignore()
                return
            self._keep_layout()
            self.analyst.close()
            self.files.close()
        event.accept()

    def dragEnterEvent(self, event: QDragEnterEvent) -> None:
        """Accept one file."""
        if self._filled and _dropped_file(event.mimeData().urls()) is not None:
            event.acceptProposedAction()

    def dropEvent(self, event: QDropEvent) -> None:
        """Open the file dropped."""
        path = _dropped_file(event.mimeData().urls())
        if path is not None:
            event.acceptProposedAction()
            self.files.open(path)


def _dropped_file(urls: list[QUrl]) -> Path | None:
    files = [Path(url.toLocalFile()) for url in urls if url.isLocalFile()]
    return files[0] if len(files) == 1 else None
