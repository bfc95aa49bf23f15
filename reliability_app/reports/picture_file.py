"""Writes a figure as SVG, PDF or PNG: the same drawing in each, whole or not at all."""

from __future__ import annotations

import os
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path

from PySide6.QtCore import QBuffer, QByteArray, QIODevice, QMarginsF, QRectF, QSize, QSizeF
from PySide6.QtGui import QImage, QPageLayout, QPageSize, QPaintDevice, QPainter, QPdfWriter
from PySide6.QtSvg import QSvgGenerator

from reliability_app import __version__
from reliability_app.engine.errors import RigpaperError
from reliability_app.reports.figure import Figure
from reliability_app.reports.figure_layout import Layout, lay_out
from reliability_app.reports.figure_painter import paint_figure
from reliability_app.session.atomic_write import write_whole
from reliability_app.session.session_errors import system_reason

POINTS_PER_MM = 72.0 / 25.4
USUAL_SIZE, USUAL_DPI = (160.0, 110.0), 200
LEAST_SIDE, MOST_SIDE = 40.0, 1200.0  # mm: below, the axes have no room; A0 is 1189 mm long
LEAST_DPI, MOST_DPI = 50, 1200
_MOST_PIXELS = 200_000_000  # 0.8 GB of memory
_PDF_DPI = 1200
_FINE = 100  # QSvgGenerator counts whole units only: hundredths of a point state the size to 0.004 mm


class PictureRefused(RigpaperError):
    """A picture that cannot be made as it was asked for: its format, its size or its resolution."""


class PictureNotWritten(RigpaperError):
    """A picture that could not be written; what was on disk before is still there."""


@dataclass(frozen=True)
class Format:
    """A format of picture files."""

    suffix: str
    title: str
    has_pixels: bool
    make: Callable[[Figure, tuple[float, float], int], bytes]


def write_picture(
    figure: Figure, path: Path, *, size_mm: tuple[float, float] = USUAL_SIZE, dpi: int = USUAL_DPI
) -> None:
    """Write a figure to a file whose suffix names the format: .svg, .pdf or .png.

    Parameters
    ----------
    size_mm : (float, float)
        Width and height; where the foot needs more than half of the height the picture becomes taller.
    dpi : int
        Dots an inch of a PNG; SVG and PDF have none.

    Raises
    ------
    PictureRefused
        For an unknown suffix, or a size or a resolution out of range.
    PictureNotWritten
        When the file could not be written; it is then as it was.
    """
    data = picture_bytes(figure, format_of(path).suffix, size_mm=size_mm, dpi=dpi)
    target = Path(os.path.realpath(path))
    try:
        write_whole(target, data)
    except OSError as error:
        raise PictureNotWritten(
            f"{path} was not written: {system_reason(error)}. Put that right, or choose another place."
        ) from error


def format_of(path: Path) -> Format:
    """Return the format that the suffix of a path names.

    Raises
    ------
    PictureRefused
    """
    found = FORMATS.get(path.suffix.lower())
    if found is None:
        ending = f"ends in {path.suffix}" if path.suffix else "has no ending"
        raise PictureRefused(f"{path} {ending}: name a picture .svg, .pdf or .png.")
    return found


def picture_bytes(
    figure: Figure, suffix: str, *, size_mm: tuple[float, float] = USUAL_SIZE, dpi: int = USUAL_DPI
) -> bytes:
    """Return the content of a picture file (see `write_picture`)."""
    check_size(size_mm, dpi)
    return FORMATS[suffix].make(figure, size_mm, dpi)


def check_size(size_mm: tuple[float, float], dpi: int) -> None:
    """Refuse a size or a resolution that makes no picture.

    Raises
    ------
    PictureRefused
    """
    for side in size_mm:
        if not LEAST_SIDE <= side <= MOST_SIDE:
            raise PictureRefused(
                f"A side of {side:g} mm cannot be drawn: give between {LEAST_SIDE:g} and {MOST_SIDE:g} mm."
            )
    if not LEAST_DPI <= dpi <= MOST_DPI:
        raise PictureRefused(f"{dpi} dots an inch cannot be drawn: give between {LEAST_DPI} and {MOST_DPI}.")


