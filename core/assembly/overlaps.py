"""Parts that penetrate each other: what they have in common is counted twice, in volume, mass and J.

The common volume comes from faceted solids. The facets of a shape are inscribed, so its moments are taken at two
finenesses and carried on to none (Richardson 1911), which leaves an error of some 1e-4; those of a mesh count as
they are.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, Final, NamedTuple

import numpy as np

from core.assembly.bodies import KnownAxial, KnownTensor, MeshBody, ShapeBody
from core.assembly.meeting import Bodies, Pairs, bodies_of, is_round, pairs_of
from core.assembly.solid_cuts import moments_of_solid
from core.errors import EditRefused
from core.facets import Facets
from core.mesh.edges import WELD
from core.mesh.survey import INSIDE_OUT
from core.moments import Moments
from core.placement import Placement

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.assembly.assembly import Assembly, MeantOverlap
    from core.assembly.nodes import Part
    from core.progress import Progress

# Steps around a full circle: as the view draws; and where that cannot tell a thin overlap from contact.
DRAWN: Final = 48
FINEST: Final = 96
# Relative to the middle side of its box: as far as that a mesh may stray from the round surface it stands for.
MESH_STRAY: Final = 1e-3
# Where the two finenesses are further apart than this share, the finer counts as it is.
STEADY: Final = 0.2
# Kinds of pairs that are cut with one another, at most; each takes about a millisecond.
MOST_KINDS: Final = 20_000
# Overlaps that are told, at most; more than that is a heap that nobody has laid out yet.
MOST_TOLD: Final = 200
# Facets of the common volume that are kept to be lit up, at most.
MOST_SHOWN: Final = 20_000


@dataclass(frozen=True, eq=False)
class Overlap:
    """Two parts, or two copies of one, that fill the same room.

    Attributes:
        keys, names: of both parts, in the order of the ledger; twice the same for copies of one part.
        count: pairs of copies that penetrate each other.
        volume: m³ that they have in common, all pairs together.
        masses: kg of it, reckoned by the density of the first and of the second; None where that has no mass yet.
        inertias: kg·m² of it about the drive axis, likewise.
        share: of the smaller of these in the total's J about the drive axis; None where that is not known.
        surface: of the common volume, m in the document frame; of many pairs only as much as is worth drawing.
        same: the same body stands twice at one pose.
        meant: the mark that this is as it should be, or None.
    """

    keys: tuple[str, str]
    names: tuple[str, str]
    count: int
    volume: float
    masses: tuple[float | None, float | None]
    inertias: tuple[float | None, float | None]
    share: float | None
    surface: Facets
    same: bool
    meant: MeantOverlap | None

    @property
    def mass(self) -> float | None:
        """The smaller of the masses that are known, kg: what is counted too much at least."""
        return min((mass for mass in self.masses if mass is not None), default=None)

    @property
    def inertia(self) -> float | None:
        """The smaller of the inertias that are known, kg·m²: what is counted too much at least."""
        return min((inertia for inertia in self.inertias if inertia is not None), default=None)

    @property
    def edges(self) -> FloatArray:
        """The edges (k, 2, 3) m of the common volume's facets, in the document frame, to light up."""
        ends = np.concatenate([self.surface.corners[:, [0, 1]], self.surface.corners[:, [1, 2]],
                               self.surface.corners[:, [2, 0]]])
        return np.asarray(self.surface.points[np.unique(np.sort(ends, axis=1), axis=0)])


class LeftOut(NamedTuple):
    """A part that was not looked at, and why."""

    key: str
    name: str
    why: str


@dataclass(frozen=True, eq=False)
class Overlaps:
    """What a search found.

    Attributes:
        found: by the order of the ledger.
        bodies: how many were looked at.
        left_out: the parts that were not.
        skipped: some pairs were not looked at, or are not told, because there are too many.
    """

    found: tuple[Overlap, ...]
    bodies: int
    left_out: tuple[LeftOut, ...]
    skipped: bool = False


@dataclass(frozen=True, eq=False)
class Meetings:
    """The pairs of copies of two parts that have something in common.

    Attributes:
        bodies: all copies of the two, the first of them part 0 and the second part 1.
        rows: (p, 2) of the bodies, a copy of the first part and one of the second.
        common: a batch (p,) of what each pair has in common, at unit density in the frame of the second one's copy.
    """

    bodies: Bodies
    rows: IntArray
    common: Moments


class _Common(NamedTuple):
    """What the pairs of a kind have in common, in their frame: moments at unit density, and the surface."""

    moments: Moments
    surface: Facets
    same: bool


