"""Proof that the machine under the GUI tests really shows widgets and really draws with OpenGL."""

from __future__ import annotations

import pytest

QtGui = pytest.importorskip("PySide6.QtGui")
QtCore = pytest.importorskip("PySide6.QtCore")
QtOpenGL = pytest.importorskip("PySide6.QtOpenGL")
QtOpenGLWidgets = pytest.importorskip("PySide6.QtOpenGLWidgets")
QtWidgets = pytest.importorskip("PySide6.QtWidgets")

RED, BLUE = (255, 0, 0), (0, 0, 255)


def rgb(image: QtGui.QImage, x: int, y: int) -> tuple[int, int, int]:
    colour = image.pixelColor(x, y)
    return colour.red(), colour.green(), colour.blue()


class Triangle(QtOpenGLWidgets.QOpenGLWidget):
    """A red triangle with its base on the lower edge and its tip in the middle of the upper one, on blue."""

    def paintGL(self) -> None:  # noqa: N802  Qt's name
        from OpenGL import GL

        GL.glClearColor(0.0, 0.0, 1.0, 1.0)
        GL.glClear(GL.GL_COLOR_BUFFER_BIT)
        GL.glColor3f(1.0, 0.0, 0.0)
        GL.glBegin(GL.GL_TRIANGLES)
        for x, y in ((-1.0, -1.0), (1.0, -1.0), (0.0, 1.0)):
            GL.glVertex2f(x, y)
        GL.glEnd()


@pytest.mark.gui
def test_a_label_is_as_wide_as_its_text(qtbot) -> None:
    narrow, wide = QtWidgets.QLabel("J"), QtWidgets.QLabel("J J J J J J J J")
    qtbot.addWidget(narrow)
    qtbot.addWidget(wide)
    assert 0 < narrow.sizeHint().width() < wide.sizeHint().width()


@pytest.mark.opengl
@pytest.mark.usefixtures("qapp")
def test_a_context_without_a_window_clears_to_the_colour_it_is_given() -> None:
    surface, context = QtGui.QOffscreenSurface(), QtGui.QOpenGLContext()
    surface.create()
    assert context.create()
    assert context.makeCurrent(surface)
    buffer = QtOpenGL.QOpenGLFramebufferObject(8, 8)
    buffer.bind()
    context.functions().glClearColor(0.2, 0.4, 0.6, 1.0)
    context.functions().glClear(0x4000)  # GL_COLOR_BUFFER_BIT
    drawn = rgb(buffer.toImage(), 4, 4)
    buffer.release()
    context.doneCurrent()
    assert drawn == (51, 102, 153)


@pytest.mark.opengl
def test_a_triangle_covers_its_inside_and_leaves_its_outside(qtbot) -> None:
    view = Triangle()
    qtbot.addWidget(view)
    view.resize(100, 100)
    view.show()
    qtbot.waitExposed(view)
    image = view.grabFramebuffer()
    width, height = image.width(), image.height()
    assert rgb(image, width // 2, height // 2) == RED
    assert rgb(image, width // 2, height - 3) == RED
    assert rgb(image, width // 10, height // 10) == BLUE
    assert rgb(image, width - width // 10, height // 10) == BLUE


@pytest.mark.opengl
def test_a_second_view_draws_as_well_as_the_first(qtbot) -> None:
    views = [Triangle(), Triangle()]
    for view in views:
        qtbot.addWidget(view)
        view.resize(60, 60)
        view.show()
        qtbot.waitExposed(view)
    assert [rgb(view.grabFramebuffer(), 30, 30) for view in views] == [RED, RED]
