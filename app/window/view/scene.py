"""The assembly as things to draw: bodies, drive axis, centre of mass, principal axes. No Qt in here.

A scene depends on the assembly alone; what is selected and which theme is on comes later (see `batch`), so
that the pointer moving over the view rebuilds nothing.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING
from weakref import WeakKeyDictionary

import numpy as np

from app.window.view.crowd import box_surface, drawn_whole
from app.window.view.laid import LaidFaces, LaidLines, laid_faces, laid_lines
from app.window.view.surface import Surface, surface_of
from core.arrays import FloatArray, frozen
from core.moments import radius_of_gyration

if TYPE_CHECKING:
    from core.assembly import Assembly, DriveAxis, Part, Table
    from core.facets import Facets
    from core.moments import Moments

# How far the drive axis reaches beyond what turns about it, relative to the size of the scene.
_OVERHANG = 0.12
# More vertices than this and the scene is fitted by the boxes around its bodies.
_MOST_FITTED = 50_000
_TIES = {"": ("1", "2", "3"), "12": ("1=2", "1=2", "3"), "23": ("1", "2=3", "2=3"), "123": ("1=2=3",) * 3}


@dataclass(frozen=True, eq=False)
class Bodies:
    """A part and its copies.

    Attributes:
        key, name: of the part.
        surface: of one copy, in the part frame.
        turn, shift: (n, 3, 3) and (n, 3) m, placements tf_document_part of the copies.
        tint: a small number that parts of the same material share.
        whole: whether the surface is the part's own, not only the box around it.

    What is worked out from these is kept, and with it through every edit that leaves the part alone.
    """

    key: str
    name: str
    surface: Surface
    turn: FloatArray
    shift: FloatArray
    tint: int = 0
    whole: bool = True
    _faces: dict[int, LaidFaces] = field(default_factory=dict, init=False, repr=False)
    _lines: dict[int, LaidLines] = field(default_factory=dict, init=False, repr=False)

    @property
    def count(self) -> int:
        """How many triangles all copies have together."""
        return self.surface.count * len(self.shift)

    @cached_property
    def bounds(self) -> FloatArray:
        """Lowest and highest corner of the box around all copies, (2, 3) m in the document frame."""
        # The box around a turned box: its half-widths are |R| times the old ones.
        centre = self.turn @ self.surface.bounds.mean(axis=0) + self.shift
        half = np.abs(self.turn) @ (0.5 * np.ptp(self.surface.bounds, axis=0))
        return frozen([(centre - half).min(axis=0), (centre + half).max(axis=0)])

    @cached_property
    def anchor(self) -> FloatArray:
        """The middle (3,) m of all copies; what is laid out is relative to it."""
        return frozen(self.bounds.mean(axis=0))

    @cached_property
    def box_corners(self) -> FloatArray:
        """The corners (8·n, 3) m of the boxes around the copies, turned with them."""
        local = np.array([self.surface.bounds[list(corner), range(3)] for corner in np.ndindex(2, 2, 2)])
        return np.asarray(local @ np.swapaxes(self.turn, 1, 2) + self.shift[:, None]).reshape(-1, 3)

    def faces_of(self, surface: Surface) -> LaidFaces:
        """Return the triangles of all copies drawn with a surface of this part: its own, or a lighter one."""
        if id(surface) not in self._faces:
            self._faces[id(surface)] = laid_faces(surface, self.turn, self.shift - self.anchor)
        return self._faces[id(surface)]

    def lines_of(self, surface: Surface) -> LaidLines:
        """Return the edges of all copies drawn with a surface of this part."""
        if id(surface) not in self._lines:
            self._lines[id(surface)] = laid_lines(surface, self.turn, self.shift - self.anchor)
        return self._lines[id(surface)]

    def still_stands(self, surface: Surface, turn: FloatArray, shift: FloatArray, tint: int) -> bool:
        """Return whether these are the same copies, drawn with the same surface and tint."""
        return (
            surface is self.surface
            and tint == self.tint
            and np.array_equal(shift, self.shift)
            and np.array_equal(turn, self.turn)
        )


@dataclass(frozen=True, eq=False)
class Line:
    """A straight mark with a name, from start to end (3,) m."""

    name: str
    start: FloatArray
    end: FloatArray


@dataclass(frozen=True, eq=False)
class Scene:
    """Everything that can be seen, in the document frame.

    Attributes:
        bodies: in the order of the ledger.
        ghost: a part that is not in the document yet.
        bounds: (2, 3) m around all bodies; None when there is none.
        axis: the drive axis, as long as it is drawn; None in an empty scene.
        other_axes: the document's other axes, drawn lighter; what they pass by is not fitted to them.
        table: what the bodies were made of, to tell what stays in the next scene.
        mass_centre: (3,) m; None while no mass is known.
        principal: three arrows from the centre of mass, as long as the radii of gyration.

    """

    bodies: tuple[Bodies, ...] = ()
    ghost: Bodies | None = None
    bounds: FloatArray | None = None
    axis: Line | None = None
    mass_centre: FloatArray | None = None
    principal: tuple[Line, ...] = ()
    other_axes: tuple[Line, ...] = ()
    table: Table | None = None

    @cached_property
    def everybody(self) -> tuple[Bodies, ...]:
        """The bodies, and the ghost where there is one."""
        return self.bodies if self.ghost is None else (*self.bodies, self.ghost)

    @property
    def note(self) -> str:
        """What a person who looks has to know of how it is drawn; "" for nothing."""
        boxed = sum(not bodies.whole for bodies in self.bodies)
        return f"The {boxed} smallest parts are drawn as boxes" if boxed else ""

    @cached_property
    def count(self) -> int:
        """How many triangles there are."""
        return sum(bodies.count for bodies in self.everybody)

    @cached_property
    def fit_points(self) -> FloatArray:
        """Points (n, 3) m that are in the picture when the whole scene is; a unit box when it is empty."""
        if self.bounds is None:
            return np.array([[x, y, z] for x in (-0.1, 0.1) for y in (-0.1, 0.1) for z in (-0.1, 0.1)])
        points = self._corners()
        marks = [self.axis, *self.principal]
        points += [np.stack([mark.start, mark.end]) for mark in marks if mark is not None]
        return np.concatenate(points)

    def _corners(self) -> list[FloatArray]:
        """Return points (n, 3) m around the bodies: the fewer there are, the closer."""
        assert self.bounds is not None
        if not all(bodies.whole for bodies in self.everybody):
            return [np.array([self.bounds[list(corner), range(3)] for corner in np.ndindex(2, 2, 2)])]
        few = sum(len(bodies.surface.vertices) * len(bodies.shift) for bodies in self.everybody) <= _MOST_FITTED
        return [
            bodies.faces_of(bodies.surface).vertices + bodies.anchor if few else bodies.box_corners
            for bodies in self.everybody
        ]

    @cached_property
    def centre(self) -> FloatArray:
        """The middle (3,) m of the points to fit; what is drawn is handed on relative to it."""
        return np.asarray(0.5 * (self.fit_points.min(axis=0) + self.fit_points.max(axis=0)))

    @cached_property
    def radius(self) -> float:
        """The radius in m of a ball about the middle that holds everything."""
        return float(np.linalg.norm(self.fit_points - self.centre, axis=1).max())


@dataclass
class SurfaceStore:
    """Surfaces made ready once, and kept for as long as anything holds the facets they were made from."""

    _kept: WeakKeyDictionary[Facets, Surface] = field(default_factory=WeakKeyDictionary)

    def of(self, facets: Facets) -> Surface:
        """Return the surface of the facets, made now if it is new.

        A worker thread may call this ahead of time: about 1.5 s for a million facets.
        """
        found = self._kept.get(facets)
        if found is None:
            found = self._kept[facets] = surface_of(facets)
        return found


def scene_of(assembly: Assembly, store: SurfaceStore, ghost: Part | None = None, before: Scene | None = None) -> Scene:
    """Return what is to be seen of an assembly, and of a part that may join it.

    What has not changed since the scene before is taken over from it.
    """
    bodies = _bodies(assembly, store, before or Scene())
    ghostly = None
    if ghost is not None and len(ghost.surface.corners):
        standing = ghost.standing
        ghostly = Bodies(ghost.key, ghost.name, store.of(ghost.surface), standing.turn, standing.shift)
    everybody = bodies if ghostly is None else (*bodies, ghostly)
    if not everybody:
        return Scene()
    bounds = _bounds(everybody)
    has_mass = bool(bodies) and float(assembly.total.mass) > 0
    arrows = _principal_arrows(assembly.total) if has_mass else ()
    reach = np.concatenate([bounds, *([arrow.start, arrow.end] for arrow in arrows)])
    lines = {axis.name: _axis_line(axis, reach) for axis in assembly.axes}
    return Scene(
        bodies,
        ghostly,
        bounds,
        lines.pop(assembly.drive),
        frozen(assembly.total.centre) if has_mass else None,
        arrows,
        tuple(lines.values()),
        assembly.table,
    )


def _bodies(assembly: Assembly, store: SurfaceStore, before: Scene) -> tuple[Bodies, ...]:
    known = {bodies.key: bodies for bodies in before.bodies}
    table = assembly.table
    tints: dict[str, int] = {}
    bodies = []
    rows_whole = zip(table.parts, table.rows_by_part, drawn_whole(table), strict=True)
    for (part, rows, whole), stayed in zip(rows_whole, _stayed(table, before.table), strict=True):
        if not len(rows) or (whole and not len(part.surface.corners)):
            continue
        tint = tints.setdefault(part.driver.label, len(tints))
        old = known.get(part.key)
        if stayed and old is not None and old.tint == tint and old.whole == whole:
            bodies.append(old)
            continue
        surface = store.of(part.surface) if whole else box_surface(part.bounds)
        turn, shift = table.standing.turn[rows], table.standing.shift[rows]
        if old is None or old.name != part.name or not old.still_stands(surface, turn, shift, tint):
            old = Bodies(part.key, part.name, surface, turn, shift, tint, whole)
        bodies.append(old)
    return tuple(bodies)


def _stayed(table: Table, before: Table | None) -> list[bool]:
    """Return which parts of a table are the same and stand where they stood in the one before."""
    if before is None or len(before.parts) != len(table.parts) or not np.array_equal(before.owner, table.owner):
        return [False] * len(table.parts)
    moved = (table.standing.shift != before.standing.shift).any(axis=1)
    moved |= (table.standing.turn != before.standing.turn).any(axis=(1, 2))
    stood = np.bincount(table.owner[moved], minlength=len(table.parts)) == 0
    return [
        still and part is old for still, part, old in zip(stood.tolist(), table.parts, before.parts, strict=True)
    ]


def _bounds(everybody: tuple[Bodies, ...]) -> FloatArray:
    boxes = np.array([bodies.bounds for bodies in everybody])
    return frozen([boxes[:, 0].min(axis=0), boxes[:, 1].max(axis=0)])


def _axis_line(axis: DriveAxis, reach: FloatArray) -> Line:
    """Return the axis from below what it passes to above it; reach (n, 3) m are the outermost points."""
    point, unit = np.asarray(axis.point, dtype=float), axis.unit
    low, high = reach.min(axis=0), reach.max(axis=0)
    # The extent of a box along a direction.
    middle, half = 0.5 * (low + high), 0.5 * np.abs(unit) @ (high - low)
    along = (middle - point) @ unit
    over = half + _OVERHANG * float(np.linalg.norm(high - low))
    return Line(axis.name, point + (along - over) * unit, point + (along + over) * unit)


def _principal_arrows(total: Moments) -> tuple[Line, ...]:
    principal = total.principal
    radii = radius_of_gyration(principal.moments, total.mass)
    names = _TIES[principal.tie]
    return tuple(
        Line(name, frozen(total.centre), frozen(total.centre + radius * axis))
        for name, radius, axis in zip(names, radii, principal.axes, strict=True)
        if radius > 0
    )
