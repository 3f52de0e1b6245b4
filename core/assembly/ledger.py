"""The table that the trade adds up: a line per part, its own inertia, its transfer term, the sum at the foot."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from core.arrays import FloatArray, IntArray, frozen, settled
from core.assembly.link import LAST_VALUES
from core.assembly.nodes import Group, Part, walk
from core.moments import Moments, radius_of_gyration
from core.placement import Placement

if TYPE_CHECKING:
    from core.assembly.assembly import Assembly
    from core.assembly.axis import DriveAxis
    from core.assembly.nodes import Table

LineKind: TypeAlias = Literal["part", "cut", "group", "total"]

# The first eight values of a line, and its last two; plain tuples, since there are thousands at every edit.
_Head: TypeAlias = tuple[tuple[str, str, LineKind, int, int, int, str, str], tuple[bool, bool]]
_UNKNOWN = (None,) * 6

# How the basis of a value begins that a reader must not take as computed.
WEAK = ("estimated", "no volume", "not set", LAST_VALUES)


@dataclass(frozen=True, eq=False)
class Line:
    """One line of the ledger; a group's line is the sum of the lines of the parts and groups it holds.

    A part's line holds its values after its cuts. The lines of the cuts stand below it, one deeper, and say what of
    that was taken out, with negative mass; they are in the part's line already and are not added again.

    Attributes:
        key, name, kind: of the node or cut; "" , the document's name and "total" at the foot.
        depth: of the node in the tree, 0 outermost; of a cut one more than of its part.
        count: equal copies of it in the group that holds it; of a cut in its part.
        times: equal copies of it in the whole document, the copies of the groups around it multiplied in.
        material: what says its mass, as shown; of a group or the total only what some of its parts lack, or the file of
            a linked group; "cut".
        basis: computed, weighed, data sheet, estimated …, last values …, not set.
        mass: kg, of all copies; None while it is not known.
        centre: (3,) m, of all copies together, document frame; None while the mass is not known.
        own_inertia: kg·m², Σ over the copies about their own centres, parallel to the drive axis.
        transfer: kg·m², Σ m·d² over the copies, d from the copy's centre to the drive axis.
        inertia: kg·m², the sum of both: J about the drive axis.
        share: of the total's J, 0…1; None while there is no total.
        counts: whether it is in the chosen variant; where it is not, it has no values.
        read_only: whether it belongs to the document of a linked group around it.
    """

    key: str
    name: str
    kind: LineKind
    depth: int
    count: int
    times: int
    material: str
    basis: str
    mass: float | None
    centre: FloatArray | None
    own_inertia: float | None
    transfer: float | None
    inertia: float | None
    share: float | None
    counts: bool = True
    read_only: bool = False

    @property
    def doubtful(self) -> bool:
        """Whether its values, or some of them, must not be taken as computed."""
        return self.basis.removeprefix("some ").startswith(WEAK)

    @property
    def radius_of_gyration(self) -> float | None:
        """√(J/m) about the drive axis, m, of all copies together; None while the mass is not known, or is none."""
        return None if self.inertia is None or not self.mass else float(radius_of_gyration(self.inertia, self.mass))


@dataclass(frozen=True, eq=False)
class Ledger:
    """All lines in order, the foot, and the axis they speak of."""

    lines: tuple[Line, ...]
    total: Line
    axis: DriveAxis


def ledger_of(assembly: Assembly) -> Ledger:
    """Return the ledger about the assembly's drive axis."""
    heads, spans = _heads(assembly)
    *lines, foot = _lines(heads, _sums(assembly).over(np.array(spans)))
    return Ledger(tuple(lines), foot, assembly.drive_axis)


