"""What a surface of facets consists of: planes, round surfaces with an axis, and the edges between them.

Facets in one plane make a patch. Patches that meet at less than SOFT belong to one round surface, unless one of them is
so much larger than its neighbours that it is a flat which runs tangent into a round. Every round surface that a turn
about some axis leaves as it is has that axis: cylinders, cones, tori, and what is made of them.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.arrays import frozen, settled
from core.mesh.curvature.surface import connected, patch_forms, survey

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.facets import Facets
    from core.mesh.curvature.surface import Surface

# rad: facets that turn by less across an edge may belong to one round surface.
SOFT: Final = float(np.radians(32))
# A patch is a flat, not a facet of a round, that is so many times as large as each of its soft neighbours, and as all
# of them together: the facets at the top of a torus make a ring in one plane that is not.
FLAT_TO_EACH: Final = 4.0
FLAT_TO_ALL: Final = 1.5
# Patches that it takes to show a round: one is a bevel, and through the edges of two there is always a circle.
FEWEST_PATCHES: Final = 3
# rad: a direction this near to an axis of the frame is that axis. Single precision in a file loses about as much.
SAME_WAY: Final = 1e-6
# Cosine of the largest angle between the normals of one plane: chains of nearly coplanar facets may bend further.
PLANE: Final = float(np.cos(np.radians(0.5)))
# Of the radius: how far corners may lie off the circle, or off the sphere, that is seen in them.
OFF_ROUND: Final = 1e-3
# Sine of the angle between a sphere's radius and the normal of its facet there.
OFF_RADIUS: Final = 0.1
# The mean square of normals along an axis: below the first there are none along it, above the second there are some.
NO_NORMALS: Final = 1e-5
SOME_NORMALS: Final = 1e-2
# The same of normals' lines that meet an axis, and of those that miss it.
MEETING: Final = 1e-7
MISSING: Final = 1e-4
# The largest planes and rounds, and the longest straight edges, that are told apart.
MOST_PLANES: Final = 40
MOST_ROUNDS: Final = 24
MOST_EDGES: Final = 48


@dataclass(frozen=True, eq=False)
class Region:
    """A plane or a round surface.

    Attributes:
        is_plane: whether it is a plane.
        area: m².
        point: (3,) m, the centroid of a plane; on the axis of a round in the middle of its length.
        direction: (3,) unit, the outward normal of a plane; along the axis of a round, pointing up.
        facets: (k,) the facets that it consists of.
        edges: (e, 2, 3) m, its outline.
    """

    is_plane: bool
    area: float
    point: FloatArray
    direction: FloatArray
    facets: IntArray
    edges: FloatArray


@dataclass(frozen=True, eq=False)
class Border:
    """Where two regions meet in a straight edge or in a circle.

    Attributes:
        regions: which two; of a circle the plane first.
        is_straight: a straight edge between planes; otherwise a circle where a round ends in a plane across its axis.
        point: (3,) m, the middle of a straight edge, the centre of a circle.
        direction: (3,) unit, along a straight edge, pointing up; the normal of the circle's plane.
        edges: (e, 2, 3) m.
    """

    regions: tuple[int, int]
    is_straight: bool
    point: FloatArray
    direction: FloatArray
    edges: FloatArray


@dataclass(frozen=True, eq=False)
class Regions:
    """The largest regions of a surface and the borders between them; size is the largest coordinate, m."""

    regions: tuple[Region, ...]
    borders: tuple[Border, ...]
    size: float


def regions_of(facets: Facets) -> Regions:
    """Return the planes and rounds of a surface whose facets share their points, the largest first; m.

    About 3 s of processor time per million facets.
    """
    surface = survey(facets.points, facets.corners)
    flat, centroids = _flats(surface), patch_forms(surface).centroids
    owner = _owners(surface, flat)
    count = int(owner.max(initial=-1)) + 1
    area: FloatArray = np.bincount(owner[owner >= 0], surface.areas[owner >= 0], count).astype(np.float64)
    is_plane = np.zeros(count, dtype=bool)
    is_plane[owner[flat[surface.patches] & (owner >= 0)]] = True
    outline = _outline(surface, owner)
    regions: list[Region] = []
    numbers = np.full(count, -1)
    order, bounds = _side_by_side(owner, count)
    wanted = [*_largest(area, is_plane, MOST_PLANES), *_largest(area, ~is_plane, MOST_ROUNDS)]
    for number in wanted:
        members = order[bounds[number] : bounds[number + 1]]
        form = _plane(surface, members) if is_plane[number] else _round(surface, members, centroids)
        if form is not None:
            numbers[number] = len(regions)
            edges = _ends(surface, outline[owner[outline // 3] == number])
            regions.append(Region(bool(is_plane[number]), float(area[number]), *form, members, edges))
    borders = _borders(surface, outline, np.append(numbers, -1)[owner], regions)
    return Regions(tuple(regions), borders, surface.size)


def _owners(surface: Surface, flat: BoolArray) -> IntArray:
    """Return which plane or round each facet (m,) is of, where flat says which patches are planes; −1 without area."""
    one = np.flatnonzero(surface.mates >= 0)
    soft = one[(np.abs(surface.turns[one]) < SOFT) & ~surface.coplanar[one]]
    here, there = surface.patches[soft // 3], surface.patches[surface.mates[soft] // 3]
    both_round = ~flat[here] & ~flat[there]
    labels = connected(len(surface.flat), here[both_round], there[both_round])
    return np.where(surface.areas > 0, labels[surface.patches], -1)


def _flats(surface: Surface) -> BoolArray:
    """Return which patches (p,) are planes of their own rather than facets of a round."""
    count = len(surface.flat)
    area = np.bincount(surface.patches, surface.areas, count)
    rim = np.flatnonzero((surface.mates >= 0) & (np.abs(surface.turns) < SOFT) & ~surface.coplanar)
    here, there = surface.patches[rim // 3], surface.patches[surface.mates[rim] // 3]
    here, there = np.divmod(np.unique(here * count + there), count)
    largest = np.zeros(count)
    np.maximum.at(largest, here, area[there])
    flat = (area > FLAT_TO_EACH * largest) & (area > FLAT_TO_ALL * np.bincount(here, area[there], count))
    both_round = ~flat[here] & ~flat[there]
    labels = connected(count, here[both_round], there[both_round])
    return np.asarray(flat | (np.bincount(labels)[labels] < FEWEST_PATCHES))


def _side_by_side(owner: IntArray, count: int) -> tuple[IntArray, IntArray]:
    """Return facets sorted by what they belong to, and where each of those begins and ends."""
    order = np.argsort(owner, kind="stable")
    return order, np.searchsorted(owner[order], np.arange(count + 1))


def _largest(area: FloatArray, which: BoolArray, most: int) -> list[int]:
    some = np.flatnonzero(which & (area > 0))
    # Rounded, so that of equal ones the same are taken whatever their last bits are.
    sizes = np.round(area[some] / area.max(initial=0.0), 6)
    return [int(at) for at in some[np.argsort(-sizes, kind="stable")][:most]]


def _outline(surface: Surface, owner: IntArray) -> IntArray:
    """Return the half-edges beyond which something else begins, or nothing."""
    ours = np.repeat(owner, 3)
    theirs = np.where(surface.mates >= 0, ours[surface.mates], -2)
    return np.flatnonzero(ours != theirs)


def _ends(surface: Surface, half_edges: IntArray) -> FloatArray:
    """Return the end points (e, 2, 3) m of half-edges."""
    triangle, corner = half_edges // 3, half_edges % 3
    ends = np.stack([surface.corners[triangle, (corner + step) % 3] for step in (1, 2)], axis=1)
    return frozen(surface.points[ends])


def _plane(surface: Surface, members: IntArray) -> tuple[FloatArray, FloatArray] | None:
    """Return centroid (3,) m and normal (3,) of facets in one plane; None where they bend after all."""
    weights = surface.areas[members]
    normals = surface.normals[members]
    normal = weights @ normals
    length = float(np.linalg.norm(normal))
    if length == 0 or float((normals @ (normal / length)).min()) < PLANE:
        return None
    corners = surface.points[surface.corners[members]]
    start = corners[0, 0]
    centroid = start + weights @ (corners - start).mean(axis=1) / weights.sum()
    return frozen(settled(centroid, surface.size)), along_frame(normal / length)


def _round(surface: Surface, members: IntArray, centroids: FloatArray) -> tuple[FloatArray, FloatArray] | None:
    """Return a point (3,) m on the axis and the axis's direction (3,) of a round surface; None where it has none."""
    weights = surface.areas[members] / surface.areas[members].sum()
    normals = surface.normals[members]
    points = surface.points[np.unique(surface.corners[members])]
    values, columns = np.linalg.eigh((normals * weights[:, None]).T @ normals)
    found: tuple[FloatArray, FloatArray] | None
    if values[0] < NO_NORMALS:
        found = _cylinder(points, columns[:, 0]) if values[1] > SOME_NORMALS else None
    else:
        patches, first = np.unique(surface.patches[members], return_index=True)
        found = _sphere(points, centroids[patches], normals[first])
        if found is None:
            found = _turned(centroids[patches], normals[first])
    if found is None:
        return None
    point, direction = found
    direction = _one_way(along_frame(direction))
    along = (points - point) @ direction
    middle = point + 0.5 * (along.min() + along.max()) * direction
    return frozen(settled(middle, surface.size)), frozen(direction)


