"""The basis panel: family, threshold, fit method, held shape, kind of bound, confidence and side of the set shown."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from math import inf

from PySide6.QtWidgets import QCheckBox, QComboBox, QFormLayout, QGroupBox, QHBoxLayout, QLabel, QWidget

from reliability_app.engine.bounds.kinds import BOUND_KINDS, LEAST_CONFIDENCE, MOST_CONFIDENCE
from reliability_app.engine.families import CATALOGUE
from reliability_app.engine.families.shaped_family import THRESHOLD_BASES
from reliability_app.engine.methods import methods_for
from reliability_app.session.document import Basis
from reliability_app.session.edits import ChangeBasis, Edit
from reliability_app.session.numbers import UnreadableNumber, read_number
from reliability_app.session.wording import BOUND_TITLES, SIDE_TITLES, as_given
from reliability_app.windows.entry_line import EntryLine

USUAL_CONFIDENCES = (0.80, 0.90, 0.95, 0.99)
# A shape to begin with where one is to be held: wear-out of middling sharpness, to be replaced by the user's own.
FIRST_SHAPE_HELD = 2.0
_ESTIMATED, _HELD = "estimated", "held"
_MAXIMUM_LIKELIHOOD = Basis().fit
_WITH_THRESHOLD = frozenset(entry.name for entry in THRESHOLD_BASES)
_WITH_HELD_SHAPE = "weibull"


class BasisPanel(QGroupBox):
    """Shows a basis and turns each choice into an edit."""

    def __init__(self, push_edit: Callable[[Edit], None], parent: QWidget | None = None) -> None:
        super().__init__("Basis", parent)
        self._push_edit = push_edit
        self._basis = Basis()
        self._set_index = 0
        self.family = _choice("Family", [(entry.title, entry.name) for entry in CATALOGUE])
        self.threshold = QCheckBox("with &threshold")
        self.threshold.setAccessibleName("With threshold")
        self.threshold.setToolTip("Estimate a threshold too, below which no unit fails")
        self.fit = _choice("Fit method", [])
        # The longest name of a method does not make the page of the units wider.
        self.fit.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.fit.setMinimumContentsLength(16)
        self.shape = _choice("Shape", [("Estimated", _ESTIMATED), ("Held at", _HELD)])
        self.held_shape = EntryLine()
        self.held_shape.setAccessibleName("Shape held")
        self.bound = _choice("Bound", [(BOUND_TITLES[kind].capitalize(), kind) for kind in BOUND_KINDS])
        self.confidence = _choice("Confidence", [(_percent(level), level) for level in USUAL_CONFIDENCES])
        self.side = _choice("Side", [(title.capitalize(), side) for side, title in SIDE_TITLES.items()])
        self.trouble = QLabel()
        self.trouble.setWordWrap(True)
        self.trouble.hide()
        self._make_confidence_editable()
        self._lay_out()
        self.family.activated.connect(self._take_family)
        self.threshold.clicked.connect(self._take_threshold)
        self.fit.activated.connect(self._take_fit)
        self.shape.activated.connect(self._take_shape_choice)
        self.held_shape.editingFinished.connect(self._take_held_shape)
        self.bound.activated.connect(lambda: self._choose(bound=self.bound.currentData()))
        self.side.activated.connect(lambda: self._choose(side=self.side.currentData()))

    def show_basis(self, set_index: int, basis: Basis) -> None:
        """Show the basis of a set; a name this version does not have is shown as it is."""
        self._set_index, self._basis = set_index, basis
        self.trouble.hide()
        _select(self.family, basis.family, basis.family)
        self.threshold.setChecked(basis.threshold)
        self.threshold.setVisible(basis.threshold or basis.family in _WITH_THRESHOLD)
        self._show_methods(basis)
        self._show_shape(basis)
        _select(self.bound, basis.bound, BOUND_TITLES.get(basis.bound, basis.bound).capitalize())
        _select(self.side, basis.side, basis.side)
        self.confidence.setCurrentIndex(self.confidence.findData(basis.confidence))
        self.confidence.setEditText(_percent(basis.confidence))

    def _lay_out(self) -> None:
        self._rows = QFormLayout(self)
        self._rows.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.AllNonFixedFieldsGrow)
        self._shape_row = _side_by_side(self.shape, self.held_shape)
        for label, field, buddy in (
            ("Fa&mily", _side_by_side(self.family, self.threshold), self.family),
            ("Fit meth&od", self.fit, self.fit),
            ("Sh&ape", self._shape_row, self.shape),
            ("&Bound", self.bound, self.bound),
            ("&Confidence", self.confidence, self.confidence),
            ("Si&de", self.side, self.side),
        ):
            title = QLabel(label)
            title.setBuddy(buddy)
            self._rows.addRow(title, field)
        self._rows.addRow(self.trouble)

    def _show_methods(self, basis: Basis) -> None:
        """List the fit methods of a family; one that it does not have, or nobody knows, is shown as it is."""
        known = basis.family in {entry.name for entry in CATALOGUE}
        self.fit.clear()
        for method in methods_for(None, basis.family) if known else (_MAXIMUM_LIKELIHOOD,):
            self.fit.addItem(_opening(method), method)
        if self.fit.findData(basis.fit) < 0:
            self.fit.addItem(f"{_opening(basis.fit)} (not for this family)", basis.fit)
        self.fit.setCurrentIndex(self.fit.findData(basis.fit))

    def _show_shape(self, basis: Basis) -> None:
        held = basis.shape is not None
        self._rows.setRowVisible(self._shape_row, held or basis.family == _WITH_HELD_SHAPE)
        self.shape.setCurrentIndex(self.shape.findData(_HELD if held else _ESTIMATED))
        self.held_shape.setVisible(held)
        self.held_shape.setText("" if basis.shape is None else as_given(basis.shape))

    # One choice takes back those that do not go with it, so that a basis which cannot be carried out is not come to
    # by the way; all of it is one step to undo.

    def _take_family(self) -> None:
        family, change = self.family.currentData(), {"family": self.family.currentData()}
        known = family in {entry.name for entry in CATALOGUE}
        if known and self._basis.fit not in methods_for(None, family):
            change["fit"] = _MAXIMUM_LIKELIHOOD
        if family not in _WITH_THRESHOLD:
            change["threshold"] = False
        if family != _WITH_HELD_SHAPE:
            change["shape"] = None
        self._choose(**change)

    def _take_threshold(self) -> None:
        if self.threshold.isChecked():
            self._choose(threshold=True, fit=_MAXIMUM_LIKELIHOOD, shape=None)
        else:
            self._choose(threshold=False)

    def _take_fit(self) -> None:
        method = self.fit.currentData()
        self._choose(**({"fit": method} if method == _MAXIMUM_LIKELIHOOD else _alone(fit=method)))

    def _take_shape_choice(self) -> None:
        if self.shape.currentData() == _ESTIMATED:
            self._choose(shape=None)
        elif self._basis.shape is None:
            self._choose(**_alone(shape=FIRST_SHAPE_HELD))
            self.held_shape.setFocus()
            self.held_shape.selectAll()

    def _take_held_shape(self) -> None:
        if self._basis.shape is None:
            return
        try:
            shape = read_number(self.held_shape.text())
        except UnreadableNumber:
            shape = 0.0
        usable = 0.0 < shape < inf
        self.trouble.setText(f"{self.held_shape.text()!r} cannot be used as a shape: type a positive number.")
        self.trouble.setVisible(not usable)
        if usable:
            self._choose(shape=shape)
        self.held_shape.setText(as_given(self._basis.shape))

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


def _alone(**change: object) -> dict[str, object]:
    """Return a change of fit method or shape, with what cannot go with it taken back."""
    return {"threshold": False, "fit": _MAXIMUM_LIKELIHOOD, "shape": None, **change}


def _opening(method: str) -> str:
    return method[:1].upper() + method[1:]


def _side_by_side(*widgets: QWidget) -> QWidget:
    row = QWidget()
    layout = QHBoxLayout(row)
    layout.setContentsMargins(0, 0, 0, 0)
    for place, widget in enumerate(widgets):
        layout.addWidget(widget, 1 if place == 0 else 0)
    return row


def _select(box: QComboBox, data: str, title: str) -> None:
    """Select an entry; one that is unknown here is added, so that it is shown and not changed."""
    if box.findData(data) < 0:
        box.addItem(f"{title} (not in this version)", data)
    box.setCurrentIndex(box.findData(data))


def _percent(level: float) -> str:
    return f"{as_given(100 * level)} %"