def _heads(assembly: Assembly) -> tuple[list[_Head], list[tuple[int, int]]]:
    """Return the words of every line and of the foot, and the run of rows of `_sums` that each adds up."""
    heads: list[_Head] = []
    spans: list[tuple[int, int]] = []
    known = assembly.bases
    everything = tuple(known[part.key] for part in assembly.table.parts)
    at, cut_at = 0, len(everything)
    above: list[int] = []
    linked: list[bool] = []
    counting = {node.key: node for node, _ in walk(assembly.counted.members)}
    for node, depth in walk(assembly.members):
        above[depth:] = [(above[depth - 1] if depth else 1) * node.copies.count]
        held = depth > 0 and linked[depth - 1]
        counted = counting.get(node.key)
        here, inside = counted is not None, 0
        if isinstance(node, Part):
            linked[depth:] = [held]
            kind: LineKind = "part"
            words = (node.driver.label, known.get(node.key, node.basis))
            inside = 1 if here else 0
        else:
            linked[depth:] = [held or node.link is not None]
            kind = "group"
            inside = 0 if counted is None else len(counted.table.parts)
            bases = everything[at : at + inside]
            words = (_link_words(node) or _warning(bases), _common_basis(bases))
        spans.append((at, at + inside))
        heads.append(((node.key, node.name, kind, depth, node.copies.count, above[depth], *words), (here, held)))
        if not isinstance(node, Part):
            continue
        at += inside
        for cut in node.cuts:
            count, times = cut.copies.count, above[depth] * cut.copies.count
            heads.append(((cut.key, cut.name, "cut", depth + 1, count, times, "cut", words[1]), (here, held)))
            spans.append((cut_at, cut_at + inside))
            cut_at += inside
    foot = (_warning(everything), _common_basis(everything))
    last: _Head = (("", assembly.name, "total", 0, 1, 1, *foot), (True, False))
    return [*heads, last], [*spans, (0, len(everything))]


@dataclass(frozen=True, eq=False)
class _Sums:
    """Mass, first moment (n, 3), own inertia, transfer and number of known masses, of lines or of parts and cuts (n,).

    `size` is how far the material reaches, m: below its round-off, a coordinate is 0.
    """

    mass: FloatArray
    first: FloatArray
    own: FloatArray
    transfer: FloatArray
    known: FloatArray
    size: float

    def over(self, spans: IntArray) -> _Sums:
        """Return the sums over runs of rows: rows first, one behind the last, (m, 2)."""
        edges, empty = spans.ravel(), spans[:, 0] == spans[:, 1]

        def summed(values: FloatArray) -> FloatArray:
            # One more row, so that a run may end behind the last; every second sum is between the runs.
            padded = np.concatenate([values, np.zeros((1, *values.shape[1:]))])
            runs = np.add.reduceat(padded, edges, axis=0)[::2]
            runs[empty] = 0
            return np.asarray(runs)

        mass, own, transfer = (summed(each) for each in (self.mass, self.own, self.transfer))
        return _Sums(mass, summed(self.first), own, transfer, summed(self.known), self.size)


def _lines(heads: list[_Head], sums: _Sums) -> list[Line]:
    """Put words and sums together; the last one is the whole."""
    shown = (sums.known > 0) & (sums.mass != 0)
    with np.errstate(divide="ignore", invalid="ignore"):
        centres = frozen(settled(sums.first / sums.mass[:, None], sums.size))
    transfer = settled(sums.transfer, np.abs(sums.own) + np.abs(sums.mass) * sums.size**2)
    inertia = sums.own + transfer
    shares = (inertia / inertia[-1]).tolist() if inertia[-1] > 0 else [None] * len(heads)
    numbers = (column.tolist() for column in (sums.own, transfer, inertia))
    rows = zip(heads, shown.tolist(), sums.mass.tolist(), centres, *numbers, shares, strict=True)
    lines = []
    for (words, said), known, *values in rows:
        lines.append(Line(*words, *(values if known else _UNKNOWN), *said))
    return lines


def _common_basis(bases: tuple[str, ...]) -> str:
    """Return the basis of parts when all have the same one, otherwise the weakest kind among them."""
    kinds = set(bases)
    if len(kinds) <= 1:
        return kinds.pop() if kinds else ""
    weak = sorted(basis for basis in kinds if basis.startswith(WEAK))
    return f"some {weak[0]}" if weak else "mixed"


def _warning(bases: tuple[str, ...]) -> str:
    """Return what some of the parts lack, as shown where a single part names its material."""
    last = sum(basis.startswith(LAST_VALUES) for basis in bases)
    weak = sum(basis.startswith(WEAK) for basis in bases) - last
    words = [f"{weak} of {len(bases)} not computed"] if weak else []
    return ", ".join([*words, f"{last} of {len(bases)} {LAST_VALUES}"] if last else words)