def _cylinder(points: FloatArray, direction: FloatArray) -> tuple[FloatArray, FloatArray] | None:
    """Return a point of the axis and its direction where the points (n, 3) lie on a cylinder along the direction."""
    direction = along_frame(direction)
    across = across_of(direction)
    fitted = _centre(points @ across.T)
    if fitted is None:
        return None
    return fitted @ across, direction


def _sphere(points: FloatArray, places: FloatArray, normals: FloatArray) -> tuple[FloatArray, FloatArray] | None:
    """Return the centre where points (n, 3) lie on a sphere; it may be turned about any axis: z is taken.

    The normals (k, 3) at places (k, 3) have to point from the centre or to it: two circles lie on a sphere, too.
    """
    centre = _centre(points)
    if centre is None:
        return None
    radii = places - centre
    off = np.linalg.norm(np.cross(radii, normals), axis=1)
    if float((off / np.linalg.norm(radii, axis=1)).max()) > OFF_RADIUS:
        return None
    return centre, np.array([0.0, 0.0, 1.0])


def _centre(points: FloatArray) -> FloatArray | None:
    """Return the centre (d,) of the circle or sphere through points (n, d); None where they lie on none.

    |p|² = 2 p·c + (r² − |c|²) is linear in what is not known (Kåsa 1976).
    """
    start = points.mean(axis=0)
    local = points - start
    system = np.column_stack([2 * local, np.ones(len(local))])
    solved, _, rank, _ = np.linalg.lstsq(system, (local**2).sum(axis=1), rcond=None)
    if rank < system.shape[1]:
        return None
    centre = solved[:-1]
    radii = np.linalg.norm(local - centre, axis=1)
    middle = float(radii.mean())
    if float(np.abs(radii - middle).max()) > OFF_ROUND * middle:
        return None
    return np.asarray(start + centre)


