"""The requirement: set, changed and withdrawn; its verdict today, the looks taken, and every change of it."""

from __future__ import annotations

from collections.abc import Sequence

from PySide6.QtCore import Signal
from PySide6.QtWidgets import (
    QCheckBox,
    QComboBox,
    QHBoxLayout,
    QLabel,
    QLineEdit,
    QPlainTextEdit,
    QPushButton,
    QVBoxLayout,
    QWidget,
)

from reliability_app.engine.errors import RigpaperError
from reliability_app.session.document import LifeAsk, ReliabilityAsk
from reliability_app.session.held_requirement import HeldRequirement, RequirementChange
from reliability_app.session.numbers import UnreadableNumber, read_number
from reliability_app.session.requirement import Judgement, Requirement
from reliability_app.session.wording import as_given
from reliability_app.windows.units_grid.wrapped_label import wrapped_label

NONE_SET = "No requirement is set. Set it before the data are judged: it is stored with its day, and every change too."
WAITING = "Being judged …"
_LIFE, _RELIABILITY = "Life", "Reliability"
_NUMBER_WIDTH = 9  # characters


class RequirementPanel(QWidget):
    """What must be shown, and how it stands.

    Signals
    -------
    required(object, bool)
        This Requirement (None: none) is to hold, judged with the adjusted bound or not.
    """

    required = Signal(object, bool)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._held: HeldRequirement | None = None
        self._life_unit = "h"
        self.kind = QComboBox()
        self.kind.addItems((_LIFE, _RELIABILITY))
        self.kind.setAccessibleName("What is required: a life or a reliability")
        self.kind.activated.connect(self._name_fields)
        self.at, self.at_least, self.confidence = QLineEdit("10"), QLineEdit(), QLineEdit("95")
        self.before_at, self.after_at, self.after_least = QLabel(), QLabel(), QLabel()
        self.set_button, self.withdraw_button = QPushButton("Set"), QPushButton("Withdraw")
        self.withdraw_button.setAccessibleName("Withdraw the requirement")
        self.adjusted = QCheckBox("Adjust the bound for repeated looks")
        self.adjusted.setToolTip(
            "Spends the error over all looks, alpha / (k (k + 1)) at the k-th: repeated confidence bounds"
        )
        self.trouble, self.verdict, self.log = wrapped_label(), wrapped_label(), QPlainTextEdit()
        self.trouble.setAccessibleName("Why the requirement cannot be set")
        self.verdict.setAccessibleName("How the requirement stands today")
        self.log.setAccessibleName("Changes of the requirement")
        self.log.setReadOnly(True)
        self.log.setTabChangesFocus(True)
        self._lay_out()
        self._name_fields()
        self.set_button.clicked.connect(self.set_requirement)
        self.withdraw_button.clicked.connect(lambda: self.required.emit(None, False))
        self.adjusted.toggled.connect(self._adjust)
        for field in (self.at, self.at_least, self.confidence):
            field.returnPressed.connect(self.set_requirement)

    def show_requirement(self, held: HeldRequirement | None, log: Sequence[RequirementChange], life_unit: str) -> None:
        """Show what is required, and every change of it."""
        if held != self._held or life_unit != self._life_unit:
            self._life_unit = life_unit
            self._show_fields(held)
        self._held = held
        self.set_button.setText("Set" if held is None else "Change")
        self.set_button.setAccessibleName(f"{self.set_button.text()} the requirement")
        self.withdraw_button.setEnabled(held is not None)
        self.adjusted.setEnabled(held is not None)
        self.adjusted.blockSignals(True)
        self.adjusted.setChecked(held is not None and held.adjusted)
        self.adjusted.blockSignals(False)
        self.log.setPlainText("\n".join(change.sentence(life_unit) for change in log))
        self.log.setVisible(bool(log))
        self.verdict.setText(NONE_SET if held is None else WAITING)

    def show_verdicts(self, verdicts: Sequence[tuple[str, Judgement | None]]) -> None:
        """Show how the requirement stands with each set today."""
        if self._held is None:
            return
        told = []
        for name, judgement in verdicts:
            head = f"{name}: " if len(verdicts) > 1 else ""
            if judgement is None:
                told.append(f"{head}cannot be told: there is no fit to judge by.")
                continue
            told.append(f"{head}{judgement.sentence(self._life_unit)}")
            told += [f"! {caution.text}" for caution in judgement.cautions]
        looks = self._held.looks
        count = {0: "No visit has judged it yet.", 1: "One visit has judged it so far."}.get(
            looks, f"{looks} visits have judged it so far."
        )
        self.verdict.setText("\n".join([*dict.fromkeys(told), count]))

    def show_trouble(self, text: str) -> None:
        """Say why there is no verdict."""
        self.verdict.setText(text)

    def set_requirement(self) -> None:
        """Take what the fields say, or say what is wrong with them."""
        try:
            requirement = self._typed()
        except (RigpaperError, UnreadableNumber) as trouble:
            self.trouble.setText(str(trouble))
            self.trouble.setVisible(True)
            return
        self.trouble.setVisible(False)
        if self._held is None or requirement != self._held.requirement:
            self.required.emit(requirement, self.adjusted.isChecked())

    # Inside

    def _typed(self) -> Requirement:
        names = {self.at: self.before_at.text(), self.at_least: "at least", self.confidence: "confidence"}
        numbers = []
        for field, name in names.items():
            try:
                numbers.append(read_number(field.text()))
            except UnreadableNumber as trouble:
                raise UnreadableNumber(f"{name.capitalize()}: {trouble}") from None
        at, least, percent = numbers
        if self.kind.currentText() == _LIFE:
            if not 0.0 < at < 100.0:
                raise UnreadableNumber(f"Percent failed {as_given(at)}: give one between 0 and 100.")
            return Requirement(LifeAsk(at), least, percent / 100.0)
        if not at > 0.0:
            raise UnreadableNumber(f"Age {as_given(at)}: give an age above 0.")
        return Requirement(ReliabilityAsk(at), least, percent / 100.0)

    def _adjust(self, wanted: bool) -> None:
        if self._held is not None and wanted != self._held.adjusted:
            self.required.emit(self._held.requirement, wanted)

    def _show_fields(self, held: HeldRequirement | None) -> None:
        if held is not None:
            ask = held.requirement.ask
            self.kind.setCurrentText(_LIFE if isinstance(ask, LifeAsk) else _RELIABILITY)
            self.at.setText(as_given(ask.percent if isinstance(ask, LifeAsk) else ask.age))
            self.at_least.setText(as_given(held.requirement.at_least))
            self.confidence.setText(as_given(round(100.0 * held.requirement.confidence, 9)))
        self._name_fields()

    def _name_fields(self) -> None:
        is_life = self.kind.currentText() == _LIFE
        unit = f" {self._life_unit}".rstrip()
        self.before_at.setText("by which failed" if is_life else "at age")
        self.after_at.setText("%" if is_life else self._life_unit)
        self.after_least.setText(unit.strip() if is_life else "")
        self.at.setAccessibleName("Percent failed" if is_life else "Age of the reliability required")
        self.at_least.setAccessibleName("Life required at least" if is_life else "Reliability required at least")
        self.confidence.setAccessibleName("Confidence of the requirement in percent")
        self.at_least.setPlaceholderText("life" if is_life else "0 to 1")

    def _lay_out(self) -> None:
        first, second = QHBoxLayout(), QHBoxLayout()
        width = _NUMBER_WIDTH * self.fontMetrics().averageCharWidth() + 12
        for field in (self.at, self.at_least, self.confidence):
            field.setMinimumWidth(width)
            field.setMaximumWidth(2 * width)
        what: tuple[QWidget, ...] = (self.kind, self.before_at, self.at, self.after_at)
        least: tuple[QWidget, ...] = (QLabel("at least"), self.at_least, self.after_least)
        sure: tuple[QWidget, ...] = (QLabel("with"), self.confidence, QLabel("% confidence"))
        buttons = (self.set_button, self.withdraw_button)
        for row, parts in ((first, (*what, *least)), (second, (*sure, *buttons))):
            for part in parts:
                row.addWidget(part)
            row.addStretch(1)
        self.trouble.setVisible(False)
        column = QVBoxLayout(self)
        column.setContentsMargins(6, 6, 6, 6)
        column.addLayout(first)
        column.addLayout(second)
        column.addWidget(self.trouble)
        column.addWidget(self.verdict)
        column.addWidget(self.adjusted)
        column.addWidget(self.log, 1)