def overlaps_of(assembly: Assembly, progress: Progress | None = None) -> Overlaps:
    """Return the parts that penetrate each other, copies of the same part among them.

    Contact is none: where the common volume is, on the average, no thicker than the facets may stray from the round
    surfaces they stand for. That is r·(1 − cos(π/96)) of a shape of radius r, MESH_STRAY of a mesh and nothing of a
    flat body, both bodies together. Thin bodies, point masses and known parts are left out.

    Raises:
        Cancelled: progress was cancelled.
    """
    parts, left_out = [], []
    for part in assembly.table.parts:
        if progress is not None:
            progress.advance(0)
        why = _why_left_out(part)
        if why:
            left_out.append(LeftOut(part.key, part.name, why))
        else:
            parts.append(part)
    bodies = bodies_of(assembly, tuple(parts))
    pairs = pairs_of(bodies)
    commons, refused = _commons(bodies, pairs, progress)
    left_out += [
        LeftOut(parts[at].key, parts[at].name, "its surface does not bound a volume clearly") for at in refused
    ]
    sums = _gathered(bodies, pairs, commons)
    found = []
    for two in sorted(sums)[:MOST_TOLD]:
        found.append(_overlap(assembly, bodies, pairs, two, sums[two]))
        if progress is not None:
            progress.advance(0)
    skipped = pairs.skipped or (len(pairs.kind) > 0 and int(pairs.kind.max()) >= MOST_KINDS) or len(sums) > MOST_TOLD
    return Overlaps(tuple(found), len(bodies.owner), tuple(left_out), skipped)


def meetings_of(assembly: Assembly, one: Part, other: Part) -> Meetings:
    """Return which copies of two solid parts have something in common, and what; contact is none.

    Raises:
        EditRefused: the surface of one of them bounds no volume clearly.
    """
    bodies = bodies_of(assembly, (one, other))
    every = pairs_of(bodies)
    apart = np.flatnonzero(bodies.owner[every.first] != bodies.owner[every.second])
    pairs = replace(every, first=every.first[apart], second=every.second[apart], kind=every.kind[apart],
                    standing=Placement(every.standing.turn[apart], every.standing.shift[apart]))
    commons, refused = _commons(bodies, pairs, None)
    if refused:
        raise EditRefused("its surface does not bound a volume clearly", where=bodies.parts[refused[0]].name)
    kept = np.flatnonzero(np.isin(pairs.kind, list(commons)))
    two = np.stack([pairs.first[kept], pairs.second[kept]], axis=1)
    two = np.where((bodies.owner[two[:, 0]] == 0)[:, None], two, two[:, ::-1])
    shared = [commons[kind].moments for kind in pairs.kind[kept].tolist()]
    seen_from = Placement(bodies.standing.turn[two[:, 1]], bodies.standing.shift[two[:, 1]]).inverse()
    standing = seen_from @ Placement(pairs.standing.turn[kept], pairs.standing.shift[kept])
    common = Moments(
        np.array([each.mass for each in shared]), np.array([each.centre for each in shared]).reshape(-1, 3),
        np.array([each.spread for each in shared]).reshape(-1, 3, 3),
    )
    return Meetings(bodies, two, standing.place(common))


def _why_left_out(part: Part) -> str:
    if isinstance(part.body, KnownTensor | KnownAxial):
        return "its data sheet gives no shape"
    if part.measure == "pieces":
        return "it is a point mass"
    if part.measure != "volume":
        return "it has no thickness"
    return "" if part.solid is not None and part.solid.mass > 0 else "its mesh bounds no volume"


def _commons(
    bodies: Bodies, pairs: Pairs, progress: Progress | None
) -> tuple[dict[int, _Common], tuple[int, ...]]:
    """Return what the pairs have in common by kind, and the parts whose surface the boolean library refuses."""
    solids, found = _Solids(bodies), {}
    kinds, examples = np.unique(pairs.kind, return_index=True)
    if progress is not None:
        progress.begin(len(kinds))
    for kind, example in zip(kinds[:MOST_KINDS].tolist(), examples.tolist(), strict=False):
        common = _common(solids, bodies, pairs, example)
        if common is not None:
            found[kind] = common
        if progress is not None:
            progress.advance()
    return found, tuple(sorted(solids.refused))


