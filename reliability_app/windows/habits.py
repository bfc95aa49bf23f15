"""What every window has beside its work: help on what is shown, the list of commands, preferences, the first page."""

from __future__ import annotations

from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QObject, QPoint
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QApplication, QMenu, QTabBar, QToolButton, QWidget

from reliability_app.engine.cautions import Severity
from reliability_app.session.plain_output import cautions_of
from reliability_app.windows.command_search import CommandSearch
from reliability_app.windows.first_page import FirstPage, sample_sets
from reliability_app.windows.help_popup import HelpPopup, HelpWindow, Pointer
from reliability_app.windows.help_texts import Term
from reliability_app.windows.help_topics import term_for, term_for_ask, term_for_caution, term_for_cell
from reliability_app.windows.preferences import PreferencesDialog
from reliability_app.windows.text_size import LARGEST_STEP, SMALLEST_STEP, apply_text_step

if TYPE_CHECKING:
    from reliability_app.session.document import Change
    from reliability_app.windows.main_window import MainWindow


class Habits(QObject):
    """Joins help, commands, preferences and the first page to a window that is filled."""

    def __init__(self, window: MainWindow) -> None:
        super().__init__(window)
        self._window = window
        contents = window.contents
        self.popup = HelpPopup(window)
        self.terms = HelpWindow(window)
        self.pointer = Pointer(self._explain_clicked, window)
        self.commands = CommandSearch(window)
        self.first_page = FirstPage(contents.tabs, paste=self._paste, open_file=window.files.open_by_dialog)
        self.popup.all_asked.connect(self.terms.show_term)
        contents.grid.shown_columns.set_hidden(window.settings.hidden_columns)
        contents.grid.shown_columns.changed.connect(self._keep_hidden_columns)
        window.bridge.changed.connect(self._follow)
        self._add_help_button()
        self._show_first_page()

    # Help

    def explain_focus(self) -> None:
        """Show the help on what has the focus; the list of terms where nothing special has it."""
        focused = QApplication.focusWidget()
        term = self._term_of(focused)
        if focused is None or term is None:
            self.terms.show_term()
            return
        view = self._window.contents.grid.view
        if view is focused or view.isAncestorOf(focused):
            place = view.viewport().mapToGlobal(view.visualRect(view.currentIndex()).bottomLeft())
        else:
            place = focused.mapToGlobal(QPoint(0, min(focused.height(), focused.window().height() // 3)))
        self.popup.show_term(term, place)

    def _explain_clicked(self, clicked: QWidget, place: QPoint) -> None:
        view = self._window.contents.grid.view
        if clicked is view.viewport():
            index = view.indexAt(view.viewport().mapFromGlobal(place))
            term: Term | None = self._term_of_cell(index.row(), index.column()) if index.isValid() else None
        else:
            term = self._term_of(clicked)
        if term is not None:
            self.popup.show_term(term, place)

    def _term_of(self, widget: QWidget | None) -> Term | None:
        """Return the term for a widget, in a table for its current row."""
        contents = self._window.contents
        table, view = contents.reading.table, contents.grid.view
        analysis = self._window.analysis
        if widget is None:
            return None
        if isinstance(widget, QTabBar) or widget is contents.tabs:
            widget = contents.tabs.currentWidget()
        if view is widget or view.isAncestorOf(widget):
            return self._term_of_cell(*view.current_cell())
        row = table.currentIndex().row()
        if analysis is not None and (table is widget or table.isAncestorOf(widget)) and row < len(analysis.readings):
            return term_for_ask(analysis.readings[max(row, 0)].ask)
        found = term_for(widget)
        if found is not None and found.key == "caution" and analysis is not None:
            worst = next(iter(cautions_of(analysis)), None)
            return found if worst is None else term_for_caution(worst.code)
        return found

    def _term_of_cell(self, row: int, section: int) -> Term:
        model = self._window.contents.grid.model
        return term_for_cell(model.columns[section], model.table.text(row, "state"))

    def point(self) -> None:
        """Explain what is clicked next."""
        self.pointer.wait()

    def list_terms(self) -> None:
        """Show the list of all terms."""
        self.terms.show_term()

    def _add_help_button(self) -> None:
        button = QToolButton(self._window)
        button.setText("?")
        button.setAutoRaise(True)
        button.setAccessibleName("What is this?")
        button.setToolTip("Click here, then on what you want explained (Shift+F1); F1 explains what has the focus")
        button.clicked.connect(self.pointer.wait)
        self._window.menuBar().setCornerWidget(button)
        button.show()

    # Commands and preferences

    def search_commands(self) -> None:
        """Open the list of all commands."""
        self._window.contents.grid.finish_entry()
        tops = [action.menu() for action in self._window.menuBar().actions()]
        self.commands.open([menu for menu in tops if isinstance(menu, QMenu)])

    def edit_preferences(self) -> None:
        """Show the preferences."""
        dialog = PreferencesDialog(self._window.settings, self._window)
        dialog.numbers_changed.connect(self._write_numbers_anew)
        dialog.scheme_chosen.connect(self._window.menus.choose_scheme)
        dialog.age_scale_chosen.connect(self._set_age_scales)
        dialog.exec()
        dialog.deleteLater()

    def step_text(self, by: int) -> None:
        """Make all text larger by so many points; 0 gives it the system's size."""
        settings = self._window.settings
        settings.text_step = min(max(settings.text_step + by, SMALLEST_STEP), LARGEST_STEP) if by else 0
        apply_text_step(settings.text_step)

    def _set_age_scales(self, kind: str) -> None:
        for page in self._window.contents.pages:
            page.set_age_scale("log" if kind == "log" else "linear")

    def _write_numbers_anew(self) -> None:
        self._window.write_anew()
        for page in self._window.contents.pages:
            # An axis keeps its labels as a picture until it is given its colours again.
            QApplication.sendEvent(page, QEvent(QEvent.Type.PaletteChange))

    def _keep_hidden_columns(self) -> None:
        self._window.settings.hidden_columns = self._window.contents.grid.shown_columns.hidden

    # The first page

    def _follow(self, change: Change) -> None:
        if change.kind in ("units", "sets", "everything"):
            self._show_first_page()

    def _show_first_page(self) -> None:
        session = self._window.session
        is_empty = not session.visits and all(unit_set.table.row_count == 0 for unit_set in session.sets)
        if is_empty:
            files = self._window.files
            self.first_page.offer(self._window.settings.recent, sample_sets(), opening=(files.open, files.open_copy))
        self.first_page.set_shown(is_empty)

    def _paste(self) -> None:
        grid = self._window.contents.grid
        grid.view.setFocus()
        mime = QGuiApplication.clipboard().mimeData()
        if mime is not None and mime.hasText():
            grid.paste()
        else:
            text = "There is no text on the clipboard: copy the rows in your spreadsheet first."
            self._window.messages.say(Severity.NOTE, text)