def image_of(figure: Figure, *, size_mm: tuple[float, float] = USUAL_SIZE, dpi: int = USUAL_DPI) -> QImage:
    """Return a figure as an image.

    Raises
    ------
    PictureRefused
    """
    check_size(size_mm, dpi)
    layout = _layout(figure, size_mm, as_outlines=True)
    each = dpi / 72.0
    width, height = round(layout.width * each), round(layout.height * each)
    if width * height > _MOST_PIXELS:
        raise PictureRefused(
            f"{width} by {height} pixels are too many: give a smaller size or fewer dots an inch, "
            "or write an SVG or a PDF."
        )
    image = QImage(width, height, QImage.Format.Format_RGB32)
    image.fill(0xFFFFFFFF)
    image.setDotsPerMeterX(round(dpi / 0.0254))
    image.setDotsPerMeterY(round(dpi / 0.0254))
    _paint(image, figure, layout, each)
    return image


def _layout(figure: Figure, size_mm: tuple[float, float], *, as_outlines: bool = False) -> Layout:
    width, height = (POINTS_PER_MM * side for side in size_mm)
    return lay_out(figure, width, height, as_outlines=as_outlines)


def _paint(device: QPaintDevice, figure: Figure, layout: Layout, each: float) -> None:
    painter = QPainter(device)
    try:
        painter.scale(each, each)
        paint_figure(painter, figure, layout)
    finally:
        painter.end()


def _png(figure: Figure, size_mm: tuple[float, float], dpi: int) -> bytes:
    image = image_of(figure, size_mm=size_mm, dpi=dpi)
    image.setText("Title", _title(figure))
    image.setText("Description", _said(figure))
    image.setText("Software", f"Rigpaper {__version__}")

    def fill(buffer: QBuffer) -> None:
        image.save(buffer, "PNG")  # type: ignore[call-overload]  # the stub wants bytes, PySide wants text

    return _filled(fill)


def _svg(figure: Figure, size_mm: tuple[float, float], _dpi: int) -> bytes:
    """Return an SVG whose letters are outlines, since no reader has every font; its description holds the words."""
    layout = _layout(figure, size_mm, as_outlines=True)

    def fill(buffer: QBuffer) -> None:
        generator = QSvgGenerator(QSvgGenerator.SvgVersion.Svg11)
        generator.setOutputDevice(buffer)
        generator.setResolution(72 * _FINE)
        generator.setSize(QSize(round(_FINE * layout.width), round(_FINE * layout.height)))
        generator.setViewBox(QRectF(0.0, 0.0, layout.width, layout.height))
        generator.setTitle(_title(figure))
        generator.setDescription(_said(figure))
        _paint(generator, figure, layout, 1.0)

    return _filled(fill)


def _pdf(figure: Figure, size_mm: tuple[float, float], _dpi: int) -> bytes:
    """Return a PDF of one page whose text can be searched, with its fonts inside."""
    layout = _layout(figure, size_mm)

    def fill(buffer: QBuffer) -> None:
        writer = QPdfWriter(buffer)
        writer.setResolution(_PDF_DPI)
        page = QPageSize(
            QSizeF(layout.width, layout.height), QPageSize.Unit.Point, "", QPageSize.SizeMatchPolicy.ExactMatch
        )
        writer.setPageLayout(QPageLayout(page, QPageLayout.Orientation.Portrait, QMarginsF()))
        writer.setTitle(_title(figure))
        writer.setCreator(f"Rigpaper {__version__}")
        _paint(writer, figure, layout, _PDF_DPI / 72.0)

    return _filled(fill)


def _filled(fill: Callable[[QBuffer], None]) -> bytes:
    content = QByteArray()
    buffer = QBuffer(content)
    buffer.open(QIODevice.OpenModeFlag.WriteOnly)
    fill(buffer)
    buffer.close()
    return bytes(content.data())


def _title(figure: Figure) -> str:
    return _printable(figure.title)


def _said(figure: Figure) -> str:
    return "\n".join(map(_printable, (*figure.foot, figure.origin)))


def _printable(text: str) -> str:
    """Leave out what no XML may hold: a set's name may come from anywhere."""
    return "".join(character if character.isprintable() else " " for character in text)


FORMATS: Mapping[str, Format] = {
    found.suffix: found
    for found in (
        Format(".svg", "SVG drawing", False, _svg),
        Format(".pdf", "PDF document", False, _pdf),
        Format(".png", "PNG image", True, _png),
    )
}
