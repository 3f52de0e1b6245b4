"""The marks over the picture: drive axis, principal axes, centre of mass, document axes, names, focus.

They are drawn with QPainter in every kind of view, so that they look the same with and without OpenGL.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QLineF, QPointF, QRectF, Qt
from PySide6.QtGui import QFont, QFontMetricsF, QPainter, QPainterPath, QPaintEvent, QPen, QPolygonF
from PySide6.QtWidgets import QWidget

from app.window.view.handle_marks import draw_handles, draw_words
from app.window.view.labels import Box, Wish, places
from app.window.view.picture import Picture, qcolor, size_of

if TYPE_CHECKING:
    from app.window.view.hand import Shown
    from app.window.view.palette import Colour
    from app.window.view.scene import Line
    from core.arrays import FloatArray

# ISO 128 chain line, narrow: long dash, gap, dot, gap, in line widths.
CHAIN = (16.0, 3.0, 0.6, 3.0)
_AXIS_WIDTH, _OTHER_AXIS_WIDTH, _ARROW_WIDTH, _FOUND_WIDTH, _CASING = 1.4, 1.0, 1.8, 1.6, 3.0
_HEAD_LENGTH, _HEAD_WIDTH = 11.0, 7.0
_DISC = 7.0
_TRIAD, _TRIAD_AT = 26.0, 44.0
# A document axis that leans this far away is drawn lighter; one as short as this on the screen is a point.
_AWAY, _END_ON = -0.2, 0.15
# So many parts that stand out are named in the picture; more would hide it.
_MOST_NAMED = 3


@dataclass(frozen=True)
class _Name:
    """A label with its wish for a place, its colour and weight."""

    text: str
    wish: Wish
    colour: Colour
    font: QFont


class Overlay(QWidget):
    """Draws the marks of a picture over whatever draws its bodies; lets the mouse through."""

    def __init__(self, parent: QWidget) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        self.setAttribute(Qt.WidgetAttribute.WA_NoSystemBackground)
        self.note = ""
        self.focused = False
        # What is shown of the handles, and boxes (px) that names keep off, told by the pane.
        self.handles: Shown | None = None
        self.covered: list[Box] = []
        self._picture: Picture | None = None

    def show_picture(self, picture: Picture) -> None:
        """Draw the marks of this picture from now on."""
        self._picture = picture
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """Draw all marks; names come last, where they have room."""
        picture = self._picture
        if picture is None:
            return
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        self._draw_found(painter, picture)
        names = self._draw_axes(painter, picture)
        names += self._draw_arrows(painter, picture, picture.scene.principal, picture.theme.principal)
        names += self._draw_arrows(painter, picture, picture.vectors, picture.theme.vector)
        taken = [self._draw_centre(painter, picture)] if picture.scene.mass_centre is not None else []
        names = [*self._draw_handles(painter, picture), *names]
        names += [*self._draw_triad(painter, picture), *self._emphasised(picture)]
        self._draw_note(painter, picture)
        self._draw_names(painter, picture, names, [*taken, *self._note_box(), *self.covered])
        if self.handles is not None:
            draw_words(painter, picture, size_of(self.width(), self.height()), self.handles)
        if self.focused:
            painter.setPen(QPen(qcolor(picture.theme.principal), 2.0))
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.drawRect(QRectF(self.rect()).adjusted(1, 1, -1, -1))
        painter.end()

    def _spots(self, picture: Picture, points: FloatArray) -> FloatArray:
        return picture.camera.project(points, size_of(self.width(), self.height()))

    def _line_on_screen(self, picture: Picture, line: Line) -> tuple[QPointF, QPointF] | None:
        """Return both ends in pixels, cut where the line passes behind the eye; None when all of it does."""
        near = picture.depths()[0]
        start, end = line.start, line.end
        depth = self._spots(picture, np.stack([start, end]))[:, 2]
        if depth.max() <= near:
            return None
        if depth.min() < near:
            cut = start + (near - depth[0]) / (depth[1] - depth[0]) * (end - start)
            start, end = (cut, end) if depth[0] < near else (start, cut)
        spots = self._spots(picture, np.stack([start, end]))
        return QPointF(spots[0, 0], spots[0, 1]), QPointF(spots[1, 0], spots[1, 1])

    def _draw_found(self, painter: QPainter, picture: Picture) -> None:
        """Draw the edges that a finding is about over whatever hides them."""
        if not len(picture.found):
            return
        spots = self._spots(picture, picture.found)
        seen = spots[(spots[..., 2] > picture.depths()[0]).all(axis=1)]
        lines = [QLineF(*ends) for ends in seen[:, :, :2].reshape(-1, 4).tolist()]
        for colour, width in ((picture.theme.casing, _FOUND_WIDTH + _CASING), (picture.theme.found, _FOUND_WIDTH)):
            painter.setPen(QPen(qcolor(colour), width))
            painter.drawLines(lines)

    def _draw_handles(self, painter: QPainter, picture: Picture) -> list[_Name]:
        if self.handles is None:
            return []
        letters = draw_handles(painter, picture, size_of(self.width(), self.height()), self.handles)
        return [self._name(text, at, away, picture.theme.text) for text, at, away in letters]

    def _draw_axes(self, painter: QPainter, picture: Picture) -> list[_Name]:
        """Draw all axes, the drive axis last, wider and with its name in bold, which comes first to find room."""
        others = [self._draw_axis(painter, picture, axis, _OTHER_AXIS_WIDTH) for axis in picture.scene.other_axes]
        drive = picture.scene.axis
        names = [] if drive is None else self._draw_axis(painter, picture, drive, _AXIS_WIDTH)
        return [*names, *(name for each in others for name in each)]

    def _draw_axis(self, painter: QPainter, picture: Picture, axis: Line, width: float) -> list[_Name]:
        theme, ends = picture.theme, self._line_on_screen(picture, axis)
        if ends is None:
            return []
        start, end = ends
        run = end - start
        if np.hypot(run.x(), run.y()) < _DISC:
            # Seen end on, an axis is a small centre cross.
            for dx, dy in ((10.0, 0.0), (0.0, 10.0)):
                cross = (end - QPointF(dx, dy), end + QPointF(dx, dy))
                self._stroke(painter, picture, cross, theme.drive, width)
        else:
            self._case(painter, picture, start, end, width)
            pen = QPen(qcolor(theme.drive), width)
            pen.setCapStyle(Qt.PenCapStyle.FlatCap)
            # A pattern is in line widths: the dashes of a thin line are as long as those of the drive axis.
            pen.setDashPattern([each * _AXIS_WIDTH / width for each in CHAIN])
            painter.setPen(pen)
            painter.drawLine(start, end)
        bold = axis is picture.scene.axis and bool(picture.scene.other_axes)
        return [self._name(axis.name, end, run, theme.drive, bold=bold)]

    def _draw_arrows(
        self, painter: QPainter, picture: Picture, arrows: tuple[Line, ...], colour: Colour
    ) -> list[_Name]:
        names = []
        for arrow in arrows:
            ends = self._line_on_screen(picture, arrow)
            if ends is None:
                continue
            start, end = ends
            run = end - start
            length = float(np.hypot(run.x(), run.y()))
            if length < _HEAD_LENGTH:
                continue
            self._draw_arrow(painter, picture, ends, colour)
            names.append(self._name(arrow.name, end, run, colour, bold=True))
        return names

    def _draw_arrow(
        self, painter: QPainter, picture: Picture, ends: tuple[QPointF, QPointF], colour: Colour
    ) -> None:
        start, end = ends
        run = end - start
        length = float(np.hypot(run.x(), run.y()))
        along = run / length
        across = QPointF(-along.y(), along.x())
        neck = end - along * _HEAD_LENGTH
        head = QPolygonF([end, neck + across * (_HEAD_WIDTH / 2), neck - across * (_HEAD_WIDTH / 2)])
        self._case(painter, picture, start, neck, _ARROW_WIDTH)
        painter.setPen(QPen(qcolor(picture.theme.casing, 170), _CASING))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawPolygon(head)
        self._stroke(painter, picture, (start, neck), colour, _ARROW_WIDTH, cased=False)
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(qcolor(colour))
        painter.drawPolygon(head)

    def _draw_centre(self, painter: QPainter, picture: Picture) -> Box:
        """Draw the quartered disc of drawings, and return the box that it takes."""
        spot = self._spots(picture, np.asarray(picture.scene.mass_centre))
        middle = QPointF(spot[0], spot[1])
        disc = QRectF(middle.x() - _DISC, middle.y() - _DISC, 2 * _DISC, 2 * _DISC)
        painter.setPen(QPen(qcolor(picture.theme.casing, 200), _CASING + 1.0))
        painter.setBrush(qcolor((255, 255, 255)))
        painter.drawEllipse(disc)
        ink = qcolor((0x00, 0x5A, 0x8F))
        painter.setPen(Qt.PenStyle.NoPen)
        painter.setBrush(ink)
        for quarter in (0, 180):
            painter.drawPie(disc, quarter * 16, 90 * 16)
        painter.setPen(QPen(ink, 1.4))
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.drawEllipse(disc)
        return disc.x(), disc.y(), disc.width(), disc.height()

    def _draw_triad(self, painter: QPainter, picture: Picture) -> list[_Name]:
        """Draw the document's directions small in the lower left corner."""
        middle = QPointF(_TRIAD_AT, self.height() - _TRIAD_AT)
        directions = picture.camera.axes.T
        names = []
        for index in np.argsort(directions[:, 2]):
            right, up, toward = directions[index]
            tip = middle + QPointF(right, -up) * _TRIAD
            pen = QPen(qcolor(picture.theme.text, 255 if toward > _AWAY else 150), 1.3)
            pen.setCapStyle(Qt.PenCapStyle.RoundCap)
            painter.setPen(pen)
            painter.drawLine(middle, tip)
            if np.hypot(right, up) < _END_ON:
                painter.setBrush(qcolor(picture.theme.text))
                painter.drawEllipse(middle, 1.6, 1.6)
            else:
                names.append(self._name("xyz"[index], tip, tip - middle, picture.theme.text))
        return names

    def _emphasised(self, picture: Picture) -> list[_Name]:
        """Return the names of the parts that stand out, each above the nearest of its copies."""
        emphasis, axes = picture.emphasis, picture.camera.axes
        keys = set(emphasis.selected if len(emphasis.selected) <= _MOST_NAMED else ()) | {emphasis.hovered}
        names = []
        for bodies in picture.scene.everybody:
            if bodies.key not in keys and bodies is not picture.scene.ghost:
                continue
            bounds = bodies.surface.bounds
            middles = bodies.turn @ bounds.mean(axis=0) + bodies.shift
            nearest = int((middles @ axes[2]).argmax())
            # The highest point of the box on the screen.
            reach = 0.5 * np.ptp(bounds, axis=0) @ np.abs(bodies.turn[nearest].T @ axes[1])
            spot = self._spots(picture, middles[nearest] + 0.8 * reach * axes[1])
            if spot[2] > 0:
                at = QPointF(spot[0], spot[1])
                names.append(self._name(bodies.name, at, QPointF(0.0, -1.0), picture.theme.selected_edge))
        return names

    def _name(self, text: str, at: QPointF, toward: QPointF, colour: Colour, *, bold: bool = False) -> _Name:
        font = QFont(self.font())
        font.setBold(bold)
        metrics = QFontMetricsF(font)
        size = (metrics.horizontalAdvance(text) + 4, metrics.height())
        return _Name(text, Wish((at.x(), at.y()), size, (toward.x(), toward.y())), colour, font)

    def _draw_names(self, painter: QPainter, picture: Picture, names: list[_Name], taken: list[Box]) -> None:
        frame = (float(self.width()), float(self.height()))
        for name, box in zip(names, places([name.wish for name in names], frame, taken), strict=True):
            if box is None:
                continue
            path = QPainterPath()
            path.addText(QPointF(box[0] + 2, box[1] + QFontMetricsF(name.font).ascent()), name.font, name.text)
            casing = QPen(qcolor(picture.theme.casing, 200), _CASING)
            casing.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
            painter.strokePath(path, casing)
            painter.fillPath(path, qcolor(name.colour))

    def _note_box(self) -> list[Box]:
        if not self.note:
            return []
        metrics = QFontMetricsF(self.font())
        width, height = metrics.horizontalAdvance(self.note), metrics.height()
        return [(self.width() - width - 10, self.height() - height - 8, width, height)]

    def _draw_note(self, painter: QPainter, picture: Picture) -> None:
        for left, top, width, height in self._note_box():
            painter.setPen(qcolor(picture.theme.text))
            painter.drawText(QRectF(left, top, width + 4, height), self.note)

    def _case(self, painter: QPainter, picture: Picture, start: QPointF, end: QPointF, width: float) -> None:
        """Draw the light line beneath a mark that lets it read over any part."""
        pen = QPen(qcolor(picture.theme.casing, 130), width + _CASING - 1.0)
        pen.setCapStyle(Qt.PenCapStyle.FlatCap)
        painter.setPen(pen)
        painter.drawLine(start, end)

    def _stroke(
        self,
        painter: QPainter,
        picture: Picture,
        ends: tuple[QPointF, QPointF],
        colour: Colour,
        width: float,
        *,
        cased: bool = True,
    ) -> None:
        if cased:
            self._case(painter, picture, *ends, width)
        painter.setPen(QPen(qcolor(colour), width))
        painter.drawLine(*ends)
