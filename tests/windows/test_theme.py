"""Controls keep a frame that shows, in light and in dark."""

import pytest
from PySide6.QtCore import Qt
from PySide6.QtGui import QColor
from PySide6.QtWidgets import QCheckBox, QVBoxLayout, QWidget

from reliability_app.windows.theme import apply_scheme


@pytest.mark.parametrize("scheme", ["dark", "light"])
def test_the_frame_of_an_empty_tick_box_stands_out_from_its_ground(qtbot, qapp, scheme):
    try:
        apply_scheme(qapp, scheme)
        ground = QWidget()
        box = QCheckBox("with threshold")
        box.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # the focus has a frame of its own
        QVBoxLayout(ground).addWidget(box)
        qtbot.addWidget(ground)
        ground.show()
        image = ground.grab(box.geometry()).toImage()
    finally:
        apply_scheme(qapp, "system")
    window = QColor(image.pixel(0, 0)).lightness()
    across = [QColor(image.pixel(x, image.height() // 2)).lightness() for x in range(6)]
    assert max(abs(light - window) for light in across) > 40
