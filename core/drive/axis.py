"""What turns about which axis and with which shaft, and the inertia about an axis in the forms that are in use."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.assembly import walk
from core.assembly.axes import without_axis
from core.drive.train import FIXED, LOAD
from core.errors import EditRefused, ValueRefused
from core.moments import Moments, radius_of_gyration, unit_vector
from core.once import Once

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.assembly import Assembly, DriveAxis


@dataclass(frozen=True)
class AboutAxis:
    """Inertia about an axis in the forms that are in use; GD² and WR² are J in units of theirs.

    Attributes:
        mass: kg.
        inertia: J, kg·m².
        own: kg·m², about the parallel axis through the centre of mass.
        transfer: kg·m², m·d².
        offset: d, m, of the centre of mass from the axis.
        radius_of_gyration: √(J/m), m; nan where there is no mass.
    """

    mass: float
    inertia: float
    own: float
    transfer: float
    offset: float
    radius_of_gyration: float


def about_axis(moments: Moments, axis: DriveAxis) -> AboutAxis:
    """Return the inertia of a single body (no batch) about an axis of the same frame."""
    mass, own = float(moments.mass), float(moments.own_inertia_along(axis.direction))
    transfer = float(moments.transfer_to_axis(axis.point, axis.direction))
    inertia = own + transfer
    offset = float(moments.offset_from_axis(axis.point, axis.direction))
    return AboutAxis(mass, inertia, own, transfer, offset, float(radius_of_gyration(inertia, mass)))


def across(axis: DriveAxis) -> tuple[FloatArray, FloatArray]:
    """Return two unit vectors (3,) across an axis: the zero mark of angles about it, and 90° on from it.

    The zero mark is the document's x axis as seen along the axis; its z axis where the axis lies along x
    (within 45°).
    """
    unit = axis.unit
    mark = np.eye(3)["xyz".index(zero_mark(axis))]
    first = unit_vector(mark - (mark @ unit) * unit)
    return first, np.asarray(np.cross(unit, first))


def zero_mark(axis: DriveAxis) -> str:
    """Return the document's axis, "x" or "z", that angles about an axis count from; see `across`."""
    return "x" if abs(axis.unit[0]) < np.sqrt(0.5) else "z"


@dataclass(frozen=True)
class TurnsWith:
    """Which shaft a line of the ledger turns with.

    Attributes:
        key: of a part or group with all it holds; "" the whole document. The innermost entry counts.
        shaft: name of a shaft, or "fixed" for what stands still.
        axis: name of the axis it turns about; "" the drive axis.
    """

    key: str = ""
    shaft: str = LOAD
    axis: str = ""


@dataclass(frozen=True, eq=False)
class TurningBody:
    """All that turns together about one axis with one shaft.

    Attributes:
        name: as shown.
        moments: as the document stands, document frame.
        axis: what it turns about; the shaft turning forwards turns it right-handed about the direction.
        shaft: name of the shaft.
    """

    name: str
    moments: Moments
    axis: DriveAxis
    shaft: str = LOAD

    @Once
    def inertia(self) -> float:
        """J about its axis, kg·m²."""
        return float(self.moments.inertia_about_axis(self.axis.point, self.axis.direction))


def bodies_of(assembly: Assembly, turning: tuple[TurnsWith, ...]) -> tuple[TurningBody, ...]:
    """Return what turns with each entry, in their order; parts that no entry names, and fixed ones, are left out.

    Raises:
        ValueRefused: two entries name the same line.
        EditRefused: an entry names a line or an axis that is not there.
    """
    refuse_unless_there(assembly, turning)
    table, by_line = assembly.table, entries_by_line(assembly, turning)
    entries = [by_line[part.key] for part in table.parts]
    bodies = []
    for entry in turning:
        name = assembly.node(entry.key).name if entry.key else assembly.name
        if entry.shaft == FIXED:
            continue
        rows = np.array([one is entry for one in entries], dtype=bool)[table.owner]
        moments = Moments(table.moments.mass[rows], table.moments.centre[rows], table.moments.spread[rows]).total()
        bodies.append(TurningBody(name, moments, axis_of(assembly, entry), entry.shaft))
    return tuple(bodies)


def refuse_unless_there(assembly: Assembly, turning: tuple[TurnsWith, ...]) -> None:
    """Refuse entries that do not go with an assembly.

    Raises:
        ValueRefused: two entries name the same line.
        EditRefused: an entry names a line or an axis that is not there.
    """
    if len({entry.key for entry in turning}) != len(turning):
        raise ValueRefused("a line turns with one shaft only", where="what turns", remedy="Keep one of the entries")
    for entry in turning:
        if entry.key:
            assembly.node(entry.key)
        axis_of(assembly, entry)


def axis_of(assembly: Assembly, entry: TurnsWith) -> DriveAxis:
    """Return the axis that an entry names.

    Raises:
        EditRefused: the assembly has none of this name.
    """
    return assembly.axis(entry.axis or assembly.drive)


def turning_about(assembly: Assembly, turning: tuple[TurnsWith, ...], name: str) -> tuple[str, ...]:
    """Return the names of what entries let turn about the axis of this name, with any shaft."""
    return tuple(
        assembly.node(entry.key).name if entry.key else "the whole document"
        for entry in turning
        if entry.shaft != FIXED and (entry.axis or assembly.drive) == name
    )


def without_idle_axis(assembly: Assembly, turning: tuple[TurnsWith, ...], name: str) -> Assembly:
    """Return the assembly without an axis.

    Raises:
        EditRefused: something turns about it, or it is the last axis, or the drive axis.
    """
    about = turning_about(assembly, turning, name)
    if about and name != assembly.drive:
        raise EditRefused(
            f"an axis that something turns about cannot be deleted: {', '.join(about)}", where=name,
            remedy="Let that turn about another axis first, on its Part page",
        )
    return without_axis(assembly, name)


def entries_by_line(assembly: Assembly, turning: tuple[TurnsWith, ...]) -> dict[str, TurnsWith | None]:
    """Return the entry that counts for each part and group, by its key: its own, or the one of what holds it."""
    by_key = {entry.key: entry for entry in turning}
    # What counts for the whole document, and then at each depth down to the line.
    above = [by_key.get("")]
    found: dict[str, TurnsWith | None] = {}
    for node, depth in walk(assembly.members):
        above[depth + 1 :] = [by_key.get(node.key, above[depth])]
        found[node.key] = above[depth + 1]
    return found


def shafts_by_key(assembly: Assembly, turning: tuple[TurnsWith, ...]) -> dict[str, str]:
    """Return the shaft that each part turns with, by the part's key; what stands still is not in it."""
    by_line = entries_by_line(assembly, turning)
    found = ((part.key, by_line[part.key]) for part in assembly.table.parts)
    return {key: entry.shaft for key, entry in found if entry is not None and entry.shaft != FIXED}


def keys_turning(assembly: Assembly, turning: tuple[TurnsWith, ...]) -> tuple[str, ...]:
    """Return the keys of all parts that turn with some shaft."""
    return tuple(shafts_by_key(assembly, turning))
