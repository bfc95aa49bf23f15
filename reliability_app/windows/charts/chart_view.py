"""The plot widget of a chart: pan, zoom and reading by keyboard, no menu entries that would ruin a scale."""

from __future__ import annotations

import pyqtgraph as pg
from PySide6.QtCore import QPoint, QRect, QRectF, Qt, Signal
from PySide6.QtGui import QContextMenuEvent, QFocusEvent, QKeyEvent, QMouseEvent, QPainter, QPaintEvent, QPalette, QPen

from reliability_app.reports.chart_ranges import Range
from reliability_app.windows.charts.round_axis import RoundAxis

_PAN = 0.1  # share of the view that an arrow key moves
_ZOOM = 1.25
_SMALLEST = 1e-5  # share of the whole picture below which nothing is left to see
_MARGINS = (6, 10, 16, 6)

_ARROWS = {
    Qt.Key.Key_Left: (-1.0, 0.0),
    Qt.Key.Key_Right: (1.0, 0.0),
    Qt.Key.Key_Up: (0.0, 1.0),
    Qt.Key.Key_Down: (0.0, -1.0),
}
_MORE = (Qt.Key.Key_Up, Qt.Key.Key_Right)
_ADDING = Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier
_READING_KEYS = Qt.KeyboardModifier.ShiftModifier | Qt.KeyboardModifier.AltModifier


class FramingBox(pg.ViewBox):  # type: ignore[misc]  # pyqtgraph ships no types
    """A view that draws a frame while Shift and the left button are held, and pans without Shift.

    Signals
    -------
    framed(QRectF, bool)
        The frame, in positions of the axes, and whether Ctrl was held.
    """

    framed = Signal(object, bool)

    def __init__(self) -> None:
        super().__init__()
        self.held = Qt.KeyboardModifier.NoModifier

    @property
    def is_framing(self) -> bool:
        """True where a drag that begins now draws a frame."""
        return bool(self.held & Qt.KeyboardModifier.ShiftModifier)

    def mouseDragEvent(self, event: pg.GraphicsScene.mouseEvents.MouseDragEvent, axis: int | None = None) -> None:
        """Draw the frame, or leave the drag to pan."""
        if event.button() != Qt.MouseButton.LeftButton or not self.is_framing or axis is not None:
            super().mouseDragEvent(event, axis=axis)
            return
        event.accept()
        if not event.isFinish():
            self.updateScaleBox(event.buttonDownPos(), event.pos())
            return
        self.rbScaleBox.hide()
        corners = [self.mapToView(corner) for corner in (event.buttonDownPos(), event.pos())]
        self.framed.emit(QRectF(*corners).normalized(), bool(self.held & Qt.KeyboardModifier.ControlModifier))


