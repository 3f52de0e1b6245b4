"""The canvas that draws with OpenGL. It only draws: the pane around it takes mouse and keys."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any, cast

import numpy as np
from OpenGL import GL
from pyqtgraph.opengl import GLLinePlotItem, GLMeshItem, GLViewWidget
from pyqtgraph.opengl.items.GLMeshItem import DirtyFlag
from pyqtgraph.opengl.shaders import FragmentShader, ShaderProgram, VertexShader
from PySide6.QtCore import Qt
from PySide6.QtGui import QMatrix4x4, QSurfaceFormat
from PySide6.QtOpenGL import QOpenGLFramebufferObject, QOpenGLFramebufferObjectFormat

from app.window.view.batch import OPAQUE, Batch, Packed, face_colours, packed
from app.window.view.picture import Picture, qcolor, shown_lines, size_of
from app.window.view.shading import EDGE_WIDTHS, LIGHT_TERMS, MOST_MOVING

if TYPE_CHECKING:
    from PySide6.QtWidgets import QWidget

    from app.window.view.palette import Colour
    from app.window.view.scene import Bodies, Scene
    from app.window.view.surface import Float32Array, Surface
    from core.arrays import IntArray

_SHADER = "masswright soft"
_SAMPLES = 4
# A processor takes several samples per pixel of at most so many triangles.
_MOST_SMOOTH = 150_000
# Faces are pushed back a little in depth, so that the lines on them are whole.
_SOLID: dict[Any, Any] = {
    GL.GL_DEPTH_TEST: True,
    GL.GL_BLEND: False,
    GL.GL_CULL_FACE: False,
    GL.GL_POLYGON_OFFSET_FILL: True,
    "glPolygonOffset": (1.0, 1.0),
    "glDepthMask": (True,),
}
_SEE_THROUGH: dict[Any, Any] = {
    **_SOLID,
    GL.GL_BLEND: True,
    GL.GL_CULL_FACE: True,
    "glDepthMask": (False,),
    "glBlendFuncSeparate": (GL.GL_SRC_ALPHA, GL.GL_ONE_MINUS_SRC_ALPHA, GL.GL_ONE, GL.GL_ONE_MINUS_SRC_ALPHA),
}
_LINES: dict[Any, Any] = {
    GL.GL_DEPTH_TEST: True,
    GL.GL_BLEND: False,
    GL.GL_CULL_FACE: False,
    GL.GL_POLYGON_OFFSET_FILL: False,
    "glDepthMask": (True,),
}


def _make_shader() -> None:
    """Register the shader: a lamp at the upper left of the viewer, and a little more light from above."""
    base, key, sky, direction = LIGHT_TERMS
    x, y, z = direction
    ShaderProgram(
        _SHADER,
        [
            VertexShader("""
            uniform mat4 u_mvp;
            uniform mat3 u_normal;
            attribute vec4 a_position;
            attribute vec3 a_normal;
            attribute vec4 a_color;
            varying vec4 v_color;
            varying vec3 v_normal;
            void main() {
                v_normal = u_normal * a_normal;
                v_color = a_color;
                gl_Position = u_mvp * a_position;
            }
        """),
            FragmentShader(f"""
            #ifdef GL_ES
            precision mediump float;
            #endif
            varying vec4 v_color;
            varying vec3 v_normal;
            void main() {{
                vec3 n = normalize(v_normal);
                if (n.z < 0.0) n = -n;
                float key = max(dot(n, vec3({x:.6f}, {y:.6f}, {z:.6f})), 0.0);
                float light = {base:.4f} + {key:.4f} * key + {sky:.4f} * (0.5 + 0.5 * n.y);
                gl_FragColor = vec4(v_color.rgb * light, v_color.a);
            }}
        """),
        ],
    )


class _BatchItem(GLMeshItem):  # type: ignore[misc] # pyqtgraph has no types
    """A batch in buffers of its own, drawn once for each placement."""

    def __init__(self, batch: Batch) -> None:
        self._here = QMatrix4x4()
        self._solid = True
        self._dirty = DirtyFlag(0)
        # What the colours that are shown were made from.
        self._owner: IntArray | None = None
        self._of_bodies = np.zeros((0, 4), dtype=np.uint8)
        super().__init__(glOptions="opaque", shader=_SHADER)
        self.take(batch)
        self.vertexes, self.normals, self.faces = batch.vertices, batch.normals, batch.faces
        self._dirty = DirtyFlag.POSITION | DirtyFlag.NORMAL | DirtyFlag.FACES

    def take(self, batch: Batch) -> _BatchItem:
        """Draw a batch of the same vertices and faces, wherever it stands; return this item."""
        self.batch = batch
        self._placements = [QMatrix4x4(*matrix.ravel().tolist()) for matrix in batch.placements]
        return self

    def colour(self, of_bodies: np.ndarray[Any, np.dtype[np.uint8]]) -> None:
        """Give each vertex the colour of its body; see-through when the body is."""
        mine = of_bodies[: int(self.batch.owner.max(initial=-1)) + 1]
        if self.batch.owner is self._owner and np.array_equal(mine, self._of_bodies):
            return
        self._owner, self._of_bodies = self.batch.owner, mine
        self.colors = np.ascontiguousarray(of_bodies[self.batch.owner])
        self._dirty |= DirtyFlag.COLOR
        self._solid = bool((self.colors[:, 3] == OPAQUE).all())
        self.setGLOptions(_SOLID if self._solid else _SEE_THROUGH)
        self.setDepthValue(0 if self._solid else 10)

    def parseMeshData(self) -> DirtyFlag:
        dirty, self._dirty = self._dirty, DirtyFlag(0)
        return dirty

    def paint(self) -> None:
        for placement in self._placements:
            self._here = placement
            if self._solid:
                super().paint()
                continue
            # What is see-through is blended far side first: the inside of the surface, then its outside.
            for side in (GL.GL_FRONT, GL.GL_BACK):
                self.updateGLOptions({"glCullFace": (side,)})
                super().paint()

    def mvpMatrix(self) -> QMatrix4x4:
        return cast("QMatrix4x4", super().mvpMatrix() * self._here)

    def modelViewMatrix(self) -> QMatrix4x4:
        return cast("QMatrix4x4", super().modelViewMatrix() * self._here)

    def release(self) -> None:
        """Give the buffers back; the context is current."""
        for buffer in (
            self.m_vbo_position,
            self.m_vbo_normal,
            self.m_vbo_color,
            self.m_ibo_faces,
            self.m_vbo_edgeVerts,
            self.m_ibo_edges,
        ):
            buffer.destroy()


class GlView(GLViewWidget):  # type: ignore[misc] # pyqtgraph has no types
    """Draws pictures with OpenGL 2.1 or newer, hardware or software."""

    def __init__(self, parent: QWidget | None = None, *, in_software: bool = False) -> None:
        super().__init__(parent)
        chosen = QSurfaceFormat.defaultFormat()
        chosen.setDepthBufferSize(24)
        self.setFormat(chosen)
        self._in_software = in_software
        self._smooth: QOpenGLFramebufferObject | None = None
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setAttribute(Qt.WidgetAttribute.WA_TransparentForMouseEvents)
        _make_shader()
        self.note = ""
        self._picture: Picture | None = None
        self._shown: tuple[Scene, bool] | None = None
        self._packs: dict[bool, Packed] = {}
        self._items: list[_BatchItem] = []
        self._lines = [GLLinePlotItem(mode="lines", glOptions=_LINES) for _ in EDGE_WIDTHS]
        for rank, item in enumerate(self._lines):
            item.setDepthValue(5 + rank)
            self.addItem(item)

    def show_picture(self, picture: Picture) -> None:
        """Draw this picture from now on."""
        before, self._picture = self._picture, picture
        light = picture.moving and picture.scene.count > MOST_MOVING
        if before is None or before.scene is not picture.scene:
            self._packs.clear()
        fresh = self._shown is None or self._shown[0] is not picture.scene or self._shown[1] != light
        if fresh:
            self._replace_items(picture.scene, light=light)
        if fresh or before is None or before.emphasis != picture.emphasis or before.theme is not picture.theme:
            colours = face_colours(picture.scene, picture.emphasis, picture.theme)
            for item in self._items:
                item.colour(colours)
        self.setBackgroundColor(qcolor(picture.theme.ground))
        self._set_lines(picture)
        self.update()

    def _pack(self, scene: Scene, *, light: bool) -> Packed:
        if light not in self._packs:
            self._packs[light] = packed(scene, _light_surface if light else _full_surface)
        return self._packs[light]

    def _replace_items(self, scene: Scene, *, light: bool) -> None:
        pack = self._pack(scene, light=light)
        before = {id(item.batch.vertices): item for item in self._items}
        # A large surface that only stands elsewhere keeps its buffers.
        kept = [before.pop(id(batch.vertices), None) for batch in pack.batches]
        self._drop([item for item in self._items if item not in kept])
        self._items = [
            self._new_item(batch) if item is None else item.take(batch)
            for batch, item in zip(pack.batches, kept, strict=True)
        ]
        self._shown = (scene, light)

    def _new_item(self, batch: Batch) -> _BatchItem:
        item = _BatchItem(batch)
        self.addItem(item)
        return item

    def _drop(self, items: list[_BatchItem]) -> None:
        """Draw these no longer, and give their buffers back."""
        current = self.isValid() and bool(items)
        if current:
            self.makeCurrent()
        for item in items:
            self.removeItem(item)
            if current:
                item.release()
        if current:
            self.doneCurrent()

    def _set_lines(self, picture: Picture) -> None:
        assert self._shown is not None
        lines = self._pack(picture.scene, light=self._shown[1]).lines
        segments = shown_lines(lines, picture)
        theme, scale = picture.theme, float(self.devicePixelRatioF())
        colours = (theme.edge, theme.hovered_edge, theme.selected_edge)
        for item, ends, colour, width in zip(self._lines, segments, colours, EDGE_WIDTHS, strict=True):
            _set_line(item, ends.reshape(-1, 3), colour, width * scale)

    def paintGL(self) -> None:
        """Draw the picture, with several samples per pixel where that is not too dear."""
        # The ground is cleared with depth, so depth has to be written.
        GL.glDepthMask(True)
        picture = self._picture
        if picture is None or (self._in_software and (picture.moving or picture.scene.count > _MOST_SMOOTH)):
            super().paintGL()
        else:
            self._paint_smoothly()
        GL.glDepthMask(True)
        GL.glDisable(GL.GL_POLYGON_OFFSET_FILL)

    def _paint_smoothly(self) -> None:
        # Rounded as Qt rounds the size of the buffer that the widget shows.
        scale = float(self.devicePixelRatioF())
        width, height = (max(int(side * scale + 0.5), 1) for side in (self.width(), self.height()))
        buffer = self._smooth
        if buffer is None or (buffer.width(), buffer.height()) != (width, height):
            chosen = QOpenGLFramebufferObjectFormat()
            chosen.setSamples(_SAMPLES)
            chosen.setAttachment(QOpenGLFramebufferObject.Attachment.CombinedDepthStencil)
            buffer = self._smooth = QOpenGLFramebufferObject(width, height, chosen)
        buffer.bind()
        GL.glViewport(0, 0, width, height)
        self.paint(region=self.getViewport(), viewport=self.getViewport())
        QOpenGLFramebufferObject.bindDefault()
        # No target means the one that the widget draws to.
        QOpenGLFramebufferObject.blitFramebuffer(cast("QOpenGLFramebufferObject", None), buffer)

    def initializeGL(self) -> None:
        """Start afresh in a new context: what belonged to the old one cannot be drawn into."""
        self._smooth = None
        super().initializeGL()

    def drawItemTree(self, item: Any = None, useItemNames: bool = False) -> None:
        """Draw the items in their order. Unlike the base class's, an error while drawing is not swallowed."""
        for drawn in sorted(self.items, key=lambda entry: entry.depthValue()):
            if drawn.visible():
                if self.default_vao.isCreated():
                    self.default_vao.bind()
                drawn.paint()

    def viewMatrix(self) -> QMatrix4x4:
        """Return the camera's matrix for points relative to the scene's middle."""
        if self._picture is None:
            return QMatrix4x4()
        return QMatrix4x4(*self._picture.camera.view_matrix(self._picture.scene.centre).ravel().tolist())

    def projectionMatrix(self, region: Any, viewport: Any) -> QMatrix4x4:
        """Return the camera's projection, parallel or perspective."""
        if self._picture is None:
            return QMatrix4x4()
        size = size_of(self.width(), self.height())
        matrix = self._picture.camera.projection_matrix(size, self._picture.depths())
        return QMatrix4x4(*matrix.ravel().tolist())


def _set_line(item: GLLinePlotItem, ends: Float32Array, colour: Colour, width: float) -> None:
    item.setVisible(bool(len(ends)))
    if len(ends):
        red, green, blue = (channel / 255 for channel in colour)
        item.setData(pos=ends, color=(red, green, blue, 1.0), width=width)


def _full_surface(bodies: Bodies) -> Surface:
    return bodies.surface


def _light_surface(bodies: Bodies) -> Surface:
    return bodies.surface.light
