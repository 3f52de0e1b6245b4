"""The 3D view: ViewPane shows an assembly, prepare_opengl gets the program ready for it (see view.opengl)."""

from app.window.view.opengl import opengl_works, prepare_opengl
from app.window.view.pane import ViewPane, make_view

__all__ = ["ViewPane", "make_view", "opengl_works", "prepare_opengl"]