class ChartView(pg.PlotWidget):  # type: ignore[misc]  # pyqtgraph ships no types
    """A plot with the keyboard of the program.

    Arrows pan, + and - zoom, 0 and Home reset; Alt with an arrow moves the reading to the next round percent, Shift
    with an arrow by a small step. Enter lets a reading be typed.

    Signals
    -------
    moved_by_hand()
        The user panned or zoomed.
    reset_wanted()
        0 or Home was pressed.
    reading_stepped(direction, fine)
        The reading is to move: +1 or -1; `fine` with Shift.
    reading_step_done()
        The key of the step was released.
    menu_wanted(QPoint)
        The context menu is wanted at this place of the screen.
    typing_wanted()
        Enter was pressed: a reading is to be typed.
    axis_double_clicked(str)
        "level" or "upright".
    double_clicked(QPointF)
        The chart itself, at a point of the scene.
    clicked(QPointF, bool)
        A click with the left button at a point of the scene, and whether it is to add (Ctrl or Shift).
    framed(QRectF, bool)
        A frame was drawn with Shift and the left button, in positions of the axes, and whether it is to add (Ctrl).
    """

    moved_by_hand = Signal()
    reset_wanted = Signal()
    reading_stepped = Signal(int, bool)
    reading_step_done = Signal()
    menu_wanted = Signal(QPoint)
    typing_wanted = Signal()
    axis_double_clicked = Signal(str)
    double_clicked = Signal(object)
    clicked = Signal(object, bool)
    framed = Signal(object, bool)

    def __init__(self, level: RoundAxis, upright: RoundAxis) -> None:
        self._axes = {"level": level, "upright": upright}
        box = FramingBox()
        super().__init__(viewBox=box, axisItems={"bottom": level, "left": upright}, enableMenu=False)
        box.framed.connect(self.framed)
        self.setFrameShape(self.Shape.NoFrame)
        self.plotItem.hideButtons()
        self.plotItem.layout.setContentsMargins(*_MARGINS)
        self.plotItem.vb.disableAutoRange()
        self.plotItem.vb.setDefaultPadding(0.0)
        self.plotItem.vb.sigRangeChangedManually.connect(self._moved)
        self.scene().sigMouseClicked.connect(self._clicked)
        self._stepping = False

    def look_at(self, part: Range, limits: Range) -> None:
        """Show a part, from which one can move and zoom within the limits."""
        box = self.plotItem.vb
        box.setLimits(
            xMin=limits.left,
            xMax=limits.right,
            yMin=limits.low,
            yMax=limits.high,
            minXRange=_SMALLEST * (part.right - part.left),
            minYRange=_SMALLEST * (part.high - part.low),
        )
        box.setRange(xRange=(part.left, part.right), yRange=(part.low, part.high), padding=0.0)

    def pan(self, across: float, along: float) -> None:
        """Move the view by shares of its size."""
        (left, right), (low, high) = self.plotItem.vb.viewRange()
        self.plotItem.vb.translateBy(x=across * (right - left), y=along * (high - low))
        self.moved_by_hand.emit()

    def zoom(self, factor: float) -> None:
        """Enlarge what is shown by a factor about the middle of the view."""
        self.plotItem.vb.scaleBy((1.0 / factor, 1.0 / factor))
        self.moved_by_hand.emit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Pan, zoom, reset or step the reading."""
        key, modifiers = Qt.Key(event.key()), event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier
        if key in _ARROWS and modifiers & _READING_KEYS:
            self._stepping = True
            fine = bool(modifiers & Qt.KeyboardModifier.ShiftModifier)
            self.reading_stepped.emit(1 if key in _MORE else -1, fine)
        elif key in _ARROWS and not modifiers:
            self.pan(*(_PAN * share for share in _ARROWS[key]))
        elif key in (Qt.Key.Key_Plus, Qt.Key.Key_Equal) and not modifiers & Qt.KeyboardModifier.ControlModifier:
            self.zoom(_ZOOM)
        elif key == Qt.Key.Key_Minus and not modifiers & Qt.KeyboardModifier.ControlModifier:
            self.zoom(1.0 / _ZOOM)
        elif key in (Qt.Key.Key_0, Qt.Key.Key_Home) and not modifiers:
            self.reset_wanted.emit()
        elif key in (Qt.Key.Key_Return, Qt.Key.Key_Enter) and not modifiers:
            self.typing_wanted.emit()
        else:
            event.ignore()
            return
        event.accept()

    def keyReleaseEvent(self, event: QKeyEvent) -> None:
        """Tell that a step of the reading is done, once, however long the key was held."""
        if event.key() in _ARROWS and not event.isAutoRepeat():
            self._finish_step()
        super().keyReleaseEvent(event)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """End a step of the reading whose key is released elsewhere."""
        self._finish_step()
        super().focusOutEvent(event)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Note what is held as a button goes down: a drag is what it began as."""
        self.plotItem.vb.held = event.modifiers()
        super().mousePressEvent(event)

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Tell of a double click on an axis or on the chart."""
        super().mouseDoubleClickEvent(event)
        if event.button() != Qt.MouseButton.LeftButton:
            return
        spot = self.mapToScene(event.position().toPoint())
        if self.plotItem.vb.sceneBoundingRect().contains(spot):
            self.double_clicked.emit(spot)
            return
        for which, axis in self._axes.items():
            if axis.sceneBoundingRect().contains(spot):
                self.axis_double_clicked.emit(which)

    def contextMenuEvent(self, event: QContextMenuEvent) -> None:
        """Open the menu from the keyboard; the mouse's right button also zooms and is told apart by the scene."""
        if event.reason() == QContextMenuEvent.Reason.Keyboard:
            self.menu_wanted.emit(self.viewport().mapToGlobal(self.viewport().rect().center()))
            event.accept()

    def paintEvent(self, event: QPaintEvent) -> None:
        """Draw the chart, and a frame while it has the keyboard."""
        super().paintEvent(event)
        if self.hasFocus():
            painter = QPainter(self.viewport())
            painter.setPen(QPen(self.palette().color(QPalette.ColorRole.Highlight), 1.0))
            painter.drawRect(self.viewport().rect().adjusted(0, 0, -1, -1))
            painter.end()

    def area_of(self, which: str) -> QRect:
        """Return the place of an axis in this widget."""
        place: QRect = self.mapFromScene(self._axes[which].sceneBoundingRect()).boundingRect()
        return place

    def _clicked(self, event: pg.GraphicsScene.mouseEvents.MouseClickEvent) -> None:
        if event.button() == Qt.MouseButton.RightButton:
            event.accept()
            self.menu_wanted.emit(event.screenPos().toPoint())
        elif event.button() == Qt.MouseButton.LeftButton and not event.double():
            spot = event.scenePos()
            if self.plotItem.vb.sceneBoundingRect().contains(spot):
                self.clicked.emit(spot, bool(event.modifiers() & _ADDING))

    def _moved(self, *_: object) -> None:
        self.moved_by_hand.emit()

    def _finish_step(self) -> None:
        if self._stepping:
            self._stepping = False
            self.reading_step_done.emit()
