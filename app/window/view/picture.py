"""One picture to draw: a scene, from where it is seen, what stands out in it, and in which colours."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, TypeAlias

import numpy as np
from PySide6.QtGui import QColor, QPalette

from app.window.view.batch import Emphasis, line_ranks
from app.window.view.palette import DARK, LIGHT, Theme

if TYPE_CHECKING:
    from collections.abc import Iterable

    from app.window.view.batch import Lines
    from app.window.view.camera import Camera, Size
    from app.window.view.scene import Line, Scene
    from app.window.view.surface import Float32Array
    from core.arrays import FloatArray

Opacity: TypeAlias = int

_MIDDLE = 128
# More edges than this are not drawn while the camera moves.
MOST_LINES_MOVING = 40_000


@dataclass(frozen=True, eq=False)
class Picture:
    """What a canvas draws.

    Attributes:
        moving: the camera is on its way, so that a lighter drawing does.
        found: edges (k, 2, 3) m in the document frame that a finding is about, drawn over everything.
        vectors: arrows of what acts on the assembly, drawn over everything, each with its name at its head.

    """

    scene: Scene
    camera: Camera
    emphasis: Emphasis = field(default_factory=Emphasis)
    theme: Theme = LIGHT
    moving: bool = False
    found: FloatArray = field(default_factory=lambda: np.zeros((0, 2, 3)))
    vectors: tuple[Line, ...] = ()

    def depths(self) -> tuple[float, float]:
        """Return the depths of the near and the far plane, m."""
        return self.camera.depth_range(self.scene.centre, self.scene.radius)


def shown_lines(lines: Lines, picture: Picture) -> list[Float32Array]:
    """Return the edges (e, 2, 3) to draw plain, under the pointer, and selected.

    Plain ones are left out while the camera moves over very many.
    """
    ranks = line_ranks(picture.scene, picture.emphasis)
    if picture.moving and len(lines.sharp) + len(lines.rims) > MOST_LINES_MOVING:
        ranks = np.where(ranks == 0, -1, ranks)
    rims, rim_ranks = lines.rims[:0], ranks[lines.rim_owner[:0]]
    if (ranks[lines.rim_owner] >= 0).any():
        seen = lines.rims_seen(picture.camera, picture.scene.centre)
        rims, rim_ranks = lines.rims[seen], ranks[lines.rim_owner[seen]]
    sharp_ranks = ranks[lines.sharp_owner]
    return [np.concatenate([lines.sharp[sharp_ranks == rank], rims[rim_ranks == rank]]) for rank in range(3)]


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