def _turned(places: FloatArray, normals: FloatArray) -> tuple[FloatArray, FloatArray] | None:
    """Return a point of the axis and its direction of a surface of revolution: its normals all meet the axis.

    A line along n through p meets the axis (direction a, moment m about the origin) where a·(p × n) + m·n = 0:
    a and m are the null vector of that system (Pottmann & Wallner, Computational Line Geometry, 2001, section 4.3).

    Args:
        places: (k, 3) m, the centroids of its plane patches.
        normals: (k, 3) unit, there.
    """
    middle = places.mean(axis=0)
    scale = float(np.ptp(places, axis=0).max())
    if scale == 0:
        return None
    lines = np.column_stack([np.cross((places - middle) / scale, normals), normals])
    values, columns = np.linalg.eigh(lines.T @ lines / len(lines))
    if values[0] > MEETING * values[-1]:
        return None
    if values[1] > MISSING * values[-1]:
        axis, moment = columns[:3, 0], columns[3:, 0]
    else:
        # The normals of one band of a cone all meet in a point, so that many axes meet them. They lean on one alike.
        spread, ways = np.linalg.eigh(np.cov(normals.T))
        if spread[0] > NO_NORMALS or spread[1] < SOME_NORMALS:
            return None
        axis = ways[:, 0]
        moment = np.linalg.lstsq(normals, -lines[:, :3] @ axis, rcond=None)[0]
    length = float(np.linalg.norm(axis))
    # A screw has its moment along its axis; a mere turn has none there.
    if length < SOME_NORMALS or abs(axis @ moment) > OFF_ROUND * length**2:
        return None
    return middle + scale * np.cross(axis, moment) / length**2, axis / length


