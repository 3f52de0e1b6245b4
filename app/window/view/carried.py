"""A scene in which some parts are being dragged: all else is packed once, and the marks stay where they were."""

from __future__ import annotations

from dataclasses import dataclass, field, fields, replace
from functools import cached_property
from typing import TYPE_CHECKING, Any
from weakref import WeakKeyDictionary

import numpy as np

from app.window.view.scene import Bodies, Scene

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from core.arrays import FloatArray
    from core.placement import Placement


@dataclass(frozen=True, eq=False)
class Piece(Scene):
    """Some bodies of a scene, laid out about the middle of the whole.

    Attributes:
        whole: the scene at rest.
        packs: what it was packed into, by the choice of surfaces.
    """

    whole: Scene = field(default_factory=Scene)
    packs: dict[Callable[[Bodies], Any], Any] = field(default_factory=dict, repr=False)

    @cached_property
    def fit_points(self) -> FloatArray:
        """Points (n, 3) m that are in the picture when the whole scene at rest is."""
        return self.whole.fit_points


@dataclass(frozen=True, eq=False)
class CarriedScene(Piece):
    """What stays, followed by what is dragged."""

    still: Piece = field(default_factory=Piece)
    moved: Piece = field(default_factory=Piece)

    @cached_property
    def everybody(self) -> tuple[Bodies, ...]:
        """The bodies that stay, with the ghost, and those that are dragged."""
        return (*self.still.everybody, *self.moved.bodies)

    @cached_property
    def radius(self) -> float:
        """The radius in m of a ball about the middle that holds everything, what is dragged away included."""
        corners = np.concatenate([bodies.bounds for bodies in self.moved.bodies])
        low, high = corners.min(axis=0), corners.max(axis=0)
        farthest = np.maximum(np.abs(low - self.centre), np.abs(high - self.centre))
        return max(self.whole.radius, float(np.linalg.norm(farthest)))


_pieces: WeakKeyDictionary[Scene, dict[frozenset[str], Piece]] = WeakKeyDictionary()


def carried(scene: Scene, standing: Mapping[str, Placement]) -> Scene:
    """Return a scene with the copies of some parts, by their keys, standing elsewhere: tf_document_part of each."""
    keys = frozenset(standing)
    moved = tuple(
        replace(one, turn=standing[one.key].turn, shift=standing[one.key].shift)
        for one in scene.bodies if one.key in keys
    )
    if not moved:
        return scene
    kept = _pieces.setdefault(scene, {})
    if keys not in kept:
        stay = tuple(one for one in scene.bodies if one.key not in keys)
        kept[keys] = Piece(stay, scene.ghost, scene.bounds, whole=replace(scene))
    still, marks = kept[keys], {each.name: getattr(scene, each.name) for each in fields(Scene)}
    piece = Piece(moved, None, scene.bounds, whole=still.whole)
    bodies = (*still.bodies, *moved)
    return CarriedScene(**{**marks, "bodies": bodies}, whole=still.whole, still=still, moved=piece)
