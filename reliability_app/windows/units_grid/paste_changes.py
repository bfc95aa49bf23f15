"""The panel that changes how a table is read: what its columns and words mean, its numbers and dates, its headings."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from PySide6.QtCore import QSize, Qt, Signal
from PySide6.QtGui import QWheelEvent
from PySide6.QtWidgets import QCheckBox, QComboBox, QFormLayout, QFrame, QLabel, QLineEdit, QScrollArea, QWidget

from reliability_app.session.date_columns import DATE_MEANINGS
from reliability_app.session.date_lives import DateLives
from reliability_app.session.dates import DayOrder, read_date, written
from reliability_app.session.numbers import DecimalMark, quoted
from reliability_app.session.states import FAILED, RUNNING, STATES, read_answer
from reliability_app.session.understanding import Understanding
from reliability_app.session.unit_table import BUILT_IN_COLUMNS, HEADINGS

_OWN = "Kept beside"
_MARKS = {DecimalMark.POINT: "Decimal point: 1,234.5", DecimalMark.COMMA: "Decimal comma: 1.234,5"}
_ORDERS = {DayOrder.DAY_FIRST: "Day first: 31/12/2025", DayOrder.MONTH_FIRST: "Month first: 12/31/2025"}
_DATE_UNITS = {"h": "Hours", "days": "Days", "weeks": "Weeks", "years": "Years of 365.25 days"}
_STATES = {state: state.capitalize() for state in STATES}
_MOST_WORDS = 20
_SAMPLES = 3
# The most that the panel takes of the height of the grid above it.
_SHARE = 0.35

Choose = Callable[[object], None]


class ChangePanel(QScrollArea):
    """One line per thing that can be read differently; a choice takes effect at once.

    Signals
    -------
    chosen(choice)
        The table is to be read with this choice: a mapping as `pasted_text.reread` takes it.
    """

    chosen = Signal(object)

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWidgetResizable(True)
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setAccessibleName("Read the table differently")
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.fields: list[QWidget] = []  # from above to below

    def show_choices(self, understood: Understanding) -> None:
        """Show what holds now; whatever had the focus has it again."""
        focused = self.focusWidget()
        name = focused.objectName() if focused is not None and focused.hasFocus() else ""
        # The choice just made comes from a part of the old form, which must outlive its signal.
        old = self.takeWidget()
        if old is not None:
            old.hide()
            old.deleteLater()
        self.fields = []
        form = QWidget()
        lines = QFormLayout(form)
        lines.setContentsMargins(0, 4, 4, 4)
        lines.setVerticalSpacing(3)
        lines.setFieldGrowthPolicy(QFormLayout.FieldGrowthPolicy.AllNonFixedFieldsGrow)
        self._add_columns(lines, understood)
        self._add_states(lines, understood)
        self._add_marks(lines, understood)
        if understood.dates is not None:
            self._add_dates(lines, understood.dates)
        self._add_headings(lines, understood)
        self.setWidget(form)
        self.updateGeometry()
        again = form.findChild(QWidget, name) if name else None
        if again is not None:
            again.setFocus()

    def sizeHint(self) -> QSize:
        """Ask for the height of the form, but for no more than a share of the grid's page."""
        form, strip = self.widget(), self.parentWidget()
        grid = strip.parentWidget() if strip is not None else None
        if form is None or grid is None:
            return super().sizeHint()
        most = round(_SHARE * grid.height())
        return QSize(super().sizeHint().width(), min(form.sizeHint().height() + 4, most))

    def minimumSizeHint(self) -> QSize:
        """Never less than a few lines."""
        return QSize(super().minimumSizeHint().width(), min(self.sizeHint().height(), 3 * self.fontMetrics().height()))

    def _read(self, **choices: object) -> None:
        self.chosen.emit(choices)

    def _add_columns(self, lines: QFormLayout, understood: Understanding) -> None:
        own: tuple[str, str | None] = (_OWN, None)
        options = [
            *((HEADINGS[key], key) for key in BUILT_IN_COLUMNS),
            *((v, k) for k, v in DATE_MEANINGS.items()),
            own,
        ]
        known = {key for _, key in options}
        for place in range(len(understood.columns)):
            meaning = understood.meaning(place)
            if meaning is None:
                continue

            def choose(key: object, place: int = place) -> None:
                self._read(columns={place: key})

            heading = understood.headings[place]
            named = f"Column {place + 1}" + (f" {quoted(heading, 24)}" if heading else "")
            samples = [cell for cell in understood.source.body[place][:50] if cell][:_SAMPLES]
            tip = f"{named} holds " + ", ".join(quoted(cell, 24) for cell in samples) if samples else named
            self._add(lines, named, options, meaning if meaning in known else None, choose, tip=tip)

    def _add_states(self, lines: QFormLayout, understood: Understanding) -> None:
        words = {word: state for word, state in understood.state_words.items() if word and word not in STATES}
        if any(read_answer(word, FAILED) for word in words):
            yes = [(_STATES[state], state) for state in (FAILED, RUNNING)]
            current = next((state for word, state in words.items() if read_answer(word, FAILED) == FAILED), None)
            self._add(lines, "Yes and 1 mean", yes, current, lambda state: self._read(yes_means=state))
            words = {word: state for word, state in words.items() if not read_answer(word, FAILED)}
        for word, state in list(words.items())[:_MOST_WORDS]:

            def choose(meant: object, word: str = word) -> None:
                self._read(states={word: meant})

            options = [(title, key) for key, title in _STATES.items()]
            self._add(lines, f"{quoted(word, 24)} means", options, state, choose)

    def _add_marks(self, lines: QFormLayout, understood: Understanding) -> None:
        places = range(len(understood.columns))
        if all(place in understood.source.true_numbers for place in places if understood.columns[place] == "life"):
            return
        current = understood.choices.mark or understood.mark
        options = [(title, mark) for mark, title in _MARKS.items()]
        self._add(lines, "Numbers", options, current, lambda mark: self._read(mark=mark))

    def _add_dates(self, lines: QFormLayout, dates: DateLives) -> None:
        orders = [(title, order) for order, title in _ORDERS.items()]
        self._add(lines, "Dates", orders, dates.order, lambda order: self._read(day_order=order))
        units = [(title, unit) for unit, title in _DATE_UNITS.items()]
        self._add(lines, "Lives in", units, dates.unit, lambda unit: self._read(date_unit=unit))
        if dates.end_means is not None:
            means = [(_STATES[state], state) for state in (FAILED, RUNNING)]
            self._add(lines, "An end date means", means, dates.end_means, lambda state: self._read(end_means=state))
        line = QLineEdit(dates.data_date)
        line.setObjectName("Date of the data")
        line.setAccessibleName("Date of the data: units without an end date run until then")
        line.setToolTip("Units without an end date run until then; empty for the latest date in the table")
        line.editingFinished.connect(lambda: self._take_date(line, dates.data_date))
        lines.addRow(_label("Date of the data"), line)
        self.fields.append(line)

    def _take_date(self, line: QLineEdit, before: str) -> None:
        """Take a date typed; what is none is put back as it was."""
        typed = line.text().strip()
        moment = read_date(typed) if typed else None
        if typed and moment is None:
            line.setText(before)
            line.setPlaceholderText("2025-04-03")
            return
        date = written(moment) if moment is not None else ""
        if date != before:
            self._read(data_date=date)

    def _add_headings(self, lines: QFormLayout, understood: Understanding) -> None:
        box = QCheckBox("First row holds headings")
        box.setObjectName("headings")
        box.setChecked(understood.source.heading_row is not None)
        box.clicked.connect(lambda checked: self._read(headings=checked))
        lines.addRow("", box)
        self.fields.append(box)

    def _add(
        self,
        lines: QFormLayout,
        title: str,
        options: Sequence[tuple[str, object]],
        current: object,
        choose: Choose,
        *,
        tip: str = "",
    ) -> None:
        box = Choice()
        box.setObjectName(title)
        box.setAccessibleName(title)
        box.setToolTip(tip)
        values = [value for _, value in options]
        for text, _ in options:
            box.addItem(text)
        box.setCurrentIndex(values.index(current) if current in values else -1)
        box.setPlaceholderText("Choose")
        box.activated.connect(lambda place: choose(values[place]))
        lines.addRow(_label(title, tip), box)
        self.fields.append(box)


class Choice(QComboBox):
    """A box that narrows with the page, and that the wheel scrolls past instead of changing it."""

    def __init__(self) -> None:
        super().__init__()
        self.setSizeAdjustPolicy(QComboBox.SizeAdjustPolicy.AdjustToMinimumContentsLengthWithIcon)
        self.setMinimumContentsLength(8)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)

    def wheelEvent(self, event: QWheelEvent) -> None:
        """Leave the wheel to the panel."""
        event.ignore()


def _label(text: str, tip: str = "") -> QLabel:
    label = QLabel(text)
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setToolTip(tip)
    label.setWordWrap(True)
    return label