def _borders(
    surface: Surface, outline: IntArray, owner: IntArray, regions: list[Region]
) -> tuple[Border, ...]:
    """Return where regions meet; owner (m,) is which of them a facet is of, −1 for none."""
    shared = outline[surface.mates[outline] >= 0]
    one, two = owner[shared // 3], owner[surface.mates[shared] // 3]
    kept = (one >= 0) & (two > one)
    shared, keys = shared[kept], one[kept] * len(regions) + two[kept]
    order = np.argsort(keys, kind="stable")
    shared, keys = shared[order], keys[order]
    starts = np.flatnonzero(np.diff(keys, prepend=-1))
    borders: list[Border] = []
    for half_edges, key in zip(np.split(shared, starts[1:]), keys[starts], strict=False):
        pair = (int(key) // len(regions), int(key) % len(regions))
        border = _border(pair, _ends(surface, half_edges), regions, surface.size)
        if border is not None:
            borders.append(border)
    straight = [border for border in borders if border.is_straight]
    # Rounded, as areas are.
    straight.sort(key=lambda border: -round(_length(border) / surface.size, 6))
    return (*(border for border in borders if not border.is_straight), *straight[:MOST_EDGES])


def _border(pair: tuple[int, int], edges: FloatArray, regions: list[Region], size: float) -> Border | None:
    """Return what two regions share, planes coming before rounds; None where it is neither straight nor a circle."""
    first, second = (regions[at] for at in pair)
    if second.is_plane:
        direction = np.cross(first.direction, second.direction)
        length = float(np.linalg.norm(direction))
        if length < SAME_WAY:
            return None
        direction = _one_way(along_frame(direction / length))
        points = edges.reshape(-1, 3)
        along = (points - points[0]) @ direction
        middle = points[0] + 0.5 * (along.min() + along.max()) * direction
        return Border(pair, True, frozen(settled(middle, size)), frozen(direction), edges)
    if not first.is_plane or np.linalg.norm(np.cross(first.direction, second.direction)) > OFF_ROUND:
        return None
    height = (first.point - second.point) @ first.direction
    centre = second.point + height * first.direction
    return Border(pair, False, frozen(settled(centre, size)), first.direction, edges)


def _length(border: Border) -> float:
    return float(np.linalg.norm(border.edges[:, 1] - border.edges[:, 0], axis=1).sum())


def along_frame(direction: FloatArray) -> FloatArray:
    """Return a unit direction (3,), or the axis of the frame that it runs along but for round-off."""
    at = int(np.abs(direction).argmax())
    if np.abs(np.delete(direction, at)).max() > SAME_WAY:
        return frozen(direction)
    axis = np.zeros(3)
    axis[at] = np.sign(direction[at])
    return frozen(axis)


def _one_way(direction: FloatArray) -> FloatArray:
    """Return a direction (3,) or its opposite: the one that points up; where it is level, back; else to +x."""
    last = int(np.flatnonzero(np.abs(direction) > SAME_WAY)[-1])
    return np.asarray(direction * np.sign(direction[last]))


def across_of(direction: FloatArray) -> FloatArray:
    """Return two unit vectors u, v (2, 3) across a unit direction (3,); u, v and the direction are right-handed.

    u is the frame's x axis as seen along the direction, or its z axis where the direction is near x.
    """
    near_x = 0.99
    mark = np.array([1.0, 0.0, 0.0]) if abs(direction[0]) < near_x else np.array([0.0, 0.0, 1.0])
    across = mark - (mark @ direction) * direction
    across /= np.linalg.norm(across)
    (x, y, z), (a, b, c) = direction, across
    return np.array([across, (y * c - z * b, z * a - x * c, x * b - y * a)])
