"""A picture looks the same as SVG, PDF and PNG, holds no bitmap, and is written whole or not at all."""

from __future__ import annotations

import os
import re
import stat
import xml.etree.ElementTree as ET
import zlib
from dataclasses import replace
from pathlib import Path

import pypdfium2
import pytest
from PySide6.QtGui import QImage

from reliability_app.reports.figure import Figure, Marks
from reliability_app.reports.page_figures import PAGES
from reliability_app.reports.picture_file import (
    PictureNotWritten,
    PictureRefused,
    image_of,
    picture_bytes,
    write_picture,
)
from reliability_app.reports.shown import Shown
from tests.reports.rasters import difference, pixels, written

ALIKE = 20.0
"""Of 255 tones, over squares of 8 pixels; a mark that is missing makes far more (see the test of that)."""
SVG = "{http://www.w3.org/2000/svg}"


def without_one_mark(figure: Figure) -> Figure:
    at = max(place for place, part in enumerate(figure.parts) if isinstance(part, Marks) and part.filled)
    marks = figure.parts[at]
    assert isinstance(marks, Marks)
    fewer = replace(marks, x=marks.x[1:], y=marks.y[1:], counts=None)
    return replace(figure, parts=(*figure.parts[:at], fewer, *figure.parts[at + 1 :]))


@pytest.mark.parametrize("page", PAGES)
def test_the_three_formats_look_the_same(page: str, two_sets: Shown, tmp_path: Path) -> None:
    paths = written(PAGES[page](two_sets), tmp_path)
    image = pixels(paths[".png"])
    assert image.min() < 60
    assert difference(image, pixels(paths[".svg"])) < ALIKE
    assert difference(image, pixels(paths[".pdf"])) < ALIKE


def test_a_missing_mark_would_be_seen(two_sets: Shown, tmp_path: Path) -> None:
    figure = PAGES["paper"](two_sets)
    image = pixels(written(figure, tmp_path)[".png"])
    poorer = written(without_one_mark(figure), tmp_path)
    assert all(difference(image, pixels(path)) > 2.0 * ALIKE for path in poorer.values())


def test_a_drawing_has_outlines_only_and_says_its_words(two_sets: Shown) -> None:
    svg = picture_bytes(PAGES["paper"](two_sets), ".svg", size_mm=(160.0, 110.0))
    root = ET.fromstring(svg)
    found = {element.tag.removeprefix(SVG) for element in root.iter()}
    assert found <= {"svg", "title", "desc", "defs", "g", "path", "polyline", "polygon", "rect", "circle", "ellipse"}
    assert b"non-scaling-stroke" not in svg
    assert float(root.attrib["width"].removesuffix("mm")) == pytest.approx(160.0, abs=0.01)
    assert float(root.attrib["height"].removesuffix("mm")) == pytest.approx(110.0, abs=0.01)
    said = root.findtext(f"{SVG}desc") or ""
    assert "Design B: B10 life" in said
    assert "2025-03-14" in said


def test_a_document_has_its_fonts_inside_no_bitmap_and_text_to_search(one_set: Shown, tmp_path: Path) -> None:
    path = tmp_path / "page.pdf"
    write_picture(PAGES["survival"](one_set), path, size_mm=(200.0, 120.0))
    data = path.read_bytes()
    objects = data + b"".join(_inflated(data))
    fonts = len(re.findall(rb"/Type\s*/FontDescriptor", objects))
    assert fonts >= 1
    assert len(re.findall(rb"/FontFile[23]?\b", objects)) == fonts
    assert not re.search(rb"/Subtype\s*/Image", objects)
    with pypdfium2.PdfDocument(path) as document:
        assert len(document) == 1
        # Qt rounds a page to whole points: 0.35 mm.
        assert document[0].get_size() == pytest.approx((200.0 * 72 / 25.4, 120.0 * 72 / 25.4), abs=0.51)
        text = document[0].get_textpage().get_text_range()
    assert "Age (h)" in text
    assert "responsible, qualified engineer" in " ".join(text.split())


def test_any_name_makes_a_drawing_that_can_be_read(two_sets: Shown, tmp_path: Path) -> None:
    pictures = tuple(replace(picture, name='<b> & "c"\x01\x0b\udcff 泵') for picture in two_sets.pictures)
    figure = PAGES["paper"](replace(two_sets, pictures=pictures, statement='<b> & "c"\x01: B10 life'))
    paths = written(figure.under("]]>\x00"), tmp_path)
    root = ET.parse(paths[".svg"]).getroot()
    assert (root.findtext(f"{SVG}desc") or "").startswith('<b> & "c" : B10 life')
    assert difference(pixels(paths[".png"]), pixels(paths[".pdf"])) < 2.0 * ALIKE


def _inflated(data: bytes) -> list[bytes]:
    streams = []
    for found in re.finditer(rb"stream\r?\n(.*?)endstream", data, re.DOTALL):
        try:
            streams.append(zlib.decompress(found[1]))
        except zlib.error:
            continue
    return streams


def test_an_image_has_the_size_and_resolution_asked_for(one_set: Shown, tmp_path: Path) -> None:
    path = tmp_path / "page.png"
    write_picture(PAGES["hazard"](one_set), path, size_mm=(127.0, 101.6), dpi=100)
    image = QImage(str(path))
    assert (image.width(), image.height()) == (500, 400)
    assert image.dotsPerMeterX() == pytest.approx(100 / 0.0254, abs=1)
    assert "B10 life" in image.text("Description")


def test_the_same_figure_gives_the_same_drawing(one_set: Shown) -> None:
    figure = PAGES["paper"](one_set)
    assert picture_bytes(figure, ".svg") == picture_bytes(figure, ".svg")
    assert image_of(figure, dpi=80) == image_of(figure, dpi=80)


@pytest.mark.parametrize(
    ("name", "how", "said"),
    [
        ("page.gif", {}, ".svg, .pdf or .png"),
        ("page", {}, "has no ending"),
        ("page.svg", {"size_mm": (10.0, 100.0)}, "between 40 and 1200 mm"),
        ("page.svg", {"size_mm": (100.0, float("nan"))}, "between 40 and 1200 mm"),
        ("page.png", {"dpi": 9000}, "between 50 and 1200"),
        ("page.png", {"size_mm": (1000.0, 1000.0), "dpi": 1200}, "too many"),
    ],
)
def test_what_cannot_be_drawn_is_refused(
    name: str, how: dict[str, object], said: str, one_set: Shown, tmp_path: Path
) -> None:
    with pytest.raises(PictureRefused, match=re.escape(said)):
        write_picture(PAGES["paper"](one_set), tmp_path / name, **how)
    assert list(tmp_path.iterdir()) == []


def test_a_file_that_cannot_be_written_stays_as_it_was(
    one_set: Shown, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    path = tmp_path / "page.svg"
    path.write_text("earlier")

    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "replace", full)
    with pytest.raises(PictureNotWritten, match="the disk is full"):
        write_picture(PAGES["paper"](one_set), path)
    assert path.read_text() == "earlier"
    assert [left.name for left in tmp_path.iterdir()] == ["page.svg"]


def test_a_new_file_is_readable_as_the_user_s_files_are(one_set: Shown, tmp_path: Path) -> None:
    path = tmp_path / "page.pdf"
    (tmp_path / "other").touch()
    write_picture(PAGES["paper"](one_set), path)
    assert stat.S_IMODE(path.stat().st_mode) == stat.S_IMODE((tmp_path / "other").stat().st_mode)
