"""The picture of a shape, painted at any size in the colours of the theme."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QEvent, QLineF, QObject, QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFont, QFontMetricsF, QImage, QPainter, QPaintEvent, QPen, QPolygonF
from PySide6.QtWidgets import QSizePolicy, QWidget

from app.window.gallery.dimensioning import ARROW, Layout, Placed, laid_out
from app.window.gallery.drawing import Drawing, can_be_drawn, drawing_of
from app.window.style import Colours, colours

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.shapes import Shape

# Line widths in px; a focused dimension is drawn thicker.
_EDGE, _SOFT, _THIN, _FOCUSED = 1.3, 0.8, 0.9, 2.0
_HIDDEN_OPACITY = 70
_MARGIN = 3.0
# Symbols are drawn no smaller than this, and in a large picture no larger, px.
_SMALLEST, _LARGEST = 10.5, 14.0
_SHARE = 0.062
# The height of a large picture, px, and a width below which it is left out.
SIDE_PX, SMALLEST_PX = 192, 80


class Pen:
    """Paints one drawing with its dimensions; coordinates y upwards become those of the painter."""

    def __init__(self, painter: QPainter, layout: Layout, middle: QPointF, height: float) -> None:
        self._painter = painter
        self._layout = layout
        self._middle = middle
        self._height = height

    def body(self, drawing: Drawing, theme: Colours) -> None:
        """Paint the body: one pale ground, hidden edges lightly, what is seen in the colour of text."""
        painter = self._painter
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(QColor(theme.raised))
        painter.setRenderHint(QPainter.RenderHint.Antialiasing, on=False)
        for face in self._at(drawing.faces):
            painter.drawPolygon(QPolygonF([QPointF(*spot) for spot in face]))
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        faint = QColor(theme.text)
        faint.setAlpha(_HIDDEN_OPACITY)
        for pieces, colour, width in (
            (drawing.hidden, faint, _SOFT), (drawing.soft, QColor(theme.quiet), _SOFT),
            (drawing.seen, QColor(theme.text), _EDGE),
        ):
            painter.setPen(QPen(colour, width, Qt.PenStyle.SolidLine, Qt.PenCapStyle.RoundCap))
            painter.drawLines([QLineF(QPointF(*a), QPointF(*b)) for a, b in self._at(pieces)])

    def dimension(self, one: Placed, theme: Colours, font: QFont, *, focused: bool) -> None:
        """Paint one dimension; a focused one thicker, its symbol on the ground of what is selected."""
        painter, colour = self._painter, QColor(theme.blue)
        painter.setPen(QPen(colour, _FOCUSED if focused else _THIN))
        painter.drawLines([QLineF(self._spot(a), self._spot(b)) for a, b in one.lines])
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(colour)
        for tip, way in one.arrows:
            painter.drawPolygon(self._head(tip, way))
        if one.dot is not None:
            painter.drawEllipse(self._spot(one.dot), 2.0, 2.0)
        box = self._box(one, QFontMetricsF(font))
        if focused:
            painter.setBrush(QColor(theme.selection))
            painter.setPen(QPen(colour, 1.0))
            painter.drawRoundedRect(box.adjusted(-3, -1, 3, 1), 3, 3)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QColor(theme.text))
        painter.setFont(font)
        painter.drawText(box, Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextDontClip, one.text)

    def _box(self, one: Placed, metrics: QFontMetricsF) -> QRectF:
        centre, width = self._spot(one.centre), metrics.horizontalAdvance(one.text)
        return QRectF(centre.x() - width / 2, centre.y() - metrics.height() / 2, width, metrics.height())

    def _head(self, tip: FloatArray, way: FloatArray) -> QPolygonF:
        length = ARROW * self._height
        side = np.array([-way[1], way[0]]) * length * 0.28
        back = tip + way * length
        return QPolygonF([self._spot(tip), self._spot(back + side), self._spot(back - side)])

    def _at(self, points: FloatArray) -> FloatArray:
        moved = points * self._layout.scale + self._layout.shift
        return np.asarray(moved * [1, -1] + [self._middle.x(), self._middle.y()])

    def _spot(self, point: FloatArray) -> QPointF:
        moved = point + self._layout.shift
        return QPointF(self._middle.x() + float(moved[0]), self._middle.y() - float(moved[1]))


def paint_shape(
    painter: QPainter, room: QRectF, shape: Shape, family: str, theme: Colours, focused: str = ""
) -> None:
    """Paint a single shape with its dimensions into a rectangle, the one named `focused` standing out."""
    drawing = drawing_of(shape)
    font = QFont(family)
    height = float(np.clip(_SHARE * min(room.width(), room.height()), _SMALLEST, _LARGEST))
    font.setPixelSize(round(height))
    symbols = {one.name: one.symbol or one.label for one in shape.dimensions}
    inside = (room.width() - 2 * _MARGIN, room.height() - 2 * _MARGIN)
    layout = laid_out(drawing, symbols, inside, height, QFontMetricsF(font).horizontalAdvance)
    pen = Pen(painter, layout, room.center(), height)
    pen.body(drawing, theme)
    # The one in focus comes last, over the others.
    for one in sorted(layout.placed, key=lambda one: one.name == focused):
        pen.dimension(one, theme, font, focused=one.name == focused)


@dataclass(frozen=True)
class Wanted:
    """What a picture is of, and how it is painted.

    Attributes:
        shape: a single one.
        width, height: in logical pixels.
        ratio: device pixels in one of them.
        family: of the font.
        theme: the colours that hold.
        focused: the name of the dimension that stands out.
    """

    shape: Shape
    width: int
    height: int
    ratio: float
    family: str
    theme: Colours
    focused: str = ""


@lru_cache(maxsize=256)
def image_of(wanted: Wanted) -> QImage:
    """Return a picture on a clear ground; the same one again where the same is wanted."""
    size = QSize(round(wanted.width * wanted.ratio), round(wanted.height * wanted.ratio))
    image = QImage(size, QImage.Format.Format_ARGB32_Premultiplied)
    image.setDevicePixelRatio(wanted.ratio)
    image.fill(Qt.GlobalColor.transparent)
    painter = QPainter(image)
    room = QRectF(0, 0, wanted.width, wanted.height)
    try:
        paint_shape(painter, room, wanted.shape, wanted.family, wanted.theme, wanted.focused)
    finally:
        # A painter left open on its image takes the process down.
        painter.end()
    return image


class ShapePicture(QWidget):
    """Shows one shape with its dimensions, as large as there is room, the one in focus standing out."""

    def __init__(self, side: int = SIDE_PX) -> None:
        super().__init__()
        self._shape: Shape | None = None
        self._focused = ""
        self._side = side
        self._watched: dict[QObject, str] = {}
        self.setSizePolicy(QSizePolicy.Policy.Ignored, QSizePolicy.Policy.Fixed)
        self.setFixedHeight(side)

    @property
    def shape(self) -> Shape | None:
        """What is shown."""
        return self._shape

    @property
    def focused(self) -> str:
        """The name of the dimension that stands out; "" for none."""
        return self._focused

    def show_shape(self, shape: Shape) -> None:
        """Show this single shape."""
        if shape != self._shape:
            self._shape = shape
            labels = ", ".join(f"{one.label} {one.symbol}".rstrip() for one in shape.dimensions)
            self.setAccessibleName(f"Picture of the {shape.title} with its dimensions: {labels}")
            self.update()

    def stand_out(self, name: str) -> None:
        """Let the dimension of this name stand out; "" for none."""
        if name != self._focused:
            self._focused = name
            self.update()

    def watch(self, field: QWidget, name: str) -> None:
        """Let a dimension stand out while the keyboard is in its field."""
        self._watched[field] = name
        field.installEventFilter(self)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Follow the keyboard from field to field."""
        if event.type() == QEvent.Type.FocusIn:
            self.stand_out(self._watched.get(watched, ""))
        elif event.type() == QEvent.Type.FocusOut:
            self.stand_out("")
        return super().eventFilter(watched, event)

    def sizeHint(self) -> QSize:
        """Return a square."""
        return QSize(self._side, self._side)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Paint the picture in the middle."""
        if self._shape is None or self.width() < SMALLEST_PX or not can_be_drawn(self._shape):
            return
        width, height = min(self.width(), round(1.3 * self._side)), self.height()
        family, ratio = self.font().family(), self.devicePixelRatioF()
        image = image_of(Wanted(self._shape, width, height, ratio, family, colours(), self._focused))
        painter = QPainter(self)
        painter.drawImage(QPointF((self.width() - width) / 2, 0), image)
