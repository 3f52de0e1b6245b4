"""What the cuts of a part take out of it: in closed form where they lie inside, otherwise what they have in common.

Each copy of a cut is judged by where it lies, not by what it is called. One that lies inside the body, or whose ends
stick out of a bar along its own axis, and that meets no other, is subtracted in closed form. One that sticks out
elsewhere or overlaps another goes to `solid_cuts`.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from itertools import pairwise
from typing import TYPE_CHECKING, TypeVar

import numpy as np

from core.assembly.bodies import ShapeBody
from core.assembly.plain_cuts import FLUSH, box_of, corners_of, pieces_along, well_inside
from core.errors import EditRefused
from core.moments import Moments
from core.placement import Placement

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.arrays import BoolArray, FloatArray, IntArray
    from core.assembly.bodies import GeometricBody
    from core.assembly.cuts import Cut
    from core.assembly.solid_cuts import Piece
    from core.facets import Facets
    from core.progress import Progress

# Relative to the body's volume: less than this is nothing left of it, more exactly than faceted solids tell.
NOTHING_LEFT = 1e-6
# Relative to the cut's own volume: less than this taken out is nothing.
NOTHING_TAKEN = 1e-9
# Relative to the cut's own volume: less than this outside the body, or shared with another cut, is not worth a word.
WORTH_A_WORD = 1e-4
# Up to this many facets of a mesh a cut takes no time that anybody notices.
CUT_AT_ONCE = 50_000
# Outcomes that a body keeps: the present one, and some that undo may bring back.
_MOST_KEPT = 8
# Copies that are held against all others at once, for the sake of memory.
_ROWS = 128

Made = TypeVar("Made")


@dataclass(frozen=True, eq=False)
class Cutting:
    """The outcome of taking all cuts out of a body.

    Attributes:
        removed: for each cut a batch (n,) of what its copies take out, after those before them; unit density,
            part frame.
        outside: for each cut the share of its volume, 0…1, that lies outside the body and is not counted.
        shared: for each cut the share of its volume that an earlier copy or cut has taken already.
        exact: all of it is in closed form.
    """

    removed: tuple[Moments, ...]
    outside: tuple[float, ...]
    shared: tuple[float, ...]
    exact: bool

    @cached_property
    def pieces(self) -> Moments:
        """All that is taken out, piece by piece in the order of the cuts, a batch (n,)."""
        return _joined(list(self.removed))

    @cached_property
    def owner(self) -> IntArray:
        """Which of the cuts each of the pieces belongs to, (n,)."""
        return np.repeat(np.arange(len(self.removed)), [len(each.mass) for each in self.removed])

    @cached_property
    def total(self) -> Moments:
        """All that is taken out together, at unit density in the part frame."""
        return self.pieces.total()


def cutting_of(
    body: GeometricBody, cuts: tuple[Cut, ...], where: str, progress: Progress | None = None
) -> Cutting:
    """Return what cuts take out of a body that bounds a volume; the body keeps the last outcomes.

    Args:
        body: a solid.
        cuts: at least one.
        where: the part's name, for a refusal.
        progress: to watch and stop it by.

    Raises:
        EditRefused: a cut takes nothing out, nothing is left of the body, or its surface bounds no volume clearly.
        Cancelled: progress was cancelled.
    """

    def computed() -> Cutting:
        cutting = _Cutter(body, cuts, where, progress).cutting()
        _refuse_all_or_nothing(body, cuts, cutting, where)
        return cutting

    return _kept(body, "_cuttings", cuts, computed)


def is_cut_already(body: GeometricBody, cuts: tuple[Cut, ...]) -> bool:
    """Return whether asking for what these cuts take out of the body costs nothing any more."""
    return _asked(cuts) in body.__dict__.get("_cuttings", {})


def surface_without(body: GeometricBody, cuts: tuple[Cut, ...]) -> Facets:
    """Return the surface to draw of a body less cuts, m in the part frame; the body's own where that fails.

    The body keeps the last ones: equal parts are drawn from one surface.
    """

    def drawn() -> Facets:
        from core.assembly.solid_cuts import drawn_without

        copies = [(cut.shape, one) for cut in cuts for one in _singles(cut.standing)]
        return drawn_without(body, copies) or body.surface

    return _kept(body, "_cut_surfaces", cuts, drawn)


def _kept(body: GeometricBody, kind: str, cuts: tuple[Cut, ...], make: Callable[[], Made]) -> Made:
    """Return what make returns for these cuts, from the body where it was asked for a short while ago."""
    kept: dict[object, Made] = body.__dict__.setdefault(kind, {})
    asked = _asked(cuts)
    if asked not in kept:
        made = make()
        while len(kept) >= _MOST_KEPT:
            kept.pop(next(iter(kept)))
        kept[asked] = made
    return kept[asked]


def _asked(cuts: tuple[Cut, ...]) -> object:
    return tuple((cut.shape, cut.pose, cut.copies) for cut in cuts)


class _Cutter:
    """All copies of all cuts as rows, and what is known about each of them."""

    def __init__(
        self, body: GeometricBody, cuts: tuple[Cut, ...], where: str, progress: Progress | None
    ) -> None:
        self._body, self._cuts, self._where, self._progress = body, cuts, where, progress
        self._edges = np.cumsum([0] + [cut.copies.count for cut in cuts])
        self._owner = np.repeat(np.arange(len(cuts)), np.diff(self._edges))
        boxes = [box_of(cut.shape) for cut in cuts]
        self._corners = np.concatenate(
            [corners_of(box, cut.standing) for box, cut in zip(boxes, cuts, strict=True)]
        )
        self._radii = np.array([np.hypot(*np.abs(box[:, :2]).max(axis=0)) for box in boxes])[self._owner]
        self._round(boxes)

    def _round(self, boxes: list[FloatArray]) -> None:
        """Take the true radius of what is round about its own axis: its box has corners that it has not."""
        from core.shapes import Cylinder, Tube

        for at, cut in enumerate(self._cuts):
            if isinstance(cut.shape, Cylinder | Tube):
                self._radii[self._owner == at] = boxes[at][1, 0]

    def cutting(self) -> Cutting:
        """Return the outcome; see `cutting_of`."""
        whole = _joined([
            cut.standing.place(_spread(cut.shape.moments(), cut.copies.count)) for cut in self._cuts
        ])
        pieces, known = self._known(whole)
        outside = np.where(known, whole.mass - pieces.mass, 0.0)
        shared = np.zeros(len(outside))
        meeting = self._meeting()
        rest = np.flatnonzero(~(known & ~meeting.any(axis=1)))
        found: list[Piece] = []
        if len(rest):
            found = self._from_solids(rest, meeting)
            pieces = _put(pieces, rest, [
                _one(whole, int(row)) if piece.whole else piece.moments for row, piece in zip(rest, found, strict=True)
            ])
            outside[rest], shared[rest] = [piece.outside for piece in found], [piece.shared for piece in found]
        volumes = np.add.reduceat(whole.mass, self._edges[:-1])
        shares = [np.add.reduceat(each, self._edges[:-1]) / volumes for each in (outside, shared)]
        removed = tuple(_slice(pieces, start, stop) for start, stop in pairwise(self._edges))
        exact = all(piece.whole for piece in found)
        return Cutting(removed, tuple(shares[0].tolist()), tuple(shares[1].tolist()), exact)

    def _known(self, whole: Moments) -> tuple[Moments, BoolArray]:
        """Return what the copies take out that are plainly bars along the body, inside it, or beside it."""
        low, high = box_of_body(self._body)
        beside = (self._corners.min(axis=1) > high).any(axis=1) | (self._corners.max(axis=1) < low).any(axis=1)
        if not isinstance(self._body, ShapeBody):
            return whole.times(np.zeros(len(self._owner))), beside
        shape = self._body.shape
        found = [pieces_along(shape, cut.shape, cut.standing) for cut in self._cuts]
        pieces, along = _joined([each for each, _ in found]), np.concatenate([known for _, known in found])
        if along.all():
            return pieces, along
        inside = ~along & well_inside(shape, self._corners)
        return Moments(
            np.where(inside, whole.mass, pieces.mass),
            np.where(inside[:, None], whole.centre, pieces.centre),
            np.where(inside[:, None, None], whole.spread, pieces.spread),
        ), along | inside | beside

    def _meeting(self) -> BoolArray:
        """Return (n, n) which copies may have something in common; none with itself."""
        low, high = self._corners.min(axis=1), self._corners.max(axis=1)
        meeting = np.zeros((len(low), len(low)), dtype=bool)
        if len(low) == 1:
            return meeting
        slack = FLUSH * float(np.ptp(self._corners.reshape(-1, 3), axis=0).max())
        axis = np.concatenate([cut.standing.turn[:, :, 2] for cut in self._cuts])
        shift = np.concatenate([cut.standing.shift for cut in self._cuts])
        for start in range(0, len(low), _ROWS):
            rows = slice(start, start + _ROWS)
            boxes = (low[rows, None] < high - slack).all(axis=2) & (low < high[rows, None] - slack).all(axis=2)
            lever = shift[rows, None] - shift
            across = lever - np.einsum("nmi,ni->nm", lever, axis[rows])[..., None] * axis[rows, None]
            parallel = np.linalg.norm(np.cross(axis[rows, None], axis), axis=2) <= FLUSH
            apart = np.linalg.norm(across, axis=2) >= self._radii[rows, None] + self._radii - slack
            meeting[rows] = boxes & ~(parallel & apart)
        np.fill_diagonal(meeting, val=False)
        return meeting

    def _from_solids(self, rows: IntArray, meeting: BoolArray) -> list[Piece]:
        from core.assembly.solid_cuts import pieces_of_solids

        singles = [one for cut in self._cuts for one in _singles(cut.standing)]
        copies = [(self._cuts[self._owner[row]].shape, singles[row]) for row in rows]
        return pieces_of_solids(self._body, copies, meeting[np.ix_(rows, rows)], self._where, self._progress)


def _refuse_all_or_nothing(body: GeometricBody, cuts: tuple[Cut, ...], cutting: Cutting, where: str) -> None:
    for cut, removed, shared in zip(cuts, cutting.removed, cutting.shared, strict=True):
        if removed.mass.sum() <= NOTHING_TAKEN * float(cut.shape.moments().mass) * cut.copies.count:
            met = shared > WORTH_A_WORD
            raise EditRefused(
                "this cut takes nothing out: other cuts have taken it already" if met
                else "this cut takes nothing out: it lies outside the body",
                where=f"{where}, {cut.name}", read=f"a cut of {_size(box_of(cut.shape))}",
                remedy="Move it, make it larger, or leave it out" if met else "Move it into the body, or leave it out",
            )
    volume = 0.0 if body.solid is None else float(body.solid.mass)
    least = (FLUSH if cutting.exact else NOTHING_LEFT) * volume
    if volume - float(cutting.total.mass) <= least:
        largest = max(zip(cuts, cutting.removed, strict=True), key=lambda pair: float(pair[1].mass.sum()))[0]
        raise EditRefused(
            "the cuts leave nothing of the body" if len(cuts) > 1 else "this cut leaves nothing of the body",
            where=f"{where}, {largest.name}",
            read=f"a cut of {_size(box_of(largest.shape))} in a body of {_size(box_of_body(body))}",
            remedy="Make it smaller, or move it",
        )


def box_of_body(body: GeometricBody) -> FloatArray:
    """Return a box (2, 3) m in the part frame that nothing of a body sticks out of."""
    return box_of(body.shape) if isinstance(body, ShapeBody) else body.bounds


def _size(box: FloatArray) -> str:
    return " × ".join(f"{length * 1e3:.4g}" for length in np.ptp(box, axis=0)) + " mm"


def _singles(standing: Placement) -> list[Placement]:
    return [Placement(turn, shift) for turn, shift in zip(standing.turn, standing.shift, strict=True)]


def _spread(one: Moments, times: int) -> Moments:
    return Moments(np.full(times, one.mass), np.tile(one.centre, (times, 1)), np.tile(one.spread, (times, 1, 1)))


def _joined(batches: list[Moments]) -> Moments:
    return Moments(
        np.concatenate([each.mass for each in batches]), np.concatenate([each.centre for each in batches]),
        np.concatenate([each.spread for each in batches]),
    )


def _slice(batch: Moments, start: int, stop: int) -> Moments:
    return Moments(batch.mass[start:stop], batch.centre[start:stop], batch.spread[start:stop])


def _one(batch: Moments, row: int) -> Moments:
    return Moments(batch.mass[row], batch.centre[row], batch.spread[row])


def _put(batch: Moments, rows: IntArray, singles: list[Moments]) -> Moments:
    mass, centre, spread = batch.mass.copy(), batch.centre.copy(), batch.spread.copy()
    mass[rows] = [one.mass for one in singles]
    centre[rows] = [one.centre for one in singles]
    spread[rows] = [one.spread for one in singles]
    return Moments(mass, centre, spread)
