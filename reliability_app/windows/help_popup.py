"""Help on screen: the text of one term beside what it is about, and the searchable list of all terms."""

from __future__ import annotations

from collections.abc import Callable

from PySide6.QtCore import QEvent, QObject, QPoint, Qt, Signal
from PySide6.QtGui import QCursor, QGuiApplication, QKeyEvent, QMouseEvent
from PySide6.QtWidgets import (
    QApplication,
    QDialog,
    QFrame,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QListWidget,
    QListWidgetItem,
    QPushButton,
    QSplitter,
    QTextBrowser,
    QVBoxLayout,
    QWidget,
)

from reliability_app.windows.help_texts import Term
from reliability_app.windows.help_topics import TERMS, terms_holding

_TERM = int(Qt.ItemDataRole.UserRole)
_WIDTH_IN_CHARACTERS = 54


class HelpPopup(QFrame):
    """Shows one term until something else is clicked or Escape is pressed: `all_asked(str)` with its key."""

    all_asked = Signal(str)

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent, Qt.WindowType.Popup)
        self.setFrameShape(QFrame.Shape.StyledPanel)
        self._key = ""
        self.title, self.text = QLabel(), QLabel()
        self.title.setTextFormat(Qt.TextFormat.PlainText)
        font = self.title.font()
        font.setBold(True)
        self.title.setFont(font)
        self.text.setWordWrap(True)
        self.text.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.more = QPushButton("All &terms …")
        self.more.clicked.connect(self._ask_all)
        row = QHBoxLayout()
        row.addStretch(1)
        row.addWidget(self.more)
        column = QVBoxLayout(self)
        column.addWidget(self.title)
        column.addWidget(self.text)
        column.addLayout(row)

    def show_term(self, shown: Term, place: QPoint) -> None:
        """Show a term below a place on the screen, moved so that all of it is seen."""
        self._key = shown.key
        self.title.setText(shown.title)
        self.text.setText(shown.text)
        self.setAccessibleName(f"Help on {shown.title}")
        self.setAccessibleDescription(shown.text)
        self.text.setFixedWidth(_WIDTH_IN_CHARACTERS * self.fontMetrics().averageCharWidth())
        self.adjustSize()
        screen = QGuiApplication.screenAt(place) or self.screen()
        room = screen.availableGeometry()
        self.move(
            max(room.left(), min(place.x(), room.right() - self.width())),
            max(room.top(), min(place.y(), room.bottom() - self.height())),
        )
        self.show()
        self.more.setFocus()

    def _ask_all(self) -> None:
        self.hide()
        self.all_asked.emit(self._key)


class HelpWindow(QDialog):
    """Lists all terms that hold what is typed, and shows the text of the chosen one; the work goes on beside it."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setWindowTitle("What the terms mean")
        self.wanted = QLineEdit()
        self.wanted.setAccessibleName("Search the terms")
        self.wanted.setPlaceholderText("Search, for instance: one-sided")
        self.wanted.setClearButtonEnabled(True)
        self.titles = QListWidget()
        self.titles.setAccessibleName("Terms")
        self.page = QTextBrowser()
        self.page.setAccessibleName("What the term means")
        parts = QSplitter()
        parts.addWidget(self.titles)
        parts.addWidget(self.page)
        parts.setStretchFactor(1, 1)
        column = QVBoxLayout(self)
        column.addWidget(self.wanted)
        column.addWidget(parts, 1)
        character = self.fontMetrics().averageCharWidth()
        self.resize(110 * character, 28 * self.fontMetrics().height())
        parts.setSizes([40 * character, 70 * character])
        self.wanted.textChanged.connect(self._list)
        self.titles.currentItemChanged.connect(self._show_text)
        self._list("")

    def show_term(self, key: str = "") -> None:
        """Open the list, at a term if one is named."""
        self.wanted.clear()
        places = {entry.key: place for place, entry in enumerate(TERMS)}
        self.titles.setCurrentRow(places.get(key, 0))
        self.show()
        self.raise_()
        self.activateWindow()
        self.wanted.setFocus()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Go up and down in the list while a word is typed."""
        steps = {Qt.Key.Key_Down: 1, Qt.Key.Key_Up: -1}
        step = steps.get(Qt.Key(event.key()))
        if step is None:
            super().keyPressEvent(event)
        else:
            self.titles.setCurrentRow(max(0, min(self.titles.currentRow() + step, self.titles.count() - 1)))

    def _list(self, wanted: str) -> None:
        self.titles.clear()
        for entry in terms_holding(wanted) if wanted.strip() else TERMS:
            item = QListWidgetItem(entry.title, self.titles)
            item.setData(_TERM, entry)
        self.titles.setCurrentRow(0)
        if not self.titles.count():
            self.page.setPlainText("No term holds this: try another word, or fewer letters.")

    def _show_text(self, item: QListWidgetItem | None) -> None:
        if item is None:
            return
        shown: Term = item.data(_TERM)
        self.page.setHtml("")
        self.page.setPlainText(f"{shown.title}\n\n{shown.text}")


class Pointer(QObject):
    """Waits for a click and tells what was clicked and where on the screen, instead of doing what the click would do.

    Escape gives up. It listens to the whole program only while it waits.
    """

    def __init__(self, found: Callable[[QWidget, QPoint], None], parent: QWidget) -> None:
        super().__init__(parent)
        self._found = found
        self.is_waiting = False

    def wait(self) -> None:
        """Wait for the click."""
        application = QApplication.instance()
        if self.is_waiting or application is None:
            return
        self.is_waiting = True
        application.installEventFilter(self)
        QGuiApplication.setOverrideCursor(QCursor(Qt.CursorShape.WhatsThisCursor))

    def give_up(self) -> None:
        """Do not wait any longer."""
        application = QApplication.instance()
        if self.is_waiting and application is not None:
            self.is_waiting = False
            application.removeEventFilter(self)
            QGuiApplication.restoreOverrideCursor()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Take the click or the Escape key away from whom it was meant for."""
        if event.type() == QEvent.Type.KeyPress and isinstance(event, QKeyEvent) and event.key() == Qt.Key.Key_Escape:
            self.give_up()
            return True
        if event.type() != QEvent.Type.MouseButtonPress or not isinstance(event, QMouseEvent):
            return False
        if not isinstance(watched, QWidget):
            return False
        self.give_up()
        self._found(watched, event.globalPosition().toPoint())
        return True
