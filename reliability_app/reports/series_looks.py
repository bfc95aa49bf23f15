"""The looks of charts: colour, mark and dash of a set always say the same, on the screen and in print.

Plain Python without numpy: the window's theme needs the hues before the first paint.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

Dash = Literal["solid", "dash", "dash dot", "dot", "dash dot dot"]
Symbol = Literal["round", "square", "triangle", "diamond", "triangle down", "pentagon", "hexagon", "upright tick"]

# Hues of Okabe and Ito (2002, "Color universal design"), in an order in which neighbours differ most. The first and
# the sixth change places between light and dark so that each stays readable on its ground.
HUES_ON_LIGHT = ("#0072B2", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#56B4E9", "#000000")
HUES_ON_DARK = ("#56B4E9", "#D55E00", "#009E73", "#CC79A7", "#E69F00", "#F0E442", "#FFFFFF")
SYMBOLS: tuple[Symbol, ...] = ("round", "square", "triangle", "diamond", "triangle down", "pentagon", "hexagon")
DASHES: tuple[Dash, ...] = ("solid", "dash", "dash dot", "dot", "dash dot dot", "dash", "dash dot")

# Print is always on white: the tones of the window's light theme.
PAPER, INK, MUTED, GRID, FINE_GRID = "#ffffff", "#1d2125", "#838587", "#dfe0e0", "#f1f2f2"
BAND_STRENGTH = 0.12
"""How strongly the ground of a band is coloured."""
CANDIDATE_DASHES: tuple[Dash, ...] = ("dash", "dot", "dash dot", "dash dot dot")
"""The dashes of candidates on the paper, thin and grey beside the line of the basis."""


@dataclass(frozen=True)
class SeriesLook:
    """How one set is drawn."""

    colour: str
    symbol: Symbol
    dash: Dash


PRINT_LOOKS = tuple(
    SeriesLook(hue, symbol, dash) for hue, symbol, dash in zip(HUES_ON_LIGHT, SYMBOLS, DASHES, strict=True)
)


def print_look(colour: int) -> SeriesLook:
    """Return the look of a set's colour index in print; indices beyond the palette start over."""
    return PRINT_LOOKS[colour % len(PRINT_LOOKS)]


def ink_on(colour: str) -> str:
    """Return black or white, whichever reads better on a colour "#rrggbb" (contrast of WCAG 2.1, 1.4.3)."""
    red, green, blue = (_linear_light(int(colour[at : at + 2], 16) / 255.0) for at in (1, 3, 5))
    luminance = 0.2126 * red + 0.7152 * green + 0.0722 * blue
    return "#000000" if (luminance + 0.05) ** 2 > 1.05 * 0.05 else "#ffffff"


def _linear_light(part: float) -> float:
    return part / 12.92 if part <= 0.04045 else float(((part + 0.055) / 1.055) ** 2.4)