def _link_words(group: Group) -> str:
    """Return what is said of the file of a linked group; nothing of another group."""
    if group.link is None:
        return ""
    state = group.link.state
    words = f"{LAST_VALUES}, file {state}" if state in {"missing", "changed"} else "linked"
    return f"{words}: {group.link.file_name}"


def _size(rows: Moments) -> float:
    """Return how far the material of a batch of bodies (n,) reaches, m: its centres and radii of gyration."""
    with np.errstate(divide="ignore", invalid="ignore"):
        spread = np.sqrt(np.abs(np.trace(rows.spread, axis1=-2, axis2=-1) / rows.mass))
    return float((np.abs(rows.centre).max(axis=-1, initial=0.0) + np.nan_to_num(spread, posinf=0.0)).max(initial=0.0))


def _sums(assembly: Assembly) -> _Sums:
    """Return the sums of every part, then those of every cut, in the order of the ledger."""
    table = assembly.table
    known = np.array([part.single is not None for part in table.parts], dtype=float)
    rows, owner = table.moments, table.owner
    cuts = sum(len(part.cuts) for part in table.parts)
    if cuts:
        removed, cut_owner = _removed_rows(table)
        rows, owner = _both(rows, removed), np.concatenate([owner, len(table.parts) + cut_owner])
        known = np.concatenate([known, np.repeat(known, [len(part.cuts) for part in table.parts])])
    axis, count = assembly.drive_axis, len(table.parts) + cuts

    def per_line(values: FloatArray) -> FloatArray:
        return np.asarray(np.bincount(owner, weights=values, minlength=count), dtype=np.float64)

    weighted = rows.mass[:, None] * rows.centre
    return _Sums(
        mass=per_line(rows.mass),
        first=np.stack([per_line(weighted[:, i]) for i in range(3)], axis=1),
        own=per_line(rows.own_inertia_along(axis.unit)),
        transfer=per_line(rows.transfer_to_axis(axis.point, axis.unit)),
        known=known,
        size=_size(rows),
    )


def _removed_rows(table: Table) -> tuple[Moments, IntArray]:
    """Return what every copy of every cut takes out of every copy of its part, and which of the cuts it belongs to.

    The moments (n,) are in the document frame, with negative mass; of a part whose mass is not known there are none.
    """
    copies = np.bincount(table.owner, minlength=len(table.parts))
    first_row = np.cumsum(copies) - copies
    first_cut = np.cumsum([0] + [len(part.cuts) for part in table.parts])
    taken: list[Moments] = []
    cut: list[IntArray] = []
    densities: list[float] = []
    owners: list[int] = []
    for at, part in enumerate(table.parts):
        if part.cuts and part.single is not None and part.solid is not None and part.cutting is not None:
            taken.append(part.cutting.pieces)
            cut.append(part.cutting.owner + first_cut[at])
            densities.append(float(part.single.mass) / float(part.solid.mass))
            owners.append(at)
    if not taken:
        return Moments(np.zeros(0), np.zeros((0, 3)), np.zeros((0, 3, 3))), np.zeros(0, dtype=np.int64)
    counts = [len(pieces.mass) for pieces in taken]
    owner, density = np.repeat(owners, counts), np.repeat(densities, counts)
    # Each piece once for each copy of its part: its row, and how far down that part's rows.
    times = copies[owner]
    piece = np.repeat(np.arange(len(times)), times)
    down = np.arange(len(piece)) - np.repeat(np.cumsum(times) - times, times)
    rows = np.argsort(table.owner, kind="stable")[first_row[owner][piece] + down]
    standing = Placement(table.standing.turn[rows], table.standing.shift[rows])
    batch = Moments(
        -(density * np.concatenate([one.mass for one in taken]))[piece],
        np.concatenate([one.centre for one in taken])[piece],
        (np.concatenate([one.spread for one in taken]) * -density[:, None, None])[piece],
    )
    return standing.place(batch), np.concatenate(cut)[piece]


def _both(first: Moments, second: Moments) -> Moments:
    return Moments(
        np.concatenate([first.mass, second.mass]), np.concatenate([first.centre, second.centre]),
        np.concatenate([first.spread, second.spread]),
    )
