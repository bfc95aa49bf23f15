"""The menu that changes what a paste was understood to be: meanings of columns, decimal mark, headings, yes and no."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TypeVar

from PySide6.QtGui import QAction, QActionGroup
from PySide6.QtWidgets import QMenu, QWidget

from reliability_app.session.numbers import DecimalMark
from reliability_app.session.pasted_text import reread
from reliability_app.session.states import FAILED, RUNNING
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, HEADINGS

Option = TypeVar("Option")
Chosen = Callable[[Understanding], None]
_OWN = "A column of its own"
_MARKS = {DecimalMark.POINT: "Decimal &point: 1,234.5", DecimalMark.COMMA: "Decimal &comma: 1.234,5"}


def change_menu(understood: Understanding, chosen: Chosen, parent: QWidget) -> QMenu:
    """Make the menu; `chosen` is called with the table read anew."""
    menu = QMenu(parent)
    menu.setAccessibleName("Read the paste differently")
    for place, key in enumerate(understood.columns):
        if key is not None:
            _add_column(menu, understood, place, key, chosen)
    menu.addSeparator()
    _add_marks(menu, understood, chosen)
    if "state" in understood.columns:
        _add_answers(menu, understood, chosen)
    has_headings = understood.source.heading_row is not None
    headings = menu.addAction("First row holds &headings")
    headings.setCheckable(True)
    headings.setChecked(has_headings)
    headings.triggered.connect(lambda: chosen(reread(understood, headings=not has_headings)))
    return menu


def _add_column(menu: QMenu, understood: Understanding, place: int, key: str, chosen: Chosen) -> None:
    heading = understood.headings[place]
    named = f"Column {place + 1}" + (f" '{heading}'" if heading else "")
    meanings = menu.addMenu(_plain(f"{named}: {HEADINGS.get(key, 'kept as it is')}"))

    def choose(meaning: str | None) -> None:
        chosen(reread(understood, columns={place: meaning}))

    options: list[tuple[str, str | None]] = [(HEADINGS[column], column) for column in BUILT_IN_COLUMNS]
    current = HEADINGS.get(key, _OWN)
    _add_options(meanings, [*options, (_OWN, None)], current, choose)


def _add_marks(menu: QMenu, understood: Understanding, chosen: Chosen) -> None:
    def choose(mark: DecimalMark) -> None:
        chosen(reread(understood, mark=mark))

    current = _MARKS.get(understood.choices.mark or understood.mark, "")
    marks = menu.addMenu("&Numbers have a")
    _add_options(marks, [(text, mark) for mark, text in _MARKS.items()], current, choose)


def _add_answers(menu: QMenu, understood: Understanding, chosen: Chosen) -> None:
    def choose(state: str) -> None:
        chosen(reread(understood, yes_means=state))

    answers = menu.addMenu("&Yes and 1 mean")
    _add_options(answers, [(FAILED, FAILED), (RUNNING, RUNNING)], understood.choices.yes_means or "", choose)


def _add_options(
    menu: QMenu, options: Sequence[tuple[str, Option]], current: str, choose: Callable[[Option], None]
) -> None:
    group = QActionGroup(menu)
    for text, option in options:
        action = QAction(text, group)
        action.setCheckable(True)
        action.setChecked(text == current)
        action.triggered.connect(lambda _checked, option=option: choose(option))
        menu.addAction(action)


def _plain(text: str) -> str:
    # An ampersand in a menu's text would underline the letter behind it.
    return text.replace("&", "&&")
