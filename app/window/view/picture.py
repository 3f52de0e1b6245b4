"""One picture to draw: a scene, from where it is seen, what stands out in it, and in which colours."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, TypeAlias

from PySide6.QtGui import QColor, QPalette

from app.window.view.batch import Emphasis
from app.window.view.palette import DARK, LIGHT, Theme

if TYPE_CHECKING:
    from collections.abc import Iterable

    from app.window.view.camera import Camera, Size
    from app.window.view.scene import Scene

Opacity: TypeAlias = int

_MIDDLE = 128


@dataclass(frozen=True, eq=False)
class Picture:
    """What a canvas draws.

    Attributes:
        moving: the camera is on its way, so that a lighter drawing does.

    """

    scene: Scene
    camera: Camera
    emphasis: Emphasis = field(default_factory=Emphasis)
    theme: Theme = LIGHT
    moving: bool = False

    def depths(self) -> tuple[float, float]:
        """Return the depths of the near and the far plane, m."""
        return self.camera.depth_range(self.scene.centre, self.scene.radius)


def theme_of(palette: QPalette) -> Theme:
    """Return the theme that goes with a palette: dark where the window's ground is dark."""
    return DARK if palette.color(QPalette.ColorRole.Window).lightness() < _MIDDLE else LIGHT


def qcolor(colour: Iterable[int], opacity: Opacity = 255) -> QColor:
    """Return a colour (red, green, blue) for Qt."""
    red, green, blue = (int(channel) for channel in colour)
    return QColor(red, green, blue, opacity)


def size_of(width: int, height: int) -> Size:
    """Return a frame size in pixels that is never zero."""
    return float(max(width, 1)), float(max(height, 1))
