"""The canvas that draws without OpenGL. It only draws: the pane around it takes mouse and keys."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from PySide6.QtCore import QLineF, QRect, Qt
from PySide6.QtGui import QImage, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QWidget

from app.window.view.batch import Packed, face_colours, packed
from app.window.view.picture import Picture, qcolor, shown_lines
from app.window.view.shading import EDGE_WIDTHS, MOST_MOVING, Raster, Stand, rastered, visible_lines

if TYPE_CHECKING:
    from app.window.view.scene import Bodies, Scene
    from app.window.view.surface import Surface
    from core.arrays import FloatArray

# While the camera moves, one drawn pixel stands for a square of this many.
_COARSE = 2
# More triangles than this are drawn lighter even at rest.
_MOST_AT_REST = 150_000


class SoftView(QWidget):
    """Draws pictures with NumPy and QPainter."""

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        self.setAttribute(Qt.WidgetAttribute.WA_OpaquePaintEvent)
        self.note = "Drawn in software: no OpenGL here"
        self._picture: Picture | None = None
        self._scene: Scene | None = None
        self._packs: dict[bool, Packed] = {}

    def show_picture(self, picture: Picture) -> None:
        """Draw this picture from now on."""
        if self._scene is not picture.scene:
            self._scene = picture.scene
            self._packs.clear()
        self._picture = picture
        self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """Draw faces into an image, and over it the lines that they do not hide."""
        painter = QPainter(self)
        picture = self._picture
        if picture is None or not picture.scene.everybody:
            painter.fillRect(self.rect(), qcolor(picture.theme.ground) if picture else self.palette().window())
            painter.end()
            return
        coarse = picture.moving and picture.scene.count > MOST_MOVING // 10
        scale = 1 / _COARSE if coarse else float(self.devicePixelRatioF())
        stand = Stand(
            picture.camera,
            picture.depths(),
            picture.scene.centre,
            max(round(self.width() * scale), 1),
            max(round(self.height() * scale), 1),
        )
        pack = self._pack(picture)
        colours = face_colours(picture.scene, picture.emphasis, picture.theme)
        raster = rastered(pack, stand, colours, picture.theme.ground)
        painter.setRenderHint(QPainter.RenderHint.SmoothPixmapTransform)
        painter.drawImage(self.rect(), _image(raster), QRect(0, 0, stand.width, stand.height))
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        self._draw_lines(painter, picture, pack, stand, raster)
        painter.end()

    def _pack(self, picture: Picture) -> Packed:
        light = picture.scene.count > (MOST_MOVING // 3 if picture.moving else _MOST_AT_REST)
        if light not in self._packs:
            self._packs[light] = packed(picture.scene, _light_surface if light else _full_surface)
        return self._packs[light]

    def _draw_lines(self, painter: QPainter, picture: Picture, pack: Packed, stand: Stand, raster: Raster) -> None:
        theme = picture.theme
        across = self.width() / stand.width
        colours = (theme.edge, theme.hovered_edge, theme.selected_edge)
        for segments, colour, width in zip(shown_lines(pack.lines, picture), colours, EDGE_WIDTHS, strict=True):
            ends = visible_lines(segments.astype(np.float64), stand, raster.depth) * across
            painter.setPen(QPen(qcolor(colour), width, c=Qt.PenCapStyle.RoundCap))
            painter.drawLines(_qlines(ends))


def _image(raster: Raster) -> QImage:
    height, width, _ = raster.colours.shape
    data = np.ascontiguousarray(raster.colours)
    # A copy: the image does not keep the array alive.
    return QImage(data.data, width, height, 3 * width, QImage.Format.Format_RGB888).copy()


def _qlines(ends: FloatArray) -> list[QLineF]:
    return [QLineF(*four) for four in ends.reshape(-1, 4).tolist()]


def _full_surface(bodies: Bodies) -> Surface:
    return bodies.surface


def _light_surface(bodies: Bodies) -> Surface:
    return bodies.surface.light
