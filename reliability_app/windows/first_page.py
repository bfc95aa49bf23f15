"""What an empty window offers: a place to paste, files opened last, sample sets; gone with the first entry."""

from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from functools import partial
from pathlib import Path

from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtWidgets import QFrame, QGridLayout, QHBoxLayout, QLabel, QPushButton, QScrollArea, QVBoxLayout, QWidget

from reliability_app.session.shipped import shipped

_MOST_LISTED = 6
_MARGIN, _BETWEEN = 28, 24


class FirstPage(QScrollArea):
    """Covers the pages while the session is empty, for there is nothing to draw yet."""

    def __init__(self, over: QWidget, *, paste: Callable[[], object], open_file: Callable[[], object]) -> None:
        super().__init__(over)
        self._over = over
        self.setAccessibleName("Where to begin")
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setWidgetResizable(True)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # its buttons take the keys
        self.paste_button = _button("&Paste here", "Paste the table of units on the clipboard (Ctrl+V in the table)")
        self.paste_button.clicked.connect(lambda: paste())
        self.open_button = _button("&Open a file …", "Open a session, a spreadsheet or a text file (Ctrl+O)")
        self.open_button.clicked.connect(lambda: open_file())
        self.recent, self.samples = _List("Opened last"), _List("Samples")
        self._lay_out()
        over.installEventFilter(self)
        self._fit()
        self.hide()

    def offer(self, recent: Sequence[Path], samples: Sequence[tuple[str, Path]], *, opening: _Opening) -> None:
        """List files opened last, and the sample sets by title."""
        open_recent, open_sample = opening
        self.recent.fill([(path.name, str(path), partial(open_recent, path)) for path in recent[:_MOST_LISTED]])
        self.samples.fill([(title, "", partial(open_sample, path)) for title, path in samples[:_MOST_LISTED]])
        self._place_lists()

    def set_shown(self, shown: bool) -> None:
        """Show or take away the page."""
        if shown:
            self._fit()
            self.raise_()
        self.setVisible(shown)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Stay as large as what is covered."""
        if watched is self._over and event.type() == QEvent.Type.Resize:
            self._fit()
        return False

    def changeEvent(self, event: QEvent) -> None:
        """Keep the heading large when the font changes."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.FontChange and hasattr(self, "_lists"):
            self._enlarge_heading()
            self._place_lists()

    def _fit(self) -> None:
        self.setGeometry(self._over.rect())
        self._place_lists()

    def _place_lists(self) -> None:
        """Put the samples beside the files opened last where both have room, else below them."""
        needed = self.recent.sizeHint().width() + self.samples.sizeHint().width() + _BETWEEN + 2 * _MARGIN
        has_room = self.recent.isHidden() or needed <= self.viewport().width()
        self._lists.addWidget(self.samples, *((0, 1) if has_room else (1, 0)), Qt.AlignmentFlag.AlignTop)

    def _enlarge_heading(self) -> None:
        font = self.font()
        font.setPointSizeF(1.5 * font.pointSizeF())
        self._heading.setFont(font)

    def _lay_out(self) -> None:
        self._heading = QLabel("Begin with the lives of some units")
        self._heading.setWordWrap(True)
        self._enlarge_heading()
        how = QLabel(
            "Copy rows from a spreadsheet or a text and paste them: one unit a row, its life, and whether it failed or "
            "still runs. Headings, decimal commas and most words for a state are understood. Or type into the table on "
            "the left, or drop a file on the window."
        )
        how.setWordWrap(True)
        buttons = QHBoxLayout()
        buttons.addWidget(self.paste_button)
        buttons.addWidget(self.open_button)
        buttons.addStretch(1)
        self._lists = QGridLayout()
        self._lists.setHorizontalSpacing(_BETWEEN)
        self._lists.addWidget(self.recent, 0, 0, Qt.AlignmentFlag.AlignTop)
        self._lists.setColumnStretch(0, 1)
        self._lists.setColumnStretch(1, 1)
        sheet = QWidget()
        sheet.setAutoFillBackground(True)
        column = QVBoxLayout(sheet)
        column.setContentsMargins(_MARGIN, 24, _MARGIN, 16)
        column.setSpacing(12)
        column.addWidget(self._heading)
        column.addWidget(how)
        column.addLayout(buttons)
        column.addLayout(self._lists)
        column.addStretch(1)
        self.setWidget(sheet)


_Opening = tuple[Callable[[Path], object], Callable[[Path], object]]


class _List(QWidget):
    """A heading with buttons below it, one a file; hidden while there is none."""

    def __init__(self, title: str) -> None:
        super().__init__()
        self.buttons: list[QPushButton] = []
        self._rows = QVBoxLayout(self)
        self._rows.setContentsMargins(0, 8, 0, 0)
        self._rows.setSpacing(2)
        heading = QLabel(title)
        font = heading.font()
        font.setBold(True)
        heading.setFont(font)
        self._rows.addWidget(heading)

    def fill(self, entries: Sequence[tuple[str, str, Callable[[], object]]]) -> None:
        """Put these in the place of what was listed: text, tip, what a click does."""
        for button in self.buttons:
            self._rows.removeWidget(button)
            button.deleteLater()
        self.buttons = []
        for text, tip, act in entries:
            button = _button(text.replace("&", "&&"), tip)
            button.setFlat(True)
            button.setStyleSheet("text-align: left; padding: 3px 6px;")
            button.clicked.connect(partial(_without_state, act))
            self._rows.addWidget(button)
            self.buttons.append(button)
        self.setVisible(bool(entries))


def _without_state(act: Callable[[], object], _checked: bool = False) -> None:
    act()


def _button(text: str, tip: str) -> QPushButton:
    button = QPushButton(text)
    button.setToolTip(tip)
    button.setAccessibleName(text.replace("&&", "\0").replace("&", "").replace("\0", "&"))
    button.setAutoDefault(False)
    return button


def sample_sets() -> list[tuple[str, Path]]:
    """Return the sample sets by title."""
    return [(_title_of(path), path) for path in sorted(shipped("sample_sets").glob("*.json"))]


def _title_of(path: Path) -> str:
    """Return a session's title without opening it whole."""
    return str(json.loads(path.read_text(encoding="utf-8")).get("title") or path.stem)
