"""How handles and the frame of a line are drawn: plain lines with letters, over the bodies, in every kind of view.

A line to move along ends in a dot, an arc to turn about has a ring in its middle, and a plane to move in is a square:
form and letters tell them apart, not colour.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QPointF, QRectF, Qt
from PySide6.QtGui import QFontMetricsF, QPainter, QPen, QPolygonF

from app.window.view.handles import FRAME_REACH, metres_at, paths_of
from app.window.view.picture import qcolor

if TYPE_CHECKING:
    from app.window.view.camera import Size
    from app.window.view.hand import Shown
    from app.window.view.handles import Grip
    from app.window.view.picture import Picture
    from core.arrays import FloatArray

LETTERS = "xyz"
_WIDTH, _LIT_WIDTH, _CASING = 1.6, 3.0, 2.4
_DOT, _LIT_DOT = 3.6, 5.0
_FILL, _LIT_FILL = 46, 130
# A frame's axis that is as short as this on the screen, px, has no letter of its own.
_SHORTEST = 8.0
# m, or as a cosine: what differs less stands, or runs, the same way.
_SAME = 1e-9
_BESIDE, _INSET = QPointF(16.0, 18.0), 6.0


def draw_handles(painter: QPainter, picture: Picture, size: Size, shown: Shown) -> list[tuple[str, QPointF, QPointF]]:
    """Draw the line's frame and its handles; return letters to write: text, what it names, away from where (px)."""
    letters = _draw_frame(painter, picture, size, shown)
    if not shown.grips:
        return [each for each in letters if _in_sight(each[1], size)]
    paths = paths_of(shown.handles, picture.camera, size)
    seen = {grip: path for grip, path in paths.items() if not shown.held or grip == shown.lit}
    for grip, path in seen.items():
        _draw_grip(painter, picture, grip, path, lit=grip == shown.lit)
    ends = {LETTERS[grip.axis]: path for grip, path in seen.items() if grip.kind == "along"}
    named = [(letter, _point(path[-1]), _point(path[-1] - path[0])) for letter, path in ends.items()]
    frame = [each for each in letters if each[0] not in ends or not _is_frame(shown)]
    return [each for each in (*named, *frame) if _in_sight(each[1], size)]


def _is_frame(shown: Shown) -> bool:
    """Return whether the handles run out of the line's own frame, so that their letters do for both."""
    handles = shown.handles
    along = np.allclose(handles.directions, handles.frame.turn.T, rtol=0, atol=_SAME)
    return bool(along and np.allclose(handles.middle, handles.frame.shift, rtol=_SAME, atol=_SAME))


def _draw_frame(painter: QPainter, picture: Picture, size: Size, shown: Shown) -> list[tuple[str, QPointF, QPointF]]:
    """Draw the line's own x, y and z at its origin; return their letters."""
    frame = shown.handles.frame
    reach = FRAME_REACH * metres_at(picture.camera, size, frame.shift)
    if reach <= 0:
        return []
    spots = picture.camera.project(np.vstack([frame.shift, frame.shift + reach * frame.turn.T]), size)
    origin, letters = _point(spots[0]), []
    for casing in (True, False):
        for axis in range(3):
            tip = _point(spots[axis + 1])
            painter.setPen(_pen(picture, _WIDTH, casing=casing, colour=picture.theme.text))
            painter.drawLine(origin, tip)
            if not casing and np.linalg.norm(spots[axis + 1, :2] - spots[0, :2]) > _SHORTEST:
                letters.append((LETTERS[axis], tip, tip - origin))
    painter.setPen(_pen(picture, _WIDTH, casing=False, colour=picture.theme.text))
    painter.setBrush(qcolor(picture.theme.casing))
    painter.drawRect(QRectF(origin.x() - 2.5, origin.y() - 2.5, 5.0, 5.0))
    return letters


def _draw_grip(painter: QPainter, picture: Picture, grip: Grip, path: FloatArray, *, lit: bool) -> None:
    points = [_point(spot) for spot in path]
    line = QPolygonF(points)
    width = _LIT_WIDTH if lit else _WIDTH
    colour = picture.theme.handle
    painter.setBrush(Qt.BrushStyle.NoBrush)
    painter.setPen(_pen(picture, width, casing=True, colour=colour))
    painter.drawPolyline(line)
    painter.setPen(_pen(picture, width, casing=False, colour=colour))
    if grip.kind == "in":
        painter.setBrush(qcolor(colour, _LIT_FILL if lit else _FILL))
        painter.drawPolygon(line)
        return
    painter.drawPolyline(line)
    dot = _LIT_DOT if lit else _DOT
    painter.setBrush(qcolor(colour if grip.kind == "along" or lit else picture.theme.ground))
    painter.drawEllipse(points[-1] if grip.kind == "along" else points[len(points) // 2], dot, dot)


def draw_words(painter: QPainter, picture: Picture, size: Size, shown: Shown) -> None:
    """Write beside the pointer what the handle does, or how far it was dragged."""
    if not shown.words:
        return
    metrics = QFontMetricsF(painter.font())
    width, height = metrics.horizontalAdvance(shown.words) + 2 * _INSET, metrics.height() + _INSET
    place = QPointF(*shown.spot) + _BESIDE
    left = place.x() if place.x() + width <= size[0] else shown.spot[0] - _BESIDE.x() - width
    top = place.y() if place.y() + height <= size[1] else shown.spot[1] - _BESIDE.y() - height
    box = QRectF(max(left, 0.0), max(top, 0.0), width, height)
    painter.setPen(QPen(qcolor(picture.theme.handle), 1.0))
    painter.setBrush(qcolor(picture.theme.ground, 240))
    painter.drawRoundedRect(box, 3.0, 3.0)
    painter.setPen(qcolor(picture.theme.text))
    painter.drawText(box, Qt.AlignmentFlag.AlignCenter, shown.words)


def _pen(picture: Picture, width: float, *, casing: bool, colour: tuple[int, int, int]) -> QPen:
    pen = QPen(qcolor(picture.theme.casing, 150), width + _CASING) if casing else QPen(qcolor(colour), width)
    pen.setCapStyle(Qt.PenCapStyle.RoundCap)
    pen.setJoinStyle(Qt.PenJoinStyle.RoundJoin)
    return pen


def _in_sight(spot: QPointF, size: Size) -> bool:
    return 0 <= spot.x() <= size[0] and 0 <= spot.y() <= size[1]


def _point(spot: FloatArray) -> QPointF:
    return QPointF(float(spot[0]), float(spot[1]))
