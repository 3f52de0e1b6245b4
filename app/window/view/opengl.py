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
from dataclasses import dataclass

from PySide6.QtCore import QCoreApplication, Qt
from PySide6.QtGui import QGuiApplication, QOffscreenSurface, QOpenGLContext, QSurfaceFormat

# Set to "software" to have the view drawn without OpenGL.
VIEW_VARIABLE = "MASSWRIGHT_VIEW"

_PLATFORMS = {"xcb": "glx", "wayland": "egl", "wayland-egl": "egl"}
# Window systems of Qt that have no OpenGL at all; asking them for it prints a warning.
_WITHOUT_OPENGL = {"offscreen", "minimal", "vnc", "linuxfb"}
_OLDEST = (2, 1)
_GL_RENDERER = 0x1F01
# What renderers that run on the processor call themselves.
_SOFTWARE = ("llvmpipe", "softpipe", "software", "swrast", "gdi generic")


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


@dataclass(frozen=True)
class OpenGl:
    """What a machine has.

    Attributes:
        works: whether a context of OpenGL 2.1 or newer can be made and used.
        in_software: whether the processor does the drawing, so that every pixel is dear.
    """

    works: bool
    in_software: bool = False


def probed() -> OpenGl:
    """Try OpenGL out, away from any window."""
    if os.environ.get(VIEW_VARIABLE, "").lower() == "software":
        return OpenGl(works=False)
    if QGuiApplication.platformName() in _WITHOUT_OPENGL:
        return OpenGl(works=False)
    context = QOpenGLContext()
    if not context.create():
        return OpenGl(works=False)
    surface = QOffscreenSurface()
    surface.setFormat(context.format())
    surface.create()
    if not surface.isValid() or not context.makeCurrent(surface):
        return OpenGl(works=False)
    version = context.format().version()
    renderer = str(context.functions().glGetString(_GL_RENDERER)).lower()
    context.doneCurrent()
    return OpenGl(bool(tuple(version) >= _OLDEST), any(name in renderer for name in _SOFTWARE))


def opengl_works() -> bool:
    """Return whether the view can draw with OpenGL here."""
    return probed().works
