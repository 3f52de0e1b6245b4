"""The signs that mark points on a plot: told apart by their shape, drawn in the colour of text."""

from __future__ import annotations

from PySide6.QtCore import QPointF, QRectF
from PySide6.QtGui import QBrush, QColor, QPainter, QPainterPath, QPen, QPolygonF

from app.window.style import colours

SIZE = 11


def _polygon(*corners: tuple[float, float]) -> QPainterPath:
    path = QPainterPath()
    path.addPolygon(QPolygonF([QPointF(x, y) for x, y in corners]))
    path.closeSubpath()
    return path


def path_of(sign: str) -> QPainterPath:
    """Return the outline of a sign, half a unit to each side of its middle, y downwards."""
    if sign == "triangle":
        return _polygon((0, -0.5), (0.5, 0.45), (-0.5, 0.45))
    if sign == "square":
        return _polygon((-0.4, -0.4), (0.4, -0.4), (0.4, 0.4), (-0.4, 0.4))
    if sign == "diamond":
        return _polygon((0, -0.5), (0.5, 0), (0, 0.5), (-0.5, 0))
    path = QPainterPath()
    path.addEllipse(QRectF(-0.42, -0.42, 0.84, 0.84))
    return path


def ink() -> tuple[QPen, QBrush]:
    """Return pen and brush of a sign in the theme of now."""
    c = colours()
    pen = QPen(QColor(c.text), 1.6)
    pen.setCosmetic(True)
    return pen, QBrush(QColor(c.ground))


def drawn(painter: QPainter, sign: str, middle: QPointF) -> None:
    """Draw a sign around a place."""
    pen, brush = ink()
    painter.save()
    painter.translate(middle)
    painter.scale(SIZE, SIZE)
    painter.setPen(pen)
    painter.setBrush(brush)
    painter.drawPath(path_of(sign))
    painter.restore()
