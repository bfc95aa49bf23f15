"""What pictures hold and how they are laid out: no label over another, no caution dropped, every part drawn."""

from __future__ import annotations

import subprocess
import sys
from dataclasses import replace
from datetime import date
from itertools import pairwise

import numpy as np
import pytest
from PySide6.QtGui import QColor, QImage

from reliability_app.engine.paper import AgeScale
from reliability_app.reports.axis_ticks import EVEN_ROOM
from reliability_app.reports.figure import Axis, Band, Figure, Line, Marks, Note, Outline, ShownReading, in_layers
from reliability_app.reports.figure_layout import lay_out, sheet_height
from reliability_app.reports.lettering import Lettering
from reliability_app.reports.page_figures import PAGES, figure_of
from reliability_app.reports.picture_file import image_of, picture_bytes
from reliability_app.reports.reading_mark import ReadingMark
from reliability_app.reports.shown import Shown, shown_of
from reliability_app.session.document import HazardAsk, ReliabilityAsk
from tests.windows.chart_pictures import NONE_FAILED, PUMPS, analysis

SIDE = 100.0  # mm


def plain(*parts: object, **more: object) -> Figure:
    """A figure of parts over 0 to 10 on both axes, without words."""
    ticks = AgeScale("linear").ticks
    axis = Axis("", 0.0, 10.0, ticks, EVEN_ROOM)
    return Figure("", axis, axis, parts, **more)


def drawn(figure: Figure) -> tuple[QImage, object]:
    return image_of(figure, size_mm=(SIDE, SIDE), dpi=144), lay_out(figure, SIDE * 72 / 25.4, SIDE * 72 / 25.4)


def tone(figure: Figure, x: float, y: float) -> QColor:
    """The colour at a point of the chart; two pixels are a point of the layout."""
    image, layout = drawn(figure)
    return image.pixelColor(round(2 * layout.x(x)), round(2 * layout.y(y)))


def ink(figure: Figure) -> int:
    """How many pixels are not white."""
    image = image_of(figure, size_mm=(SIDE, SIDE), dpi=72)
    return sum(image.pixelColor(x, y).lightness() < 250 for x in range(image.width()) for y in range(image.height()))


@pytest.mark.parametrize("size", [(60.0, 60.0), (160.0, 110.0), (297.0, 210.0)])
@pytest.mark.parametrize("page", PAGES)
def test_labels_keep_apart_and_inside_at_every_size(page: str, size: tuple[float, float], two_sets: Shown) -> None:
    width, height = (side * 72 / 25.4 for side in size)
    layout = lay_out(PAGES[page](two_sets), width, height)
    letters = layout.letters
    level = [(layout.x(t.position), letters.width(t.label)) for t in layout.level_ticks if t.major]
    assert len(level) >= 2
    assert all(b - a > 0.5 * (wide_a + wide_b) for (a, wide_a), (b, wide_b) in pairwise(level))
    assert max(x + 0.5 * wide for x, wide in level) <= width
    upright = sorted(layout.y(t.position) for t in layout.upright_ticks if t.major)
    assert all(b - a > letters.line_height for a, b in pairwise(upright))
    assert upright[0] - 0.5 * letters.line_height > layout.title_base + letters.line_height - letters.ascent
    assert layout.area.height() > 0.2 * height


def test_every_caution_stands_in_the_foot_however_small_the_picture(two_sets: Shown) -> None:
    figure = PAGES["paper"](two_sets)
    small = lay_out(figure, 120.0, 120.0)
    assert " ".join(small.foot_lines).split() == " ".join((*figure.foot, figure.origin)).split()
    assert small.height > 120.0
    assert sheet_height(figure, 120.0, 120.0) == small.height
    assert small.foot_top + len(small.foot_lines) * small.foot_letters.line_height < small.height
    assert max(small.foot_letters.width(line) for line in small.foot_lines) <= 120.0


def test_the_foot_says_reading_basis_cautions_and_date() -> None:
    shown = replace(shown_of([analysis(PUMPS)], "h"), on=date(2025, 3, 14))
    figure = PAGES["paper"](shown)
    said = "\n".join(figure.foot)
    assert "Design A: B10 life" in said
    assert "With 95 % confidence at least" in said
    assert "(Lognormal, maximum likelihood, 9 failed of 13, likelihood ratio bound)" in said
    assert "responsible, qualified engineer" in said
    assert figure.origin.endswith(", 2025-03-14")
    assert figure.title == "Design A — Lognormal paper"
    assert figure.under("Rig 2").title == "Rig 2 — Design A — Lognormal paper"


def test_several_sets_say_each_caution_once_and_whose_it_is(two_sets: Shown) -> None:
    lines = two_sets.statement.splitlines()
    assert [line.split(":")[0] for line in lines[:2]] == ["Design A", "Design B"]
    assert len(lines) == len(set(lines))
    assert sum("responsible, qualified engineer" in line for line in lines) == 1
    assert any(line.startswith("!! Design B: Only 3 units have failed") for line in lines)


def test_units_without_a_failure_are_drawn_without_a_fit() -> None:
    shown = shown_of([analysis(NONE_FAILED)], "h")
    assert PAGES["paper"](shown).reading is None
    assert [part.edge_row for part in PAGES["paper"](shown).parts if isinstance(part, Marks) and part.x.size] == [0]
    assert "no estimate" in PAGES["hazard"](shown).empty_text
    assert all(len(picture_bytes(build(shown), ".svg")) > 1000 for build in PAGES.values())
    assert PAGES["survival"](Shown(())).empty_text
    assert figure_of("Nonesuch", shown) is None


