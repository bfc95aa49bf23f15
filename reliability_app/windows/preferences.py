"""The preferences: how numbers, text and colours look and what new sets start with; each choice counts at once."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace

from PySide6.QtCore import Signal
from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QFormLayout,
    QGroupBox,
    QSpinBox,
    QVBoxLayout,
    QWidget,
)

from reliability_app.session.number_style import (
    LEAST_DIGITS,
    MOST_DIGITS,
    THOUSANDS_MARKS,
    NumberStyle,
    choose_number_style,
)
from reliability_app.session.wording import SIDE_TITLES
from reliability_app.windows.settings import SCHEMES, WindowSettings
from reliability_app.windows.text_size import LARGEST_STEP, SMALLEST_STEP, apply_text_step

_SHOWN_THOUSANDS = 12345.0
_CONFIDENCES = (0.80, 0.90, 0.95, 0.99)
_AGE_SCALES: Mapping[str, str] = {"": "As last used on each page", "log": "Log age", "linear": "Linear age"}


class PreferencesDialog(QDialog):
    """Shows what is preferred and takes each choice over as it is made.

    Signals
    -------
    numbers_changed()
        Numbers are written differently now: what is shown has to be written anew.
    age_scale_chosen(str)
        The pages are to have this age axis: log or linear.
    scheme_chosen(str)
        The program is to be light, dark or as the system.
    """

    numbers_changed = Signal()
    age_scale_chosen = Signal(str)
    scheme_chosen = Signal(str)

    def __init__(self, settings: WindowSettings, parent: QWidget) -> None:
        super().__init__(parent)
        self.setWindowTitle("Preferences")
        self._settings = settings
        self.digits = QSpinBox()
        self.digits.setRange(LEAST_DIGITS, MOST_DIGITS)
        self.digits.setAccessibleName("Digits of a result")
        self.thousands = _choice("Between thousands", [(name, _example(name)) for name in THOUSANDS_MARKS])
        self.text_step = QSpinBox()
        self.text_step.setRange(SMALLEST_STEP, LARGEST_STEP)
        self.text_step.setSuffix(" pt")
        self.text_step.setAccessibleName("Text size")
        self.scheme = _choice("Colours", SCHEMES.items())
        self.age_scale = _choice("Age axis of the pages", _AGE_SCALES.items())
        levels = [(level, f"{100 * level:g} %") for level in _CONFIDENCES]
        self.confidence = _choice("Confidence of a new session", levels)
        sides = [(side, title.capitalize()) for side, title in SIDE_TITLES.items()]
        self.side = _choice("Side of the bound of a new session", sides)
        self._lay_out()
        self._show()
        self._connect()

    def _show(self) -> None:
        settings = self._settings
        style = settings.number_style
        self.digits.setValue(style.digits)
        self.text_step.setValue(settings.text_step)
        self._show_step(settings.text_step)
        level = settings.confidence
        if self.confidence.findData(level) < 0:
            self.confidence.addItem(f"{100 * level:g} %", level)
        for box, value in (
            (self.thousands, style.thousands),
            (self.scheme, settings.scheme),
            (self.age_scale, settings.first_age_scale or ""),
            (self.confidence, level),
            (self.side, settings.side),
        ):
            box.setCurrentIndex(max(0, box.findData(value)))

    def _connect(self) -> None:
        self.digits.valueChanged.connect(lambda digits: self._take_style(digits=digits))
        self.thousands.activated.connect(lambda: self._take_style(thousands=self.thousands.currentData()))
        self.text_step.valueChanged.connect(self._take_step)
        self.scheme.activated.connect(lambda: self.scheme_chosen.emit(self.scheme.currentData()))
        self.age_scale.activated.connect(self._take_age_scale)
        self.confidence.activated.connect(lambda: setattr(self._settings, "confidence", self.confidence.currentData()))
        self.side.activated.connect(lambda: setattr(self._settings, "side", self.side.currentData()))

    def _take_style(self, **change: object) -> None:
        style = replace(self._settings.number_style, **change)  # type: ignore[arg-type]  # fields named above
        self._settings.number_style = style
        choose_number_style(style)
        self.numbers_changed.emit()

    def _take_step(self, step: int) -> None:
        self._settings.text_step = step
        self._show_step(step)
        apply_text_step(step)

    def _show_step(self, step: int) -> None:
        self.text_step.setPrefix("system " if step < 0 else "system +" if step else "system ±")

    def _take_age_scale(self) -> None:
        kind = self.age_scale.currentData()
        self._settings.first_age_scale = kind or None
        if kind:
            self.age_scale_chosen.emit(kind)

    def _restore(self) -> None:
        """Go back to how the program comes."""
        settings = self._settings
        settings.number_style, settings.text_step, settings.first_age_scale = NumberStyle(), 0, None
        settings.confidence, settings.side = 0.95, "lower"
        self._show()
        self._take_style()
        self.scheme.setCurrentIndex(self.scheme.findData("system"))
        self.scheme_chosen.emit("system")

    def _lay_out(self) -> None:
        column = QVBoxLayout(self)
        for title, rows in (
            ("Numbers", (("&Digits of a result", self.digits), ("Between &thousands", self.thousands))),
            ("Looks", (("Text &size", self.text_step), ("&Colours", self.scheme), ("&Age axis", self.age_scale))),
            ("New sessions begin with", (("C&onfidence", self.confidence), ("S&ide of the bound", self.side))),
        ):
            box = QGroupBox(title)
            form = QFormLayout(box)
            for label, field in rows:
                form.addRow(label, field)
            column.addWidget(box)
        buttons = QDialogButtonBox(
            QDialogButtonBox.StandardButton.RestoreDefaults | QDialogButtonBox.StandardButton.Close
        )
        buttons.rejected.connect(self.reject)
        usual = buttons.button(QDialogButtonBox.StandardButton.RestoreDefaults)
        usual.setText("&Usual settings")
        usual.clicked.connect(self._restore)
        column.addWidget(buttons)


def _choice(name: str, entries: Iterable[tuple[object, str]]) -> QComboBox:
    box = QComboBox()
    box.setAccessibleName(name)
    for data, title in entries:
        box.addItem(title, data)
    return box


def _example(name: str) -> str:
    grouped = f"{_SHOWN_THOUSANDS:,.0f}".replace(",", THOUSANDS_MARKS[name])
    return f"{grouped}  ({'nothing' if name == 'none' else 'small space' if name == 'space' else name})"
