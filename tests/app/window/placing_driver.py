"""A window with lines to place, and the hand that drags and nudges them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import QEvent, QPointF, Qt
from PySide6.QtGui import QMouseEvent
from PySide6.QtWidgets import QApplication
from window_driver import solid

from app.window.main import MainWindow
from app.window.manner import Manner
from app.window.view.dragging import Amount
from app.window.view.handles import Grip, paths_of
from app.window.view.opengl import VIEW_VARIABLE, prepare_opengl
from app.window.view.soft_view import SoftView
from core.assembly import Assembly, Cut, Group
from core.assembly.placing import standing_of
from core.machine import Machine
from core.placement import Pose, Ring
from core.pointing import met_on_plane, nearest_on_axis
from core.shapes import SHAPES

NO, SHIFT, CONTROL = (
    Qt.KeyboardModifier.NoModifier, Qt.KeyboardModifier.ShiftModifier, Qt.KeyboardModifier.ControlModifier
)
X, Z = Grip("along", 0), Grip("along", 2)
ABOUT_Z, IN_XY = Grip("about", 2), Grip("in", 2)


def machine() -> Machine:
    """Return a plate, a bar in a turned group, pins in a ring in it, and a bored block."""
    plate = solid("plate", "cylinder", diameter=400, length=20)
    bar = solid("bar", "cylinder", (0.05, 0.02, 0.03), diameter=40, length=100)
    pins = replace(solid("pins", "cylinder", (0.1, 0, 0), diameter=10, length=50), copies=Ring(5, start=0.4))
    group = Group("group", "group", (bar, pins), Pose((0, 0, 0.1), (0.5, 0, 0.4)))
    bore = Cut("bore", "bore", SHAPES["cylinder"].of({"diameter": 0.02, "length": 0.4}), Pose((0, 0, -0.1)))
    block = replace(solid("block", "box", (-0.2, -0.1, 0.1), length_x=100, length_y=100, length_z=100), cuts=(bore,))
    return Machine(Assembly("d", (plate, group, block)))


def placing_window(qtbot, monkeypatch, canvas: str) -> MainWindow:
    """Return a window with the machine in it, drawn in software or with OpenGL."""
    monkeypatch.setenv(VIEW_VARIABLE, canvas)
    prepare_opengl()
    made = MainWindow()
    assert isinstance(made.view.canvas, SoftView) == (canvas == "software")
    qtbot.addWidget(made, before_close_func=lambda window: setattr(window, "_given_up", True))
    made.show()
    made.activateWindow()
    qtbot.waitExposed(made)
    made.session.take(machine(), None)
    made.session.set_manner(Manner())
    QApplication.processEvents()
    return made


def select(window, *keys):
    window.session.select(frozenset(keys))
    QApplication.processEvents()


def send(view, kind, spot, modifiers=NO):
    left, none = Qt.MouseButton.LeftButton, Qt.MouseButton.NoButton
    button = none if kind == QEvent.Type.MouseMove else left
    buttons = none if kind == QEvent.Type.MouseButtonRelease else left
    QApplication.sendEvent(view, QMouseEvent(kind, QPointF(*spot), QPointF(*spot), button, buttons, modifiers))


def grip_spot(window, grip) -> np.ndarray:
    """Return a place on a handle, px: the end of a line, the middle of an arc or a square."""
    path = paths_of(window.view.hand.shown.handles, window.view.camera, window.view.frame_size)[grip]
    return {"along": path[-1], "about": path[len(path) // 2], "in": path[:4].mean(axis=0)}[grip.kind]


def carried_spot(window, grip, values) -> np.ndarray:
    """Return where the place on a handle that is taken is on the screen after a move by values, m or rad."""
    view, handles = window.view, window.view.hand.shown.handles
    start, direction = view.camera.ray(tuple(grip_spot(window, grip)), view.frame_size)
    normal = handles.directions[grip.axis]
    if grip.kind == "along":
        taken = handles.middle + nearest_on_axis(start, direction, handles.middle, normal) * normal
    else:
        taken = met_on_plane(start, direction, handles.middle, normal)
    motion = Amount(grip.kind == "about", values).motion(handles)
    return view.camera.project(motion.apply(taken), view.frame_size)[:2]


def press(window, grip, modifiers=NO):
    spot = grip_spot(window, grip)
    send(window.view, QEvent.Type.MouseMove, spot)
    send(window.view, QEvent.Type.MouseButtonPress, spot, modifiers)
    assert window.view.hand.holds
    return spot


def drag(window, grip, to, modifiers=NO, *, steps=5):
    start = press(window, grip, modifiers)
    for share in np.linspace(0, 1, steps + 1)[1:]:
        send(window.view, QEvent.Type.MouseMove, start + share * (to - start), modifiers)
    QApplication.processEvents()


def let_go(window, spot):
    send(window.view, QEvent.Type.MouseButtonRelease, spot)


def position(window, key):
    return standing_of(window.session.assembly, key).shift