@pytest.mark.parametrize("ask", [ReliabilityAsk(1500.0), HazardAsk(1500.0)])
def test_a_reading_at_an_age_is_marked_on_every_page(ask: ReliabilityAsk | HazardAsk) -> None:
    shown = shown_of([analysis(PUMPS, ask=ask)], "h")
    without_ages = ("likelihood", "residuals")
    marks = {name: build(shown).reading for name, build in PAGES.items() if name not in without_ages}
    assert all(reading is not None and reading.mark.age_text == "1500 h" for reading in marks.values())
    bounded = marks["survival" if isinstance(ask, ReliabilityAsk) else "hazard"]
    assert bounded is not None
    assert bounded.mark.along == "value"


def test_a_crowd_of_marks_is_drawn_once_where_no_eye_could_tell() -> None:
    x = np.repeat(np.linspace(1.0, 9.0, 40), 2500)
    crowd = plain(Marks(x, x, "#0072B2", "round", True))
    few = plain(Marks(x[::2500], x[::2500], "#0072B2", "round", True))
    assert len(picture_bytes(crowd, ".svg")) < 1.2 * len(picture_bytes(few, ".svg"))


def test_every_part_is_drawn_where_it_is_and_not_beyond_the_chart() -> None:
    square_x, square_y = np.array([2.0, 8, 8, 2]), np.array([2.0, 2, 8, 8])
    region = plain(Outline(square_x, square_y, "#D55E00", strength=0.5))
    assert tone(region, 5.0, 5.0).red() > tone(region, 5.0, 5.0).blue() + 50
    assert tone(region, 1.3, 5.3) == QColor("white")
    band = plain(Band(np.array([-50.0, 50]), np.array([4.0, 4]), np.array([60.0, 60]), "#009E73", strength=1.0))
    assert tone(band, 0.3, 9.3) == tone(band, 9.3, 4.3) == QColor("#009E73")
    assert tone(band, 5.3, 3.3) == QColor("white")
    image, layout = drawn(band)
    assert image.pixelColor(round(2 * layout.x(10.0)) + 8, round(2 * layout.y(5.3))) == QColor("white")
    assert tone(plain(Marks(square_x, square_y, "#0072B2", "diamond", True)), 8.0, 2.0) == QColor("#0072B2")
    nothing = ink(plain())
    assert ink(plain(Note(5.0, 5.0, "Weibull"))) > nothing + 40
    assert ink(plain(Note(15.0, 5.0, "Weibull"))) == nothing
    assert ink(plain(Line(square_x, np.full(4, np.nan), "#0072B2"))) == nothing


def test_a_bound_beyond_the_picture_is_told_at_its_edge() -> None:
    def with_lower(lower: float) -> Figure:
        mark = ReadingMark(5.0, 5.0, "age", lower, None, "5 h", "10 %", f"{lower:g} h", "")
        return plain(reading=ShownReading(mark, "#0072B2", "value"))

    # The bracket is thick from its end to the ring, and nothing of it stands left of the chart.
    assert tone(with_lower(3.0), 4.0, 5.0) == QColor("#0072B2")
    assert tone(with_lower(-400.0), 4.0, 5.0) == QColor("#0072B2")
    image, layout = drawn(with_lower(-400.0))
    beside = round(2 * (layout.area.left() - 2.0 * layout.letters.unit))
    assert image.pixelColor(beside, round(2 * layout.y(5.0))) != QColor("#0072B2")


def test_grounds_lie_below_lines_and_lines_below_marks() -> None:
    x = np.array([1.0, 2])
    of_set = [Marks(x, x, "#000000", "round", True), Line(x, x, "#000000"), Band(x, x, x, "#000000")]
    assert [type(part) for part in in_layers([of_set, of_set])] == [Band, Band, Line, Line, Marks, Marks]


def test_text_is_wrapped_to_the_width_and_loses_nothing() -> None:
    letters = Lettering(8.0)
    text = "A word and an unbrokenlongwordthatfitsnowhere then more\nsecond paragraph"
    lines = letters.wrapped(text, 60.0)
    assert max(map(letters.width, lines)) <= 60.0
    assert "".join("".join(lines).split()) == "".join(text.split())
    assert letters.times(2.0).width(text) == pytest.approx(2.0 * letters.width(text))


def test_pictures_need_neither_the_window_nor_its_charts() -> None:
    script = (
        "import importlib, pkgutil, sys, reliability_app.reports.page_figures\n"
        "assert 'PySide6' not in sys.modules, 'the description of figures needs no Qt'\n"
        "import reliability_app.reports as floor\n"
        "[importlib.import_module(room.name) for room in pkgutil.walk_packages(floor.__path__, floor.__name__ + '.')]\n"
        "print(*sys.modules)"
    )
    # A process of its own: this one has imported the window already.
    run = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, timeout=60, check=False)
    assert run.returncode == 0, run.stderr
    modules = run.stdout.split()
    assert "PySide6.QtSvg" in modules
    assert not {"pyqtgraph", "PySide6.QtWidgets", "pandas", "jinja2"} & set(modules)
    assert not [name for name in modules if name.startswith("reliability_app.windows")]
