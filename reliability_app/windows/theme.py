"""Light and dark: the program's palettes, and the colours, marks and dashes of the charts that go with a palette."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QPalette
from PySide6.QtWidgets import QApplication

from reliability_app.reports.series_looks import DASHES, HUES_ON_DARK, HUES_ON_LIGHT, SYMBOLS, Dash, Symbol

Scheme = Literal["light", "dark", "system"]

_FRAMED = ("QCheckBox", "QRadioButton", "QLineEdit", "QComboBox", "QAbstractSpinBox")
_SYSTEM_STYLE = "rigpaper_system_style"  # where the application keeps the name of the style it came with

_SYMBOL_NAMES: dict[Symbol, str] = {
    "round": "o",
    "square": "s",
    "triangle": "t1",
    "diamond": "d",
    "triangle down": "t",
    "pentagon": "p",
    "hexagon": "h",
}
PEN_STYLES: dict[Dash, Qt.PenStyle] = {
    "solid": Qt.PenStyle.SolidLine,
    "dash": Qt.PenStyle.DashLine,
    "dash dot": Qt.PenStyle.DashDotLine,
    "dot": Qt.PenStyle.DotLine,
    "dash dot dot": Qt.PenStyle.DashDotDotLine,
}


@dataclass(frozen=True)
class SeriesStyle:
    """How one set is drawn: colour, mark (a pyqtgraph symbol name) and dash always say the same."""

    colour: str
    symbol: str
    dash: Qt.PenStyle


@dataclass(frozen=True)
class Theme:
    """The colours of the charts.

    Attributes
    ----------
    background, foreground : str
        Ground and text.
    muted : str
        Axis lines and what is of second rank.
    grid, fine_grid : str
        Lines at the labelled ticks, and between them.
    series : tuple of SeriesStyle
        One for each colour index of a set.
    is_dark : bool
    """

    background: str
    foreground: str
    muted: str
    grid: str
    fine_grid: str
    series: tuple[SeriesStyle, ...]
    is_dark: bool

    def style(self, colour: int) -> SeriesStyle:
        """Return the style of a set's colour index; indices beyond the palette start over."""
        return self.series[colour % len(self.series)]


def light() -> Theme:
    """Return the theme of the program's light palette."""
    return theme_of(light_palette())


def dark() -> Theme:
    """Return the theme of the program's dark palette."""
    return theme_of(dark_palette())


def theme_of(palette: QPalette) -> Theme:
    """Return the theme that goes with a palette, the system's own or one of the program's."""
    ground, ink = palette.color(QPalette.ColorRole.Base), palette.color(QPalette.ColorRole.Text)
    is_dark = ground.lightnessF() < ink.lightnessF()
    hues = HUES_ON_DARK if is_dark else HUES_ON_LIGHT
    return Theme(
        background=ground.name(),
        foreground=ink.name(),
        muted=_blend(ground, ink, 0.55),
        grid=_blend(ground, ink, 0.17 if is_dark else 0.14),
        fine_grid=_blend(ground, ink, 0.08 if is_dark else 0.06),
        series=tuple(
            SeriesStyle(hue, _SYMBOL_NAMES[symbol], PEN_STYLES[dash])
            for hue, symbol, dash in zip(hues, SYMBOLS, DASHES, strict=True)
        ),
        is_dark=is_dark,
    )


def apply_scheme(app: QApplication, scheme: Scheme) -> None:
    """Show the program in light, in dark, or as the system has it.

    Light and dark are palettes of our own on the Fusion style, because asking Qt for a colour scheme does nothing on
    a machine without a desktop theme.
    """
    if app.property(_SYSTEM_STYLE) is None:
        app.setProperty(_SYSTEM_STYLE, app.style().objectName())
    if scheme == "system":
        app.setStyle(str(app.property(_SYSTEM_STYLE)))
        app.setPalette(QPalette())
    else:
        app.setStyle("Fusion")
        app.setPalette(light_palette() if scheme == "light" else dark_palette())
        if scheme == "dark":
            _outline_controls(app)


def _outline_controls(app: QApplication) -> None:
    """Give controls a frame that shows in the dark.

    Fusion draws it in a darker shade of the control's Window colour, which these controls use for nothing else.
    """
    palette = app.palette()
    ground, text = (palette.color(role) for role in (QPalette.ColorRole.Window, QPalette.ColorRole.WindowText))
    palette.setColor(QPalette.ColorRole.Window, QColor(_blend(ground, text, 0.6)))
    for control in _FRAMED:
        app.setPalette(palette, control)  # type: ignore[arg-type]  # the stub says bytes, the call takes text only


def light_palette() -> QPalette:
    """Return the program's light palette."""
    return _palette("#f3f4f5", "#ffffff", "#1d2125", accent="#0067a3", link="#0067a3")


def dark_palette() -> QPalette:
    """Return the program's dark palette."""
    return _palette("#25282b", "#1a1c1e", "#e3e5e7", accent="#2f7fb3", link="#6cb8ee")


def _palette(window: str, base: str, ink: str, *, accent: str, link: str) -> QPalette:
    role = QPalette.ColorRole
    ground, sheet, text = QColor(window), QColor(base), QColor(ink)
    raised = QColor(_blend(ground, text, 0.06))
    palette = QPalette(text, raised, raised.lighter(140), raised.darker(160), raised.darker(130), text, sheet)
    for kind, colour in (
        (role.Window, ground),
        (role.WindowText, text),
        (role.Base, sheet),
        (role.AlternateBase, QColor(_blend(sheet, text, 0.03))),
        (role.Text, text),
        (role.Button, raised),
        (role.ButtonText, text),
        (role.ToolTipBase, QColor(_blend(sheet, text, 0.08))),
        (role.ToolTipText, text),
        (role.PlaceholderText, QColor(_blend(sheet, text, 0.55))),
        (role.Highlight, QColor(accent)),
        (role.HighlightedText, QColor("#ffffff")),
        (role.Link, QColor(link)),
        (role.LinkVisited, QColor(link)),
    ):
        palette.setColor(kind, colour)
    faint = QColor(_blend(ground, text, 0.45))
    for kind in (role.WindowText, role.Text, role.ButtonText):
        palette.setColor(QPalette.ColorGroup.Disabled, kind, faint)
    palette.setColor(QPalette.ColorGroup.Disabled, role.Highlight, QColor(_blend(ground, text, 0.2)))
    return palette


def _blend(ground: QColor, ink: QColor, share: float) -> str:
    """Return the colour that lies `share` of the way from the ground to the ink."""
    parts = zip(_parts(ground), _parts(ink), strict=True)
    return QColor.fromRgbF(*(low + share * (high - low) for low, high in parts)).name()


def _parts(colour: QColor) -> tuple[float, float, float]:
    return colour.redF(), colour.greenF(), colour.blueF()
