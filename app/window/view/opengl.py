"""Getting OpenGL ready, and finding out whether there is any.

Order, in the program's main function:
1. `share_contexts()` before the QApplication is made: a second view, or one that moves to another window,
would
   otherwise be blank.
2. make the QApplication.
3. `prepare_opengl()` before the first view: only now is it known which window system Qt has chosen, and
PyOpenGL has
   to talk to the same one. It must run before pyqtgraph.opengl is imported for the first time.
"""

from __future__ import annotations

import os

from PySide6.QtCore import QCoreApplication, Qt
from PySide6.QtGui import QGuiApplication, QOffscreenSurface, QOpenGLContext, QSurfaceFormat

# Set to "software" to have the view drawn without OpenGL.
VIEW_VARIABLE = "MASSWRIGHT_VIEW"

_PLATFORMS = {"xcb": "glx", "wayland": "egl", "wayland-egl": "egl"}
# Window systems of Qt that have no OpenGL at all; asking them for it prints a warning.
_WITHOUT_OPENGL = {"offscreen", "minimal", "vnc", "linuxfb"}


def share_contexts() -> None:
    """Ask Qt, before the application is made, for contexts that share, and for OpenGL proper."""
    QCoreApplication.setAttribute(Qt.ApplicationAttribute.AA_ShareOpenGLContexts)
    chosen = QSurfaceFormat.defaultFormat()
    chosen.setRenderableType(QSurfaceFormat.RenderableType.OpenGL)
    QSurfaceFormat.setDefaultFormat(chosen)


def prepare_opengl() -> None:
    """Point PyOpenGL at the window system that Qt runs on.

    Called before the application exists it does what `share_contexts` does; called after, it sets
    PYOPENGL_PLATFORM unless the user has. So a main function may call it twice: before and after.
    """
    if QCoreApplication.instance() is None:
        share_contexts()
        return
    platform = _PLATFORMS.get(QGuiApplication.platformName())
    if platform is not None:
        os.environ.setdefault("PYOPENGL_PLATFORM", platform)


def opengl_works() -> bool:
    """Return whether a context for OpenGL 2.1 or newer can be made and used here."""
    if os.environ.get(VIEW_VARIABLE, "").lower() == "software":
        return False
    if QGuiApplication.platformName() in _WITHOUT_OPENGL:
        return False
    context = QOpenGLContext()
    if not context.create():
        return False
    surface = QOffscreenSurface()
    surface.setFormat(context.format())
    surface.create()
    if not surface.isValid() or not context.makeCurrent(surface):
        return False
    version = context.format().version()
    context.doneCurrent()
    return bool(tuple(version) >= (2, 1))
