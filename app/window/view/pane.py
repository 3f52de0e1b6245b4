"""The view as the main window uses it: it holds a canvas and the marks over it, and takes mouse and keys."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Protocol, cast

import numpy as np
from PySide6.QtCore import QEvent, QPointF, QSize, Qt, QTimer, Signal
from PySide6.QtWidgets import QWidget

from app.window.view.camera import Camera, LookName, Size
from app.window.view.carried import carried
from app.window.view.hand import Hand
from app.window.view.nudging import nudge_of
from app.window.view.opengl import prepare_opengl, probed
from app.window.view.overlay import Overlay
from app.window.view.picking import pick
from app.window.view.picture import Picture, size_of, theme_of
from app.window.view.scene import Line, Scene, SurfaceStore, scene_of

if TYPE_CHECKING:
    from collections.abc import Mapping

    from PySide6.QtGui import QFocusEvent, QKeyEvent, QMouseEvent, QResizeEvent, QShowEvent, QWheelEvent

    from app.window.view.hand import Steps
    from app.window.view.handles import Handles
    from app.window.view.labels import Box
    from core.arrays import FloatArray
    from core.assembly import Assembly, Part
    from core.placement import Placement

TOOL_TIP = (
    "Drag turns the view; drag with Shift or with the middle button moves it; the wheel zooms to the\n"
    "pointer. A click selects a part, with Ctrl or Shift one more. F shows everything; 1–7: front, back, left,\n"
    "right, top, bottom, isometric; arrow keys turn; + and − zoom.\n"
    "Drag a handle of the selected line to move or turn it, with Shift in finer steps; Escape puts it back.\n"
    "Ctrl with arrow keys, Page up and Page down moves it by a step, with Shift as well turns it."
)

_KEYS: dict[int, LookName] = {
    Qt.Key.Key_1: "front",
    Qt.Key.Key_2: "back",
    Qt.Key.Key_3: "left",
    Qt.Key.Key_4: "right",
    Qt.Key.Key_5: "top",
    Qt.Key.Key_6: "bottom",
    Qt.Key.Key_7: "iso",
}
_ARROWS: dict[int, tuple[float, float]] = {
    Qt.Key.Key_Left: (1.0, 0.0),
    Qt.Key.Key_Right: (-1.0, 0.0),
    Qt.Key.Key_Up: (0.0, 1.0),
    Qt.Key.Key_Down: (0.0, -1.0),
}
_ARROW_STEP = np.radians(7.5)
_TURN_PER_PIXEL = np.radians(0.45)
_ZOOM_STEP = 1.2
_ROUND_OFF = 1e-9
# A press that moves less than this many pixels is a click.
_CLICK = 4.0
# Room left around a fitted scene, px: names beside the marks need some.
_INSET = 30.0
# The picture is drawn in full this long after the last movement, ms; the pointer is looked up this often.
_REST, _HOVER = 160, 40


class Canvas(Protocol):
    """What draws pictures: GlView or SoftView."""

    note: str

    def show_picture(self, picture: Picture) -> None:
        """Draw this picture from now on."""


class Aim(Protocol):
    """What takes the clicks in the view, instead of the selection, while something is pointed at."""

    def hover(self, spot: QPointF) -> None:
        """Show what a click at a place in the pane would take."""

    def click(self, spot: QPointF) -> None:
        """Take what is at a place in the pane."""


def make_view(parent: QWidget) -> QWidget:
    """Return a canvas for this machine: a GlView where OpenGL works, otherwise a SoftView."""
    found = probed()
    if found.works:
        prepare_opengl()
        from app.window.view.gl_view import GlView

        return cast("QWidget", GlView(parent, in_software=found.in_software))
    from app.window.view.soft_view import SoftView

    return SoftView(parent)


class ViewPane(QWidget):
    """Shows an assembly in space.

    Signals:
        picked(str, bool): the key of the part that was clicked ("" for empty space), and whether it joins what
            is selected already.
        hovered(str): the key of the part under the pointer, "" for none.
        nudged(Nudge): a key asks to move or turn what is selected by a step.
        aimed: something else takes the clicks now, or does so no more.
    """

    picked = Signal(str, bool)
    hovered = Signal(str)
    nudged = Signal(object)
    aimed = Signal()

    def __init__(self, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setMouseTracking(True)
        self.setAccessibleName("View of the assembly")
        self.setAccessibleDescription(TOOL_TIP)
        self.setToolTip(TOOL_TIP)
        self.setMinimumSize(160, 120)
        self.canvas = make_view(self)
        self._overlay = Overlay(self)
        self._overlay.note = cast("Canvas", self.canvas).note
        # A worker that imports a large mesh may fill it beforehand: store.of(facets).
        self.store = SurfaceStore()
        self._assembly: Assembly | None = None
        self._ghost: Part | None = None
        self._picture = Picture(Scene(), Camera(np.zeros(3)), theme=theme_of(self.palette()))
        # Fitted when there is something to fit and a size to fit it to, and again until the camera is moved.
        self._fit_due = True
        self._stays_fitted = True
        self._pressed: QPointF | None = None
        self._last = QPointF()
        self._dragging = False
        self._under = ""
        # The scene without what is being dragged in it, while something is.
        self._at_rest: Scene | None = None
        self.hand = Hand(self)
        self.aim: Aim | None = None
        self._rest = QTimer(self, singleShot=True, interval=_REST)
        self._rest.timeout.connect(lambda: self._redraw(moving=False))
        self._look_up = QTimer(self, singleShot=True, interval=_HOVER)
        self._look_up.timeout.connect(self._tell_hovered)

    @property
    def camera(self) -> Camera:
        """Where the scene is seen from."""
        return self._picture.camera

    @property
    def scene(self) -> Scene:
        """What is shown."""
        return self._picture.scene

    @property
    def frame_size(self) -> Size:
        """Width and height of the picture in logical pixels."""
        return size_of(self.width(), self.height())

    def sizeHint(self) -> QSize:
        """Return a size at which an assembly of some parts reads well."""
        return QSize(560, 440)

    def show_assembly(
        self, assembly: Assembly, selected: frozenset[str] = frozenset(), hovered: str | None = None
    ) -> None:
        """Show an assembly, the parts with these keys selected, and lit up the one that the pointer is on."""
        emphasis = replace(self._picture.emphasis, selected=selected, hovered=hovered or None)
        was_empty = not self.scene.everybody
        if assembly is not self._assembly:
            self._assembly, self._at_rest = assembly, None
            self._picture = replace(self._picture, scene=scene_of(assembly, self.store, self._ghost, self.scene))
            self._fit_due |= self._stays_fitted
        self._picture = replace(self._picture, emphasis=emphasis)
        if was_empty and self.scene.everybody:
            self._fit_due = self._stays_fitted = True
        self._redraw(moving=self._picture.moving)

    def set_preview(self, part: Part | None) -> None:
        """Show a part that is not in the document yet, see-through; None takes it away."""
        if part is self._ghost or (part is None and self._ghost is None):
            return
        self._ghost, self._at_rest = part, None
        if self._assembly is None:
            return
        was_empty = not self.scene.everybody
        self._picture = replace(self._picture, scene=scene_of(self._assembly, self.store, part, self.scene))
        self._fit_due |= was_empty or self._stays_fitted
        self._redraw(moving=False)

    def show_carried(self, standing: Mapping[str, Placement]) -> None:
        """Show parts, by their keys, as if their copies stood there (tf_document_part); none: as they are."""
        at_rest = self._at_rest or self.scene
        self._at_rest = at_rest if standing else None
        self._picture = replace(self._picture, scene=carried(at_rest, standing) if standing else at_rest)
        self._redraw(moving=bool(standing))

    def show_handles(self, handles: Handles | None, steps: Steps, *, grips: bool) -> None:
        """Show these handles, or none, and let amounts snap to these steps."""
        self.hand.show(handles, steps, grips=grips)
        self._show_hand()

    def cover(self, boxes: list[Box]) -> None:
        """Keep names off these boxes (left, top, width, height) px, which something else covers."""
        self._overlay.covered = boxes
        self._overlay.update()

    def point_with(self, aim: Aim | None) -> None:
        """Let something take the clicks, handles being hidden meanwhile; None: they select again."""
        self.aim = aim
        self._show_hand()
        self.aimed.emit()

    def light_up(self, edges: FloatArray) -> None:
        """Draw edges (k, 2, 3) m of the document frame over everything; none takes those shown away."""
        self._picture = replace(self._picture, found=edges)
        self._redraw(moving=False)

    def show_vectors(self, vectors: tuple[Line, ...]) -> None:
        """Draw arrows (m, document frame) over everything, each with its name; none takes those shown away."""
        if vectors or self._picture.vectors:
            self._picture = replace(self._picture, vectors=vectors)
            self._redraw(moving=False)

    def go_to(self, points: FloatArray) -> None:
        """Show these points (n, 3) m, as near as they allow, from where the camera looks."""
        self._fit_due = self._stays_fitted = False
        self._move_to(self.camera.fitted(points, self.frame_size, 0.25 * min(self.frame_size)), moving=False)

    def fit(self) -> None:
        """Show everything."""
        self._fit_due = self._stays_fitted = True
        self._redraw(moving=False)

    def look(self, name: LookName) -> None:
        """Turn to one of the named views, and show everything."""
        self._picture = replace(self._picture, camera=self.camera.looking(name))
        self.fit()

    def set_parallel(self, parallel: bool) -> None:
        """Draw in parallel or in perspective projection."""
        self._picture = replace(self._picture, camera=self.camera.with_parallel(parallel))
        self._redraw(moving=False)

    def set_see_through(self, see_through: bool) -> None:
        """Draw all parts so that what lies behind and inside them shows."""
        emphasis = replace(self._picture.emphasis, see_through=see_through)
        self._picture = replace(self._picture, emphasis=emphasis)
        self._redraw(moving=False)

    def key_at(self, spot: QPointF) -> str:
        """Return the key of the part at a place in the pane, "" for none."""
        start, direction = self.camera.ray((spot.x(), spot.y()), self.frame_size)
        hit = pick(self.scene, start, direction)
        return "" if hit is None else hit.key

    def _move_to(self, camera: Camera, *, moving: bool) -> None:
        self._stays_fitted = False
        self._picture = replace(self._picture, camera=camera)
        self._redraw(moving=moving)

    def _redraw(self, *, moving: bool) -> None:
        if self._fit_due and self.isVisible():
            self._fit_due = False
            camera = self.camera.fitted(self.scene.fit_points, self.frame_size, _INSET)
            if not _same_place(camera, self.camera):
                self._picture = replace(self._picture, camera=camera)
        self._picture = replace(self._picture, moving=moving)
        cast("Canvas", self.canvas).show_picture(self._picture)
        said = (cast("Canvas", self.canvas).note, self.scene.note)
        self._overlay.note = " · ".join(note for note in said if note)
        self._overlay.show_picture(self._picture)
        if moving:
            self._rest.start()

    def _show_hand(self) -> None:
        shown = self.hand.shown if self.aim is None else None
        self._overlay.handles = shown
        self._overlay.update()
        over = shown is not None and shown.lit is not None
        shape = Qt.CursorShape.ClosedHandCursor if self.hand.holds else Qt.CursorShape.OpenHandCursor
        self.setCursor(shape if over else Qt.CursorShape.ArrowCursor)

    def _tell_hovered(self) -> None:
        if self.aim is not None and not self._dragging:
            self.aim.hover(self._last)
        key = "" if self._dragging or self.hand.holds or not self.underMouse() else self.key_at(self._last)
        if key != self._under:
            self._under = key
            self.hovered.emit(key)

    def mousePressEvent(self, event: QMouseEvent) -> None:
        """Take the handle there, or remember where a click or a drag begins."""
        self._pressed = self._last = event.position()
        self._dragging = False
        left = event.button() == Qt.MouseButton.LeftButton
        if left and self.aim is None and self.hand.take(_pair(self._last), self.camera, self.frame_size):
            # Who drags wants to see the same picture afterwards.
            self._stays_fitted = False
            self._show_hand()

    def mouseMoveEvent(self, event: QMouseEvent) -> None:
        """Turn or move the view while a button is down, otherwise look up what the pointer is on."""
        step, self._last = event.position() - self._last, event.position()
        shifted = bool(event.modifiers() & Qt.KeyboardModifier.ShiftModifier)
        if self.hand.holds:
            self.hand.carry(_pair(self._last), finer=shifted)
            self._show_hand()
            return
        if self._pressed is None:
            self._look_up.start()
            if self.aim is None and self.hand.look(_pair(self._last), self.camera, self.frame_size):
                self._show_hand()
            return
        way = event.position() - self._pressed
        self._dragging |= bool(np.hypot(way.x(), way.y()) > _CLICK)
        if not self._dragging:
            return
        if event.buttons() & Qt.MouseButton.MiddleButton or shifted:
            self._move_to(self.camera.panned(step.x(), step.y(), self.frame_size), moving=True)
        elif event.buttons() & Qt.MouseButton.LeftButton:
            turned = self.camera.orbited(-step.x() * _TURN_PER_PIXEL, step.y() * _TURN_PER_PIXEL)
            self._move_to(turned, moving=True)

    def mouseReleaseEvent(self, event: QMouseEvent) -> None:
        """Select on a click; end a drag; let a handle go."""
        stirred = self.hand.stirred
        if self.hand.holds:
            self.hand.let_go()
            self._show_hand()
        if stirred:
            self._pressed = None
        if self._pressed is not None and not self._dragging and event.button() == Qt.MouseButton.LeftButton:
            more = Qt.KeyboardModifier.ControlModifier | Qt.KeyboardModifier.ShiftModifier
            if self.aim is not None:
                self.aim.click(event.position())
            else:
                self.picked.emit(self.key_at(event.position()), bool(event.modifiers() & more))
        self._pressed, self._dragging = None, False

    def leaveEvent(self, event: QEvent) -> None:
        """Nothing is under a pointer that has left."""
        super().leaveEvent(event)
        self._look_up.start()

    def wheelEvent(self, event: QWheelEvent) -> None:
        """Zoom to the pointer."""
        spot = event.position()
        factor = _ZOOM_STEP ** (event.angleDelta().y() / 120)
        self._move_to(self.camera.zoomed(factor, (spot.x(), spot.y()), self.frame_size), moving=True)
        event.accept()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Fit, turn to a named view, orbit, zoom, nudge; Escape drops a handle. The window gets every other key."""
        if self.hand.holds:
            if event.key() == Qt.Key.Key_Escape:
                self.hand.drop()
                self._pressed = None
                self._show_hand()
            return
        nudge = nudge_of(event.key(), event.modifiers())
        if nudge is not None:
            self.nudged.emit(nudge)
            return
        key, size = event.key(), self.frame_size
        plain = not event.modifiers() & ~(Qt.KeyboardModifier.ShiftModifier | Qt.KeyboardModifier.KeypadModifier)
        middle = (0.5 * size[0], 0.5 * size[1])
        if not plain:
            super().keyPressEvent(event)
        elif key == Qt.Key.Key_F:
            self.fit()
        elif key in _KEYS:
            self.look(_KEYS[key])
        elif key in _ARROWS:
            turn, tilt = _ARROWS[key]
            self._move_to(self.camera.orbited(turn * _ARROW_STEP, tilt * _ARROW_STEP), moving=True)
        elif key in (Qt.Key.Key_Plus, Qt.Key.Key_Equal):
            self._move_to(self.camera.zoomed(_ZOOM_STEP, middle, size), moving=True)
        elif key == Qt.Key.Key_Minus:
            self._move_to(self.camera.zoomed(1 / _ZOOM_STEP, middle, size), moving=True)
        else:
            super().keyPressEvent(event)

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Show the focus."""
        super().focusInEvent(event)
        self._show_focus()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Stop showing the focus."""
        super().focusOutEvent(event)
        self._show_focus()
        self.hand.drop()

    def _show_focus(self) -> None:
        self._overlay.focused = self.hasFocus()
        self._overlay.update()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Let canvas and marks fill the pane."""
        super().resizeEvent(event)
        self.canvas.setGeometry(self.rect())
        self._overlay.setGeometry(self.rect())
        self._fit_due |= self._stays_fitted
        self._redraw(moving=self._picture.moving)

    def showEvent(self, event: QShowEvent) -> None:
        """Fit the scene that was given before there was a size."""
        super().showEvent(event)
        self._redraw(moving=False)

    def changeEvent(self, event: QEvent) -> None:
        """Follow the theme."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.PaletteChange and hasattr(self, "_picture"):
            self._picture = replace(self._picture, theme=theme_of(self.palette()))
            self._redraw(moving=self._picture.moving)


def _pair(spot: QPointF) -> tuple[float, float]:
    return spot.x(), spot.y()


def _same_place(one: Camera, other: Camera) -> bool:
    """Tell whether a fitted camera stands where the other one of the same direction does, but for round-off."""
    near = np.allclose(one.target, other.target, rtol=0, atol=_ROUND_OFF * one.distance)
    return bool(near and abs(one.distance - other.distance) <= _ROUND_OFF * one.distance)
