"""The table that the trade adds up: a line per part, its own inertia, its transfer term, the sum at the foot."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np

from core.arrays import BoolArray, FloatArray, frozen, settled
from core.assembly.assembly import Assembly, DriveAxis
from core.assembly.nodes import Part, walk


# How the basis of a value begins that a reader must not take as computed.
WEAK = ("estimated", "no volume", "not set")


@dataclass(frozen=True, eq=False)
class Line:
    """One line of the ledger; a group's line is the sum of the lines it holds.

    Attributes:
        key, name, kind: of the node; "" , the document's name and "total" at the foot.
        depth: of the node in the tree, 0 outermost.
        count: equal copies of it in the group that holds it.
        times: equal copies of it in the whole document, the copies of the groups around it multiplied in.
        material: what says its mass, as shown; of a group or the total only what some of its parts lack.
        basis: computed, weighed, data sheet, estimated …, not set.
        mass: kg, of all copies; None while it is not known.
        centre: (3,) m, of all copies together, document frame; None while the mass is not known.
        own_inertia: kg·m², Σ over the copies about their own centres, parallel to the drive axis.
        transfer: kg·m², Σ m·d² over the copies, d from the copy's centre to the drive axis.
        inertia: kg·m², the sum of both: J about the drive axis.
        share: of the total's J, 0…1; None while there is no total.
    """

    key: str
    name: str
    kind: Literal["part", "group", "total"]
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


@dataclass(frozen=True, eq=False)
class Ledger:
    """All lines in order, the foot, and the axis they speak of."""

    lines: tuple[Line, ...]
    total: Line
    axis: DriveAxis


@dataclass(frozen=True, eq=False)
class _Sums:
    """Per part (n,), summed over all its copies; whether its mass is known; how far out the farthest centre is, m."""

    mass: FloatArray
    first: FloatArray
    own: FloatArray
    transfer: FloatArray
    known: BoolArray
    size: float

    def of(self, rows: slice) -> tuple[float, FloatArray, float, float] | None:
        """Return mass, centre, own inertia and transfer of a run of parts; None when no mass among them is known."""
        mass = float(self.mass[rows].sum())
        if not self.known[rows].any() or mass == 0:
            return None
        centre = frozen(settled(self.first[rows].sum(axis=0) / mass, self.size))
        own, transfer = float(self.own[rows].sum()), float(self.transfer[rows].sum())
        return mass, centre, own, float(settled(transfer, own + mass * self.size**2))


def ledger_of(assembly: Assembly) -> Ledger:
    """Return the ledger about the assembly's drive axis."""
    sums = _sums(assembly)
    whole = float(sums.own.sum() + sums.transfer.sum())
    lines: list[Line] = []
    at = 0
    above: list[int] = []
    for node, depth in walk(assembly.members):
        parts = [inner for inner, _ in walk((node,)) if isinstance(inner, Part)]
        above[depth:] = [(above[depth - 1] if depth else 1) * node.copies.count]
        head = _Head(
            node.key, node.name, "part" if isinstance(node, Part) else "group", depth, node.copies.count, above[depth],
            node.driver.label if isinstance(node, Part) else _warning(parts), _common_basis(parts),
        )
        lines.append(head.with_values(sums.of(slice(at, at + len(parts))), whole))
        at += isinstance(node, Part)
    everything = list(assembly.table.parts)
    foot = _Head("", assembly.name, "total", 0, 1, 1, _warning(everything), _common_basis(everything))
    return Ledger(tuple(lines), foot.with_values(sums.of(slice(None)), whole), assembly.drive_axis)


@dataclass(frozen=True)
class _Head:
    """The words and counts of a line."""

    key: str
    name: str
    kind: Literal["part", "group", "total"]
    depth: int
    count: int
    times: int
    material: str
    basis: str

    def with_values(self, values: tuple[float, FloatArray, float, float] | None, whole: float) -> Line:
        head = (self.key, self.name, self.kind, self.depth, self.count, self.times, self.material, self.basis)
        if values is None:
            return Line(*head, None, None, None, None, None, None)
        mass, centre, own, transfer = values
        inertia = own + transfer
        return Line(*head, mass, centre, own, transfer, inertia, inertia / whole if whole > 0 else None)


def _common_basis(parts: list[Part]) -> str:
    """Return the basis of the parts when all have the same one, otherwise the weakest kind among them."""
    bases = {part.basis for part in parts}
    if len(bases) <= 1:
        return bases.pop() if bases else ""
    weak = sorted(basis for basis in bases if basis.startswith(WEAK))
    return f"some {weak[0]}" if weak else "mixed"


def _warning(parts: list[Part]) -> str:
    """Return what some of the parts lack, as shown where a single part names its material."""
    weak = sum(part.basis.startswith(WEAK) for part in parts)
    return f"{weak} of {len(parts)} not computed" if weak else ""


def _sums(assembly: Assembly) -> _Sums:
    table, axis = assembly.table, assembly.drive_axis
    rows, count = table.moments, len(table.parts)

    def per_part(values: FloatArray) -> FloatArray:
        return np.asarray(np.bincount(table.owner, weights=values, minlength=count), dtype=np.float64)

    weighted = rows.mass[:, None] * rows.centre
    return _Sums(
        mass=per_part(rows.mass),
        first=np.stack([per_part(weighted[:, i]) for i in range(3)], axis=1),
        own=per_part(rows.own_inertia_along(axis.unit)),
        transfer=per_part(rows.transfer_to_axis(axis.point, axis.unit)),
        known=np.array([part.single is not None for part in table.parts], dtype=bool),
        size=float(np.abs(rows.centre).max(initial=0.0)),
    )
