"""The basis panel: family, kind of bound, confidence and side of the set shown."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from PySide6.QtWidgets import QComboBox, QFormLayout, QGroupBox, QLabel, QWidget

from reliability_app.engine.bounds.kinds import BOUND_KINDS, LEAST_CONFIDENCE, MOST_CONFIDENCE
from reliability_app.engine.families import CATALOGUE
from reliability_app.session.document import Basis
from reliability_app.session.edits import ChangeBasis, Edit
from reliability_app.session.wording import BOUND_TITLES, SIDE_TITLES, as_given
from reliability_app.windows.entry_line import EntryLine

USUAL_CONFIDENCES = (0.80, 0.90, 0.95, 0.99)


class BasisPanel(QGroupBox):
    """Shows a basis and turns each choice into an edit."""

    def __init__(self, push_edit: Callable[[Edit], None], parent: QWidget | None = None) -> None:
        super().__init__("Basis", parent)
        self._push_edit = push_edit
        self._basis = Basis()
        self._set_index = 0
        self.family = _choice("Family", [(entry.title, entry.name) for entry in CATALOGUE])
        self.bound = _choice("Bound", [(BOUND_TITLES[kind].capitalize(), kind) for kind in BOUND_KINDS])
        self.confidence = _choice("Confidence", [(_percent(level), level) for level in USUAL_CONFIDENCES])
        self.side = _choice("Side", [(title.capitalize(), side) for side, title in SIDE_TITLES.items()])
        self.trouble = QLabel()
        self.trouble.setWordWrap(True)
        self.trouble.hide()
        self._make_confidence_editable()
        layout = QFormLayout(self)
        layout.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.AllNonFixedFieldsGrow)
        for label, field in (
            ("Fa&mily", self.family),
            ("&Bound", self.bound),
            ("&Confidence", self.confidence),
            ("Si&de", self.side),
        ):
            layout.addRow(label, field)
        layout.addRow(self.trouble)
        self.family.activated.connect(lambda: self._choose(family=self.family.currentData()))
        self.bound.activated.connect(lambda: self._choose(bound=self.bound.currentData()))
        self.side.activated.connect(lambda: self._choose(side=self.side.currentData()))

    def show_basis(self, set_index: int, basis: Basis) -> None:
        """Show the basis of a set; a name this version does not have is shown as it is."""
        self._set_index, self._basis = set_index, basis
        _select(self.family, basis.family, basis.family)
        _select(self.bound, basis.bound, BOUND_TITLES.get(basis.bound, basis.bound).capitalize())
        _select(self.side, basis.side, basis.side)
        self.confidence.setCurrentIndex(self.confidence.findData(basis.confidence))
        self.confidence.setEditText(_percent(basis.confidence))

    def _make_confidence_editable(self) -> None:
        self.confidence.setEditable(True)
        self.confidence.setInsertPolicy(QComboBox.InsertPolicy.NoInsert)
        line = EntryLine()
        line.setAccessibleName("Confidence in percent")
        line.editingFinished.connect(self._take_confidence)
        self.confidence.setLineEdit(line)
        self.confidence.setCompleter(None)  # type: ignore[arg-type]  # None takes the completer away
        self.confidence.activated.connect(self._take_confidence)

    def _take_confidence(self) -> None:
        text = self.confidence.currentText().replace("%", "").replace(",", ".").strip()
        try:
            given = float(text)
        except ValueError:
            given = 0.0
        level = round(given if 0.5 < given < 1.0 else given / 100.0, 12)
        usable = LEAST_CONFIDENCE < level <= MOST_CONFIDENCE
        self.trouble.setText(
            f"{self.confidence.currentText()!r} cannot be used: type a percent above 50 and below 100."
        )
        self.trouble.setVisible(not usable)
        if usable:
            self._choose(confidence=level)
        self.confidence.setEditText(_percent(self._basis.confidence))

    def _choose(self, **change: object) -> None:
        chosen = replace(self._basis, **change)  # type: ignore[arg-type]  # fields named by the callers above
        if chosen != self._basis:
            old, self._basis = self._basis, chosen
            self._push_edit(ChangeBasis(self._set_index, old, chosen))


def _choice(name: str, entries: list[tuple[str, object]]) -> QComboBox:
    box = QComboBox()
    box.setAccessibleName(name)
    for title, data in entries:
        box.addItem(title, data)
    return box


def _select(box: QComboBox, data: str, title: str) -> None:
    """Select an entry; one that is unknown here is added, so that it is shown and not changed."""
    if box.findData(data) < 0:
        box.addItem(f"{title} (not in this version)", data)
    box.setCurrentIndex(box.findData(data))


def _percent(level: float) -> str:
    return f"{as_given(100 * level)} %"
