"""The outline on a small canvas: points that are dragged over a grid, and the place that is at fault."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QEvent, QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QFocusEvent, QKeyEvent, QMouseEvent, QPainter, QPainterPath, QPaintEvent, QPen
from PySide6.QtWidgets import QWidget

from app.window.outline.draft import Loops, Place, bounds_of, grid_step, lines_of, places, snapped
from app.window.style import Colours, colours

if TYPE_CHECKING:
    from core.arrays import FloatArray

HEIGHT = 224
_INSET = 22.0
_HANDLE, _REACH = 3.5, 9.0
_FAULT = 8.0
_FINEST_GRID_PX = 4.0
_CHAIN = [16.0, 3.0, 0.6, 3.0]
TIP = (
    "Drag a point to move it; it snaps to the grid, with Shift it moves freely. Arrow keys move the chosen point by\n"
    "one step of the grid. A double click on the line puts a new point there; Delete takes the chosen one out."
)
_ARROWS = {
    Qt.Key.Key_Left: (-1, 0), Qt.Key.Key_Right: (1, 0), Qt.Key.Key_Up: (0, 1), Qt.Key.Key_Down: (0, -1),
}


class OutlineCanvas(QWidget):
    """Draws loops and lets their points be moved.

    Signals:
        chosen: the place (loop, point) that was clicked.
        dragged, moved: place and new (x, y) m of a point, while it is dragged and when it is let go.
        split: place and (x, y) m of a new point behind it.
        removed: the place of a point to take out.
    """

    chosen = Signal(object)
    dragged = Signal(object, object)
    moved = Signal(object, object)
    split = Signal(object, object)
    removed = Signal(object)

    def __init__(self) -> None:
        super().__init__()
        self.setAccessibleName("Outline")
        self.setAccessibleDescription(TIP)
        self.setToolTip(TIP)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setFixedHeight(HEIGHT)
        self.setMinimumWidth(160)
        self.step = 0.0
        self.shows_axis = False
        self.faults: tuple[tuple[float, float], ...] = ()
        self.current: Place | None = None
        self._loops: Loops = ()
        self._bounds: FloatArray = np.zeros((2, 2))
        self._held: Place | None = None
        self._was_moved = False

    def sizeHint(self) -> QSize:
        """Return a size at which an outline reads well."""
        return QSize(280, HEIGHT)

    def show_loops(self, loops: Loops) -> None:
        """Show these loops; the picture is fitted to them, and what is at fault, unless a point is being dragged."""
        self._loops = loops
        if self._held is None and loops:
            spots = np.concatenate([bounds_of(loops), np.reshape(self.faults, (-1, 2))])
            self._bounds = np.stack([spots.min(axis=0), spots.max(axis=0)])
        self.update()

    @property
    def grid(self) -> float:
        """The step (m) to which points snap: the chosen one, or one that suits the outline."""
        size = float(np.max(self._bounds[1] - self._bounds[0]))
        return self.step or (grid_step(size) if size > 0 else 0.001)

    # From the outline to the screen and back

    def _scale(self) -> float:
        extent = np.maximum(self._bounds[1] - self._bounds[0], 1e-12)
        room = np.maximum([self.width() - 2 * _INSET, self.height() - 2 * _INSET], 10)
        return float(np.min(room / extent))

    def spot_of(self, x: float, y: float) -> QPointF:
        """Return where a point (m) is on the screen."""
        middle, scale = self._bounds.mean(axis=0), self._scale()
        return QPointF(self.width() / 2 + (x - middle[0]) * scale, self.height() / 2 - (y - middle[1]) * scale)

    def _point_at(self, spot: QPointF, *, free: bool) -> tuple[float, float]:
        middle, scale = self._bounds.mean(axis=0), self._scale()
        x = float(middle[0] + (spot.x() - self.width() / 2) / scale)
        y = float(middle[1] - (spot.y() - self.height() / 2) / scale)
        return (x, y) if free else (snapped(x, self.grid), snapped(y, self.grid))

    def _place_at(self, spot: QPointF) -> Place | None:
        near = [(self._distance(place, spot), place) for place in places(self._loops)]
        distance, place = min(near, default=(np.inf, (0, 0)))
        return place if distance <= _REACH else None

    def _distance(self, place: Place, spot: QPointF) -> float:
        point = self._loops[place[0]][place[1]]
        way = self.spot_of(point.x, point.y) - spot
        return float(np.hypot(way.x(), way.y()))

    # Mouse and keys

    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Choose a point, and hold it."""
        self._held, self._was_moved = self._place_at(event.position()), False
        if self._held is not None:
            self.current = self._held
            self.chosen.emit(self._held)
            self.update()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        """Drag the held point."""
        if self._held is not None:
            self._was_moved = True
            self.dragged.emit(self._held, self._point_at(event.position(), free=_is_free(event)))

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        """Let the held point go."""
        held, self._held = self._held, None
        if held is not None and self._was_moved:
            self.moved.emit(held, self._point_at(event.position(), free=_is_free(event)))

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Put a new point on the edge that was clicked."""
        if self._place_at(event.position()) is not None:
            return
        spot = np.array(self._point_at(event.position(), free=True))
        best: tuple[float, Place] = (np.inf, (0, 0))
        for place in places(self._loops):
            points = self._loops[place[0]]
            a, b = (np.array(points[k % len(points)][:2]) for k in (place[1], place[1] + 1))
            share = np.clip((spot - a) @ (b - a) / max(float((b - a) @ (b - a)), 1e-30), 0, 1)
            best = min(best, (float(np.linalg.norm(a + share * (b - a) - spot)), place))
        if best[0] * self._scale() <= _REACH:
            self.split.emit(best[1], self._point_at(event.position(), free=_is_free(event)))

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Move the chosen point by a step of the grid, or take it out; every other key is left to the page."""
        key, place = Qt.Key(event.key()), self.current
        if place is None or place not in places(self._loops) or (key not in _ARROWS and key != Qt.Key.Key_Delete):
            super().keyPressEvent(event)
        elif key == Qt.Key.Key_Delete:
            self.removed.emit(place)
        else:
            point, (right, up) = self._loops[place[0]][place[1]], _ARROWS[key]
            step = self.grid
            self.moved.emit(place, (_moved_by(point.x, right, step), _moved_by(point.y, up, step)))

    def event(self, event: QEvent) -> bool:
        """Keep Delete from the ledger while the keyboard is here."""
        if (
            event.type() == QEvent.Type.ShortcutOverride
            and isinstance(event, QKeyEvent)
            and event.key() == Qt.Key.Key_Delete
        ):
            event.accept()
            return True
        return super().event(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Show the focus; the first point is chosen where none was."""
        super().focusInEvent(event)
        if self.current is None and self._loops:
            self.current = (0, 0)
            self.chosen.emit(self.current)
        self.update()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Stop showing the focus."""
        super().focusOutEvent(event)
        self.update()

    # Drawing

    def paintEvent(self, event: QPaintEvent) -> None:
        """Draw grid, axis, outline, points and the place at fault."""
        painter, theme = QPainter(self), colours()
        painter.fillRect(self.rect(), QColor(theme.ground))
        self._draw_grid(painter, theme)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if self._loops:
            self._draw_axis(painter, theme)
            self._draw_outline(painter, theme)
            self._draw_points(painter, theme)
        for fault in self.faults:
            self._draw_fault(painter, theme, fault)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QColor(theme.blue if self.hasFocus() else theme.hairline))
        painter.drawRect(QRectF(self.rect()).adjusted(0.5, 0.5, -0.5, -0.5))

    def _draw_grid(self, painter: QPainter, theme: Colours) -> None:
        apart = self.grid * self._scale()
        if apart < _FINEST_GRID_PX:
            return
        faint = QColor(theme.hairline)
        faint.setAlpha(90)
        painter.setPen(faint)
        origin = self.spot_of(0.0, 0.0)
        for k in range(int(np.ceil(-origin.x() / apart)), int((self.width() - origin.x()) / apart) + 1):
            x = round(origin.x() + k * apart)
            painter.drawLine(x, 0, x, self.height())
        for k in range(int(np.ceil(-origin.y() / apart)), int((self.height() - origin.y()) / apart) + 1):
            y = round(origin.y() + k * apart)
            painter.drawLine(0, y, self.width(), y)

    def _draw_axis(self, painter: QPainter, theme: Colours) -> None:
        if not self.shows_axis:
            return
        x = min(max(self.spot_of(0.0, 0.0).x(), 2.0), self.width() - 2.0)
        pen = QPen(QColor(theme.quiet), 1.2)
        pen.setDashPattern(_CHAIN)
        painter.setPen(pen)
        painter.drawLine(QPointF(x, 0), QPointF(x, self.height()))

    def _draw_outline(self, painter: QPainter, theme: Colours) -> None:
        path = QPainterPath()
        for line in lines_of(self._loops):
            path.moveTo(self.spot_of(*line[0]))
            for x, y in line[1:]:
                path.lineTo(self.spot_of(x, y))
            path.closeSubpath()
        fill = QColor(theme.selection)
        fill.setAlpha(120)
        painter.setBrush(fill)
        painter.setPen(QPen(QColor(theme.text), 1.3))
        painter.drawPath(path)

    def _draw_points(self, painter: QPainter, theme: Colours) -> None:
        painter.setPen(QPen(QColor(theme.blue), 1.2))
        for place in places(self._loops):
            point = self._loops[place[0]][place[1]]
            is_current = place == self.current
            half = _HANDLE + (1.5 if is_current else 0.0)
            painter.setBrush(QColor(theme.blue if is_current else theme.ground))
            spot = self.spot_of(point.x, point.y)
            painter.drawRect(QRectF(spot.x() - half, spot.y() - half, 2 * half, 2 * half))

    def _draw_fault(self, painter: QPainter, theme: Colours, fault: tuple[float, float]) -> None:
        spot = self.spot_of(*fault)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(QColor(theme.failed), 2.0))
        painter.drawEllipse(spot, _FAULT, _FAULT)
        for way in (1, -1):
            painter.drawLine(spot + QPointF(-_FAULT, -way * _FAULT), spot + QPointF(_FAULT, way * _FAULT))


def _is_free(event: QMouseEvent) -> bool:
    return bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)


def _moved_by(value: float, way: int, step: float) -> float:
    """Return a coordinate moved to the next line of the grid one way, or as it is for no way."""
    return snapped(value + way * step, step) if way else value
