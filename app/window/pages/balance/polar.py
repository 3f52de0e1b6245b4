"""The polar plot: unbalance vectors over an angle scale and circles of equal unbalance, and what is permitted."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFocusEvent, QFontMetricsF, QPainter, QPaintEvent, QPen, QPolygonF
from PySide6.QtWidgets import QWidget

from app.window.style import colours
from app.window.view.labels import Box, Wish, places

if TYPE_CHECKING:
    from app.window.style import Colours

# How many circles at most, and the steps that they may be apart times a power of ten.
_MOST_CIRCLES = 5
_STEPS = (1.0, 2.0, 2.5, 5.0, 10.0)
_SPOKE = 30
# Where the circles may be named: straight down, or straight up.
_UPRIGHT = (-0.5 * math.pi, 0.5 * math.pi)
_INWARDS = 0.4
# Room for the numbers of the angle scale, in heights of the text.
_MARGIN = 1.9
_HEAD = (10.0, 7.0)
_SMALLEST, _BEST = 200, 320
# A permitted circle further out than this many times the largest vector would make the vectors points.
_FURTHEST = 2.5
# Of the outermost circle: one smaller than this is a point.
_NEAREST = 0.04
# Opacity of the ground beneath a name, 0…255.
_VEIL = 215
# Arrows differ by colour and by the pattern of their shafts, in line widths.
_LOOKS: tuple[tuple[str, tuple[float, ...]], ...] = (
    ("blue", ()), ("sound", (6.0, 2.5)), ("estimate", (2.0, 2.0)), ("sound", (8.0, 2.0, 1.5, 2.0)),
    ("estimate", (1.0, 2.5)),
)


@dataclass(frozen=True)
class PolarMark:
    """A vector of the plot.

    Attributes:
        name: as it stands beside its head.
        size: in the unit shown.
        angle: rad from the zero mark; None where the size is 0.
        permitted: in the unit shown; None where nothing says.
    """

    name: str
    size: float
    angle: float | None
    permitted: float | None = None


@dataclass(frozen=True)
class PolarPicture:
    """What a polar plot shows.

    Attributes:
        marks: the vectors.
        unit: symbol of what the circles measure.
        decimal_mark: of the numbers.
        words: the same in sentences, for who cannot see it.
    """

    marks: tuple[PolarMark, ...] = ()
    unit: str = ""
    decimal_mark: str = "."
    words: str = ""


def circles_of(largest: float) -> tuple[float, ...]:
    """Return round radii for the circles of a plot in which this size has room, the outermost last."""
    if largest <= 0:
        return (1.0,)
    power = 10.0 ** math.floor(math.log10(largest / _MOST_CIRCLES))
    step = next((each * power for each in _STEPS if each * power * _MOST_CIRCLES >= largest), 10 * power)
    return tuple(step * at for at in range(1, math.ceil(largest / step - 1e-9) + 1))


def reach_of(picture: PolarPicture) -> float:
    """Return the largest size that a plot has to have room for."""
    sizes = [mark.size for mark in picture.marks]
    largest = max(sizes, default=0.0)
    permitted = [mark.permitted for mark in picture.marks if mark.permitted is not None]
    shown = [each for each in permitted if not largest or each <= _FURTHEST * largest]
    return max([largest, *shown], default=0.0)


def is_drawn(picture: PolarPicture, mark: PolarMark) -> bool:
    """Return whether what is permitted for a vector can be told in the plot from its middle, and lies in it."""
    outermost = circles_of(reach_of(picture))[-1]
    return mark.permitted is not None and _NEAREST * outermost <= mark.permitted <= outermost


class PolarPlot(QWidget):
    """Draws vectors from the middle, 0° to the right and angles anticlockwise, with the axis towards the reader."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAccessibleName("Polar plot of the unbalance")
        self.setFocusPolicy(Qt.FocusPolicy.TabFocus)
        self.setMinimumSize(_SMALLEST, _SMALLEST)
        self.picture = PolarPicture()
        self.labels: tuple[str, ...] = ()

    def sizeHint(self) -> QSize:
        """Return a square that shows a plot well."""
        return QSize(_BEST, _BEST)

    def show_picture(self, picture: PolarPicture) -> None:
        """Show other vectors."""
        self.picture = picture
        self.setAccessibleDescription(picture.words)
        self.setToolTip(picture.words)
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """Draw scale, circles, what is permitted, vectors, and names where they have room."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        _Drawing(self, painter).draw()
        painter.end()

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Show the focus."""
        super().focusInEvent(event)
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Stop showing the focus."""
        super().focusOutEvent(event)
        self.update()


class _Drawing:
    """One drawing of a plot."""

    def __init__(self, plot: PolarPlot, painter: QPainter) -> None:
        self._plot, self._painter, self._picture = plot, painter, plot.picture
        self._colours: Colours = colours()
        self._metrics = QFontMetricsF(plot.font())
        self._middle = QPointF(plot.width() / 2, plot.height() / 2)
        self._radius = min(plot.width(), plot.height()) / 2 - _MARGIN * self._metrics.height()
        self._circles = circles_of(reach_of(plot.picture))
        self._names: list[tuple[str, Wish, str]] = []
        self._taken: list[Box] = []
        self._written: list[str] = []

    def draw(self) -> None:
        """Draw all of it."""
        c, painter = self._colours, self._painter
        painter.fillRect(self._plot.rect(), QColor(c.ground))
        self._draw_scale()
        self._draw_circles()
        self._draw_permitted()
        for at, mark in enumerate(self._picture.marks):
            self._draw_vector(at, mark)
        self._draw_names()
        if self._plot.hasFocus():
            painter.setPen(QPen(QColor(c.blue), 2))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRect(QRectF(self._plot.rect()).adjusted(1, 1, -1, -1))

    def _at(self, size: float, angle: float) -> QPointF:
        """Return the place of a size at an angle, px."""
        out = self._radius * size / self._circles[-1]
        return self._middle + QPointF(out * math.cos(angle), -out * math.sin(angle))

    def _draw_scale(self) -> None:
        painter, c = self._painter, self._colours
        for degrees in range(0, 360, _SPOKE):
            angle = math.radians(degrees)
            painter.setPen(QPen(QColor(c.hairline), 1))
            painter.drawLine(self._middle, self._at(self._circles[-1], angle))
            text = f"{degrees}°"
            width, height = self._metrics.horizontalAdvance(text), self._metrics.height()
            far = self._radius + 0.9 * height
            spot = self._middle + QPointF(far * math.cos(angle), -far * math.sin(angle))
            painter.setPen(QColor(c.quiet))
            box = QRectF(spot.x() - width / 2 - 2, spot.y() - height / 2, width + 4, height)
            painter.drawText(box, int(Qt.AlignmentFlag.AlignCenter), text)
            self._taken.append((box.x(), box.y(), box.width(), box.height()))

    def _draw_circles(self) -> None:
        painter, c = self._painter, self._colours
        painter.setBrush(Qt.BrushStyle.NoBrush)
        for size in self._circles:
            painter.setPen(QPen(QColor(c.hairline), 1))
            out = self._radius * size / self._circles[-1]
            painter.drawEllipse(self._middle, out, out)
            text = f"{size:.6g}".replace(".", self._picture.decimal_mark)
            (wide, high), outermost = self._size_of(text), size == self._circles[-1]
            # The number of the angle scale stands just outside.
            inwards = _INWARDS * high * self._circles[-1] / max(self._radius, 1.0) if outermost else 0.0
            spot = self._at(size - inwards, self._free())
            self._write(text, QRectF(spot.x() - wide / 2, spot.y() - high / 2, wide, high), "quiet")
        words = f"circles in {self._picture.unit}"
        self._write(words, QRectF(0.0, 0.0, *self._size_of(words)), "quiet")

    def _free(self) -> float:
        """Return the angle straight down or up that is further from every vector, rad; there the circles are named."""
        used = [mark.angle for mark in self._picture.marks if mark.angle is not None]
        return max(_UPRIGHT, key=lambda angle: min((1 - math.cos(angle - each) for each in used), default=0.0))

    def _draw_permitted(self) -> None:
        """Draw what is permitted in each plane as a dashed circle, said once where it is the same in several."""
        painter, c = self._painter, self._colours
        names: dict[float, list[str]] = {}
        for mark in self._picture.marks:
            if mark.permitted is not None and is_drawn(self._picture, mark):
                names.setdefault(mark.permitted, []).append(mark.name)
        for at, (size, whose) in enumerate(names.items()):
            pen = QPen(QColor(c.failed), 1.6)
            pen.setDashPattern([5.0, 3.0])
            painter.setPen(pen)
            painter.setBrush(Qt.BrushStyle.NoBrush)
            out = self._radius * size / self._circles[-1]
            painter.drawEllipse(self._middle, out, out)
            spot = self._at(size, math.radians(-105 - 40 * at))
            self._want(f"permitted, {' and '.join(whose)}", spot, spot - self._middle, "failed")

    def _draw_vector(self, at: int, mark: PolarMark) -> None:
        """Draw a vector; no name may cover it."""
        if mark.angle is None:
            return
        role, pattern = _LOOKS[at % len(_LOOKS)]
        painter, colour = self._painter, QColor(getattr(self._colours, role))
        tip = self._at(mark.size, mark.angle)
        run = tip - self._middle
        length = float(np.hypot(run.x(), run.y()))
        along = run / length if length else QPointF(1, 0)
        aside = QPointF(-along.y(), along.x())
        neck = tip - along * min(_HEAD[0], length)
        pen = QPen(colour, 2)
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        if pattern:
            pen.setDashPattern(list(pattern))
        painter.setPen(pen)
        painter.drawLine(self._middle, neck)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(colour)
        painter.drawPolygon(QPolygonF([tip, neck + aside * (_HEAD[1] / 2), neck - aside * (_HEAD[1] / 2)]))
        self._want(mark.name, tip, along, role)
        steps = [self._middle + run * (step / 8) for step in range(1, 9)]
        self._taken += [(spot.x() - 2, spot.y() - 2, 4.0, 4.0) for spot in steps]

    def _want(self, text: str, spot: QPointF, toward: QPointF, role: str) -> None:
        wish = Wish((spot.x(), spot.y()), self._size_of(text), (toward.x(), toward.y()))
        self._names.append((text, wish, role))

    def _draw_names(self) -> None:
        """Write names, those of vectors first, then what is permitted."""
        ordered = sorted(self._names, key=lambda name: name[2] == "failed")
        frame = (float(self._plot.width()), float(self._plot.height()))
        boxes = places([wish for _, wish, _ in ordered], frame, self._taken)
        for (text, _, role), box in zip(ordered, boxes, strict=True):
            if box is not None:
                self._write(text, QRectF(*box), role)
        self._plot.labels = tuple(self._written)

    def _size_of(self, text: str) -> tuple[float, float]:
        return self._metrics.horizontalAdvance(text) + 6, self._metrics.height()

    def _write(self, text: str, box: QRectF, role: str) -> None:
        """Write a text on a ground of its own; nothing else is named there."""
        ground = QColor(self._colours.ground)
        ground.setAlpha(_VEIL)
        self._painter.fillRect(box, ground)
        self._painter.setPen(QColor(getattr(self._colours, role)))
        self._painter.drawText(box, int(Qt.AlignmentFlag.AlignCenter), text)
        self._taken.append((box.x(), box.y(), box.width(), box.height()))
        self._written.append(text)