def _common(solids: _Solids, bodies: Bodies, pairs: Pairs, at: int) -> _Common | None:
    rows = int(pairs.first[at]), int(pairs.second[at])
    one, other = (int(bodies.owner[row]) for row in rows)
    tf_pair_document = Placement(pairs.standing.turn[at], pairs.standing.shift[at]).inverse()
    standing = [tf_pair_document @ Placement(bodies.standing.turn[row], bodies.standing.shift[row]) for row in rows]
    if bodies.geometry[one] == bodies.geometry[other] and _agree(bodies, one, *standing):
        part = bodies.parts[one]
        surface = Facets(standing[0].apply(part.surface.points), part.surface.corners)
        assert part.solid is not None  # the others were left out
        return _Common(standing[0].place(part.solid), surface, same=True)
    flat = solids.is_flat(one) and solids.is_flat(other)
    for steps in (DRAWN,) if flat else (DRAWN, FINEST):
        fine = solids.common(one, other, *standing, steps)
        if fine is None:
            return None
        if fine.thickness > solids.stray(one, steps) + solids.stray(other, steps):
            break
    else:
        return None
    moments = fine.moments
    if not flat:
        coarse = solids.common(one, other, *standing, steps // 2)
        if coarse is not None and abs(coarse.moments.mass / moments.mass - 1) < STEADY:
            # The error falls with the square of the steps.
            moments = moments.times(4 / 3) - coarse.moments.times(1 / 3)
    return _Common(moments, fine.surface, same=False)


def _agree(bodies: Bodies, part: int, one: Placement, other: Placement) -> bool:
    """Return whether two bodies of one form stand at the same pose."""
    turns = (one.turn[:, 2], other.turn[:, 2]) if bodies.round[part] else (one.turn, other.turn)
    away = float(np.linalg.norm(one.shift - other.shift))
    return bool(np.abs(turns[0] - turns[1]).max() <= WELD and away <= WELD * float(bodies.sizes[part]))


class _Shared(NamedTuple):
    moments: Moments
    surface: Facets
    thickness: float


class _Solids:
    """The bodies of an assembly as solids of the boolean library, each made once for each fineness."""

    def __init__(self, bodies: Bodies) -> None:
        self._bodies = bodies
        self._solids: dict[tuple[int, int], Any | None] = {}
        self._flat: dict[int, bool] = {}
        self.refused: set[int] = set()

    def is_flat(self, part: int) -> bool:
        """Return whether a finer mesh of the part would be the same one."""
        form = int(self._bodies.geometry[part])
        if form not in self._flat:
            body, cuts = self._bodies.parts[part].body, self._bodies.parts[part].cuts
            shapes = [body.shape] if isinstance(body, ShapeBody) else []
            shapes += [cut.shape for cut in cuts]
            self._flat[form] = all(len(one.facets(8).corners) == len(one.facets(16).corners) for one in shapes)
        return self._flat[form]

    def stray(self, part: int, steps: int) -> float:
        """Return how far the facets at so many steps may be from the surface that they stand for, m."""
        one = self._bodies.parts[part]
        sides = np.ptp(one.bounds, axis=0)
        rounding = WELD * float(self._bodies.sizes[part])
        if isinstance(one.body, MeshBody):
            return rounding + MESH_STRAY * float(np.sort(sides)[1])
        # Shapes are round about their z axis, or have corners that are rounded across it.
        across = float(sides[:2].max() if is_round(one) else sides.max()) / 2
        return rounding if self.is_flat(part) else rounding + float(1 - np.cos(np.pi / steps)) * across

    def common(self, one: int, other: int, *rest: Any) -> _Shared | None:
        """Return what two parts have in common as they stand (two placements) at so many steps, or None."""
        first_standing, second_standing, steps = rest
        first, second = self._solid(one, steps), self._solid(other, steps)
        if first is None or second is None:
            return None
        centres = {part: self._bodies.parts[part].bounds.mean(axis=0) for part in (one, other)}
        middle = first_standing.apply(centres[one])
        common = _placed(first, first_standing, centres[one], middle) ^ _placed(
            second, second_standing, centres[other], middle
        )
        if common.is_empty() or common.volume() <= 0:
            return None
        moments = moments_of_solid(common, middle)
        if moments.mass <= 0:
            return None
        mesh = common.to_mesh64()
        surface = Facets(mesh.vert_properties[:, :3] + middle, mesh.tri_verts.astype(np.int64))
        return _Shared(moments, surface, 2 * float(moments.mass) / common.surface_area())

    def _solid(self, part: int, steps: int) -> Any | None:
        form = int(self._bodies.geometry[part])
        fixed = isinstance(self._bodies.parts[part].body, MeshBody) or self.is_flat(part)
        key = (form, 0 if fixed else steps)
        if key not in self._solids:
            self._solids[key] = _made(self._bodies.parts[part], steps)
        if self._solids[key] is None:
            self.refused.add(part)
        return self._solids[key]


def _made(part: Part, steps: int) -> Any | None:
    """Return a part as a solid seen from the middle of its box; None where its surface bounds no volume clearly."""
    from core.mesh.solids import solid_of, united

    facets = part.body.shape.facets(steps) if isinstance(part.body, ShapeBody) else part.surface
    middle = part.bounds.mean(axis=0)
    inside_out = isinstance(part.body, MeshBody) and part.body.asset.survey.verdict == INSIDE_OUT
    solid = solid_of(facets.points, facets.corners[:, ::-1] if inside_out else facets.corners, middle)
    if solid is None or not part.cuts or not isinstance(part.body, ShapeBody):
        return solid
    cuts = []
    for cut in part.cuts:
        surface = cut.shape.facets(steps)
        one = solid_of(surface.points, surface.corners, np.zeros(3))
        if one is None:
            return None
        for turn, shift in zip(cut.standing.turn, cut.standing.shift, strict=True):
            cuts.append(_placed(one, Placement(turn, shift), np.zeros(3), middle))
    return solid - united(cuts)


def _placed(solid: Any, standing: Placement, origin: FloatArray, middle: FloatArray) -> Any:
    """Return a solid seen from origin (3,) m of its own frame as it stands, seen from middle (3,) m."""
    return solid.transform(np.column_stack([standing.turn, standing.apply(origin) - middle]))


def _gathered(
    bodies: Bodies, pairs: Pairs, commons: dict[int, _Common]
) -> dict[tuple[int, int], list[tuple[IntArray, _Common]]]:
    """Return for every two parts that overlap the rows of their pairs, kind by kind, with what these have in common."""
    sums: dict[tuple[int, int], list[tuple[IntArray, _Common]]] = {}
    order = np.argsort(pairs.kind, kind="stable")
    starts = np.searchsorted(pairs.kind[order], np.arange(max(commons, default=-1) + 2))
    for kind, common in commons.items():
        rows = order[starts[kind] : starts[kind + 1]]
        owners = np.sort(np.stack([bodies.owner[pairs.first[rows]], bodies.owner[pairs.second[rows]]], axis=1), axis=1)
        two_parts, number = np.unique(owners, axis=0, return_inverse=True)
        sorted_rows = rows[np.argsort(number.reshape(-1), kind="stable")]
        edges = np.cumsum(np.bincount(number.reshape(-1)))[:-1]
        for two, some in zip(two_parts.tolist(), np.split(sorted_rows, edges), strict=True):
            sums.setdefault((two[0], two[1]), []).append((some, common))
    return sums


def _overlap(
    assembly: Assembly, bodies: Bodies, pairs: Pairs, two: tuple[int, int], kinds: list[tuple[IntArray, _Common]]
) -> Overlap:
    axis = assembly.drive_axis
    count, volume, inertia = 0, 0.0, 0.0
    for rows, common in kinds:
        times = np.minimum(bodies.times[pairs.first[rows]], bodies.times[pairs.second[rows]])
        standing = Placement(pairs.standing.turn[rows], pairs.standing.shift[rows])
        placed = standing.place(common.moments)
        count += int(times.sum())
        volume += float(common.moments.mass) * int(times.sum())
        inertia += float((times * placed.inertia_about_axis(axis.point, axis.unit)).sum())
    parts = bodies.parts[two[0]], bodies.parts[two[1]]
    densities = [_density(part) for part in parts]
    inertias = tuple(None if density is None else density * inertia for density in densities)
    masses = tuple(None if density is None else density * volume for density in densities)
    least = min((each for each in inertias if each is not None), default=None)
    whole = float(assembly.total.inertia_about_axis(axis.point, axis.unit))
    return Overlap(
        (parts[0].key, parts[1].key), (parts[0].name, parts[1].name), count, volume, (masses[0], masses[1]),
        (inertias[0], inertias[1]), None if least is None or whole <= 0 else least / whole, _shown(pairs, kinds),
        all(common.same for _, common in kinds), assembly.meant_overlap(parts[0].key, parts[1].key),
    )


def _density(part: Part) -> float | None:
    if part.single is None or part.solid is None:
        return None
    return float(part.single.mass / part.solid.mass)


def _shown(pairs: Pairs, kinds: list[tuple[IntArray, _Common]]) -> Facets:
    points, corners, at, facets = [], [], 0, 0
    for rows, common in kinds:
        for row in rows.tolist():
            if facets and facets + len(common.surface.corners) > MOST_SHOWN:
                break
            standing = Placement(pairs.standing.turn[row], pairs.standing.shift[row])
            turned = common.surface.corners[:, ::-1] if standing.mirrors else common.surface.corners
            points.append(standing.apply(common.surface.points))
            corners.append(turned + at)
            at, facets = at + len(points[-1]), facets + len(turned)
    return Facets(np.concatenate(points), np.concatenate(corners))
