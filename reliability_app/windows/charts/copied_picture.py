"""Puts a picture on the clipboard, as an image and as a drawing: each program pasted into takes what it knows."""

from __future__ import annotations

from PySide6.QtCore import QByteArray, QMimeData
from PySide6.QtGui import QGuiApplication

from reliability_app.reports.figure import Figure
from reliability_app.reports.picture_file import USUAL_DPI, USUAL_SIZE, image_of, picture_bytes

SVG_TYPE = "image/svg+xml"


def copy_figure(figure: Figure, *, size_mm: tuple[float, float] = USUAL_SIZE, dpi: int = USUAL_DPI) -> None:
    """Put a figure on the clipboard.

    Raises
    ------
    PictureRefused
        For a size or a resolution out of range.
    """
    copied = QMimeData()
    copied.setImageData(image_of(figure, size_mm=size_mm, dpi=dpi))
    copied.setData(SVG_TYPE, QByteArray(picture_bytes(figure, ".svg", size_mm=size_mm)))
    QGuiApplication.clipboard().setMimeData(copied)
