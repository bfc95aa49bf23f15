"""Light and dark: the program's palettes, and the colours, marks and dashes of the charts that go with a palette."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from PySide6.QtCore import Qt
from PySide6.QtGui import QColor, QPalette
from PySide6.QtWidgets import QApplication

Scheme = Literal["light", "dark", "system"]

_SYSTEM_STYLE = "rigpaper_system_style"  # where the application keeps the name of the style it came with

# Hues of Okabe and Ito (2002, "Color universal design"), in an order in which neighbours differ most. The first and
# the sixth change places between light and dark so that each stays readable on its ground.
_ON_LIGHT = ("#0072B2", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#56B4E9", "#000000")
_ON_DARK = ("#56B4E9", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#F0E442", "#FFFFFF")
_SYMBOLS = ("o", "s", "t1", "d", "t", "p", "h")
_DASHES = (
    Qt.PenStyle.SolidLine,
    Qt.PenStyle.DashLine,
    Qt.PenStyle.DashDotLine,
    Qt.PenStyle.DotLine,
    Qt.PenStyle.DashDotDotLine,
    Qt.PenStyle.DashLine,
    Qt.PenStyle.DashDotLine,
)


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
    hues = _ON_DARK if is_dark else _ON_LIGHT
    return Theme(
        background=ground.name(),
        foreground=ink.name(),
        muted=_blend(ground, ink, 0.55),
        grid=_blend(ground, ink, 0.17 if is_dark else 0.14),
        fine_grid=_blend(ground, ink, 0.08 if is_dark else 0.06),
        series=tuple(SeriesStyle(hue, symbol, dash) for hue, symbol, dash in zip(hues, _SYMBOLS, _DASHES, strict=True)),
        is_dark=is_dark,
    )


def ink_on(colour: str) -> str:
    """Return black or white, whichever reads better on `colour` (contrast of WCAG 2.1, 1.4.3)."""
    red, green, blue = (_linear_light(part) for part in _parts(QColor(colour)))
    luminance = 0.2126 * red + 0.7152 * green + 0.0722 * blue
    return "#000000" if (luminance + 0.05) ** 2 > 1.05 * 0.05 else "#ffffff"


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


def _linear_light(part: float) -> float:
    return part / 12.92 if part <= 0.04045 else ((part + 0.055) / 1.055) ** 2.4
