"""The main window: its frame is painted first, its contents follow; `_connect` is where all signals are wired."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import Qt, QTimer, QUrl, Signal
from PySide6.QtGui import QCloseEvent, QDragEnterEvent, QDropEvent, QIcon
from PySide6.QtWidgets import QLabel, QMainWindow, QWidget

from reliability_app.windows.settings import WindowSettings

if TYPE_CHECKING:  # what costs time to import comes with the contents, after the first paint
    from reliability_app.session.analysis import SetAnalysis
    from reliability_app.session.document import Change, LifeAsk, Session, UnitSet
    from reliability_app.session.edits import Edit
    from reliability_app.session.messages import Messages
    from reliability_app.session.recovery import RecoveryCopy
    from reliability_app.session.understanding import Understanding

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
        self._filled = False
        self.say_why_empty("Rigpaper is starting …")

    def say_why_empty(self, text: str) -> None:
        """Say in the place of the contents why there are none."""
        said = QLabel(text)
        said.setAlignment(Qt.AlignmentFlag.AlignCenter)
        said.setWordWrap(True)
        self.setCentralWidget(said)

    def fill(self, session: Session, messages: Messages, *, recovery: RecoveryCopy | None = None) -> None:
        """Build the contents and wire them; the heavy libraries are imported here."""
        from reliability_app.session.shipped import shipped
        from reliability_app.windows.answering import Answering
        from reliability_app.windows.background import Analyst, PlanSimulator
        from reliability_app.windows.contents import Contents
        from reliability_app.windows.file_commands import FileCommands
        from reliability_app.windows.habits import Habits
        from reliability_app.windows.session_bridge import SessionBridge
        from reliability_app.windows.undo import UndoStack

        self.setWindowIcon(QIcon(str(shipped("resources") / "rigpaper.svg")))
        self.session, self.messages = session, messages
        self.shown_set = 0
        self._set_shown: UnitSet = session.sets[0]
        self._dragged_to: LifeAsk | None = None
        self.undo = UndoStack(self)
        self.bridge = SessionBridge(session, messages, self)
        self.analyst = Analyst(self)
        self.simulator = PlanSimulator(self)
        self.contents = Contents(session, self.push_edit, messages)
        self.answering = Answering(session, self.contents, self.analyst, self)
        self.files = FileCommands(
            session, self.undo, messages, self.settings, self, self.contents.grid.finish_entry, recovery
        )
        self._make_commands()
        self.setCentralWidget(self.contents)
        self._filled = True
        self._restore_layout()
        self._connect()
        self._show_everything()
        self.habits = Habits(self)

    def _make_commands(self) -> None:
        from reliability_app.windows.bring_in import BringInCommands
        from reliability_app.windows.menus import Menus
        from reliability_app.windows.page_wiring import PageWiring
        from reliability_app.windows.picture_commands import PictureCommands
        from reliability_app.windows.table_commands import TableCommands
        from reliability_app.windows.visit_commands import VisitCommands

        self.pictures = PictureCommands(self)
        self.tables = TableCommands(self)
        self.page_wiring = PageWiring(self)
        self.visits = VisitCommands(self)
        self.bringing_in = BringInCommands(self)
        self.menus = Menus(self)

    @property
    def analysis(self) -> SetAnalysis | None:
        """The answer that is shown to the set worked on."""
        return self.answering.analysis

    def push_edit(self, edit: Edit) -> None:
        """Apply an edit as one undo step."""
        self.undo.push_edit(self.session, edit)

    def _connect(self) -> None:
        contents = self.contents
        self.bridge.changed.connect(self._take_change)
        self.bridge.said.connect(contents.message_bar.show_message)
        self.analyst.advanced.connect(contents.reading.show_progress)
        self.answering.shown.connect(self.answer_shown)
        self.answering.troubled.connect(self._say_failure)
        contents.reading.stop_asked.connect(self.answering.stop)
        self._connect_simulator()
        self.undo.cleanChanged.connect(self._show_title)
        self.undo.retraced.connect(self._show_place_of)
        self.files.path_changed.connect(self._show_title)
        self.files.table_opened.connect(self._show_opened)
        contents.set_bar.set_chosen.connect(self.show_set)
        contents.grid.undo_paste_asked.connect(self.undo.undo_if_latest)
        for page in contents.pages:
            page.percent_dragged.connect(self.answering.drag_to)
            page.percent_chosen.connect(self._choose_percent)
            page.age_scale_changed.connect(partial(self.settings.keep_age_scale, page.name))
            page.copy_action.triggered.connect(self.pictures.copy)

    def _connect_simulator(self) -> None:
        plan = self.contents.reading.plan
        plan.simulate_asked.connect(self.simulator.simulate)
        plan.stop_asked.connect(self.simulator.stop)
        self.simulator.advanced.connect(plan.show_progress)
        self.simulator.answered.connect(plan.show_plan)
        self.simulator.failed.connect(plan.show_failure)
        self.simulator.failed.connect(self._say_serious)

    # What the session says

    def _take_change(self, change: Change) -> None:
        if change.kind == "everything":
            self.answering.forget()
            self.contents.reading.plan.forget()
            self._show_everything()
            return
        self.files.note_edit()
        self.contents.message_bar.put_away_notes()
        if change.kind == "sets":
            self._follow_set()
            return
        if change.kind in ("life_unit", "units"):  # a table may bring its unit along
            self.contents.set_bar.refresh(self.shown_set)
        if change.kind == "title":
            self._show_title()
        self.contents.grid.refresh(change)
        if change.kind in ("title", "notes"):
            return
        if change.set_index in (None, self.shown_set):
            self.contents.basis.show_basis(self.shown_set, self.session.sets[self.shown_set].basis)
            self._ask()

    def _follow_set(self) -> None:
        """Stay with the set that is shown where sets come, go and change places; where it went, with its neighbour."""
        sets, shown = self.session.sets, self._set_shown
        place = next((at for at, one in enumerate(sets) if one is shown), min(self.shown_set, len(sets) - 1))
        if place != self.shown_set or sets[place] is not shown:
            self.show_set(place)
        else:
            self.contents.set_bar.refresh(place)
            self._ask()

    def show_set(self, place: int) -> None:
        """Show the set at `place`."""
        self.shown_set, self._set_shown = place, self.session.sets[place]
        self.contents.set_bar.refresh(place)
        self.contents.grid.show_set(self.session, place)
        self.contents.basis.show_basis(place, self.session.sets[place].basis)
        self._ask()

    def _show_opened(self, understood: Understanding, place: int) -> None:
        """Show a table that was opened from a file, with what it was understood to be."""
        if place != self.shown_set:
            self.show_set(place)
        self.contents.grid.show_opened(understood)

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
        self.answering.ask(self.shown_set)

    def write_anew(self) -> None:
        """Show every number again, because the way they are written has changed."""
        self._ask()

    def _say_serious(self, text: str) -> None:
        from reliability_app.engine.cautions import Severity

        self.messages.say(Severity.SERIOUS, text)

    def _say_failure(self, text: str) -> None:
        self._say_serious(f"{text} Save your work, and undo the latest change to go on.")

    # The reading line

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
        else:
            self.answering.let_go()

    # The frame

    def _show_title(self) -> None:
        self.setWindowTitle(f"{self.files.title}[*] — {APPLICATION_TITLE}")
        self.setWindowModified(not self.undo.isClean())

    def _restore_layout(self) -> None:
        self.contents.restoreState(self.settings.layout("spread"))
        self.contents.right.restoreState(self.settings.layout("right"))

        for page in self.contents.pages:
            kept = self.settings.first_age_scale or self.settings.age_scale(page.name)
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
            self.hide()  # work under way ends at its next step, which nobody need look at
            for worker in (self.analyst, self.simulator, self.page_wiring.comparer, *self.visits.workers):
                worker.stop()
            self.analyst.close()
            self.simulator.close()
            self.page_wiring.close()
            self.visits.close()
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
            # Not within the drop: whoever the file comes from waits until that has ended.
            QTimer.singleShot(0, self, partial(self.files.open, path))


def _dropped_file(urls: list[QUrl]) -> Path | None:
    files = [Path(url.toLocalFile()) for url in urls if url.isLocalFile()]
    return files[0] if len(files) == 1 else None
