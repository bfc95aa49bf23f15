"""Asks in which format, size and resolution a picture is to be written."""

from __future__ import annotations

from PySide6.QtWidgets import (
    QComboBox,
    QDialog,
    QDialogButtonBox,
    QDoubleSpinBox,
    QFormLayout,
    QLabel,
    QSpinBox,
    QVBoxLayout,
    QWidget,
)

from reliability_app.reports.figure import Figure
from reliability_app.reports.figure_layout import sheet_height
from reliability_app.reports.picture_file import (
    FORMATS,
    LEAST_DPI,
    LEAST_SIDE,
    MOST_DPI,
    MOST_SIDE,
    POINTS_PER_MM,
)
from reliability_app.windows.settings import PictureChoice


class PictureDialog(QDialog):
    """Shows the choice made last; `choice` is the one made now."""

    def __init__(self, figure: Figure, last: PictureChoice, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setWindowTitle("Export picture")
        self._figure = figure
        self.format = QComboBox()
        for found in FORMATS.values():
            self.format.addItem(f"{found.title} ({found.suffix})", found.suffix)
        self.format.setCurrentIndex(max(0, self.format.findData(last.suffix)))
        self.width_mm, self.height_mm = _millimetres(last.width), _millimetres(last.height)
        self.dpi = QSpinBox(minimum=LEAST_DPI, maximum=MOST_DPI, singleStep=50, value=last.dpi, suffix=" dpi")
        self.hint = QLabel()
        self.hint.setWordWrap(True)
        self.hint.setFixedWidth(30 * self.fontMetrics().averageCharWidth())
        self._lay_out()
        for changed in (self.width_mm.valueChanged, self.height_mm.valueChanged, self.dpi.valueChanged):
            changed.connect(self._say_outcome)
        self.format.currentIndexChanged.connect(self._say_outcome)
        self._say_outcome()

    @property
    def choice(self) -> PictureChoice:
        """What is chosen."""
        suffix = str(self.format.currentData())
        return PictureChoice(suffix, self.width_mm.value(), self.height_mm.value(), self.dpi.value())

    def _lay_out(self) -> None:
        form = QFormLayout()
        fields: tuple[tuple[str, QWidget], ...] = (
            ("&Format", self.format),
            ("&Width", self.width_mm),
            ("&Height", self.height_mm),
            ("&Resolution", self.dpi),
        )
        for title, field in fields:
            form.addRow(title, field)
            field.setAccessibleName(title.replace("&", ""))
        buttons = QDialogButtonBox(QDialogButtonBox.StandardButton.Cancel)
        buttons.addButton("&Choose a file …", QDialogButtonBox.ButtonRole.AcceptRole)
        buttons.accepted.connect(self.accept)
        buttons.rejected.connect(self.reject)
        layout = QVBoxLayout(self)
        layout.setSizeConstraint(QVBoxLayout.SizeConstraint.SetFixedSize)
        layout.addLayout(form)
        layout.addWidget(self.hint)
        layout.addWidget(buttons)

    def _say_outcome(self) -> None:
        """Say how tall the picture becomes with its cautions, and of how many pixels it is."""
        chosen = self.choice
        has_pixels = FORMATS[chosen.suffix].has_pixels
        self.dpi.setEnabled(has_pixels)
        asked = POINTS_PER_MM * chosen.height
        height = sheet_height(self._figure, POINTS_PER_MM * chosen.width, asked) / POINTS_PER_MM
        said = []
        if height > chosen.height + 0.5:
            said.append(f"The readings and cautions below the chart need more room: {height:.0f} mm high.")
        if has_pixels:
            each = chosen.dpi / 25.4
            said.append(f"{chosen.width * each:.0f} by {height * each:.0f} pixels.")
        self.hint.setText(" ".join(said))


def _millimetres(value: float) -> QDoubleSpinBox:
    return QDoubleSpinBox(minimum=LEAST_SIDE, maximum=MOST_SIDE, decimals=0, singleStep=5.0, value=value, suffix=" mm")
