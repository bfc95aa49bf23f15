"""Picture files as arrays of pixels, two to the point, and how far two of them differ."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pypdfium2
from PySide6.QtGui import QImage, QPainter
from PySide6.QtSvg import QSvgRenderer

from reliability_app.reports.figure import Figure
from reliability_app.reports.picture_file import write_picture

PIXELS_PER_POINT = 2
DPI = 72 * PIXELS_PER_POINT
_BLOCK = 8


def written(figure: Figure, folder: Path, **how: object) -> dict[str, Path]:
    """Write a figure in every format."""
    paths = {suffix: folder / f"picture{suffix}" for suffix in (".svg", ".pdf", ".png")}
    for path in paths.values():
        write_picture(figure, path, dpi=DPI, **how)
    return paths


def pixels(path: Path) -> np.ndarray:
    """Return a picture file as an array (height, width, 3)."""
    if path.suffix == ".pdf":
        with pypdfium2.PdfDocument(path) as document:
            return np.array(document[0].render(scale=PIXELS_PER_POINT).to_numpy()[:, :, 2::-1], float)
    if path.suffix == ".png":
        return _array(QImage(str(path)))
    drawing = QSvgRenderer(str(path))
    size = drawing.viewBoxF().size() * PIXELS_PER_POINT
    image = QImage(round(size.width()), round(size.height()), QImage.Format.Format_RGB32)
    image.fill(0xFFFFFFFF)
    painter = QPainter(image)
    drawing.render(painter)
    painter.end()
    return _array(image)


def difference(one: np.ndarray, other: np.ndarray) -> float:
    """Return the largest difference of tone between small squares: what an eye sees, not how edges are smoothed."""
    height, width = (min(sizes) // _BLOCK * _BLOCK for sizes in zip(one.shape[:2], other.shape[:2], strict=True))
    apart = one[:height, :width] - other[:height, :width]
    blocks = apart.reshape(height // _BLOCK, _BLOCK, width // _BLOCK, _BLOCK, 3).mean(axis=(1, 3))
    return float(np.abs(blocks).max())


def _array(image: QImage) -> np.ndarray:
    plain = image.convertToFormat(QImage.Format.Format_RGB888)
    rows = np.frombuffer(plain.constBits(), np.uint8).reshape(plain.height(), plain.bytesPerLine())
    return rows[:, : 3 * plain.width()].reshape(plain.height(), plain.width(), 3).astype(float)
